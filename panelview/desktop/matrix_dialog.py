"""Asks what kind of specimen a file holds when the file does not say."""

from __future__ import annotations

from collections.abc import Mapping

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QLabel,
    QListWidget,
    QListWidgetItem,
    QVBoxLayout,
    QWidget,
)

from panelview.catalogue.matrices import Matrix


class MatrixDialog(QDialog):
    """A list of matrices; `chosen` is the id, "" where it is left open. Rejecting leaves it open."""

    def __init__(self, matrices: Mapping[str, Matrix], unstated: int, total: int, parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle("What kind of specimen is this?")
        self.chosen = ""
        whose = "The file does" if unstated == total else f"For {unstated} of {total} specimens the file does"
        question = QLabel(
            f"{whose} not say what kind of specimen it holds. Conditions, conversions and which steps can be "
            "read at all depend on it. Your answer is shown as yours."
        )
        question.setWordWrap(True)
        self.list = QListWidget()
        self.list.setAccessibleName("Kind of specimen")
        for matrix in matrices.values():
            item = QListWidgetItem(matrix.name)
            item.setData(Qt.ItemDataRole.UserRole, matrix.id)
            item.setToolTip(matrix.note)
            self.list.addItem(item)
        self.list.itemActivated.connect(lambda _: self.accept())
        self.list.itemSelectionChanged.connect(self._allow)
        self.buttons = QDialogButtonBox()
        self._take = self.buttons.addButton("Use this", QDialogButtonBox.ButtonRole.AcceptRole)
        self.leave = self.buttons.addButton("Leave it open", QDialogButtonBox.ButtonRole.RejectRole)
        self.buttons.accepted.connect(self.accept)
        self.buttons.rejected.connect(self.reject)
        self._take.setEnabled(False)
        layout = QVBoxLayout(self)
        layout.setSpacing(10)
        layout.addWidget(question)
        layout.addWidget(self.list)
        layout.addWidget(self.buttons)
        self.resize(440, 380)

    def _allow(self) -> None:
        self._take.setEnabled(bool(self.list.selectedItems()))

    def accept(self) -> None:
        for item in self.list.selectedItems():
            self.chosen = item.data(Qt.ItemDataRole.UserRole)
            super().accept()
