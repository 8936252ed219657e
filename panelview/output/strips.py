"""Draws balance strips and their axis on a page: vector lines, black and grey, each state by its own mark."""

from __future__ import annotations

import math

from reportlab.lib.colors import Color, black, white
from reportlab.pdfbase.pdfmetrics import stringWidth
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import Flowable

from panelview.assess.sentences import signed
from panelview.output.fonts import BOLD, REGULAR
from panelview.output.scale import Scale
from panelview.output.strip import Strip

#: Room at both ends of a strip, pt, so that a mark at the end is whole.
MARGIN = 5.0

_RADIUS = 2.5
_RADIUS_STRONG = 3.3
_COMPRESSED = Color(0.93, 0.93, 0.93)
_BAND = Color(0.78, 0.78, 0.78)
_LINE = Color(0.45, 0.45, 0.45)
_MUTED = Color(0.25, 0.25, 0.25)


class StripDrawing(Flowable):
    """One strip on `scale`, `width` × `height` pt; a strip without marks shows its `note`, if any."""

    def __init__(self, strip: Strip, scale: Scale, width: float, height: float, note: str = "") -> None:
        super().__init__()
        self.width = width
        self.height = height
        self._strip = strip
        self._scale = scale
        self._note = note

    def wrap(self, _width: float, _height: float) -> tuple[float, float]:
        """The strip's own size, whatever room there is."""
        return self.width, self.height

    def draw(self) -> None:
        """Ground, reference, hairlines, interval and point, in this order."""
        canvas: Canvas = self.canv
        canvas.saveState()
        self._ground(canvas)
        if self._strip.reason:
            self._zero(canvas)
            self._write_note(canvas)
        else:
            self._reference(canvas)
            self._zero(canvas)
            self._interval(canvas)
            if math.isfinite(self._strip.value):
                self._point(canvas)
        canvas.restoreState()

    def _x(self, value: float) -> float:
        return position(self._scale, value, self.width)

    def _ground(self, canvas: Canvas) -> None:
        canvas.setFillColor(_COMPRESSED)
        for at in self._scale.breaks:
            x, end = self._x(at), 0.0 if at < 0 else self.width
            canvas.rect(min(x, end), 0, abs(end - x), self.height, stroke=0, fill=1)

    def _zero(self, canvas: Canvas) -> None:
        canvas.setStrokeColor(_LINE)
        canvas.setLineWidth(0.6)
        x = self._x(0.0)
        canvas.line(x, 0, x, self.height)
        canvas.setLineWidth(0.4)
        canvas.setDash(0.8, 1.2)
        for limit in self._strip.limits:
            if math.isfinite(limit):
                x = self._x(limit)
                canvas.line(x, 0, x, self.height)
        canvas.setDash()

    def _write_note(self, canvas: Canvas) -> None:
        """The note, small, on white, shortened never: callers give one that fits or none."""
        if not self._note:
            return
        size = 5.8
        width = stringWidth(self._note, REGULAR, size)
        left, middle = (self.width - width) / 2, self.height / 2
        canvas.setFillColor(white)
        canvas.rect(left - 1.5, middle - 3.6, width + 3, 7.2, stroke=0, fill=1)
        canvas.setFillColor(_MUTED)
        canvas.setFont(REGULAR, size)
        canvas.drawString(left, middle - 2, self._note)

    def _reference(self, canvas: Canvas) -> None:
        """The reference interval as a band; without one, mean ± SD as a whisker and single controls."""
        middle = self.height / 2
        low, high = self._strip.band
        if math.isfinite(low):
            half = min(self.height * 0.36, 6.5)
            canvas.setFillColor(_BAND)
            width = max(self._x(high) - self._x(low), 1.0)
            canvas.rect(self._x(low), middle - half, width, 2 * half, stroke=0, fill=1)
            return
        canvas.setStrokeColor(_LINE)
        mean, sd = self._strip.spread
        if math.isfinite(mean):
            canvas.setLineWidth(0.9)
            x = self._x(mean)
            canvas.line(x, middle - 4.5, x, middle + 4.5)
            if math.isfinite(sd):
                canvas.setLineWidth(2.6)
                canvas.setStrokeColor(_BAND)
                canvas.line(self._x(mean - sd), middle, self._x(mean + sd), middle)
                canvas.setStrokeColor(_LINE)
        canvas.setLineWidth(0.5)
        for value in self._strip.controls:
            x = self._x(value)
            canvas.line(x, 0.5, x, 3)

    def _interval(self, canvas: Canvas) -> None:
        """The 95 % interval; a bracket at a bound with an arrow towards the open side."""
        strip, middle = self._strip, self.height / 2
        canvas.setStrokeColor(black)
        canvas.setLineWidth(1.5 if strip.side else 0.8)
        left = self._x(strip.lower) if math.isfinite(strip.lower) else 1.5
        right = self._x(strip.upper) if math.isfinite(strip.upper) else self.width - 1.5
        canvas.line(left, middle, right, middle)
        if not math.isfinite(strip.lower):
            _arrow(canvas, left, middle, 1)
            _bracket(canvas, right, middle, -1)
        elif self._scale.is_beyond(strip.lower):
            _arrow(canvas, left, middle, 1)
        if not math.isfinite(strip.upper):
            _arrow(canvas, right, middle, -1)
            _bracket(canvas, left, middle, 1)
        elif self._scale.is_beyond(strip.upper):
            _arrow(canvas, right, middle, -1)

    def _point(self, canvas: Canvas) -> None:
        """Full: assessed; open: proxy; dashed diamond: rests on an inferred pool; large: highlighted."""
        strip = self._strip
        x, y = self._x(strip.value), self.height / 2
        radius = _RADIUS_STRONG if strip.side else _RADIUS
        canvas.setStrokeColor(black)
        canvas.setLineWidth(1.3 if strip.side else 0.9)
        canvas.setFillColor(white if strip.proxy or strip.inferred else black)
        if strip.inferred:
            canvas.setDash(1.3, 0.9)
            path = canvas.beginPath()
            path.moveTo(x, y - radius - 1)
            for dx, dy in ((radius + 1, 0), (0, radius + 1), (-radius - 1, 0)):
                path.lineTo(x + dx, y + dy)
            path.close()
            canvas.drawPath(path, stroke=1, fill=1)
            canvas.setDash()
        else:
            canvas.circle(x, y, radius, stroke=1, fill=1)


