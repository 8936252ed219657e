"""The review: the one value that everything above makes and everything below shows."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from panelview.catalogue.load import Catalogue
from panelview.catalogue.steps import Step
from panelview.intake.panel import Panel, SpecimenFacts
from panelview.thermo.conditions import Conditions

if TYPE_CHECKING:
    from panelview.assess.mass_action import ConditionConstants
    from panelview.assess.plan import Plan

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Codes = NDArray[np.int8]

#: Where a condition's value came from; these words are shown and printed.
ORIGIN_FILE = "from the file"
ORIGIN_DEFAULT = "default of the matrix"
ORIGIN_COMMAND = "given on the command line"
ORIGIN_REVIEWER = "set by the reviewer"
ORIGIN_UNSTATED = "default, matrix not stated"


@dataclass(frozen=True, slots=True)
class StepColumn:
    """One column of the review: a step, read in one compartment.

    index: of the step in Catalogue.steps; compartment: of catalogue.steps.COMPARTMENTS.
    """

    step: Step
    index: int
    compartment: str


@dataclass(frozen=True)
class Findings:
    """What was found, arrays of shape [specimen, column]; energies kJ/mol; NaN where nothing can be said.

    assessability, direction, distance, shift_call: codes of `calls`; reason: index into Review.reasons;
    ln_gamma, ln_k_prime; delta_g0_prime with _sd (of the constant alone); delta_g with _sd and 95 %
    limits (±inf where a value below LOQ leaves a side open; then delta_g and ln_gamma are NaN);
    p_reversed = P(ΔG′ > 0), p_near; reference_n, _mean, _sd, _lower, _upper: ΔG′ of the reference
    group (limits NaN below 20 controls); band_lower, band_upper: the same limits on the shift axis
    (reference mean = 0); shift = ΔG′ − reference mean, shift_sd: standard deviation of
    that difference among healthy specimens; shift_lower, shift_upper: where the shift can lie when a
    value is censored (±inf on the open side, NaN otherwise; shift is then NaN); p_value, q_value;
    highlighted; censored: rests on a value beyond a limit of quantification; inferred: rests on an
    inferred free pool; defines_pool: the column's couple defines a free pool and is not judged by it
    (its shift is that of the couple).
    """

    assessability: Codes
    reason: NDArray[np.int32]
    ln_gamma: Array
    ln_k_prime: Array
    delta_g0_prime: Array
    delta_g0_prime_sd: Array
    delta_g: Array
    delta_g_sd: Array
    delta_g_lower95: Array
    delta_g_upper95: Array
    p_reversed: Array
    p_near: Array
    direction: Codes
    distance: Codes
    reference_n: NDArray[np.int32]
    reference_mean: Array
    reference_sd: Array
    reference_lower: Array
    reference_upper: Array
    band_lower: Array
    band_upper: Array
    shift: Array
    shift_sd: Array
    shift_lower: Array
    shift_upper: Array
    shift_call: Codes
    p_value: Array
    q_value: Array
    highlighted: Flags
    censored: Flags
    inferred: Flags
    defines_pool: Flags


@dataclass(frozen=True)
class Concentrations:
    """What the engine used, arrays of shape [specimen, analyte] over `analytes` (metabolite ids).

    ln_c: ln of mol/L (at the limit for censored values), NaN where missing; sd: standard uncertainty of
    ln c from the assay; shared_sd, basis: uncertainty and code of the shared conversion factor;
    below, above: the value lies under (over) ln_c; reading: index into Panel.readings, −1 where none.
    """

    analytes: tuple[str, ...]
    ln_c: Array
    sd: Array
    shared_sd: Array
    basis: Codes
    below: Flags
    above: Flags
    reading: NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class StateRow:
    """One redox or energy quantity of one specimen; fields as in state.csv."""

    specimen: int
    quantity: str
    compartment: str
    couple: str
    value: float
    lower95: float
    upper95: float
    unit: str
    validity: str
    reason: str


@dataclass(frozen=True)
class ReferenceUsed:
    """The reference group in words and numbers.

    kind: "group", "file", "published" or "none"; label: shown and printed; specimens: indices into
    Review.specimens where the controls are in the study (else empty); count: specimens in the group.
    ln_c: matrix id → geometric mean of the reference's concentrations, [analyte], NaN where unknown;
    members: matrix id → (ln c of each control, [control, analyte], NaN where missing or censored; index
    of each control among the review's specimens, −1 for others); empty for published values.
    """

    kind: str
    label: str
    specimens: tuple[int, ...]
    count: int
    ln_c: Mapping[str, Array]
    members: Mapping[str, tuple[Array, NDArray[np.intp]]]


@dataclass(frozen=True)
class Review:
    """A panel assessed: see `Findings` for the numbers.

    conditions: of each specimen; condition_origin[field][specimen]: one of the ORIGIN_ words;
    plan_of: index into `plans` of each specimen (which free pools it used and how); constants: of every
    step at each specimen's conditions.
    """

    program_version: str
    catalogue: Catalogue
    panel: Panel
    specimens: tuple[SpecimenFacts, ...]
    conditions: Conditions
    condition_origin: Mapping[str, tuple[str, ...]]
    columns: tuple[StepColumn, ...]
    findings: Findings
    reasons: tuple[str, ...]
    concentrations: Concentrations
    plans: tuple[Plan, ...]
    plan_of: NDArray[np.int32]
    constants: ConditionConstants
    reference: ReferenceUsed
    shift_floor: float

    def reason(self, specimen: int, column: int) -> str:
        """Why the column is a proxy, not assessable or missing here; "" where there is nothing to say."""
        return self.reasons[int(self.findings.reason[specimen, column])]

    def constant_source(self, column: int) -> str:
        return self.catalogue.constants.source(self.columns[column].index)

    def state_of(self, specimen: int) -> tuple[StateRow, ...]:
        """Redox and energy state of one specimen."""
        from panelview.assess.state import state_of  # made from the review, so imported late

        return state_of(self, specimen)

    @cached_property
    def state(self) -> tuple[StateRow, ...]:
        """Redox and energy state of every specimen."""
        return tuple(row for i in range(len(self.specimens)) for row in self.state_of(i))
