"""Draws a balance strip and its axis with a QPainter; the table, the legend and exported figures share it."""

from __future__ import annotations

import math

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QFontMetricsF, QPainter, QPainterPath, QPen

from panelview.assess.sentences import signed
from panelview.desktop.palette import Colours
from panelview.output.scale import Axis, Scale
from panelview.output.strip import Strip

#: Room at both ends of a strip, px, so that a mark at the end is whole.
MARGIN = 9.0

#: What the sides mean, where there is no room for the axis's own words.
_SHORT_SIDES = {Axis.SHIFT: ("← forward", "back →"), Axis.DISTANCE: ("← usual", "turned →")}

_RADIUS = 4.2
_RADIUS_STRONG = 5.4


class StripPainter:
    """Paints strips on one scale in one set of colours."""

    def __init__(self, scale: Scale, colours: Colours) -> None:
        self._scale = scale
        self._colours = colours

    def x(self, value: float, area: QRectF) -> float:
        """Where `value` (kJ/mol) is drawn in `area`."""
        return area.left() + MARGIN + self._scale.at(value) * (area.width() - 2 * MARGIN)

    def paint(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        """Draw `strip` into `area` (a reason is text and left to the caller)."""
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setClipRect(area)
        self._ground(painter, area)
        if not strip.reason:
            self._reference(painter, area, strip)
        self._zero(painter, area, strip)
        if not strip.reason:
            self._interval(painter, area, strip)
            if math.isfinite(strip.value):
                self._point(painter, area, strip)
        painter.restore()

    def paint_bare(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        """Draw the marks of `strip` alone, without zero line (for the legend)."""
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        self._reference(painter, area, strip)
        self._hairlines(painter, area, strip)
        if strip.has_mark:
            self._interval(painter, area, strip)
        if math.isfinite(strip.value):
            self._point(painter, area, strip)
        painter.restore()

    def _ground(self, painter: QPainter, area: QRectF) -> None:
        """Shade the compressed parts."""
        for at in self._scale.breaks:
            x = self.x(at, area)
            end = area.left() if at < 0 else area.right()
            painter.fillRect(
                QRectF(min(x, end), area.top(), abs(end - x), area.height()),
                self._colours.colour("compressed"),
            )

    def _zero(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        painter.setPen(QPen(self._colours.colour("line"), 1.0))
        x = self.x(0.0, area)
        painter.drawLine(QLineF(x, area.top(), x, area.bottom()))
        self._hairlines(painter, area, strip)

    def _hairlines(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        painter.setPen(QPen(self._colours.colour("hairline"), 0.8, Qt.PenStyle.DotLine))
        for limit in strip.limits:
            if math.isfinite(limit):
                x = self.x(limit, area)
                painter.drawLine(QLineF(x, area.top(), x, area.bottom()))

    def _reference(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        """The reference interval as a band; without one, mean ± SD as a pale whisker and single controls."""
        middle = area.center().y()
        if math.isfinite(strip.band[0]):
            left, right = self.x(strip.band[0], area), self.x(strip.band[1], area)
            half = area.height() * 0.34
            painter.fillRect(
                QRectF(left, middle - half, max(right - left, 2.0), 2 * half), self._colours.colour("band")
            )
            return
        mean, sd = strip.spread
        pen = QPen(self._colours.colour("hairline"), 1.4)
        painter.setPen(pen)
        if math.isfinite(mean):
            x = self.x(mean, area)
            painter.drawLine(QLineF(x, middle - 7, x, middle + 7))
            if math.isfinite(sd):
                painter.drawLine(QLineF(self.x(mean - sd, area), middle, self.x(mean + sd, area), middle))
        pen.setWidthF(1.0)
        painter.setPen(pen)
        for value in strip.controls:
            x = self.x(value, area)
            painter.drawLine(QLineF(x, area.bottom() - 5, x, area.bottom() - 1))

    def _ink(self, strip: Strip) -> QColor:
        return self._colours.colour(strip.side or "mark")

    def _interval(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        """The 95 % interval; a bracket at a bound with an arrow towards the open side."""
        middle = area.center().y()
        painter.setPen(QPen(self._ink(strip), 2.4 if strip.side else 1.4))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        left = self.x(strip.lower, area) if math.isfinite(strip.lower) else area.left() + 3
        right = self.x(strip.upper, area) if math.isfinite(strip.upper) else area.right() - 3
        painter.drawLine(QLineF(left, middle, right, middle))
        if math.isinf(strip.lower):
            self._arrow(painter, left, middle, 1)
            self._bracket(painter, right, middle, -1)
        elif self._scale.is_beyond(strip.lower):
            self._arrow(painter, left, middle, 1)
        if math.isinf(strip.upper):
            self._arrow(painter, right, middle, -1)
            self._bracket(painter, left, middle, 1)
        elif self._scale.is_beyond(strip.upper):
            self._arrow(painter, right, middle, -1)

    @staticmethod
    def _arrow(painter: QPainter, x: float, y: float, inward: int) -> None:
        painter.drawPolyline([QPointF(x + 5 * inward, y - 4), QPointF(x, y), QPointF(x + 5 * inward, y + 4)])

    @staticmethod
    def _bracket(painter: QPainter, x: float, y: float, inward: int) -> None:
        tip = x + 4 * inward
        painter.drawPolyline([QPointF(tip, y - 6.5), QPointF(x, y - 6.5), QPointF(x, y + 6.5), QPointF(tip, y + 6.5)])

    def _point(self, painter: QPainter, area: QRectF, strip: Strip) -> None:
        ink = self._ink(strip)
        centre = QPointF(self.x(strip.value, area), area.center().y())
        r = _RADIUS_STRONG if strip.side else _RADIUS
        hollow = strip.proxy or strip.inferred
        pen = QPen(ink, 2.0 if strip.side else 1.5)
        if strip.inferred:
            pen.setDashPattern([1.3, 1.0])
            pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        painter.setPen(pen)
        painter.setBrush(QBrush(self._colours.colour("base")) if hollow else QBrush(ink))
        if strip.inferred:
            path = QPainterPath(centre + QPointF(0, -r - 1))
            for dx, dy in ((r + 1, 0), (0, r + 1), (-r - 1, 0)):
                path.lineTo(centre + QPointF(dx, dy))
            path.closeSubpath()
            painter.drawPath(path)
        else:
            painter.drawEllipse(centre, r, r)

    def paint_axis(self, painter: QPainter, area: QRectF, axis: Axis, has_title: bool = True) -> None:
        """The axis over a column of strips: title and meaning of the sides, ticks, break marks."""
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        metrics = QFontMetricsF(painter.font())
        if has_title:
            self._axis_words(painter, area, axis, metrics)
        base = area.bottom() - 4.5  # the break marks reach under it
        painter.setPen(QPen(self._colours.colour("muted"), 1.0))
        painter.drawLine(QLineF(area.left() + MARGIN, base, area.right() - MARGIN, base))
        widest = metrics.horizontalAdvance("−00")
        for tick in self._scale.ticks(area.width() - 2 * MARGIN, widest):
            x = self.x(tick, area)
            painter.drawLine(QLineF(x, base - 4, x, base))
            text = "0" if tick == 0 else signed(tick, 0)
            width = metrics.horizontalAdvance(text)
            left = min(max(x - width / 2, area.left() + 1), area.right() - width - 1)
            painter.drawText(QPointF(left, base - 6 - metrics.descent()), text)
        for at in self._scale.breaks:
            self._break_mark(painter, self.x(at, area) + (-6 if at < 0 else 6), base)
        painter.restore()

    def _axis_words(self, painter: QPainter, area: QRectF, axis: Axis, metrics: QFontMetricsF) -> None:
        """Title in the middle, what the sides mean at the ends; shortened where room is short."""
        top = QRectF(area.left() + 4, area.top() + 2, area.width() - 8, metrics.height())
        left, right = f"← {axis.left}", f"{axis.right} →"
        short = _SHORT_SIDES[axis]
        choices = (
            (left, axis.title, right),
            (left, "kJ/mol", right),
            (short[0], "kJ/mol", short[1]),
            ("←", "kJ/mol", "→"),
        )
        fitting = (c for c in choices if sum(metrics.horizontalAdvance(t) for t in c) + 16 <= top.width())
        left, title, right = next(fitting, choices[-1])
        painter.setPen(self._colours.colour("text"))
        painter.drawText(top, Qt.AlignmentFlag.AlignHCenter, title)
        painter.setPen(self._colours.colour("muted"))
        painter.drawText(top, Qt.AlignmentFlag.AlignLeft, left)
        painter.drawText(top, Qt.AlignmentFlag.AlignRight, right)

    def _break_mark(self, painter: QPainter, x: float, y: float) -> None:
        """Two slanting strokes: from here on the scale is compressed."""
        painter.setPen(QPen(self._colours.colour("text"), 1.2))
        for dx in (-2.0, 2.0):
            painter.drawLine(QLineF(x + dx - 2, y + 4, x + dx + 2, y - 4))
