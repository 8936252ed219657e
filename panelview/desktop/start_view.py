"""What the window shows before a panel is open: open, drop, a sample, a recent file."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QFrame, QGridLayout, QLabel, QPushButton, QVBoxLayout, QWidget

from panelview.desktop.samples import SAMPLES, sample_path

_WIDTH = 720


class StartView(QWidget):
    """An invitation. `open_asked`: the user wants to choose a file; `file_chosen`: a file to open."""

    open_asked = Signal()
    file_chosen = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        title = QLabel("Open a metabolite panel")
        title.setProperty("role", "title")
        hint = QLabel(
            "A table of your laboratory's results: one row a result, or one row a specimen. Drop the file "
            "anywhere in this window, or choose it."
        )
        hint.setWordWrap(True)
        self.open = QPushButton("Open panel …")
        self.open.setDefault(True)
        self.open.clicked.connect(self.open_asked)
        column = QFrame()
        column.setFixedWidth(_WIDTH)
        self._layout = QVBoxLayout(column)
        self._layout.setSpacing(8)
        self._layout.addWidget(title)
        self._layout.addWidget(hint)
        self._layout.addWidget(self.open, 0, Qt.AlignmentFlag.AlignLeft)
        self._layout.addSpacing(14)
        self._layout.addWidget(_heading("Or look at a sample (invented data)"))
        self._layout.addLayout(self._sample_grid())
        self._recent = QVBoxLayout()
        self._recent.setSpacing(2)
        self._layout.addSpacing(10)
        self._layout.addLayout(self._recent)
        outer = QVBoxLayout(self)
        outer.addStretch(1)
        outer.addWidget(column, 0, Qt.AlignmentFlag.AlignHCenter)
        outer.addStretch(2)

    def _sample_grid(self) -> QGridLayout:
        """A button and its story a sample."""
        grid = QGridLayout()
        grid.setHorizontalSpacing(14)
        grid.setColumnStretch(1, 1)
        self.samples: list[QPushButton] = []
        for row, sample in enumerate(SAMPLES):
            button = QPushButton(sample.title)
            button.setAccessibleDescription(sample.story)
            button.clicked.connect(lambda _=False, s=sample: self.file_chosen.emit(sample_path(s)))
            story = QLabel(sample.story)
            self.samples.append(button)
            grid.addWidget(button, row, 0)
            grid.addWidget(story, row, 1)
        return grid

    def show_recent(self, paths: Sequence[Path]) -> None:
        """List files opened before."""
        while (item := self._recent.takeAt(0)) is not None:
            widget = item.widget()
            if widget is not None:
                widget.deleteLater()
        if paths:
            self._recent.addWidget(_heading("Opened before"))
        for path in paths[:5]:
            button = QPushButton(path.name)
            button.setFlat(True)
            button.setProperty("role", "link")
            button.setToolTip(str(path))
            button.setAccessibleName(f"Open {path.name}")
            button.clicked.connect(lambda _=False, p=path: self.file_chosen.emit(p))
            self._recent.addWidget(button, 0, Qt.AlignmentFlag.AlignLeft)


def _heading(text: str) -> QLabel:
    label = QLabel(text)
    label.setProperty("role", "heading")
    return label
