"""The table that `panelview constants` prints: K′eq, ΔrG′° and uncertainty of steps or reactions."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from panelview.catalogue.load import Catalogue
from panelview.catalogue.reactions import reaction_constants, read_reaction
from panelview.intake.constants_file import AtRow
from panelview.thermo.conditions import FIELDS, Conditions
from panelview.thermo.physical import GAS_CONSTANT

COLUMNS = ("step", "k_prime", "log10_k_prime", "delta_g0_prime_kj_per_mol", "delta_g0_prime_sd", "basis")

#: Conditions are evaluated in blocks of this many, so that memory stays bounded.
_BLOCK = 2000


@dataclass(frozen=True, slots=True)
class ConstantRow:
    """One line: `step` is an id or a reaction as written; NaN and "none" where no constant is known."""

    step: str
    k_prime: float
    log10_k_prime: float
    delta_g0_prime_kj_per_mol: float
    delta_g0_prime_sd: float
    basis: str


class UnknownStep(ValueError):
    """A row names a step that the catalogue does not hold."""

    def __init__(self, row: int, step: str) -> None:
        super().__init__(row, step)
        self.row = row
        self.step = step


def all_steps(catalogue: Catalogue, conditions: Conditions) -> list[ConstantRow]:
    """One row a step at one set of conditions, whose own uncertainties count."""
    constants = catalogue.constants
    at = constants.at(conditions)
    sd = _with_conditions(at.sd, at.by, conditions)
    rt = float(GAS_CONSTANT * conditions.temperature[0])
    return [
        _row(step, float(at.delta_g0_prime[0, k]), float(sd[0, k]), rt, constants.basis(k))
        for k, step in enumerate(constants.step_ids)
    ]


def one_reaction(text: str, catalogue: Catalogue, conditions: Conditions) -> ConstantRow:
    """One row for a reaction. Raises UnreadableReaction."""
    reaction = read_reaction(text, catalogue)
    at = reaction_constants(reaction, catalogue, conditions)
    sd = _with_conditions(at.sd, at.by, conditions)
    basis = catalogue.constants.basis(reaction.step) if reaction.step >= 0 else "estimated"
    rt = float(GAS_CONSTANT * conditions.temperature[0])
    return _row(text, float(at.delta_g0_prime[0, 0]), float(sd[0, 0]), rt, basis)


def at_rows(rows: Sequence[AtRow], catalogue: Catalogue, default: Conditions) -> list[ConstantRow]:
    """One output row an input row, in order; what a row does not state is taken from `default`.

    Raises UnknownStep, UnreadableReaction.
    """
    index = {step: k for k, step in enumerate(catalogue.constants.step_ids)}
    values = {
        field: np.array([r.conditions.get(field, float(getattr(default, field)[0])) for r in rows])
        for field in FIELDS
    }
    spread = {f"{field}_sd": float(getattr(default, f"{field}_sd")[0]) for field in FIELDS}
    for r in rows:
        if r.step and r.step not in index:
            raise UnknownStep(r.row, r.step)
    made: list[ConstantRow | None] = [None] * len(rows)
    steps = np.array([k for k, r in enumerate(rows) if r.step], dtype=np.intp)
    for start in range(0, len(steps), _BLOCK):
        block = steps[start : start + _BLOCK]
        conditions = Conditions.of(**{f: v[block] for f, v in values.items()}, **spread)
        at = catalogue.constants.at(conditions)
        sd = _with_conditions(at.sd, at.by, conditions)
        for place, k in enumerate(block):
            s = index[rows[k].step]
            rt = float(GAS_CONSTANT * conditions.temperature[place])
            made[k] = _row(
                rows[k].step,
                float(at.delta_g0_prime[place, s]),
                float(sd[place, s]),
                rt,
                catalogue.constants.basis(s),
            )
    for k, r in enumerate(rows):
        if made[k] is None:
            conditions = Conditions.of(**{f: v[k] for f, v in values.items()}, **spread)
            made[k] = one_reaction(r.reaction, catalogue, conditions)
    return [row for row in made if row is not None]


def _with_conditions(sd: np.ndarray, by: np.ndarray, conditions: Conditions) -> np.ndarray:
    """Constant's uncertainty together with what the conditions' own uncertainties bring."""
    spread = np.stack([getattr(conditions, f"{f}_sd") for f in FIELDS], axis=-1)
    return np.asarray(np.sqrt(sd**2 + ((by * spread[:, None, :]) ** 2).sum(axis=-1)))


def _row(step: str, delta_g0: float, sd: float, rt: float, basis: str) -> ConstantRow:
    if not math.isfinite(delta_g0):
        return ConstantRow(step, math.nan, math.nan, math.nan, math.nan, "none")
    ln_k = -delta_g0 / rt
    k = math.exp(ln_k) if abs(ln_k) < 700 else math.inf if ln_k > 0 else 0.0
    return ConstantRow(step, k, ln_k / math.log(10), delta_g0, sd, basis)
