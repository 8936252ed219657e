"""Measured apparent equilibrium constants, with the conditions and source of each."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class MeasuredConstant:
    """One measured K′ in the catalogue's direction of the step.

    k_prime: in (mol/L)^Σν, water left out; temperature: K; ionic_strength: mol/L; the `_basis` fields
    tell what was stated and what assumed; evaluation: A (best) to D; set_aside: why the row is not
    used, "" where it is.
    """

    step_id: str
    k_prime: float
    temperature: float
    ionic_strength: float
    ionic_strength_basis: str
    ph: float
    pmg: float
    pmg_basis: str
    evaluation: str
    reference_id: str
    method: str
    k_printed: str
    flipped: bool
    buffer: str
    database_row: str
    twins: tuple[str, ...]
    set_aside: str
    source: str
    note: str
