"""The heading of the step table; over the strips it draws their axis."""

from __future__ import annotations

from PySide6.QtCore import QRect, QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPen
from PySide6.QtWidgets import QHeaderView, QWidget

from panelview.desktop.cells import HEADINGS, NUMBERS, Cell
from panelview.desktop.palette import Colours
from panelview.desktop.strip_delegate import PADDING
from panelview.desktop.strip_painter import StripPainter
from panelview.output.scale import Axis


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
            right = index in NUMBERS
            align = Qt.AlignmentFlag.AlignRight if right else Qt.AlignmentFlag.AlignLeft
            area = rect.adjusted(PADDING, 0, -PADDING, -6)
            painter.drawText(area, align | Qt.AlignmentFlag.AlignBottom, HEADINGS[Cell(index)])
        painter.restore()
