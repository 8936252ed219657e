"""What the window tells its reader: what must be seen, what passes, and progress with a way out."""

from __future__ import annotations

from enum import Enum

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QProgressBar, QPushButton, QWidget

from panelview.desktop.elided import ElidedLabel
from panelview.desktop.work import Token
from panelview.output.text import CAUTION

#: Work shorter than this shows no progress bar, ms.
_PATIENCE = 200

#: How long a passing message stays, ms.
_STAYS = 8000


class Severity(Enum):
    NOTE = "note"
    CAUTION = "caution"
    REFUSAL = "refusal"


class NoticeBar(QFrame):
    """A sentence or a few over the window's contents, until it is dismissed or replaced."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("notice")
        self.text = QLabel()
        self.text.setWordWrap(True)
        self.text.setTextFormat(Qt.TextFormat.PlainText)
        self.text.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        self.more = QPushButton()
        self.dismiss = QPushButton("Dismiss")
        self.dismiss.clicked.connect(self.hide)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(10, 6, 10, 6)
        layout.addWidget(self.text, 1)
        layout.addWidget(self.more, 0, Qt.AlignmentFlag.AlignTop)
        layout.addWidget(self.dismiss, 0, Qt.AlignmentFlag.AlignTop)
        self._on_more: object = None
        self.hide()

    def tell(self, severity: Severity, text: str, more: str = "", on_more: object = None) -> None:
        """Show `text`; `more` names a button that calls `on_more`."""
        self.setProperty("severity", severity.value)
        self.style().unpolish(self)
        self.style().polish(self)
        self.text.setText(text)
        self.setAccessibleName(f"{severity.value}: {text}")
        if self._on_more is not None:
            self.more.clicked.disconnect()
        self._on_more = on_more
        if on_more is not None:
            self.more.setText(more)
            self.more.clicked.connect(on_more)
        self.more.setVisible(on_more is not None)
        self.show()


class BottomLine(QWidget):
    """Always in sight: the caution; beside it passing messages, progress and a button to stop."""

    cancelled = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("bottom")
        self.caution = QLabel(CAUTION)
        self.caution.setObjectName("caution_line")
        self.caution.setAccessibleName(CAUTION)
        self.message = ElidedLabel(Qt.AlignmentFlag.AlignRight)
        self.progress = QProgressBar()
        self.progress.setFixedWidth(140)
        self.progress.setTextVisible(False)
        self.stop = QPushButton("Stop")
        self.stop.clicked.connect(self.cancelled)
        self._forget = QTimer(self)
        self._forget.setSingleShot(True)
        self._forget.timeout.connect(lambda: self.message.say(""))
        self._late = QTimer(self)
        self._late.setSingleShot(True)
        self._late.timeout.connect(self._show_progress)
        self._what = ""
        self.token: Token | None = None
        layout = QHBoxLayout(self)
        layout.setContentsMargins(10, 3, 10, 3)
        layout.setSpacing(10)
        layout.addWidget(self.caution)
        layout.addWidget(self.message, 1)
        layout.addWidget(self.progress)
        layout.addWidget(self.stop)
        self.progress.hide()
        self.stop.hide()

    def say(self, text: str) -> None:
        """A message that passes."""
        self.message.say(text)
        self._forget.start(_STAYS)

    def work_started(self, what: str, token: Token) -> None:
        """Show what runs and how to stop it, unless it is over at once."""
        self._what, self.token = what, token
        self.progress.setRange(0, 0)
        self._late.start(_PATIENCE)

    def work_advanced(self, done: int, total: int, what: str) -> None:
        self.progress.setRange(0, total)
        self.progress.setValue(done)
        self.message.say(f"{self._what} {what} ({done} of {total})" if total else f"{self._what} {what}")

    def work_ended(self) -> None:
        self._late.stop()
        self.token = None
        self.progress.hide()
        self.stop.hide()
        if self.message.whole.startswith(self._what) and self._what:
            self.message.say("")

    def _show_progress(self) -> None:
        self._forget.stop()
        self.message.say(self._what)
        self.progress.show()
        self.stop.show()
