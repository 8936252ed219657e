"""Whether a column can be read in a specimen, and the reason in words when it cannot or only in part."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from panelview.assess.calls import Assessability
from panelview.assess.plan import Plan
from panelview.assess.review import Concentrations, StepColumn
from panelview.catalogue.load import Catalogue

_BY_WORD = {a.word: a for a in Assessability}

#: Matrices where measured total ADP and AMP are customarily read as free (no creatine kinase; little is
#: bound): the erythrocyte. Elsewhere a total is the best that is known, and said so.
TOTALS_CUSTOMARY = frozenset({"erythrocyte"})

_UNSTATED = (
    "the matrix is not stated, so whether the step can be read here was not checked; "
    "state it in the file, on the command line or in the window"
)


class Readability:
    """Judges columns plan by plan and collects the distinct reasons."""

    def __init__(
        self, catalogue: Catalogue, columns: tuple[StepColumn, ...], analytes: tuple[str, ...]
    ) -> None:
        self._catalogue = catalogue
        self._columns = columns
        self._symbols = [catalogue.metabolites[a].symbol for a in analytes]
        self._texts: dict[str, int] = {"": 0}

    def texts(self) -> tuple[str, ...]:
        """All reasons given, in the order of their index."""
        return tuple(self._texts)

    def judge(
        self, plan: Plan, used: Concentrations, rows: NDArray[np.intp]
    ) -> tuple[NDArray[np.int8], NDArray[np.int32]]:
        """Assessability codes and reason indices, both [specimen of the plan, column]."""
        shape = (len(rows), len(self._columns))
        code = np.empty(shape, dtype=np.int8)
        reason = np.empty(shape, dtype=np.int32)
        missing = np.isnan(used.ln_c[rows])
        no_constant = self._without_constant(plan)
        for c, column in enumerate(self._columns):
            base, text = self._by_matrix(plan.matrix, column)
            if base == Assessability.NOT_ASSESSABLE:
                code[:, c], reason[:, c] = base, self._index(text)
                continue
            if plan.blocked[c]:
                code[:, c], reason[:, c] = Assessability.MISSING, self._index(plan.blocked[c])
                continue
            if plan.defines[c] and not plan.nu[c].any():
                text = _join(
                    self._definition(plan, c), "both of its adenylates are inferred, no pair is left"
                )
                code[:, c], reason[:, c] = Assessability.NOT_ASSESSABLE, self._index(text)
                continue
            level, text = self._of_pools(plan, c, base, text)
            if no_constant[c]:
                text = _join(
                    text, "no equilibrium constant is known: only the shift against controls can be read"
                )
            code[:, c], reason[:, c] = level, self._index(text)
            self._mark_missing(plan, c, missing, code, reason)
        return code, reason

    def _by_matrix(self, matrix: str, column: StepColumn) -> tuple[Assessability, str]:
        if matrix == "":
            return Assessability.PROXY, _UNSTATED
        entry = self._catalogue.applicability[column.step.id, matrix]
        level = _BY_WORD[entry.assessability]
        return level, "" if level == Assessability.ASSESSED else entry.reason

    def _of_pools(self, plan: Plan, c: int, level: Assessability, text: str) -> tuple[Assessability, str]:
        """What the column's pools add: defining couples, proxied couples, totals read as free."""
        if plan.defines[c]:
            return level, _join(self._definition(plan, c), text)
        for couple in plan.rests_on[c]:
            if plan.matrix == "":
                continue
            entry = self._catalogue.applicability[couple.step_id, plan.matrix]
            if entry.assessability == "proxy" and level == Assessability.ASSESSED:
                level = Assessability.PROXY
                text = _join(text, f"rests on a free pool whose couple is a proxy here: {entry.reason}")
        if plan.totals[c]:
            symbols = " and ".join(self._catalogue.metabolites[i].symbol for i in sorted(plan.totals[c]))
            text = _join(text, f"{symbols}: measured total read as free")
            has_couple = any(
                k.pool == "adp_cytosol" and plan.matrix in k.matrices for k in self._catalogue.couples
            )
            if has_couple and self._columns[c].compartment == "cytosol" and level == Assessability.ASSESSED:
                level = Assessability.PROXY
                text = _join(
                    text,
                    "most ADP and AMP of this tissue is bound; with phosphocreatine, creatine and ATP "
                    "the free values would be used",
                )
        return level, text

    def _definition(self, plan: Plan, c: int) -> str:
        pool = plan.defines[c]
        if pool.startswith("nad"):
            what = "NADP⁺/NADPH" if pool.startswith("nadp") else "NAD⁺/NADH"
            where = pool.split("_", 1)[1].replace("_", " ")
            return (
                f"defines the ratio: free {what} of the {where} is taken from this couple, so it is not "
                "judged by it; its shift is that of the free ratio"
            )
        symbol = pool.removesuffix("_cytosol").upper()
        return f"defines the pool: free {symbol} is taken from this couple, so it is not judged by it"

    def _mark_missing(
        self,
        plan: Plan,
        c: int,
        missing: NDArray[np.bool_],
        code: NDArray[np.int8],
        reason: NDArray[np.int32],
    ) -> None:
        needed = np.flatnonzero(plan.nu[c])
        lacks = missing[:, needed]
        pattern = lacks @ (1 << np.arange(len(needed)))
        for value in sorted(set(pattern.tolist())):
            if value == 0:
                continue
            names = [self._symbols[a] for k, a in enumerate(needed) if value >> k & 1]
            at = pattern == value
            code[at, c] = Assessability.MISSING
            reason[at, c] = self._index(f"not measured: {', '.join(names)}")

    def _without_constant(self, plan: Plan) -> NDArray[np.bool_]:
        unknown = np.array([a.basis == "none" for a in self._catalogue.constants.anchors])
        known_own = np.array(
            [a.step_id in self._catalogue.constants.own for a in self._catalogue.constants.anchors]
        )
        return np.asarray(((plan.combination != 0) & (unknown & ~known_own)).any(axis=1))

    def _index(self, text: str) -> int:
        return self._texts.setdefault(text, len(self._texts))


def _join(*parts: str) -> str:
    return "; ".join(p.rstrip(".") for p in parts if p)
