"""The top of the window: the specimen's conditions with their uncertainty and origin, each editable."""

from __future__ import annotations

import math
from dataclasses import dataclass

from PySide6.QtCore import QLocale, QSize, Qt, Signal
from PySide6.QtGui import QFontMetrics, QValidator
from PySide6.QtWidgets import (
    QComboBox,
    QDoubleSpinBox,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSizePolicy,
    QWidget,
)

from panelview.assess.review import ORIGIN_REVIEWER
from panelview.desktop import choices
from panelview.desktop.reviewing import Reviewing
from panelview.thermo.conditions import LABELS, LIMITS
from panelview.thermo.physical import ZERO_CELSIUS


@dataclass(frozen=True, slots=True)
class _Kind:
    """How one condition is shown. offset: added to make the model's value; step, decimals: of the
    field; widest: its widest usual value."""

    field: str
    label: str
    unit: str
    offset: float
    step: float
    sd_step: float
    decimals: int
    widest: str


_KINDS = (
    _Kind("ph", "pH", "", 0.0, 0.05, 0.01, 2, "7.00"),
    _Kind("temperature", "Temperature", "°C", ZERO_CELSIUS, 0.5, 0.1, 1, "37.0"),
    _Kind("ionic_strength", "Ionic strength", "mol/L", 0.0, 0.01, 0.01, 3, "0.000"),
    _Kind("pmg", "pMg", "", 0.0, 0.1, 0.05, 2, "10.00"),
)


#: Longest name of a matrix that is shown whole, px; the tooltip has all of it.
_MATRIX_WIDTH = 130


class NumberField(QDoubleSpinBox):
    """A number with a point or a comma; takes any number, so that the model can say what it refuses."""

    def __init__(self, decimals: int, step: float, widest: str, lowest: float = -1000.0) -> None:
        super().__init__()
        self._widest = widest
        self.setLocale(QLocale.c())
        self.setDecimals(decimals)
        self.setSingleStep(step)
        self.setRange(lowest, 1000.0)
        self.setKeyboardTracking(False)
        self.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.setButtonSymbols(QDoubleSpinBox.ButtonSymbols.UpDownArrows)

    def validate(self, text: str, position: int) -> tuple[QValidator.State, str, int]:
        return super().validate(text.replace(",", ".").replace("−", "-"), position)

    def valueFromText(self, text: str) -> float:
        return super().valueFromText(text.replace(",", ".").replace("−", "-"))

    def wheelEvent(self, event: object) -> None:
        """The wheel scrolls the window; a value changes only on purpose."""
        event.ignore()  # type: ignore[attr-defined]

    def sizeHint(self) -> QSize:
        """Room for the widest usual value, not for every number that may be typed."""
        text = QFontMetrics(self.font()).horizontalAdvance(self.prefix() + self._widest)
        return QSize(text + 38, super().sizeHint().height())

    def minimumSizeHint(self) -> QSize:
        return self.sizeHint()

    def show_value(self, value: float) -> None:
        """Show a value without telling anyone."""
        self.blockSignals(True)
        self.setValue(value)
        self.blockSignals(False)


class ConditionField(QWidget):
    """One condition: value ± standard uncertainty, and where it comes from. `edited` tells field, value, sd
    in the model's units; NaN for the part that was not touched."""

    edited = Signal(str, float, float)

    def __init__(self, kind: _Kind) -> None:
        super().__init__()
        self._kind = kind
        label = LABELS[kind.field]
        low, high = (x - kind.offset for x in LIMITS[kind.field])
        tip = f"{kind.label} of the specimen; the model holds from {low:g} to {high:g} {kind.unit}".strip()
        self.value = NumberField(kind.decimals, kind.step, kind.widest)
        self.value.setAccessibleName(f"{label} of the specimen, {kind.unit}".rstrip(", "))
        self.value.setToolTip(tip)
        self.sd = NumberField(kind.decimals, kind.sd_step, f"{0:.{kind.decimals}f}", lowest=0.0)
        self.sd.setAccessibleName(f"standard uncertainty of {label}")
        self.sd.setToolTip(f"Standard uncertainty of {label}")
        self.sd.setPrefix("± ")
        self.name = QLabel(f"{kind.label}, {kind.unit}" if kind.unit else kind.label)
        self.origin = QLabel()
        self.origin.setProperty("role", "origin")
        self.value.valueChanged.connect(lambda v: self.edited.emit(kind.field, v + kind.offset, math.nan))
        self.sd.valueChanged.connect(lambda v: self.edited.emit(kind.field, math.nan, v))
        layout = QGridLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setHorizontalSpacing(4)
        layout.setVerticalSpacing(1)
        layout.addWidget(self.name, 0, 0, 1, 2)
        layout.addWidget(self.value, 1, 0)
        layout.addWidget(self.sd, 1, 1)
        layout.addWidget(self.origin, 2, 0, 1, 2)

    def show_condition(self, value: float, sd: float, origin: str) -> None:
        """Show a condition (the model's units)."""
        self.value.show_value(value - self._kind.offset)
        self.sd.show_value(sd)
        show_origin(self.origin, origin)


def show_origin(label: QLabel, origin: str) -> None:
    """An origin in words, marked where it is the reviewer's."""
    is_own = origin == ORIGIN_REVIEWER
    label.setText(f"● {origin}" if is_own else origin)
    if bool(label.property("own")) != is_own:
        label.setProperty("own", is_own)
        label.style().unpolish(label)
        label.style().polish(label)


