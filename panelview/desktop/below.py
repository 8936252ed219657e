"""Under the strips, one at a time: redox and energy state, and what was read of the files."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from PySide6.QtCore import (
    QAbstractTableModel,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    Qt,
)
from PySide6.QtGui import QKeyEvent, QKeySequence, QResizeEvent, QShowEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QLabel,
    QTableView,
    QTabWidget,
    QVBoxLayout,
    QWidget,
)

from panelview.assess.review import Review, StateRow
from panelview.desktop.copying import copy_selected_rows
from panelview.desktop.reading_report import (
    PROBLEM_HEADINGS,
    VALUE_HEADINGS,
    ValueRows,
    counted,
    problem_rows,
    summary,
)
from panelview.desktop.reviewing import Reviewing
from panelview.output.text import quantity_name, shown_id, state_interval, state_value

Index = QModelIndex | QPersistentModelIndex

#: So many rows decide the width of a column.
_LOOKED_AT = 60

STATE_HEADINGS = ("Quantity", "Compartment", "From", "Value", "95 % interval", "Validity", "What to know")


def state_texts(review: Review, row: StateRow) -> tuple[str, ...]:
    """One line of the state table."""
    enzyme = next((s.short for s in review.catalogue.steps if s.id == row.couple), "")
    name = quantity_name(row.quantity)
    return (
        name[:1].upper() + name[1:],
        shown_id(row.compartment),
        enzyme,
        state_value(row.value, row.unit),
        state_interval(row.lower95, row.upper95, row.unit),
        shown_id(row.validity),
        row.reason,
    )


class TextTable(QAbstractTableModel):
    """Rows of texts under headings."""

    def __init__(self, headings: tuple[str, ...], parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._headings = headings
        self._rows: Sequence[tuple[str, ...]] = ()

    def show(self, rows: Sequence[tuple[str, ...]]) -> None:
        self.beginResetModel()
        self._rows = rows
        self.endResetModel()

    @property
    def rows(self) -> Sequence[tuple[str, ...]]:
        return self._rows

    @property
    def headings(self) -> tuple[str, ...]:
        return self._headings

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(self._headings)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if orientation is Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole:
            return self._headings[section]
        if orientation is Qt.Orientation.Horizontal and role == Qt.ItemDataRole.TextAlignmentRole:
            return Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
        return None

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if not index.isValid():
            return None
        text = self._rows[index.row()][index.column()]
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole):
            return text
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"{self._headings[index.column()]}: {text or 'none'}"
        return None


class TextTableView(QTableView):
    """A plain table of a `TextTable`; the last column takes the room that is left."""

    def __init__(self, model: TextTable, name: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.texts = model
        self.setModel(model)
        self.setAccessibleName(name)
        self.verticalHeader().hide()
        self.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 8)
        self.horizontalHeader().setStretchLastSection(True)
        self.horizontalHeader().setHighlightSections(False)
        self.setShowGrid(False)
        self.setAlternatingRowColors(True)
        self.setFrameShape(QTableView.Shape.NoFrame)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setTabKeyNavigation(False)
        self.setWordWrap(False)
        model.modelReset.connect(self._fit)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if event.oldSize().width() != event.size().width():
            self._fit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.matches(QKeySequence.StandardKey.Copy):
            copy_selected_rows(self)
            return
        super().keyPressEvent(event)

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self._fit()

    def _fit(self) -> None:
        """Widths from the first rows' texts, no column wider than a third of the table. (The view's own way
        asks the model many times a cell.)"""
        if not self.texts.rows or not self.isVisible():
            return
        metrics = self.fontMetrics()
        widest = max(self.viewport().width() // 3, 120)
        lines = [self.texts.headings, *self.texts.rows[:_LOOKED_AT]]
        for column in range(self.texts.columnCount() - 1):
            width = max(metrics.horizontalAdvance(line[column]) for line in lines)
            self.setColumnWidth(column, min(width + 20, widest))


class BelowView(QTabWidget):
    """Tabs: state of the chosen specimen; remarks on what was read; every value."""

    def __init__(self, reviewing: Reviewing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._reviewing = reviewing
        self.setDocumentMode(True)
        self.setAccessibleName("State and reading report")
        self.state = TextTableView(TextTable(STATE_HEADINGS), "Redox and energy state", self)
        self.problems = TextTableView(TextTable(PROBLEM_HEADINGS), "Problems and assumptions", self)
        self.values = TextTableView(TextTable(VALUE_HEADINGS), "Values as reported and as used", self)
        self.summary = QLabel()
        self.summary.setWordWrap(True)
        self.summary.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.addTab(self.state, "Redox and energy state")
        self.addTab(self._reading_page(), "What was read")
        self.addTab(self.values, "Values as used")
        reviewing.opened.connect(self._show_new)
        reviewing.reviewed.connect(self._show_state)
        reviewing.specimen_changed.connect(self._show_state)

    def _reading_page(self) -> QWidget:
        page = QWidget()
        layout = QVBoxLayout(page)
        layout.setContentsMargins(6, 4, 6, 0)
        layout.setSpacing(4)
        layout.addWidget(self.summary)
        layout.addWidget(self.problems, 1)
        return page

    def show_reading(self) -> None:
        """Bring the reading report to the front."""
        self.setCurrentIndex(1)
        self.problems.setFocus()

    def _show_new(self) -> None:
        self._show_state()
        review = self._reviewing.review
        assert review is not None
        self.summary.setText(summary(review.panel))
        problems = problem_rows(review.panel)
        self.problems.texts.show(problems)
        self.setTabText(1, f"What was read ({counted(len(problems), 'remark')})" if problems else "What was read")
        self.values.texts.show(ValueRows(review.panel))

    def _show_state(self) -> None:
        review = self._reviewing.review
        assert review is not None
        rows = [state_texts(review, row) for row in review.state_of(self._reviewing.specimen)]
        self.state.texts.show(rows)
