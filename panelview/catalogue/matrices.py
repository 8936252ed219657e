"""Specimen matrices: default conditions, conversion factors and where a step can be read."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Matrix:
    """A kind of specimen, with the conditions of the pool that its values stand for.

    temperature in K; ionic strengths in mol/L; `usual_basis`: what an unqualified amount per mass
    or per cells refers to here (one of `Conversion.basis`, or "" where there is none).
    """

    id: str
    name: str
    pools: str
    ph: float
    ph_sd: float
    temperature: float
    temperature_sd: float
    ionic_strength: float
    ionic_strength_sd: float
    pmg: float
    pmg_sd: float
    usual_basis: str
    source: str
    note: str


@dataclass(frozen=True, slots=True)
class Conversion:
    """Litres of the pool's water per unit of a reporting basis, in one matrix.

    basis: "litre", "litre_cells", "kg_wet", "kg_dry", "kg_protein", "kg_haemoglobin", "billion_cells";
    litres: water volume in L per L, per kg or per 10⁹ cells; relative_sd: shared by all values of a
    specimen converted with it. A value in mol per basis divided by `litres` is mol/L of pool water.
    """

    matrix_id: str
    basis: str
    litres: float
    relative_sd: float
    source: str
    note: str


@dataclass(frozen=True, slots=True)
class Applicability:
    """Whether a step can be read in a matrix: "assessed", "proxy" or "not_assessable", and why."""

    step_id: str
    matrix_id: str
    assessability: str
    reason: str
    caution: str
    source: str
