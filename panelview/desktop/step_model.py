"""The step table as a Qt model: wraps a review and an arrangement, computes nothing."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtGui import QFont

from panelview.assess.review import Review
from panelview.desktop.arrangement import Heading, Row, is_unread
from panelview.desktop.cells import HEADINGS, NUMBERS, TOOLTIPS, Cell, cell_text, spoken
from panelview.output.scale import Axis
from panelview.output.strip import Strip, strip_of

#: Data roles of our own: the `Strip` to paint, the row (a `Heading` or a column of the review), how the
#: row is to look ("", "back", "forward" or "unread"), and the enzyme's name.
STRIP_ROLE = Qt.ItemDataRole.UserRole + 1
ROW_ROLE = Qt.ItemDataRole.UserRole + 2
LOOK_ROLE = Qt.ItemDataRole.UserRole + 3
ENZYME_ROLE = Qt.ItemDataRole.UserRole + 4

Index = QModelIndex | QPersistentModelIndex

_RIGHT = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
_LEFT = Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter


class StepModel(QAbstractTableModel):
    """One row a step (and a heading), one column a `Cell`."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._review: Review | None = None
        self._specimen = 0
        self._axis = Axis.SHIFT
        self._rows: tuple[Row, ...] = ()
        self._texts: dict[tuple[int, Cell], str] = {}
        self._strips: dict[int, Strip] = {}

    def show(self, review: Review | None, specimen: int, rows: tuple[Row, ...]) -> None:
        """Show other rows (another specimen, order or filter)."""
        self.beginResetModel()
        self._review, self._specimen, self._rows = review, specimen, rows
        self._forget()
        self.endResetModel()

    def update_review(self, review: Review) -> None:
        """Take the numbers of a new review; every row keeps its place."""
        self._review = review
        self._forget()
        self._all_changed()

    def set_axis(self, axis: Axis) -> None:
        self._axis = axis
        self._forget()
        self._all_changed()

    @property
    def rows(self) -> tuple[Row, ...]:
        return self._rows

    def row_of(self, column: int) -> int:
        """The row that shows a column of the review, −1 where it is filtered out."""
        return self._rows.index(column) if column in self._rows else -1

    def _forget(self) -> None:
        self._texts.clear()
        self._strips.clear()

    def _all_changed(self) -> None:
        if self._rows:
            self.dataChanged.emit(self.index(0, 0), self.index(len(self._rows) - 1, len(Cell) - 1))

    # -- Qt's questions --------------------------------------------------------------------------

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(Cell)

    def flags(self, index: Index) -> Qt.ItemFlag:
        if not index.isValid() or isinstance(self._rows[index.row()], Heading):
            return Qt.ItemFlag.NoItemFlags
        return Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if orientation is not Qt.Orientation.Horizontal:
            return None
        cell = Cell(section)
        if role == Qt.ItemDataRole.DisplayRole:
            return HEADINGS[cell]
        if role in (Qt.ItemDataRole.ToolTipRole, Qt.ItemDataRole.AccessibleDescriptionRole):
            return TOOLTIPS[cell]
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _RIGHT if cell in NUMBERS else _LEFT
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if not index.isValid() or self._review is None:
            return None
        row = self._rows[index.row()]
        if role == ROW_ROLE:
            return row
        if isinstance(row, Heading):
            wanted = (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole)
            return row.text if role in wanted and index.column() == 0 else None
        return self._of_step(row, Cell(index.column()), role)

    def _of_step(self, column: int, cell: Cell, role: int) -> Any:
        if role == Qt.ItemDataRole.DisplayRole:
            return self.text(column, cell)
        if role == STRIP_ROLE:
            return self.strip(column)
        if role == LOOK_ROLE:
            return self.look(column)
        if role == ENZYME_ROLE:
            return self._shown.columns[column].step.enzyme
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return spoken(self._shown, self._specimen, column, cell, self._axis)
        if role == Qt.ItemDataRole.ToolTipRole:
            return self._tooltip(column, cell)
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return _RIGHT if cell in NUMBERS else _LEFT
        if role == Qt.ItemDataRole.FontRole and self.strip(column).side:
            font = QFont()
            font.setBold(True)
            return font
        return None

    @property
    def _shown(self) -> Review:
        assert self._review is not None
        return self._review

    def text(self, column: int, cell: Cell) -> str:
        """The text of a cell of a step's row."""
        key = column, cell
        if key not in self._texts:
            self._texts[key] = cell_text(self._shown, self._specimen, column, cell, self._axis)
        return self._texts[key]

    def strip(self, column: int) -> Strip:
        if column not in self._strips:
            self._strips[column] = strip_of(self._shown, self._specimen, column, self._axis)
        return self._strips[column]

    def look(self, column: int) -> str:
        """How a row is to look: "unread", "back", "forward" or "" for a plain one."""
        return "unread" if is_unread(self._shown, self._specimen, column) else self.strip(column).side

    def _tooltip(self, column: int, cell: Cell) -> str:
        if cell is Cell.STEP:
            step = self._shown.columns[column].step
            return f"{step.enzyme} (EC {step.ec}), {', '.join(step.pathways)}"
        if cell is Cell.STRIP:
            return spoken(self._shown, self._specimen, column, cell, self._axis)
        if cell is Cell.CALL:
            return self.text(column, cell)
        return f"{HEADINGS[cell].splitlines()[0]}: {self.text(column, cell)}" if self.text(column, cell) else ""
