"""Paints the rows of the step table: strips, names, numbers and headings."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QRect, QRectF, QSize, Qt
from PySide6.QtGui import QFontMetrics, QPainter, QPen
from PySide6.QtWidgets import QStyledItemDelegate, QStyleOptionViewItem, QTableView, QWidget

from panelview.desktop.arrangement import Heading
from panelview.desktop.cells import NUMBERS, Cell
from panelview.desktop.palette import Colours
from panelview.desktop.step_model import ENZYME_ROLE, LOOK_ROLE, ROW_ROLE, STRIP_ROLE
from panelview.desktop.strip_painter import StripPainter

#: Room at both sides of a text, px.
PADDING = 5


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
        elif index.column() == Cell.STEP:
            self._paint_name(painter, option, index)
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
            option.rect.adjusted(PADDING, 0, -PADDING, -2),
            Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom,
            text,
        )
        painter.restore()

    def _ground(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """The row's ground, its rule, and a bar at the left of the chosen row."""
        assert self.colours is not None
        view = self.parent()
        assert isinstance(view, QTableView)
        chosen = view.selectionModel().isRowSelected(index.row())
        painter.fillRect(option.rect, self.colours.colour("selection" if chosen else "base"))
        painter.setPen(QPen(self.colours.colour("faint_line"), 1))
        painter.drawLine(option.rect.bottomLeft(), option.rect.bottomRight())
        if chosen and view.hasFocus():
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
        assert self.painter is not None
        strip = index.data(STRIP_ROLE)
        if strip.reason:
            self._text(painter, option, strip.reason, "muted", False, Qt.AlignmentFlag.AlignLeft)
            return
        self.painter.paint(painter, QRectF(option.rect).adjusted(0, 0, 0, -1), strip)

    def _paint_name(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """The step's label, and the enzyme's name as far as there is room."""
        label = index.data() or ""
        look = index.data(LOOK_ROLE)
        bold = look in ("back", "forward")
        self._text(painter, option, label, "text", bold, Qt.AlignmentFlag.AlignLeft)
        font = option.font
        font.setBold(bold)
        used = QFontMetrics(font).horizontalAdvance(label) + 8
        rest = QStyleOptionViewItem(option)
        rest.rect = option.rect.adjusted(used, 0, 0, 0)
        if rest.rect.width() > 2 * PADDING + 24:
            self._text(painter, rest, index.data(ENZYME_ROLE), "muted", False, Qt.AlignmentFlag.AlignLeft)

    def _paint_text(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        look = index.data(LOOK_ROLE)
        bold = look in ("back", "forward")
        name = "text"
        if look == "unread":
            name = "muted"
        elif bold and index.column() in (Cell.CALL, Cell.SHIFT):
            name = look
        right = index.column() in NUMBERS
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
        area = option.rect.adjusted(PADDING, 0, -PADDING, 0)
        shown = QFontMetrics(font).elidedText(text, Qt.TextElideMode.ElideRight, area.width())
        painter.drawText(area, align | Qt.AlignmentFlag.AlignVCenter, shown)
        painter.restore()
