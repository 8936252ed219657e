"""Copies the selected rows of a table as text, with its headings, one line a row."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QTableView


def copy_selected_rows(table: QTableView) -> None:
    """Put the selected rows on the clipboard, cells apart by tabs."""
    model = table.model()
    columns = range(model.columnCount())
    across = Qt.Orientation.Horizontal
    lines = ["\t".join(_one_line(model.headerData(c, across)) for c in columns)]
    for index in sorted(table.selectionModel().selectedRows(), key=lambda i: i.row()):
        lines.append("\t".join(_one_line(model.index(index.row(), c).data()) for c in columns))
    QApplication.clipboard().setText("\n".join(lines) + "\n")


def _one_line(text: object) -> str:
    return " ".join(str(text or "").split())