class AxisDrawing(Flowable):
    """The axis over (or under) a column of strips: title, what the sides mean, ticks, break marks."""

    def __init__(self, scale: Scale, width: float, title: str, left: str, right: str) -> None:
        super().__init__()
        self.width = width
        self.height = 25.0
        self._scale = scale
        self._title = title
        self._left = left
        self._right = right

    def wrap(self, _width: float, _height: float) -> tuple[float, float]:
        """The axis' own size."""
        return self.width, self.height

    def draw(self) -> None:
        """Title line, meaning of the sides, ticks with labels, break marks on the base line."""
        canvas: Canvas = self.canv
        canvas.saveState()
        canvas.setFillColor(black)
        canvas.setFont(BOLD, 6.4)
        canvas.drawCentredString(self.width / 2, self.height - 6, self._title)
        canvas.setFont(REGULAR, 5.6)
        canvas.setFillColor(_MUTED)
        canvas.drawString(1, self.height - 13, f"← {self._left}")
        canvas.drawRightString(self.width - 1, self.height - 13, f"{self._right} →")
        canvas.setStrokeColor(_MUTED)
        canvas.setLineWidth(0.6)
        canvas.line(MARGIN, 1, self.width - MARGIN, 1)
        widest = stringWidth("−00", REGULAR, 5.6)
        for tick in self._scale.ticks(self.width - 2 * MARGIN, widest):
            self._tick(canvas, tick)
        for at in self._scale.breaks:
            self._break_mark(canvas, position(self._scale, at, self.width) + (-2.5 if at < 0 else 2.5))
        canvas.restoreState()

    def _tick(self, canvas: Canvas, value: float) -> None:
        x = position(self._scale, value, self.width)
        canvas.line(x, 1, x, 3)
        text = "0" if value == 0 else signed(value, 0)
        half = stringWidth(text, REGULAR, 5.6) / 2
        canvas.drawCentredString(min(max(x, half), self.width - half), 4.5, text)

    def _break_mark(self, canvas: Canvas, x: float) -> None:
        """Two slanting strokes: from here on the scale is compressed."""
        canvas.setLineWidth(0.7)
        for dx in (-0.9, 0.9):
            canvas.line(x + dx - 0.9, -0.8, x + dx + 0.9, 2.8)
        canvas.setLineWidth(0.6)


def position(scale: Scale, value: float, width: float) -> float:
    """Where `value` (kJ/mol) lies on a strip `width` pt wide."""
    return MARGIN + scale.at(value) * (width - 2 * MARGIN)


def _arrow(canvas: Canvas, x: float, y: float, inward: int) -> None:
    for dy in (-2.4, 2.4):
        canvas.line(x, y, x + 3 * inward, y + dy)


def _bracket(canvas: Canvas, x: float, y: float, inward: int) -> None:
    for dy in (-3.8, 3.8):
        canvas.line(x, y, x, y + dy)
        canvas.line(x, y + dy, x + 2.4 * inward, y + dy)