class ConditionsBar(QWidget):
    """All conditions of the chosen specimen, the highlight floor, and the way to the free ratios."""

    ratios_asked = Signal()

    def __init__(self, reviewing: Reviewing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._reviewing = reviewing
        self.setAccessibleName("Conditions of the specimen")
        self.fields = {kind.field: ConditionField(kind) for kind in _KINDS}
        for field in self.fields.values():
            field.edited.connect(self._edit)
        self._make_others()
        self._lay_out()
        for signal in (reviewing.opened, reviewing.reviewed, reviewing.specimen_changed):
            signal.connect(self.show_conditions)
        reviewing.choice_refused.connect(self.show_conditions)

    def _make_others(self) -> None:
        self.matrix = QLabel()
        self.matrix.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.matrix_origin = QLabel()
        self.matrix_origin.setProperty("role", "origin")
        self.ratios = QPushButton("Free ratios …")
        self.ratios.setToolTip("Free NAD⁺/NADH and NADP⁺/NADPH: values, where they come from, your own")
        self.ratios.clicked.connect(self.ratios_asked)
        self.ratios_origin = QLabel()
        self.ratios_origin.setProperty("role", "origin")
        self.floor = NumberField(1, 0.5, "10.0", lowest=0.0)
        self.floor.setAccessibleName("Smallest shift that is highlighted")
        self.floor.setToolTip("Smallest shift that is highlighted, kJ/mol")
        self.floor.valueChanged.connect(self._set_floor)
        self.floor_origin = QLabel()
        self.floor_origin.setProperty("role", "origin")
        self.scope = QComboBox()
        self.scope.addItems(["this specimen", "all specimens"])
        self.scope.setAccessibleName("Which specimens a changed condition applies to")
        self.scope.setToolTip("Which specimens a changed condition applies to")
        self.reset = QPushButton("Reset")
        self.reset.setToolTip("Conditions, ratios, floor and reference as they were when the panel was opened")
        self.reset.clicked.connect(self.reset_all)

    def _lay_out(self) -> None:
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(12)
        layout.addWidget(_stack(QLabel("Matrix"), self.matrix, self.matrix_origin))
        for field in self.fields.values():
            layout.addWidget(field)
        layout.addWidget(_stack(QLabel("Free cofactor ratios"), self.ratios, self.ratios_origin))
        layout.addWidget(_stack(QLabel("Highlight from, kJ/mol"), self.floor, self.floor_origin))
        layout.addStretch(1)
        layout.addWidget(_stack(QLabel("Changes apply to"), self.scope, self.reset))

    # -- showing ---------------------------------------------------------------------------------

    def show_conditions(self, _: object = None) -> None:
        review, i = self._reviewing.review, self._reviewing.specimen
        if review is None:
            return
        for name, field in self.fields.items():
            field.show_condition(
                float(getattr(review.conditions, name)[i]),
                float(getattr(review.conditions, f"{name}_sd")[i]),
                review.condition_origin[name][i],
            )
        record = review.catalogue.matrices.get(review.specimens[i].matrix)
        name = record.name if record else "not stated"
        font = self.matrix.font()
        font.setBold(True)
        self.matrix.setFont(font)
        self.matrix.setText(QFontMetrics(font).elidedText(name, Qt.TextElideMode.ElideRight, _MATRIX_WIDTH))
        self.matrix.setToolTip(name)
        show_origin(self.matrix_origin, self._reviewing.matrix_origin(i))
        own = sum(ratio.source == ORIGIN_REVIEWER for ratio in self._reviewing.settings.free_ratios.values())
        show_origin(self.ratios_origin, ORIGIN_REVIEWER if own else "from couples of the panel")
        self.floor.show_value(review.shift_floor)
        changed = self._reviewing.settings.shift_floor != self._reviewing.start.shift_floor
        show_origin(self.floor_origin, ORIGIN_REVIEWER if changed else "as started")
        self.reset.setEnabled(self._reviewing.is_changed)

    # -- editing ---------------------------------------------------------------------------------

    def _edit(self, field: str, value: float, sd: float) -> None:
        review = self._reviewing.review
        if review is None:
            return
        whole_panel = self.scope.currentIndex() == 1
        code = None if whole_panel else review.specimens[self._reviewing.specimen].code
        self._reviewing.apply(
            choices.with_condition(
                self._reviewing.wanted,
                field,
                value if math.isfinite(value) else None,
                sd if math.isfinite(sd) else None,
                code,
            )
        )

    def _set_floor(self, floor: float) -> None:
        self._reviewing.apply(choices.with_shift_floor(self._reviewing.wanted, floor))

    def start_editing(self) -> None:
        """Put the cursor on the first condition, ready to be typed over."""
        first = self.fields["ph"].value
        first.setFocus()
        first.selectAll()

    def reset_all(self) -> None:
        """Everything as it was when the panel was opened."""
        self._reviewing.apply(self._reviewing.start)


def _stack(*widgets: QWidget) -> QWidget:
    """Widgets over one another, as high as a condition field."""
    box = QWidget()
    layout = QGridLayout(box)
    layout.setContentsMargins(0, 0, 0, 0)
    layout.setVerticalSpacing(1)
    for row, widget in enumerate(widgets):
        layout.addWidget(widget, row, 0)
    box.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Preferred)
    return box
