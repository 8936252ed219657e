"""How a specimen's free pools are known, and what that makes of each step's stoichiometry.

A step that needs a free pool which no assay sees (NAD⁺/NADH, free ADP) is read together with the couple
that reports the pool. If the couple is at equilibrium, ΔG′ of the step equals ΔG′ of the step plus a
multiple of the couple from which the pool has cancelled. So every inferred quantity is one linear
combination of measured ln c and step constants, and its uncertainty and covariance follow exactly.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.assess.review import StepColumn
from panelview.assess.settings import FreeRatio
from panelview.catalogue.couples import COFACTORS, RATIO_POOLS, IndicatorCouple
from panelview.catalogue.load import Catalogue

Array = NDArray[np.float64]

_MATRIX_SIDE = {"mitochondrial_matrix", "mitochondrial_inner_membrane"}


@dataclass(frozen=True, slots=True)
class PoolUse:
    """Where one pool of a plan comes from.

    pool: of RATIO_POOLS, or "adp_cytosol", "amp_cytosol"; kind: "couple", "reviewer", "total"
    (the measured total stands for the free pool) or "unknown"; couple: set for "couple".
    """

    pool: str
    kind: str
    couple: IndicatorCouple | None


@dataclass(frozen=True)
class Plan:
    """Effective stoichiometry of every column for specimens of one matrix with the same pools known.

    owner[column]: index of the column's own step; nu[column, analyte]: exponents of the measured
    concentrations, inferred pools eliminated;
    combination[column, step]: how many times each step's ΔrG′° enters ΔG′ (1 for the step itself);
    offset, offset_sd[column]: ln of the reviewer's ratios as they enter ln Γ, with standard uncertainty;
    blocked[column]: why the column cannot be evaluated ("" if it can); defines[column]: pool that the
    column's couple defines, "" for most; inferred[column]: uses an inferred pool; totals[column]: uses a
    measured total as if it were free; rests_on[column]: couples used.
    """

    matrix: str
    pools: tuple[PoolUse, ...]
    owner: NDArray[np.intp]
    nu: Array
    combination: Array
    offset: Array
    offset_sd: Array
    blocked: tuple[str, ...]
    defines: tuple[str, ...]
    inferred: NDArray[np.bool_]
    totals: tuple[tuple[str, ...], ...]
    rests_on: tuple[tuple[IndicatorCouple, ...], ...]


def step_columns(catalogue: Catalogue) -> tuple[StepColumn, ...]:
    """The review's columns: each step once, and once more in the matrix where a cofactor pool differs."""
    columns = []
    second = []
    for index, step in enumerate(catalogue.steps):
        columns.append(StepColumn(step, index, step.compartments[0]))
        sides = {_side(c) for c in step.compartments}
        if len(sides) > 1 and COFACTORS & set(step.metabolite_ids):
            other = next(c for c in step.compartments if _side(c) != _side(step.compartments[0]))
            second.append(StepColumn(step, index, other))
    return (*columns, *second)


def _side(compartment: str) -> str:
    return "mitochondrial_matrix" if compartment in _MATRIX_SIDE else "cytosol"


def couple_analytes(catalogue: Catalogue, couple: IndicatorCouple) -> tuple[str, ...]:
    """What must be measured for the couple to report its pool (everything but the pool itself)."""
    step = next(s for s in catalogue.steps if s.id == couple.step_id)
    hidden = set(_pool_forms(couple.pool))
    if couple.pool == "amp_cytosol":
        hidden.add("adp")  # comes from creatine kinase
    return tuple(
        i for i in step.metabolite_ids if i not in hidden and not catalogue.metabolites[i].unit_activity
    )


def _pool_forms(pool: str) -> tuple[str, ...]:
    if pool in RATIO_POOLS:
        return RATIO_POOLS[pool][:2]
    return (pool.removesuffix("_cytosol"),)


