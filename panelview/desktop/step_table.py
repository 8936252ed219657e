"""The balance-strip table: rows of the step model with the strips painted and their axis in the heading."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QRect, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QFontMetrics, QKeyEvent, QPainter, QPaintEvent, QPalette, QPen, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHeaderView,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QTableView,
    QWidget,
)

from panelview.desktop.arrangement import Heading
from panelview.desktop.cells import HEADINGS, Cell
from panelview.desktop.palette import Colours
from panelview.desktop.step_model import LOOK_ROLE, ROW_ROLE, STRIP_ROLE, StepModel
from panelview.desktop.strip_painter import StripPainter
from panelview.output.scale import Axis, Scale

#: The widest usual text of each column; longer ones are elided and told in full by the tooltip.
_USUAL = {
    Cell.STEP: "Glyceraldehyde-3-P dehydr.",
    Cell.GAMMA: "0.0000000",
    Cell.K_PRIME: "0.0·10⁻¹⁰",
    Cell.DELTA_G: "−00.0 ± 00.0",
    Cell.SHIFT: "+00.0 ± 0.0",
    Cell.CALL: "pushed forward −00.0",
}
_LEAST_STRIP = 170
_PADDING = 7


class StripDelegate(QStyledItemDelegate):
    """Paints strips, headings and texts; the colours of a row come from its look."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.colours: Colours | None = None
        self.painter: StripPainter | None = None

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        if self.colours is None:
            return
        row = index.data(ROW_ROLE)
        if isinstance(row, Heading):
            self._paint_heading(painter, option, row)
            return
        self._ground(painter, option, index)
        if index.column() == Cell.STRIP:
            self._paint_strip(painter, option, index)
        else:
            self._paint_text(painter, option, index)

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        return QSize(10, option.fontMetrics.height() + 10)

    def _paint_heading(self, painter: QPainter, option: QStyleOptionViewItem, heading: Heading) -> None:
        assert self.colours is not None
        painter.save()
        painter.fillRect(option.rect, self.colours.colour("window"))
        font = option.font
        font.setBold(True)
        painter.setFont(font)
        painter.setPen(self.colours.colour("muted"))
        text = heading.text[:1].upper() + heading.text[1:]
        painter.drawText(
            option.rect.adjusted(_PADDING, 0, -_PADDING, -2),
            Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom,
            text,
        )
        painter.restore()

    def _ground(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """The row's ground, its rule, and a bar at the left of the chosen row."""
        assert self.colours is not None
        chosen = bool(option.state & QStyle.StateFlag.State_Selected)
        painter.fillRect(option.rect, self.colours.colour("selection" if chosen else "base"))
        painter.setPen(QPen(self.colours.colour("faint_line"), 1))
        painter.drawLine(option.rect.bottomLeft(), option.rect.bottomRight())
        view = self.parent()
        if chosen and isinstance(view, QTableView) and view.hasFocus():
            painter.setPen(QPen(self.colours.colour("accent"), 1))
            painter.drawLine(option.rect.topLeft(), option.rect.topRight())
            painter.drawLine(option.rect.bottomLeft(), option.rect.bottomRight())
        if index.column() == 0 and chosen:
            painter.fillRect(
                QRect(option.rect.left(), option.rect.top(), 3, option.rect.height()),
                self.colours.colour("accent"),
            )

    def _paint_strip(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        assert self.colours is not None and self.painter is not None
        strip = index.data(STRIP_ROLE)
        if strip.reason:
            self._text(painter, option, strip.reason, "muted", False, Qt.AlignmentFlag.AlignLeft)
            return
        self.painter.paint(painter, QRectF(option.rect).adjusted(0, 0, 0, -1), strip)

    def _paint_text(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        look = index.data(LOOK_ROLE)
        bold = look in ("back", "forward")
        name = "text"
        if look == "unread" and index.column() != Cell.STEP:
            name = "muted"
        elif bold and index.column() in (Cell.CALL, Cell.SHIFT):
            name = look
        right = index.column() in (Cell.GAMMA, Cell.K_PRIME, Cell.DELTA_G, Cell.SHIFT)
        align = Qt.AlignmentFlag.AlignRight if right else Qt.AlignmentFlag.AlignLeft
        self._text(painter, option, index.data() or "", name, bold, align)

    def _text(
        self,
        painter: QPainter,
        option: QStyleOptionViewItem,
        text: str,
        colour: str,
        bold: bool,
        align: Qt.AlignmentFlag,
    ) -> None:
        assert self.colours is not None
        painter.save()
        font = option.font
        font.setBold(bold)
        painter.setFont(font)
        painter.setPen(self.colours.colour(colour))
        area = option.rect.adjusted(_PADDING, 0, -_PADDING, 0)
        shown = QFontMetrics(font).elidedText(text, Qt.TextElideMode.ElideRight, area.width())
        painter.drawText(area, align | Qt.AlignmentFlag.AlignVCenter, shown)
        painter.restore()


class StripHeader(QHeaderView):
    """The table's heading; over the strips it draws their axis."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(Qt.Orientation.Horizontal, parent)
        self.setSectionsClickable(False)
        self.setHighlightSections(False)
        self.colours: Colours | None = None
        self.painter: StripPainter | None = None
        self.axis = Axis.SHIFT

    def sizeHint(self) -> QSize:
        return QSize(100, 2 * self.fontMetrics().height() + 14)

    def paintSection(self, painter: QPainter, rect: QRect, index: int) -> None:
        if self.colours is None or self.painter is None:
            return
        painter.save()
        painter.fillRect(rect, self.colours.colour("base"))
        painter.setPen(QPen(self.colours.colour("line"), 1))
        painter.drawLine(rect.bottomLeft(), rect.bottomRight())
        painter.setFont(self.font())
        if index == Cell.STRIP:
            self.painter.paint_axis(painter, QRectF(rect), self.axis)
        else:
            painter.setPen(self.colours.colour("muted"))
            right = index in (Cell.GAMMA, Cell.K_PRIME, Cell.DELTA_G, Cell.SHIFT)
            align = Qt.AlignmentFlag.AlignRight if right else Qt.AlignmentFlag.AlignLeft
            area = rect.adjusted(_PADDING, 0, -_PADDING, -6)
            painter.drawText(area, align | Qt.AlignmentFlag.AlignBottom, HEADINGS[Cell(index)])
        painter.restore()


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
        model.modelReset.connect(self._span_headings)
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
            self.setCurrentIndex(model.index(row, 0))
            self.scrollTo(model.index(row, 0))
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
        """The strip takes the width that the other columns leave."""
        if self.model() is not None:
            others = sum(self.columnWidth(cell) for cell in Cell if cell is not Cell.STRIP)
            self.setColumnWidth(Cell.STRIP, max(_LEAST_STRIP, self.viewport().width() - others))

    def _span_headings(self) -> None:
        model = self.model()
        assert isinstance(model, StepModel)
        self.clearSpans()
        for k, row in enumerate(model.rows):
            if isinstance(row, Heading):
                self.setSpan(k, 0, 1, len(Cell))

    def _fit_columns(self) -> None:
        metrics = self.fontMetrics()
        for cell, text in _USUAL.items():
            self._header.setSectionResizeMode(cell, QHeaderView.ResizeMode.Interactive)
            self.setColumnWidth(cell, metrics.horizontalAdvance(text) + 2 * _PADDING + 2)
        row_height = metrics.height() + 10
        self.verticalHeader().setDefaultSectionSize(row_height)
        self.verticalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
