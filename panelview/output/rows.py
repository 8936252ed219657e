"""The rows of every table a review is written to, as the contract names them."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from panelview.assess.calls import Assessability, Direction, Distance, Shift
from panelview.assess.drivers import drivers
from panelview.assess.review import Codes, Review
from panelview.thermo.physical import ZERO_CELSIUS

#: A cell: text, truth, a whole number or a number (NaN where nothing is known).
Value = str | bool | int | float
Row = tuple[Value, ...]

#: Columns of steps.csv that are fixed, in their order.
STEP_COLUMNS = (
    "specimen",
    "step",
    "enzyme",
    "ec",
    "pathway",
    "reaction",
    "assessability",
    "reason",
    "ln_gamma",
    "ln_k_prime",
    "delta_g0_prime_kj_per_mol",
    "delta_g0_prime_sd",
    "delta_g_kj_per_mol",
    "delta_g_sd",
    "delta_g_lower95",
    "delta_g_upper95",
    "p_reversed",
    "p_near_equilibrium",
    "direction",
    "distance",
    "reference_n",
    "reference_lower",
    "reference_upper",
    "shift_kj_per_mol",
    "shift_sd",
    "shift",
    "q_value",
    "highlighted",
    "censored",
    "inferred",
    "constant_source",
)

#: Further columns of steps.csv.
MORE_STEP_COLUMNS = (
    "compartment",
    "short",
    "p_value",
    "reference_mean",
    "reference_sd",
    "shift_lower",
    "shift_upper",
    "defines_pool",
    "participant",
    "group",
    "matrix",
    "ph",
    "temperature_c",
    "ionic_strength_mol_per_l",
    "pmg",
    "constant_basis",
    "reference",
)

DRIVER_COLUMNS = ("specimen", "step", "term", "contribution_kj_per_mol", "compartment")

STATE_COLUMNS = (
    "specimen",
    "quantity",
    "compartment",
    "couple",
    "value",
    "lower95",
    "upper95",
    "unit",
    "validity",
    "reason",
)


def written_columns(review: Review, specimen: int) -> list[int]:
    """Columns with a row of their own: each step once, and a second compartment where it can be read."""
    levels = review.findings.assessability[specimen]
    seen: set[int] = set()
    kept = []
    for c, entry in enumerate(review.columns):
        if entry.index not in seen or levels[c] <= Assessability.PROXY:
            kept.append(c)
        seen.add(entry.index)
    return sorted(kept, key=lambda c: (review.columns[c].index, c))


class StepRows:
    """Rows of steps.csv, one specimen at a time."""

    columns = STEP_COLUMNS + MORE_STEP_COLUMNS

    def __init__(self, review: Review) -> None:
        self._review = review
        constants = review.catalogue.constants
        # What is the same for all specimens, by column of the review.
        self._fixed: dict[str, Sequence[Value]] = {
            "step": [c.step.id for c in review.columns],
            "enzyme": [c.step.enzyme for c in review.columns],
            "ec": [c.step.ec for c in review.columns],
            "pathway": ["; ".join(c.step.pathways) for c in review.columns],
            "reaction": [c.step.reaction for c in review.columns],
            "compartment": [c.compartment for c in review.columns],
            "short": [c.step.short for c in review.columns],
            "constant_source": [review.constant_source(k) for k in range(len(review.columns))],
            "constant_basis": [constants.basis(c.index) for c in review.columns],
        }

    def of(self, specimen: int) -> Iterator[Row]:
        """The specimen's rows, in catalogue order."""
        by_name = self._fixed | _numbers(self._review, specimen) | _words(self._review, specimen)
        facts = _facts(self._review, specimen)
        kept = written_columns(self._review, specimen)
        lists = [
            [facts[name]] * len(kept) if name in facts else [by_name[name][c] for c in kept] for name in self.columns
        ]
        return iter(zip(*lists, strict=True))


#: Name of a column → name of the array in Findings.
_ARRAYS = {
    "ln_gamma": "ln_gamma",
    "ln_k_prime": "ln_k_prime",
    "delta_g0_prime_kj_per_mol": "delta_g0_prime",
    "delta_g0_prime_sd": "delta_g0_prime_sd",
    "delta_g_kj_per_mol": "delta_g",
    "delta_g_sd": "delta_g_sd",
    "delta_g_lower95": "delta_g_lower95",
    "delta_g_upper95": "delta_g_upper95",
    "p_reversed": "p_reversed",
    "p_near_equilibrium": "p_near",
    "reference_n": "reference_n",
    "reference_mean": "reference_mean",
    "reference_sd": "reference_sd",
    "reference_lower": "reference_lower",
    "reference_upper": "reference_upper",
    "shift_kj_per_mol": "shift",
    "shift_sd": "shift_sd",
    "shift_lower": "shift_lower",
    "shift_upper": "shift_upper",
    "p_value": "p_value",
    "q_value": "q_value",
    "highlighted": "highlighted",
    "censored": "censored",
    "inferred": "inferred",
    "defines_pool": "defines_pool",
}


def _numbers(review: Review, specimen: int) -> dict[str, Sequence[Value]]:
    f = review.findings
    return {name: getattr(f, array)[specimen].tolist() for name, array in _ARRAYS.items()}


def _words(review: Review, specimen: int) -> dict[str, Sequence[Value]]:
    f = review.findings

    def words(codes: Codes, kind: type[Assessability | Direction | Distance | Shift]) -> list[Value]:
        return [kind(int(code)).word for code in codes[specimen]]

    return {
        "assessability": words(f.assessability, Assessability),
        "reason": [review.reason(specimen, c) for c in range(len(review.columns))],
        "direction": words(f.direction, Direction),
        "distance": words(f.distance, Distance),
        "shift": words(f.shift_call, Shift),
    }


def _facts(review: Review, specimen: int) -> dict[str, Value]:
    """What is the same in all rows of a specimen."""
    facts, at = review.specimens[specimen], review.conditions
    return {
        "specimen": facts.code,
        "participant": facts.participant,
        "group": facts.group,
        "matrix": facts.matrix,
        "ph": float(at.ph[specimen]),
        "temperature_c": round(float(at.temperature[specimen]) - ZERO_CELSIUS, 9),
        "ionic_strength_mol_per_l": float(at.ionic_strength[specimen]),
        "pmg": float(at.pmg[specimen]),
        "reference": review.reference.label,
    }


def driver_rows(review: Review, specimen: int) -> Iterator[Row]:
    """Contributions to the shift of each of the specimen's steps, largest first."""
    code = review.specimens[specimen].code
    for c in written_columns(review, specimen):
        entry = review.columns[c]
        for driver in drivers(review, specimen, c):
            yield code, entry.step.id, driver.term, driver.contribution, entry.compartment


def state_rows(review: Review, specimen: int) -> Iterator[Row]:
    """Redox and energy quantities of the specimen."""
    code = review.specimens[specimen].code
    for r in review.state_of(specimen):
        yield (
            code,
            r.quantity,
            r.compartment,
            r.couple,
            r.value,
            r.lower95,
            r.upper95,
            r.unit,
            r.validity,
            r.reason,
        )