class Planner:
    """Makes plans for one catalogue, set of columns, analyte order and set of reviewer's ratios."""

    def __init__(
        self,
        catalogue: Catalogue,
        columns: tuple[StepColumn, ...],
        analytes: tuple[str, ...],
        free_ratios: Mapping[str, FreeRatio],
    ) -> None:
        self._catalogue = catalogue
        self._columns = columns
        self._ratios = free_ratios
        self._analytes = analytes
        self._position = {a: k for k, a in enumerate(analytes)}
        self._step_index = {s.id: k for k, s in enumerate(catalogue.steps)}
        self._step_nu = np.zeros((len(catalogue.steps), len(analytes)))
        for k, step in enumerate(catalogue.steps):
            for metabolite, nu in step.stoichiometry:
                if not catalogue.metabolites[metabolite].unit_activity:
                    self._step_nu[k, self._position[metabolite]] += nu

    def plan(self, matrix: str, pools: tuple[PoolUse, ...]) -> Plan:
        """The plan for specimens of `matrix` whose pools are known as `pools` says."""
        n = len(self._columns)
        nu = np.zeros((n, len(self._analytes)))
        combination = np.zeros((n, len(self._catalogue.steps)))
        offset, variance = np.zeros(n), np.zeros(n)
        blocked, defines = [""] * n, [""] * n
        inferred = np.zeros(n, dtype=bool)
        totals: list[tuple[str, ...]] = [()] * n
        rests_on: list[tuple[IndicatorCouple, ...]] = [()] * n
        by_pool = {use.pool: use for use in pools}
        for c, column in enumerate(self._columns):
            row = _Row(self._step_nu[column.index].copy(), np.zeros(len(self._catalogue.steps)))
            row.combination[column.index] = 1.0
            defines[c] = self._defined_pool(column, by_pool)
            if defines[c]:
                self._strip_pool(row, defines[c])
            else:
                self._eliminate_ratios(row, column, by_pool, matrix)
                self._eliminate_adenylates(row, column, by_pool)
            nu[c], combination[c] = row.nu, row.combination
            offset[c], variance[c] = row.offset, row.variance
            blocked[c], inferred[c] = row.blocked, row.inferred
            totals[c], rests_on[c] = tuple(row.totals), tuple(row.rests_on)
        nu[np.abs(nu) < 1e-12] = 0.0
        return Plan(
            matrix=matrix,
            pools=pools,
            owner=np.array([column.index for column in self._columns], dtype=np.intp),
            nu=nu,
            combination=combination,
            offset=offset,
            offset_sd=np.sqrt(variance),
            blocked=tuple(blocked),
            defines=tuple(defines),
            inferred=inferred,
            totals=tuple(totals),
            rests_on=tuple(rests_on),
        )

    def _defined_pool(self, column: StepColumn, by_pool: Mapping[str, PoolUse]) -> str:
        for use in by_pool.values():
            if use.couple is None or use.couple.step_id != column.step.id:
                continue
            if use.pool not in RATIO_POOLS or RATIO_POOLS[use.pool][2] == _side(column.compartment):
                return use.pool
        return ""

    def _strip_pool(self, row: _Row, pool: str) -> None:
        """Leave the measured pair and the couple's constant: its shift is that of the free pool, at any conditions."""
        for form in _pool_forms(pool):
            row.nu[self._position[form]] = 0.0
        if pool == "amp_cytosol":
            row.nu[:] = 0.0  # both adenylates are inferred; no measured pair is left

    def _eliminate_ratios(
        self, row: _Row, column: StepColumn, by_pool: Mapping[str, PoolUse], matrix: str
    ) -> None:
        for pool, (oxidised, reduced, compartment) in RATIO_POOLS.items():
            if compartment != _side(column.compartment):
                continue
            reduced_nu = row.nu[self._position[reduced]]
            if reduced_nu == 0.0:
                continue
            use = by_pool[pool]
            row.nu[self._position[oxidised]] = row.nu[self._position[reduced]] = 0.0
            if use.kind == "reviewer":
                ratio = self._ratios[pool]
                row.offset -= reduced_nu * np.log(ratio.value)
                row.variance += (reduced_nu * ratio.sd_ln) ** 2
                row.inferred = True
            elif use.couple is not None:
                couple_nu = self._step_nu[self._step_index[use.couple.step_id]].copy()
                times = -reduced_nu / couple_nu[self._position[reduced]]
                couple_nu[self._position[oxidised]] = couple_nu[self._position[reduced]] = 0.0
                self._add(row, use.couple, times, couple_nu)
            else:
                row.blocked = _unknown_ratio(self._catalogue, pool, matrix)

    def _eliminate_adenylates(self, row: _Row, column: StepColumn, by_pool: Mapping[str, PoolUse]) -> None:
        for pool in ("amp_cytosol", "adp_cytosol"):  # AMP first: it brings in ADP
            form = pool.removesuffix("_cytosol")
            nu = row.nu[self._position[form]]
            if nu == 0.0:
                continue
            use = by_pool[pool]
            if use.couple is None or _side(column.compartment) != "cytosol":
                row.totals.append(form)
                continue
            couple_nu = self._step_nu[self._step_index[use.couple.step_id]].copy()
            self._add(row, use.couple, -nu / couple_nu[self._position[form]], couple_nu)

    def _add(self, row: _Row, couple: IndicatorCouple, times: float, couple_nu: Array) -> None:
        row.nu += times * couple_nu
        row.combination[self._step_index[couple.step_id]] += times
        row.inferred = True
        row.rests_on.append(couple)


