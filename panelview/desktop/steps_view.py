"""The middle of the window: the step table with its heading, axis, order and filters."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QFontMetrics
from PySide6.QtWidgets import (
    QButtonGroup,
    QCheckBox,
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from panelview.assess.review import ORIGIN_REVIEWER
from panelview.desktop.arrangement import Arrangement, Order, arranged, pathways, unread_count
from panelview.desktop.elided import ElidedLabel
from panelview.desktop.palette import Colours
from panelview.desktop.reviewing import Reviewing
from panelview.desktop.step_model import StepModel
from panelview.desktop.step_table import StepTable
from panelview.output.scale import Axis, scale_of

_ALL = "All pathways"


class StepsView(QWidget):
    """Shows the steps of the chosen specimen. `axis_changed` and `order_changed` keep menus in step."""

    axis_changed = Signal(object)
    order_changed = Signal(object)
    hide_changed = Signal(bool)

    def __init__(self, reviewing: Reviewing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._reviewing = reviewing
        self._colours: Colours | None = None
        self.axis = Axis.SHIFT
        self.order = Order.HOW_FAR
        self.model = StepModel(self)
        self.table = StepTable(self)
        self.table.setModel(self.model)
        self.table.column_chosen.connect(reviewing.choose_column)
        self._make_controls()
        self._lay_out()
        reviewing.opened.connect(self._show_new)
        reviewing.reviewed.connect(self._follow)
        reviewing.specimen_changed.connect(self._arrange)
        reviewing.column_changed.connect(lambda: self.table.choose(reviewing.column))

    # -- making ----------------------------------------------------------------------------------

    def _make_controls(self) -> None:
        self.code = QLabel()
        self.code.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        bold = self.code.font()
        bold.setBold(True)
        self.code.setFont(bold)
        self.heading = ElidedLabel()
        self._axis_buttons = {
            Axis.SHIFT: _segment("&Shift against controls", "left", "How far each step stands from the controls"),
            Axis.DISTANCE: _segment("&Distance from equilibrium", "right", "ΔG′ of each step; 0 is equilibrium"),
        }
        self._axis_group = QButtonGroup(self)
        for axis, button in self._axis_buttons.items():
            self._axis_group.addButton(button)
            button.clicked.connect(lambda _=False, a=axis: self.set_axis(a))
        self._axis_buttons[self.axis].setChecked(True)
        self.order_box = QComboBox()
        self.order_box.setAccessibleName("Order of the steps")
        self.order_box.setToolTip("Order of the steps")
        for order, text in ((Order.HOW_FAR, "Furthest off first"), (Order.PATHWAY, "Pathway order")):
            self.order_box.addItem(text, order)
        self.order_box.activated.connect(lambda: self.set_order(self.order_box.currentData()))
        self.pathway_box = QComboBox()
        self.pathway_box.setAccessibleName("Pathway")
        self.pathway_box.setToolTip("Show the steps of one pathway")
        self.pathway_box.addItem(_ALL, "")
        self.pathway_box.setMinimumContentsLength(11)
        self.pathway_box.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.pathway_box.activated.connect(self._arrange)
        self.filter_edit = QLineEdit()
        self.filter_edit.setPlaceholderText("Find step or analyte")
        self.filter_edit.setAccessibleName("Find step or analyte")
        self.filter_edit.setClearButtonEnabled(True)
        self.filter_edit.textChanged.connect(self._arrange)
        self.hide_box = QCheckBox("Hide unread")
        self.hide_box.setToolTip("Leave out steps that are not assessable here or not measured")
        self.hide_box.toggled.connect(self._arrange)
        self.hide_box.toggled.connect(self.hide_changed)

    def _lay_out(self) -> None:
        segments = QHBoxLayout()
        segments.setSpacing(0)
        for button in self._axis_buttons.values():
            segments.addWidget(button)
        controls = QHBoxLayout()
        controls.setSpacing(8)
        controls.addLayout(segments)
        for widget in (self.order_box, self.pathway_box):
            controls.addWidget(widget)
        controls.addWidget(self.filter_edit, 1)
        top = QHBoxLayout()
        top.addWidget(self.code)
        top.addWidget(self.heading, 1)
        top.addWidget(self.hide_box)
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(6)
        layout.addLayout(top)
        layout.addLayout(controls)
        layout.addWidget(self.table, 1)

    # -- asking ----------------------------------------------------------------------------------

    @property
    def asked(self) -> Arrangement:
        return Arrangement(
            order=self.order,
            text=self.filter_edit.text(),
            pathway=self.pathway_box.currentData() or "",
            hide_unread=self.hide_box.isChecked(),
        )

    def set_axis(self, axis: Axis) -> None:
        """Read the strips as shift against controls or as distance from equilibrium."""
        self.axis = axis
        self._axis_buttons[axis].setChecked(True)
        self.model.set_axis(axis)
        self._look()
        self.axis_changed.emit(axis)

    def set_order(self, order: Order) -> None:
        self.order = order
        self.order_box.setCurrentIndex(self.order_box.findData(order))
        self._arrange()
        self.order_changed.emit(order)

    def set_colours(self, colours: Colours) -> None:
        self._colours = colours
        self._look()

    # -- following -------------------------------------------------------------------------------

    def _show_new(self) -> None:
        review = self._reviewing.review
        assert review is not None
        self.pathway_box.clear()
        self.pathway_box.addItem(_ALL, "")
        for pathway in pathways(review):
            self.pathway_box.addItem(pathway[:1].upper() + pathway[1:], pathway)
        self.filter_edit.blockSignals(True)
        self.filter_edit.clear()
        self.filter_edit.blockSignals(False)
        if review.reference.kind == "none" and self.axis is Axis.SHIFT:
            self.set_axis(Axis.DISTANCE)
        self._look()
        self._arrange()

    def _arrange(self) -> None:
        review = self._reviewing.review
        if review is None:
            return
        rows = arranged(review, self._reviewing.specimen, self.asked)
        self.model.show(review, self._reviewing.specimen, rows)
        self.table.choose(self._reviewing.column)
        self._tell()

    def _follow(self) -> None:
        """New numbers: rows keep their place unless the filters now show other steps."""
        review = self._reviewing.review
        assert review is not None
        self._look()
        wanted = {r for r in arranged(review, self._reviewing.specimen, self.asked) if isinstance(r, int)}
        if wanted == {r for r in self.model.rows if isinstance(r, int)}:
            self.model.update_review(review)
            self._tell()
        else:
            self._arrange()

    def _look(self) -> None:
        review = self._reviewing.review
        if review is not None and self._colours is not None:
            self.table.set_look(scale_of(review, self.axis), self.axis, self._colours)

    def _tell(self) -> None:
        """The specimen, how many of its steps are off, and what it is compared with."""
        review, specimen = self._reviewing.review, self._reviewing.specimen
        assert review is not None
        facts = review.specimens[specimen]
        unread = unread_count(review, specimen)
        read = len(review.columns) - unread
        off = int(review.findings.highlighted[specimen].sum())
        said = "no step off" if off == 0 else f"{off} step{'s' if off > 1 else ''} off"
        kind = review.reference.kind
        compared = review.reference.label if kind == "none" else f"compared with {review.reference.label}"
        if self._reviewing.settings.reference != self._reviewing.start.reference:
            compared += f" ({ORIGIN_REVIEWER})"
        self.code.setText(facts.code)
        self.heading.say(f"· {said} of {read} read · {compared}")
        self.hide_box.setText(f"Hide {unread} not readable")


def _segment(text: str, side: str, tip: str) -> QPushButton:
    """One half of a two-part switch."""
    button = QPushButton(text)
    button.setCheckable(True)
    button.setToolTip(tip)
    button.setProperty("segment", side)
    bold = button.font()
    bold.setBold(True)  # as the style sheet shows it when it is on
    button.setMinimumWidth(QFontMetrics(bold).horizontalAdvance(text.replace("&", "")) + 22)
    return button
