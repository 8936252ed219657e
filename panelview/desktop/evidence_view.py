"""The right of the window: the evidence for the chosen step, to scroll, select and copy."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QRectF, QUrl
from PySide6.QtGui import QPainter, QPen, QPixmap, QTextDocument
from PySide6.QtWidgets import QTextBrowser, QVBoxLayout, QWidget

from panelview.desktop.evidence_html import BAR_SCHEME, evidence_html
from panelview.desktop.palette import LIGHT, Colours
from panelview.desktop.reviewing import Reviewing

_BAR_WIDTH = 120
_BAR_HEIGHT = 12


class _Page(QTextBrowser):
    """Draws the driver bars that the text asks for, at the screen's own resolution."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.colours = LIGHT
        self.setOpenLinks(False)
        self.setFrameShape(QTextBrowser.Shape.NoFrame)

    def loadResource(self, kind: int, name: QUrl | str) -> Any:
        url = QUrl(name)
        if kind == QTextDocument.ResourceType.ImageResource and url.scheme() == BAR_SCHEME:
            contribution, largest = (float(x) for x in url.path().split("/"))
            return self._bar(contribution, largest)
        return None  # nothing else is ever loaded

    def _bar(self, contribution: float, largest: float) -> QPixmap:
        """A bar from the middle to the side the contribution pushes to."""
        ratio = self.devicePixelRatioF()
        picture = QPixmap(round(_BAR_WIDTH * ratio), round(_BAR_HEIGHT * ratio))
        picture.setDevicePixelRatio(ratio)
        picture.fill(self.colours.colour("base"))
        painter = QPainter(picture)
        middle = _BAR_WIDTH / 2
        length = (middle - 2) * contribution / largest
        area = QRectF(min(middle, middle + length), 2, abs(length), _BAR_HEIGHT - 4)
        painter.fillRect(area, self.colours.colour("back" if contribution > 0 else "forward"))
        painter.setPen(QPen(self.colours.colour("line"), 1))
        painter.drawLine(int(middle), 0, int(middle), _BAR_HEIGHT)
        painter.end()
        return picture


class EvidenceView(QWidget):
    """Follows the chosen step and specimen."""

    def __init__(self, reviewing: Reviewing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._reviewing = reviewing
        self._colours = LIGHT
        self._shown: object = None
        self.page = _Page(self)
        self.page.setAccessibleName("Evidence for the chosen step")
        self.page.setPlaceholderText("Choose a step to see what its call rests on.")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.page)
        for signal in (
            reviewing.opened,
            reviewing.reviewed,
            reviewing.specimen_changed,
            reviewing.column_changed,
        ):
            signal.connect(self.show_evidence)

    def set_colours(self, colours: Colours) -> None:
        self._colours = self.page.colours = colours
        self._shown = None
        self.show_evidence()

    def show_evidence(self) -> None:
        """Lay out the evidence; the place in the text stays where only its numbers changed."""
        evidence = self._reviewing.evidence()
        if evidence is None:
            self.page.clear()
            return
        key = self._reviewing.specimen, self._reviewing.column, id(self._reviewing.review)
        if key == self._shown:
            return
        stays = isinstance(self._shown, tuple) and self._shown[:2] == key[:2]
        place = self.page.verticalScrollBar().value() if stays else 0
        self._shown = key
        self.page.setHtml(evidence_html(evidence, self._colours))
        self.page.verticalScrollBar().setValue(place)