class _Row:
    """One column of a plan while it is being made."""

    def __init__(self, nu: Array, combination: Array) -> None:
        self.nu = nu
        self.combination = combination
        self.offset = 0.0
        self.variance = 0.0
        self.blocked = ""
        self.inferred = False
        self.totals: list[str] = []
        self.rests_on: list[IndicatorCouple] = []


def _unknown_ratio(catalogue: Catalogue, pool: str, matrix: str) -> str:
    """Why the ratio is unknown in this matrix, and which pairs measured there would tell it."""
    oxidised, reduced, compartment = RATIO_POOLS[pool]
    pairs = []
    for couple in catalogue.couples:
        if couple.pool == pool and _usable_in(catalogue, couple, matrix):
            needed = " and ".join(catalogue.metabolites[i].symbol for i in couple_analytes(catalogue, couple))
            pairs.append(needed)
    ask = (
        f"; would be known from {' or from '.join(pairs)}, or set by the reviewer"
        if pairs
        else ("; can be set by the reviewer")
    )
    names = catalogue.metabolites[oxidised].symbol, catalogue.metabolites[reduced].symbol
    return f"free {names[0]}/{names[1]} of the {compartment.replace('_', ' ')} is not known{ask}"


def known_pools(
    catalogue: Catalogue,
    matrix: str,
    available: NDArray[np.bool_],
    analytes: tuple[str, ...],
    free_ratios: Mapping[str, FreeRatio],
) -> tuple[NDArray[np.int64], list[tuple[PoolUse, ...]]]:
    """How each specimen of one matrix knows its pools.

    available[specimen, analyte]: whether ln c (or a bound of it) is known. Returns an index per specimen
    and the pool uses it points to. The reviewer's ratio goes before any couple; couples go by priority.
    """
    position = {a: k for k, a in enumerate(analytes)}
    pools = [*RATIO_POOLS, "adp_cytosol", "amp_cytosol"]
    choice = np.zeros((len(available), len(pools)), dtype=np.int64)
    options: list[list[PoolUse]] = []
    for p, pool in enumerate(pools):
        fallback = "unknown" if pool in RATIO_POOLS else "total"
        uses = [PoolUse(pool, fallback, None)]
        options.append(uses)
        if pool in free_ratios:
            uses[0] = PoolUse(pool, "reviewer", None)
            continue
        couples = sorted((c for c in catalogue.couples if c.pool == pool), key=lambda c: c.priority)
        for couple in reversed(couples):  # the first priority is written last and stays
            if not _usable_in(catalogue, couple, matrix):
                continue
            uses.append(PoolUse(pool, "couple", couple))
            needed = [position[i] for i in couple_analytes(catalogue, couple)]
            has = available[:, needed].all(axis=1)
            if pool == "amp_cytosol":  # needs the free ADP that creatine kinase reports
                has &= choice[:, pools.index("adp_cytosol")] > 0
            choice[has, p] = len(uses) - 1
    distinct, inverse = np.unique(choice, axis=0, return_inverse=True)
    made = [tuple(options[p][k] for p, k in enumerate(row)) for row in distinct]
    return inverse.reshape(-1), made


def _usable_in(catalogue: Catalogue, couple: IndicatorCouple, matrix: str) -> bool:
    if matrix == "":
        return couple.pool == "nad_cytosol" and couple.priority == 1
    if matrix not in couple.matrices:
        return False
    return catalogue.applicability[couple.step_id, matrix].assessability != "not_assessable"
