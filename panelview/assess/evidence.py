"""The evidence for one step of one specimen, in numbers and in plain words."""

from __future__ import annotations

from dataclasses import dataclass

from panelview.assess.review import Review
from panelview.catalogue.measurements import MeasuredConstant


@dataclass(frozen=True, slots=True)
class Term:
    """One reactant in the step's mass-action ratio.

    nu: as written in the step; concentration: mol/L, NaN where none; sd_ln: relative uncertainty;
    origin: "measured", "below LOQ", "above range", "missing", "measured total", "free, inferred",
    "set by the reviewer", "unit activity"; reported: value and unit as written with row and column;
    reference: mol/L of the reference group, NaN where none; turning_point: mol/L at which the step
    would be at equilibrium, the others held, NaN where not defined.
    """

    metabolite_id: str
    symbol: str
    name: str
    nu: float
    concentration: float
    sd_ln: float
    origin: str
    reported: str
    reference: float
    turning_point: float


@dataclass(frozen=True, slots=True)
class Driver:
    """Contribution of one analyte (or of "conditions") to the shift, kJ/mol; they add up to it."""

    term: str
    label: str
    contribution: float


@dataclass(frozen=True, slots=True)
class EffectorFinding:
    """What the panel says of one known effector: "consistent with", "against", "not measured", "within"."""

    effector: str
    effect: str
    kind: str
    tissue: str
    finding: str
    detail: str


@dataclass(frozen=True)
class Evidence:
    """Everything shown for one step of one specimen; text is final, views only lay it out."""

    title: str
    call: str
    sentence: str
    equation: str
    equation_numbers: str
    terms: tuple[Term, ...]
    drivers: tuple[Driver, ...]
    effectors: tuple[EffectorFinding, ...]
    regulation: str
    constant: str
    constant_source: str
    constant_basis: str
    measurements: tuple[MeasuredConstant, ...]
    pools: tuple[str, ...]
    cautions: tuple[str, ...]


def evidence(review: Review, specimen: int, column: int) -> Evidence:
    """Gather the evidence for a column of a specimen."""
    raise NotImplementedError
