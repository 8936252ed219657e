"""One catalogued metabolite, and the names laboratories give it."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Metabolite:
    """A biochemical reactant: the sum of its protonated and magnesium-bound species.

    id: snake_case id; name: full name with Greek letters and stereo prefixes; symbol: short label for
    tables and figures ("G6P"); formula: neutral (free acid) molecular formula, None for reduced-count
    proteins; molar_mass: g/mol of `formula`, None with it; unit_activity: water and polymer ends, left
    out of Γ; species_data: "table", "derived", "zero" (convention zero), "none".
    """

    id: str
    name: str
    symbol: str
    formula: str | None
    molar_mass: float | None
    unit_activity: bool
    species_data: str
    count_convention: str
    zero_family: str
    source: str
    note: str


@dataclass(frozen=True, slots=True)
class Name:
    """One spelling a laboratory may use and the analytes it may mean.

    text: as written; candidates: ids of metabolites or of known analytes outside the catalogue; more
    than one means that the name alone does not tell (never guessed); is_sum: the signal is the sum of
    the candidates (hexose phosphates); molar_mass: g/mol to be used for a mass reported under this
    name, where custom weighs something else than the whole molecule (urea nitrogen, phosphate as
    phosphorus), else None.
    """

    text: str
    candidates: tuple[str, ...]
    is_sum: bool
    source: str
    molar_mass: float | None = None


@dataclass(frozen=True, slots=True)
class KnownAnalyte:
    """An analyte that laboratories report and that takes part in no catalogued step."""

    id: str
    name: str
    molar_mass: float | None
    source: str
