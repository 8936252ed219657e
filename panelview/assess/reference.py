"""Which specimens or published values a panel is compared with, and what they are under a plan."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.assess.concentrations import concentrations
from panelview.assess.controls import Reference, from_controls, from_published, no_reference
from panelview.assess.mass_action import ConditionConstants, MassAction, evaluate
from panelview.assess.plan import Plan
from panelview.assess.review import Concentrations, ReferenceUsed
from panelview.assess.settings import Settings, UnknownReference
from panelview.assess.specimen_conditions import resolve_conditions
from panelview.catalogue.load import Catalogue
from panelview.catalogue.published import PublishedConcentration
from panelview.intake.panel import Panel

Array = NDArray[np.float64]

#: Group names that mean controls, in the languages laboratories write them (common practice, no source).
CONTROL_WORDS = frozenset(
    "control controls ctrl ctl con healthy normal reference ref hc "
    "kontrolle kontrollen gesund gesunde temoin témoin temoins témoins controle contrôle controles contrôles "
    "controllo controlli control_sano sano sanos kontroll kontroller".split()
)


#: Standard deviation of ln c between laboratories, put on each published value: its own SD is that of one
#: laboratory's method. Two published red-cell tables (Minakami and Yoshikawa 1965; Beutler 1984) differ by a
#: factor of two in the median of the analytes they share, an SD of 0.7 each; 0.4 leaves half of that to biology.
BETWEEN_LABORATORIES_SD = 0.4


@dataclass(frozen=True)
class _Controls:
    """Control specimens of a panel: which, what they hold, their constants."""

    matrices: NDArray[np.object_]
    rows: NDArray[np.intp]
    used: Concentrations
    constants: ConditionConstants
    in_study: bool


@dataclass(frozen=True)
class _Published:
    """Published ln c of one matrix: mean and spread per analyte, and subjects where all state them."""

    ln_mean: Array
    ln_sd: Array
    n: NDArray[np.int32]


@dataclass(frozen=True)
class ReferenceGroup:
    """The chosen reference; `used` is what the review shows of it."""

    used: ReferenceUsed
    controls: _Controls | None
    published: Mapping[str, _Published]

    def against(
        self,
        plan: Plan,
        rows: NDArray[np.intp],
        action: MassAction,
        rt: Array,
        used: Concentrations,
    ) -> Reference:
        """The reference for the specimens `rows` evaluated as `action` under `plan`.

        Controls are evaluated under the specimens' own plan, so that both use the same pools.
        """
        shape = (len(rows), len(action.active))
        if self.controls is not None:
            return self._from_controls(self.controls, plan, rows, action)
        if plan.matrix in self.published:
            return self._from_published(self.published[plan.matrix], plan, action, rt[:, None], used, rows)
        return no_reference(shape)

    def _from_controls(self, controls: _Controls, plan: Plan, rows: NDArray[np.intp], action: MassAction) -> Reference:
        own = controls.rows[controls.matrices[controls.rows] == plan.matrix]
        if len(own) == 0:
            return no_reference((len(rows), len(action.active)))
        theirs = evaluate(plan, controls.used, own, controls.constants, action.active)
        complete = ~(theirs.missing | theirs.open_below | theirs.open_above)
        member = np.full(len(rows), -1, dtype=np.intp)
        if controls.in_study:
            place = {specimen: k for k, specimen in enumerate(own)}
            member = np.array([place.get(r, -1) for r in rows], dtype=np.intp)
        return from_controls(theirs.compared, complete, member)

    def _from_published(
        self,
        published: _Published,
        plan: Plan,
        action: MassAction,
        rt: Array,
        used: Concentrations,
        rows: NDArray[np.intp],
    ) -> Reference:
        nu = plan.nu[action.active]
        uses = nu != 0
        lacks_mean = (uses & np.isnan(published.ln_mean)).any(axis=1)
        lacks_sd = (uses & np.isnan(published.ln_sd)).any(axis=1)
        ln_q = np.nan_to_num(published.ln_mean) @ nu.T + plan.offset[action.active]
        mean = action.constant_total + rt * np.where(lacks_mean, np.nan, ln_q)
        # Analytes are taken as independent between subjects: their correlation is not published.
        variance = (np.nan_to_num(published.ln_sd) ** 2 + BETWEEN_LABORATORIES_SD**2) @ (nu**2).T
        factor = np.where(np.isnan(used.ln_c[rows]), 0.0, used.shared_sd[rows]) @ nu.T
        sd = rt * np.sqrt(variance + factor**2)
        sd = np.where(lacks_sd | lacks_mean, np.nan, sd)
        subjects = np.where(uses, published.n, np.iinfo(np.int32).max).min(axis=1)
        n = np.broadcast_to(np.where(subjects > 0, subjects, 0).astype(np.int32), mean.shape)
        return from_published(mean, sd, np.where(np.isfinite(mean), n, 0))


def control_rows(panel: Panel, group: str | None = None) -> NDArray[np.intp]:
    """Specimens that belong to `group`, or to any group whose name means controls."""

    def is_control(name: str) -> bool:
        word = name.strip().casefold()
        return word == group.strip().casefold() if group is not None else word in CONTROL_WORDS

    return np.flatnonzero([is_control(s.group) for s in panel.specimens])


def reference_group(
    panel: Panel,
    catalogue: Catalogue,
    settings: Settings,
    used: Concentrations,
    constants: ConditionConstants,
) -> ReferenceGroup:
    """The reference that the settings choose; used, constants: of the panel. Raises UnknownReference."""
    choice = settings.reference
    if choice.kind == "none":
        return _nothing("no reference chosen")
    if choice.kind == "published":
        return _published(catalogue, used.analytes, panel)
    if choice.kind == "file" and choice.panel is not None:
        rows = control_rows(choice.panel)
        rows = rows if len(rows) else np.arange(len(choice.panel.specimens))
        theirs = concentrations(choice.panel, used.analytes)
        conditions, _ = resolve_conditions(choice.panel.specimens, catalogue.matrices, settings)
        at = ConditionConstants.of(catalogue.constants, conditions)
        return _controls("file", choice.name, choice.panel, rows, theirs, at)
    if choice.kind == "group":
        rows = control_rows(panel, choice.name)
        if len(rows) == 0:
            raise UnknownReference(choice.name, tuple(sorted({s.group for s in panel.specimens if s.group})))
        return _controls("group", choice.name, panel, rows, used, constants)
    rows = control_rows(panel)
    if len(rows):
        names = sorted({panel.specimens[r].group for r in rows})
        return _controls("group", ", ".join(names), panel, rows, used, constants)
    return _published(catalogue, used.analytes, panel)


def _nothing(label: str) -> ReferenceGroup:
    return ReferenceGroup(ReferenceUsed("none", label, (), 0, {}, {}), None, {})


def _controls(
    kind: str,
    name: str,
    panel: Panel,
    rows: NDArray[np.intp],
    used: Concentrations,
    constants: ConditionConstants,
) -> ReferenceGroup:
    matrices = np.array([s.matrix for s in panel.specimens], dtype=object)
    controls = _Controls(
        matrices=matrices,
        rows=rows,
        used=used,
        constants=constants,
        in_study=kind == "group",
    )
    ln_c: dict[str, Array] = {}
    members: dict[str, tuple[Array, NDArray[np.intp]]] = {}
    for matrix in sorted(set(matrices[rows])):
        of_matrix = rows[matrices[rows] == matrix]
        values = np.where(used.below | used.above, np.nan, used.ln_c)[of_matrix]
        counted = np.isfinite(values).sum(axis=0)
        total = np.nansum(values, axis=0)
        ln_c[matrix] = np.where(counted > 0, total / np.maximum(counted, 1), np.nan)
        members[matrix] = (values, of_matrix if kind == "group" else np.full(len(of_matrix), -1))
    where = f"controls of this study (group “{name}”)" if kind == "group" else f"controls from {name}"
    return ReferenceGroup(
        used=ReferenceUsed(
            kind=kind,
            label=f"{where}, {len(rows)} specimens",
            specimens=tuple(int(r) for r in rows) if kind == "group" else (),
            count=len(rows),
            ln_c=ln_c,
            members=members,
        ),
        controls=controls,
        published={},
    )


def _published(catalogue: Catalogue, analytes: tuple[str, ...], panel: Panel) -> ReferenceGroup:
    position = {a: k for k, a in enumerate(analytes)}
    made: dict[str, _Published] = {}
    labels = []
    for matrix in sorted({s.matrix for s in panel.specimens}):
        rows = [p for p in catalogue.published if p.is_default and p.matrix_id == matrix]
        if not rows:
            continue
        made[matrix] = _published_of(rows, position)
        labels.append(f"{catalogue.matrices[matrix].name}: {rows[0].set_id.replace('_', ' ')}")
    if not made:
        return _nothing("no controls in the study and no published values for the matrix")
    return ReferenceGroup(
        used=ReferenceUsed(
            kind="published",
            label="published concentrations (" + "; ".join(labels) + "), not this laboratory's own controls; "
            "widened for differences between laboratories",
            specimens=(),
            count=0,
            ln_c={matrix: values.ln_mean for matrix, values in made.items()},
            members={},
        ),
        controls=None,
        published=made,
    )


def _published_of(rows: list[PublishedConcentration], position: Mapping[str, int]) -> _Published:
    ln_mean = np.full(len(position), np.nan)
    ln_sd = np.full(len(position), np.nan)
    n = np.zeros(len(position), dtype=np.int32)
    for row in rows:
        k = position[row.metabolite_id]
        ln_mean[k], ln_sd[k], n[k] = row.ln_mean, row.ln_sd, row.n or 0
    return _Published(ln_mean, ln_sd, n)
