"""The marks of the balance strips explained in one line, drawn by the strips' own painter."""

from __future__ import annotations

import math

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from panelview.desktop.palette import Colours
from panelview.desktop.strip_painter import StripPainter
from panelview.output.scale import LINEAR, Axis, Scale
from panelview.output.strip import Strip

_SCALE = Scale(-LINEAR, LINEAR)
_CELL = 34


def legend(axis: Axis) -> list[tuple[Strip, str]]:
    """Each mark as a strip of its own, and what it means."""
    limits = "highlighted from" if axis is Axis.SHIFT else "near equilibrium"
    return [
        (Strip("", 0.0, -7.0, 7.0), "measured"),
        (Strip("", 0.0, -7.0, 7.0, inferred=True), "inferred pool"),
        (Strip("", 0.0, -7.0, 7.0, proxy=True), "proxy"),
        (Strip("", math.nan, -math.inf, 4.0), "bound"),
        (Strip("", 0.0, -7.0, 7.0, side="back"), "off"),
        (Strip("", band=(-7.0, 7.0)), "controls, 95 %"),
        (Strip("", limits=(-5.0, 5.0)), limits),
        (Strip("", spread=(0.0, 7.0), controls=(-6.0, -2.0, 3.0, 7.0)), "controls, mean ± SD"),
    ]


class StripLegend(QWidget):
    """As many of the entries as the width holds, the most needed first; the tooltip has all."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._axis = Axis.SHIFT
        self._colours: Colours | None = None
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self._name()

    def set_look(self, axis: Axis, colours: Colours) -> None:
        self._axis, self._colours = axis, colours
        self._name()
        self.update()

    def sizeHint(self) -> QSize:
        return QSize(300, self.fontMetrics().height() + 6)

    def _name(self) -> None:
        is_shift = self._axis is Axis.SHIFT
        words = "; ".join(
            (
                "filled point: measured; bar: "
                + ("± 1.96 SD of such a difference among healthy specimens" if is_shift else "95 % interval"),
                "open point: proxy",
                "dashed diamond: rests on an inferred free pool",
                "bracket and arrow: a bound from a value beyond a limit of quantification",
                "large and coloured: off, beyond the highlight floor",
                "band: 95 % reference interval of the controls",
                "thin cross: mean ± standard deviation of controls that are too few for an interval",
                "dotted lines: " + ("highlight floor" if is_shift else "limits of near equilibrium"),
                "shaded ends behind the double stroke: compressed scale",
            )
        )
        self.setAccessibleName(f"Legend: {words}")
        self.setToolTip(words.replace("; ", "\n"))

    def paintEvent(self, event: QPaintEvent) -> None:
        if self._colours is None:
            return
        painter = QPainter(self)
        strips = StripPainter(_SCALE, self._colours)
        x = 0.0
        for strip, text in legend(self._axis):
            width = self.fontMetrics().horizontalAdvance(text)
            if x + _CELL + width > self.width():
                break
            strips.paint_bare(painter, QRectF(x, 0, _CELL, self.height()), strip)
            painter.setPen(self._colours.colour("muted"))
            area = QRectF(x + _CELL + 2, 0, width + 4, self.height())
            painter.drawText(area, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, text)
            x += _CELL + width + 10
        painter.end()
