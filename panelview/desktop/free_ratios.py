"""The free cofactor ratios of a specimen, where they come from, and values of the reviewer's own."""

from __future__ import annotations

import math
from dataclasses import dataclass

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QGridLayout,
    QLabel,
    QLineEdit,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from panelview.assess.review import ORIGIN_REVIEWER, Review
from panelview.catalogue.couples import RATIO_POOLS
from panelview.desktop import choices
from panelview.desktop.conditions_bar import show_origin
from panelview.desktop.reviewing import Reviewing
from panelview.output.text import shown_id, state_interval, state_value


@dataclass(frozen=True, slots=True)
class PoolRow:
    """One free ratio of a specimen. value: with its interval, "not known" without; origin: in words."""

    pool: str
    name: str
    value: str
    origin: str


def pool_rows(review: Review, specimen: int, own: dict[str, float]) -> list[PoolRow]:
    """The ratio pools of a specimen. own: values chosen in place of the couples, by pool."""
    uses = {use.pool: use for use in review.plans[review.plan_of[specimen]].pools}
    state = review.state_of(specimen)
    made = []
    for pool, (oxidised, reduced, compartment) in RATIO_POOLS.items():
        symbols = [review.catalogue.metabolites[i].symbol for i in (oxidised, reduced)]
        name = f"free {symbols[0]}/{symbols[1]}, {shown_id(compartment)}"
        use = uses.get(pool)
        value, origin = "not known", "no couple measured"
        if use is not None and use.kind == "reviewer":
            value, origin = state_value(own[pool], "1"), ORIGIN_REVIEWER
        elif use is not None and use.couple is not None:
            couple = use.couple.step_id
            enzyme = next(s.enzyme for s in review.catalogue.steps if s.id == couple)
            origin = f"from {enzyme}"
            row = next(
                (
                    r
                    for r in state
                    if r.couple == couple and r.compartment == compartment and r.quantity.endswith("_free")
                ),
                None,
            )
            if row is not None:
                shown = state_value(row.value, row.unit)
                value = f"{shown} ({state_interval(row.lower95, row.upper95, row.unit)})".strip()
        made.append(PoolRow(pool, name, value, origin))
    return made


class FreeRatiosDialog(QDialog):
    """One line a pool: the value in use, its origin, a field for a value of one's own, a way back."""

    def __init__(self, reviewing: Reviewing, parent: QWidget) -> None:
        super().__init__(parent)
        self._reviewing = reviewing
        self.setWindowTitle("Free cofactor ratios")
        self._values: dict[str, QLabel] = {}
        self._origins: dict[str, QLabel] = {}
        self.edits: dict[str, QLineEdit] = {}
        self.resets: dict[str, QPushButton] = {}
        self.problem = QLabel()
        self.problem.setProperty("role", "problem")
        self.problem.setWordWrap(True)
        note = QLabel(
            "Total NAD(P)(H) of an extract is never read as free. A ratio of your own, oxidised over "
            "reduced, goes in place of the couple's for all specimens and is marked wherever it is used."
        )
        note.setWordWrap(True)
        grid = QGridLayout()
        grid.setHorizontalSpacing(14)
        for column, text in enumerate(("Pool", "In use (95 % interval)", "Origin", "Your own")):
            grid.addWidget(QLabel(f"<b>{text}</b>"), 0, column)
        for row, pool in enumerate(RATIO_POOLS, start=1):
            self._add(grid, row, pool)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.setSpacing(12)
        layout.addWidget(note)
        layout.addLayout(grid)
        layout.addWidget(self.problem)
        layout.addWidget(buttons)
        reviewing.reviewed.connect(self.show_ratios)
        self.show_ratios()

    def _add(self, grid: QGridLayout, row: int, pool: str) -> None:
        self._values[pool], self._origins[pool] = QLabel(), QLabel()
        self._values[pool].setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self._origins[pool].setProperty("role", "origin")
        edit = QLineEdit()
        edit.setPlaceholderText("e.g. 700")
        edit.setMaximumWidth(110)
        edit.setAccessibleName(f"Own value of {shown_id(pool)}")
        edit.returnPressed.connect(lambda p=pool: self._set(p))
        reset = QPushButton("Use the couple")
        reset.setAutoDefault(False)
        reset.clicked.connect(lambda _=False, p=pool: self._reset(p))
        self.edits[pool], self.resets[pool] = edit, reset
        take = QPushButton("Set")
        take.setAutoDefault(False)
        take.setAccessibleName(f"Set {shown_id(pool)}")
        take.clicked.connect(lambda _=False, p=pool: self._set(p))
        name = QLabel()
        name.setObjectName(pool)
        for column, widget in enumerate((name, self._values[pool], self._origins[pool], edit, take, reset)):
            grid.addWidget(widget, row, column)

    def show_ratios(self) -> None:
        """The ratios of the chosen specimen as they now are."""
        review = self._reviewing.review
        if review is None:
            return
        ratios = self._reviewing.settings.free_ratios
        own = {pool: ratio.value for pool, ratio in ratios.items()}
        for row in pool_rows(review, self._reviewing.specimen, own):
            name = self.findChild(QLabel, row.pool)
            if name is not None:
                name.setText(row.name)
            self._values[row.pool].setText(row.value)
            show_origin(self._origins[row.pool], row.origin)
            self.resets[row.pool].setEnabled(row.pool in own)

    def _set(self, pool: str) -> None:
        text = self.edits[pool].text().strip().replace(",", ".")
        value = _number(text)
        if value is None:
            self.problem.setText(f"“{self.edits[pool].text()}” is no ratio; give a number above 0, such as 700.")
            self.edits[pool].setFocus()
            return
        self.problem.clear()
        self._reviewing.apply(choices.with_free_ratio(self._reviewing.wanted, pool, value))

    def _reset(self, pool: str) -> None:
        self.edits[pool].clear()
        settings = choices.without_free_ratio(self._reviewing.wanted, self._reviewing.start, pool)
        self._reviewing.apply(settings)


def _number(text: str) -> float | None:
    """A finite number above 0 and not beyond what a ratio can be, else None."""
    try:
        value = float(text)
    except ValueError:
        return None
    return value if math.isfinite(value) and 1e-12 < value < 1e12 else None
