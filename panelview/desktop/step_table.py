"""The balance-strip table: rows of the step model with the strips painted and their axis in the heading."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, Qt, Signal
from PySide6.QtGui import QFontMetrics, QKeyEvent, QKeySequence, QPaintEvent, QPalette, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QWidget

from panelview.desktop.arrangement import Heading
from panelview.desktop.cells import Cell
from panelview.desktop.copying import copy_selected_rows
from panelview.desktop.palette import Colours
from panelview.desktop.step_model import ROW_ROLE, StepModel
from panelview.desktop.strip_delegate import PADDING, StripDelegate
from panelview.desktop.strip_header import StripHeader
from panelview.desktop.strip_painter import StripPainter
from panelview.output.scale import Axis, Scale

#: The widest usual text of each column of fixed width; longer ones are elided, the tooltip has them whole.
_USUAL = {
    Cell.GAMMA: "0.0·10⁻¹⁰",
    Cell.K_PRIME: "0.0·10⁻¹⁰",
    Cell.DELTA_G: "−00.0 ± 0.0",
    Cell.SHIFT: "+00.0 ± 0.0",
    Cell.CALL: "pushed forward −00.0",
}

#: Share of the table's width that the step's name takes, within limits, px; the strip takes the rest.
_NAME_SHARE = 0.16
_NAME_LEAST, _NAME_MOST = 104, 250
_LEAST_STRIP = 156


class StepTable(QTableView):
    """The table itself. `painted` is sent after the first paint that shows steps; `column_chosen` tells the
    column of the review whose row was chosen."""

    painted = Signal()
    column_chosen = Signal(int)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._has_painted = False
        self._delegate = StripDelegate(self)
        self._header = StripHeader(self)
        self.setHorizontalHeader(self._header)
        self.setItemDelegate(self._delegate)
        self.verticalHeader().hide()
        self.setShowGrid(False)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setTabKeyNavigation(False)
        self.setWordWrap(False)
        self.setFrameShape(QTableView.Shape.NoFrame)
        self.setAccessibleName("Steps")
        self.setAccessibleDescription(
            "One row a step, with its balance strip, Γ, K′eq, ΔG′, shift against controls and call"
        )

    def setModel(self, model: StepModel) -> None:  # type: ignore[override]
        super().setModel(model)
        self._header.setMinimumSectionSize(40)
        model.modelReset.connect(self._span)
        model.dataChanged.connect(self._span)
        self._fit_columns()

    def set_look(self, scale: Scale, axis: Axis, colours: Colours) -> None:
        """Paint on this scale, axis and set of colours from now on."""
        painter = StripPainter(scale, colours)
        self._delegate.painter = self._header.painter = painter
        self._delegate.colours = self._header.colours = colours
        self._header.axis = axis
        palette = self.palette()
        palette.setColor(QPalette.ColorRole.Base, colours.colour("base"))
        self.setPalette(palette)
        self._header.viewport().update()
        self.viewport().update()

    def choose(self, column: int) -> None:
        """Make the row of a column of the review the current one and bring it into sight."""
        model = self.model()
        if not isinstance(model, StepModel):
            return
        row = model.row_of(column)
        if row >= 0:
            index = model.index(row, 0)
            is_seen = self.viewport().rect().contains(self.visualRect(index))
            self.setCurrentIndex(index)
            if not is_seen:
                self.scrollTo(index, QAbstractItemView.ScrollHint.PositionAtCenter)
        else:
            self.clearSelection()

    def currentChanged(self, current: QModelIndex, previous: QModelIndex) -> None:  # type: ignore[override]
        super().currentChanged(current, previous)
        row = current.data(ROW_ROLE) if current.isValid() else None
        if isinstance(row, int) and current.row() != previous.row():
            self.column_chosen.emit(row)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Left and right scroll nothing here: a row is one thing, so they are left to the window."""
        if event.key() in (Qt.Key.Key_Left, Qt.Key.Key_Right):
            event.ignore()
            return
        if event.matches(QKeySequence.StandardKey.Copy):
            copy_selected_rows(self)
            return
        super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        super().paintEvent(event)
        if not self._has_painted and self.model() is not None and self.model().rowCount():
            self._has_painted = True
            self.painted.emit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit_strip()

    def _fit_strip(self) -> None:
        """Name and strip share the width that the other columns leave."""
        if self.model() is None:
            return
        width = self.viewport().width()
        self.setColumnWidth(Cell.STEP, round(min(max(width * _NAME_SHARE, _NAME_LEAST), _NAME_MOST)))
        others = sum(self.columnWidth(cell) for cell in Cell if cell is not Cell.STRIP)
        self.setColumnWidth(Cell.STRIP, max(_LEAST_STRIP, width - others))

    def _span(self) -> None:
        """A heading takes its whole row; a reason takes the room of the Γ that is not known either."""
        model = self.model()
        assert isinstance(model, StepModel)
        self.clearSpans()
        for k, row in enumerate(model.rows):
            if isinstance(row, Heading):
                self.setSpan(k, 0, 1, len(Cell))
            elif model.look(row) == "unread":
                self.setSpan(k, Cell.STRIP, 1, 2)

    def _fit_columns(self) -> None:
        font = self.font()
        font.setBold(True)
        metrics = QFontMetrics(font)
        self._header.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        for cell, text in _USUAL.items():
            self.setColumnWidth(cell, metrics.horizontalAdvance(text) + 2 * PADDING + 2)
        self.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        self.verticalHeader().setDefaultSectionSize(metrics.height() + 9)
