"""A line of text that is cut with an ellipsis rather than pushing its neighbours away."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtGui import QFontMetrics, QResizeEvent
from PySide6.QtWidgets import QLabel, QSizePolicy


class ElidedLabel(QLabel):
    """Shows as much of `whole` as fits; the tooltip and screen readers have all of it."""

    def __init__(self, side: Qt.AlignmentFlag = Qt.AlignmentFlag.AlignLeft) -> None:
        super().__init__()
        self._whole = ""
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        self.setAlignment(side | Qt.AlignmentFlag.AlignVCenter)

    @property
    def whole(self) -> str:
        """The text as it was said."""
        return self._whole

    def say(self, text: str) -> None:
        self._whole = text
        self.setToolTip(text)
        self.setAccessibleName(text)
        self._cut()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._cut()

    def _cut(self) -> None:
        room = max(self.width() - 2, 0)
        self.setText(QFontMetrics(self.font()).elidedText(self._whole, Qt.TextElideMode.ElideRight, room))
