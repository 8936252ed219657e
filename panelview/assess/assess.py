"""The one entry: a panel, the catalogue and the reviewer's settings make a review."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

import panelview
from panelview.assess import verdicts
from panelview.assess.calls import FALSE_DISCOVERY_RATE, Z95, Assessability
from panelview.assess.concentrations import concentrations
from panelview.assess.controls import Reference, p_values, shift_sd
from panelview.assess.mass_action import ConditionConstants, MassAction, evaluate
from panelview.assess.plan import Plan, Planner, known_pools, step_columns
from panelview.assess.readability import Readability
from panelview.assess.reference import reference_group
from panelview.assess.review import Concentrations, Findings, Review, StepColumn
from panelview.assess.settings import Settings
from panelview.assess.specimen_conditions import resolve_conditions
from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Panel

Array = NDArray[np.float64]

_DEFAULT_SETTINGS = Settings()


def assess(panel: Panel, catalogue: Catalogue, settings: Settings = _DEFAULT_SETTINGS) -> Review:
    """Assess every specimen of the panel.

    Raises OutOfModelRange for a chosen condition outside the model, UnknownReference for a control group
    that no specimen belongs to, KeyError for an own constant of an unknown step.
    """
    if settings.own_constants:
        catalogue = replace(catalogue, constants=catalogue.constants.with_own(settings.own_constants))
    analytes = tuple(catalogue.metabolites)
    columns = step_columns(catalogue)
    conditions, origins = resolve_conditions(panel.specimens, catalogue.matrices, settings)
    used = concentrations(panel, analytes)
    constants = ConditionConstants.of(catalogue.constants, conditions)
    group = reference_group(panel, catalogue, settings, used, constants)
    planner = Planner(catalogue, columns, analytes, settings.free_ratios)
    readability = Readability(catalogue, columns, analytes)

    plans, plan_of = _plans(panel, catalogue, settings, planner, used)
    board = _Board((len(panel.specimens), len(columns)))
    board.fill_constants(columns, constants)
    for k, plan in enumerate(plans):
        rows = np.flatnonzero(plan_of == k)
        action = evaluate(plan, used, rows, constants)
        readable, reason = readability.judge(plan, used, rows)
        board.readability[rows], board.reason[rows] = readable, reason
        board.fill(plan, rows, action, constants.rt[rows][:, None])
        reference = group.against(plan, rows, action, constants.rt[rows], used)
        board.compare(rows, action, reference)
    return Review(
        program_version=panelview.__version__,
        catalogue=catalogue,
        panel=panel,
        specimens=panel.specimens,
        conditions=conditions,
        condition_origin=origins,
        columns=columns,
        findings=board.findings(columns, settings.shift_floor),
        reasons=readability.texts(),
        concentrations=used,
        plans=plans,
        plan_of=plan_of,
        constants=constants,
        reference=group.used,
        shift_floor=settings.shift_floor,
    )


def _plans(
    panel: Panel, catalogue: Catalogue, settings: Settings, planner: Planner, used: Concentrations
) -> tuple[tuple[Plan, ...], NDArray[np.int32]]:
    """One plan for each matrix and way of knowing the pools; the plan's index of every specimen."""
    matrices = np.array([s.matrix for s in panel.specimens], dtype=object)
    plan_of = np.zeros(len(panel.specimens), dtype=np.int32)
    plans: list[Plan] = []
    available = np.isfinite(used.ln_c)
    for matrix in sorted(set(matrices)):
        rows = np.flatnonzero(matrices == matrix)
        index, pools = known_pools(catalogue, matrix, available[rows], used.analytes, settings.free_ratios)
        plan_of[rows] = index + len(plans)
        plans += [planner.plan(matrix, uses) for uses in pools]
    return tuple(plans), plan_of


#: Float arrays of a board.
_FLOAT_ARRAYS = 23


