"""Published concentrations: what a matrix usually holds."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class PublishedConcentration:
    """One published figure, as printed and as used.

    set_id: figures that belong together (one table, one method) and must not be mixed with others;
    is_default: whether the set is the one compared with when no controls are at hand;
    mean, spread, unit, per: as printed; ln_mean: ln of mol/L of pool water; ln_sd: standard deviation
    of ln c between subjects (NaN where the source gives none); n: subjects, None where not stated;
    state: physiological state the set describes.
    """

    set_id: str
    is_default: bool
    metabolite_id: str
    matrix_id: str
    organism: str
    mean: float | None
    spread: str
    unit: str
    per: str
    ln_mean: float
    ln_sd: float
    n: int | None
    state: str
    source: str
    basis: str
    confidence: str
    note: str
