"""pH, temperature, ionic strength and free magnesium, each with its standard uncertainty."""

from __future__ import annotations

import dataclasses
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

#: The four conditions, in the order in which derivatives are stacked.
FIELDS = ("ph", "temperature", "ionic_strength", "pmg")

#: Where the extended Debye–Hückel model and the species tables may be used.
#: pH and temperature: span of the species tables and of most measurements (Alberty 2003, pH 5–9);
#: ionic strength: limit of the extended Debye–Hückel equation (Alberty 2003); pMg: free Mg²⁺ from
#: 0.1 µmol/L (none, in effect) to 0.1 mol/L.
LIMITS: dict[str, tuple[float, float]] = {
    "ph": (5.0, 9.0),
    "temperature": (273.15, 323.15),
    "ionic_strength": (0.0, 0.35),
    "pmg": (1.0, 20.0),
}

LABELS = {
    "ph": "pH",
    "temperature": "temperature",
    "ionic_strength": "ionic strength",
    "pmg": "pMg",
}

UNITS = {"ph": "", "temperature": "K", "ionic_strength": "mol/L", "pmg": ""}


class OutOfModelRange(ValueError):
    """A condition lies where the model does not hold.

    field: one of `FIELDS`; value: the offending number, in the units of `UNITS`; lower, upper: the limits.
    """

    def __init__(self, field: str, value: float, lower: float, upper: float) -> None:
        super().__init__(field, value, lower, upper)
        self.field = field
        self.value = value
        self.lower = lower
        self.upper = upper

    def __str__(self) -> str:
        if self.field == "temperature":
            return (
                f"temperature {self.value - 273.15:g} °C is outside the model's range "
                f"({self.lower - 273.15:g} to {self.upper - 273.15:g} °C)"
            )
        unit = f" {UNITS[self.field]}" if UNITS[self.field] else ""
        return (
            f"{LABELS[self.field]} {self.value:g}{unit} is outside the model's range "
            f"({self.lower:g} to {self.upper:g}{unit})"
        )


@dataclass(frozen=True)
class Conditions:
    """Conditions of n specimens (or n calculations); every array has shape [condition].

    ph: −log10[H⁺]; temperature: K; ionic_strength: mol/L; pmg: −log10[free Mg²⁺]; the fields
    ending in `_sd` are standard uncertainties in the same units.
    """

    ph: Array
    temperature: Array
    ionic_strength: Array
    pmg: Array
    ph_sd: Array
    temperature_sd: Array
    ionic_strength_sd: Array
    pmg_sd: Array

    @classmethod
    def of(
        cls,
        ph: ArrayLike = 7.0,
        temperature: ArrayLike = 310.15,
        ionic_strength: ArrayLike = 0.25,
        pmg: ArrayLike = 3.0,
        *,
        ph_sd: ArrayLike = 0.0,
        temperature_sd: ArrayLike = 0.0,
        ionic_strength_sd: ArrayLike = 0.0,
        pmg_sd: ArrayLike = 0.0,
    ) -> Conditions:
        """Conditions from scalars or arrays, broadcast to one length and checked against `LIMITS`.

        Raises OutOfModelRange.
        """
        given = (ph, temperature, ionic_strength, pmg, ph_sd, temperature_sd, ionic_strength_sd, pmg_sd)
        arrays = np.broadcast_arrays(*(np.atleast_1d(np.asarray(x, dtype=np.float64)) for x in given))
        made = cls(*(np.ascontiguousarray(a) for a in arrays))
        made.check()
        return made

    def check(self) -> None:
        """Raise OutOfModelRange for the first value outside `LIMITS` (or not a number)."""
        for field in FIELDS:
            lower, upper = LIMITS[field]
            values = getattr(self, field)
            bad = ~((values >= lower - 1e-12) & (values <= upper + 1e-12))
            if bad.any():
                raise OutOfModelRange(field, float(values[bad][0]), lower, upper)

    def __len__(self) -> int:
        return len(self.ph)

    def __getitem__(self, rows: Any) -> Conditions:
        """The conditions of the chosen rows (index array, mask or slice)."""
        return Conditions(*(np.atleast_1d(getattr(self, f.name)[rows]) for f in dataclasses.fields(self)))

    def replace(self, **changes: ArrayLike) -> Conditions:
        """A copy with some arrays changed (broadcast over all rows). Raises OutOfModelRange."""
        values = {f.name: getattr(self, f.name) for f in dataclasses.fields(self)}
        return Conditions.of(**(values | changes))