class _Board:
    """The findings while they are being filled in, plan by plan."""

    def __init__(self, shape: tuple[int, int]) -> None:
        # One block for all arrays: a cohort's pages are then faulted in together, four times as fast.
        block = iter(np.full((_FLOAT_ARRAYS, *shape), np.nan))

        def nothing() -> Array:
            return next(block)

        def no() -> NDArray[np.bool_]:
            return np.zeros(shape, dtype=bool)

        self.readability = np.full(shape, Assessability.MISSING, dtype=np.int8)
        self.reason = np.zeros(shape, dtype=np.int32)
        self.ln_k, self.g0, self.g0_sd = nothing(), nothing(), nothing()
        self.ln_gamma, self.g, self.g_sd = nothing(), nothing(), nothing()
        self.lower, self.upper = nothing(), nothing()
        self.p_reversed, self.p_near = nothing(), nothing()
        self.direction = np.zeros(shape, dtype=np.int8)
        self.distance = np.zeros(shape, dtype=np.int8)
        self.n = np.zeros(shape, dtype=np.int32)
        self.mean, self.sd = nothing(), nothing()
        self.ref_lower, self.ref_upper = nothing(), nothing()
        self.band_lower, self.band_upper = nothing(), nothing()
        self.shift, self.shift_sd, self.p = nothing(), nothing(), nothing()
        self.shift_lower, self.shift_upper = nothing(), nothing()
        self.at_limit, self.ln_ratio = nothing(), nothing()
        self.tested, self.censored, self.inferred, self.defines = no(), no(), no(), no()

    def fill_constants(self, columns: tuple[StepColumn, ...], constants: ConditionConstants) -> None:
        index = [column.index for column in columns]
        self.g0[:] = constants.steps.delta_g0_prime[:, index][constants.row]
        self.g0_sd[:] = constants.steps.sd[:, index][constants.row]
        self.g0_sd[np.isnan(self.g0)] = np.nan
        self.ln_k[:] = -self.g0 / constants.rt[:, None]

    def fill(self, plan: Plan, rows: NDArray[np.intp], action: MassAction, rt: Array) -> None:
        """ΔG′, its limits and calls for the readable entries of one plan."""
        at = np.ix_(rows, action.active)
        readable = self.readability[at] <= Assessability.PROXY
        defines = np.array([bool(plan.defines[c]) for c in action.active], dtype=bool)
        has_value = readable & ~defines
        g = np.where(has_value, action.delta_g, np.nan)
        sd = np.where(has_value & np.isfinite(g), action.sd, np.nan)
        below, above = action.open_below, action.open_above
        is_open = below | above
        p = verdicts.probability_reversed(g, sd)
        # A step without a constant has a mass-action ratio all the same.
        self.ln_gamma[at] = np.where(has_value & ~is_open, action.ln_gamma, np.nan)
        self.g[at] = np.where(is_open, np.nan, g)
        self.g_sd[at] = sd
        self.lower[at] = np.where(below & np.isfinite(g), -np.inf, g - Z95 * sd)
        self.upper[at] = np.where(above & np.isfinite(g), np.inf, g + Z95 * sd)
        self.p_reversed[at] = np.where(is_open, np.nan, p)
        self.p_near[at] = np.where(is_open, np.nan, verdicts.probability_near(g, sd, rt))
        self.direction[at] = verdicts.directions(p, below, above)
        self.ln_ratio[at] = g / rt
        self.distance[at] = verdicts.distances(g / rt, below, above)
        self.censored[at] = is_open & readable
        self.inferred[at] = plan.inferred[action.active] & has_value
        self.defines[at] = defines & readable

    def compare(self, rows: NDArray[np.intp], action: MassAction, reference: Reference) -> None:
        """The specimens of one plan against the reference group."""
        at = np.ix_(rows, action.active)
        readable = self.readability[at] <= Assessability.PROXY
        is_open = action.open_below | action.open_above
        # The columns' own constants cancel in this difference; where none is known it is RT Δln Γ.
        difference = np.where(readable, action.compared - reference.mean, np.nan)
        sd = shift_sd(reference, action.assay_sd)
        has_delta_g = readable & np.isfinite(action.delta_g) & ~self.defines[at]
        self.n[at] = np.where(readable, reference.n, 0)
        self.mean[at] = np.where(has_delta_g, reference.mean, np.nan)
        self.sd[at] = np.where(readable, reference.sd, np.nan)
        self.ref_lower[at] = np.where(has_delta_g, reference.lower, np.nan)
        self.ref_upper[at] = np.where(has_delta_g, reference.upper, np.nan)
        self.band_lower[at] = np.where(readable, reference.lower - reference.mean, np.nan)
        self.band_upper[at] = np.where(readable, reference.upper - reference.mean, np.nan)
        self.shift[at] = np.where(is_open, np.nan, difference)
        self.shift_sd[at] = np.where(np.isfinite(difference), sd, np.nan)
        known = is_open & np.isfinite(difference)
        self.shift_lower[at] = np.where(known, np.where(action.open_below, -np.inf, difference), np.nan)
        self.shift_upper[at] = np.where(known, np.where(action.open_above, np.inf, difference), np.nan)
        # A bound is tested only towards the side on which every value is at least as extreme.
        agrees = (action.open_below & ~action.open_above & (difference < 0)) | (
            action.open_above & ~action.open_below & (difference > 0)
        )
        p = p_values(difference, sd, reference)
        self.p[at] = np.where(is_open & ~agrees, np.nan, p)
        self.tested[at] = reference.tested & np.isfinite(difference)
        self.at_limit[at] = difference

    def findings(self, columns: tuple[StepColumn, ...], shift_floor: float) -> Findings:
        """Close the board: false discovery rate over each specimen, calls, highlights."""
        tested = np.isfinite(self.p).any(axis=0)
        q = np.full_like(self.p, np.nan)
        q[:, tested] = verdicts.false_discovery(self.p[:, tested])
        call = verdicts.shift_calls(self.at_limit, q, self.tested)
        either = np.array([column.step.usual_direction == "either" for column in columns], dtype=bool)
        direction = verdicts.without_usual_direction(self.direction, either, self.ln_ratio, call)
        moved = (q <= FALSE_DISCOVERY_RATE) & (np.abs(self.at_limit) >= shift_floor)
        return Findings(
            assessability=self.readability,
            reason=self.reason,
            ln_gamma=self.ln_gamma,
            ln_k_prime=self.ln_k,
            delta_g0_prime=self.g0,
            delta_g0_prime_sd=self.g0_sd,
            delta_g=self.g,
            delta_g_sd=self.g_sd,
            delta_g_lower95=self.lower,
            delta_g_upper95=self.upper,
            p_reversed=self.p_reversed,
            p_near=self.p_near,
            direction=direction,
            distance=self.distance,
            reference_n=self.n,
            reference_mean=self.mean,
            reference_sd=self.sd,
            reference_lower=self.ref_lower,
            reference_upper=self.ref_upper,
            band_lower=self.band_lower,
            band_upper=self.band_upper,
            shift=self.shift,
            shift_sd=self.shift_sd,
            shift_lower=self.shift_lower,
            shift_upper=self.shift_upper,
            shift_call=call,
            p_value=self.p,
            q_value=q,
            highlighted=moved,
            censored=self.censored,
            inferred=self.inferred,
            defines_pool=self.defines,
        )
