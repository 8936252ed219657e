"""The left of the window: participants and their specimens, with how many steps are off in each."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray
from PySide6.QtCore import (
    QAbstractListModel,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    QRect,
    QSize,
    Qt,
    Signal,
)
from PySide6.QtGui import QFontMetrics, QPainter, QPen
from PySide6.QtWidgets import (
    QLabel,
    QLineEdit,
    QListView,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QVBoxLayout,
    QWidget,
)

from panelview.assess.calls import Assessability
from panelview.assess.review import Review
from panelview.desktop.palette import Colours
from panelview.desktop.reviewing import Reviewing

ENTRY_ROLE = Qt.ItemDataRole.UserRole + 1

Index = QModelIndex | QPersistentModelIndex


@dataclass(frozen=True, slots=True)
class Entry:
    """One line of the list. specimen: index, −1 for a heading; detail: second line; off: highlighted steps;
    read: steps that could be read; indented: one of several specimens of a participant."""

    text: str
    specimen: int = -1
    detail: str = ""
    off: int = 0
    read: int = 0
    is_control: bool = False
    indented: bool = False

    @property
    def off_words(self) -> str:
        return f"{self.off} off" if self.off else "none off"

    @property
    def spoken(self) -> str:
        """The line for a screen reader."""
        if self.specimen < 0:
            return self.text
        kind = "control specimen" if self.is_control else "specimen"
        return f"{kind} {self.text}, {self.detail}, {self.off} of {self.read} steps off"


def entries_of(review: Review, text: str = "") -> list[Entry]:
    """The list: participants in file order with their specimens, then the controls.

    text: only specimens whose code, participant, group or matrix holds it.
    """
    controls = set(review.reference.specimens)
    wanted = text.casefold().strip()
    others = [s for i, s in enumerate(review.specimens) if i not in controls]
    telling = _Telling(
        group=len({s.group for s in others}) > 1,
        matrix=len({s.matrix for s in others}) > 1,
        off=review.findings.highlighted.sum(axis=1),
        read=(review.findings.assessability <= Assessability.PROXY).sum(axis=1),
    )
    of_participant: dict[str, list[Entry]] = {}
    of_controls: list[Entry] = []
    for i, facts in enumerate(review.specimens):
        searched = f"{facts.code} {facts.participant} {facts.group} {facts.matrix}".casefold()
        if wanted and wanted not in searched:
            continue
        entry = _entry(review, i, i in controls, telling)
        if entry.is_control:
            of_controls.append(entry)
        else:
            of_participant.setdefault(facts.participant or facts.code, []).append(entry)
    made: list[Entry] = []
    for participant, own in of_participant.items():
        if len(own) > 1:
            made.append(Entry(f"{participant} · {len(own)} specimens"))
            made += [_indented(e) for e in own]
        else:
            made.append(_named(own[0], participant))
    if of_controls:
        made.append(Entry(f"Controls · {len(of_controls)}"))
        made += [_indented(e) for e in of_controls]
    return made


@dataclass(frozen=True)
class _Telling:
    """Which facts differ between the specimens, and so are worth a word; off, read: steps of each specimen."""

    group: bool
    matrix: bool
    off: NDArray[np.int_]
    read: NDArray[np.int_]


def _entry(review: Review, specimen: int, is_control: bool, telling: _Telling) -> Entry:
    facts = review.specimens[specimen]
    words = [facts.collected, facts.group if telling.group and not is_control else ""]
    if telling.matrix:
        matrix = review.catalogue.matrices.get(facts.matrix)
        words.append(matrix.name if matrix else "matrix not stated")
    return Entry(
        text=facts.code,
        specimen=specimen,
        detail=" · ".join(w for w in words if w),
        off=int(telling.off[specimen]),
        read=int(telling.read[specimen]),
        is_control=is_control,
    )


def _named(entry: Entry, participant: str) -> Entry:
    """With the participant told, where it is not the specimen's own code."""
    return entry if participant == entry.text else replace(entry, detail=f"{participant} · {entry.detail}")


def _indented(entry: Entry) -> Entry:
    return replace(entry, indented=True)


class SpecimenModel(QAbstractListModel):
    """The entries as a Qt list."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._entries: list[Entry] = []

    def show(self, entries: list[Entry]) -> None:
        self.beginResetModel()
        self._entries = entries
        self.endResetModel()

    def row_of(self, specimen: int) -> int:
        return next((k for k, e in enumerate(self._entries) if e.specimen == specimen), -1)

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(self._entries)

    def flags(self, index: Index) -> Qt.ItemFlag:
        if not index.isValid() or self._entries[index.row()].specimen < 0:
            return Qt.ItemFlag.NoItemFlags
        return Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        if not index.isValid():
            return None
        entry = self._entries[index.row()]
        if role == Qt.ItemDataRole.DisplayRole:
            return entry.text
        if role == ENTRY_ROLE:
            return entry
        if role in (Qt.ItemDataRole.AccessibleTextRole, Qt.ItemDataRole.ToolTipRole):
            return entry.spoken
        return None


class SpecimenDelegate(QStyledItemDelegate):
    """Two lines a specimen, one a control: a filled disc for a specimen, a ring for a control."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.colours: Colours | None = None

    def sizeHint(self, option: QStyleOptionViewItem, index: Index) -> QSize:
        entry = index.data(ENTRY_ROLE)
        line = option.fontMetrics.height()
        has_detail = entry.specimen >= 0 and not entry.is_control
        return QSize(100, 2 * line + 8 if has_detail else line + (12 if entry.specimen < 0 else 6))

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        if self.colours is None:
            return
        entry: Entry = index.data(ENTRY_ROLE)
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if entry.specimen < 0:
            self._paint_heading(painter, option, entry)
        else:
            self._paint_specimen(painter, option, index)
        painter.restore()

    def _paint_heading(self, painter: QPainter, option: QStyleOptionViewItem, entry: Entry) -> None:
        assert self.colours is not None
        font = option.font
        font.setBold(True)
        painter.setFont(font)
        painter.setPen(self.colours.colour("muted"))
        area = option.rect.adjusted(8, 0, -8, -2)
        text = QFontMetrics(font).elidedText(entry.text, Qt.TextElideMode.ElideRight, area.width())
        painter.drawText(area, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignBottom, text)

    def _paint_specimen(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        assert self.colours is not None
        entry: Entry = index.data(ENTRY_ROLE)
        rect = option.rect
        view = self.parent()
        assert isinstance(view, QListView)
        if view.selectionModel().isRowSelected(index.row()):
            painter.fillRect(rect, self.colours.colour("selection"))
            painter.fillRect(QRect(rect.left(), rect.top(), 3, rect.height()), self.colours.colour("accent"))
            if view.hasFocus():
                painter.setPen(QPen(self.colours.colour("accent"), 1))
                painter.drawRect(rect.adjusted(0, 0, -1, -1))
        left = rect.left() + (18 if entry.indented else 8)
        line = option.fontMetrics.height()
        top = rect.top() + (4 if not entry.is_control else 3)
        self._paint_disc(painter, left, top + line / 2, entry)
        area = QRect(left + 14, top, rect.right() - left - 20, line)
        right = self._paint_off(painter, option, area, entry)
        font = option.font
        font.setBold(entry.off > 0 and not entry.is_control)
        painter.setFont(font)
        painter.setPen(self.colours.colour("muted" if entry.is_control else "text"))
        self._elided(painter, QRect(area.left(), top, right - area.left(), line), entry.text)
        if not entry.is_control:
            font.setBold(False)
            painter.setFont(font)
            painter.setPen(self.colours.colour("muted"))
            self._elided(painter, area.translated(0, line), entry.detail)

    def _paint_disc(self, painter: QPainter, x: float, y: float, entry: Entry) -> None:
        assert self.colours is not None
        ink = self.colours.colour("hairline" if entry.is_control else "text")
        painter.setPen(QPen(ink, 1.4))
        painter.setBrush(Qt.BrushStyle.NoBrush if entry.is_control else ink)
        painter.drawEllipse(int(x), int(y - 3), 6, 6)

    def _paint_off(self, painter: QPainter, option: QStyleOptionViewItem, area: QRect, entry: Entry) -> int:
        """How many steps are off, at the right; returns where the space for the code ends."""
        assert self.colours is not None
        font = option.font
        font.setBold(entry.off > 0)
        painter.setFont(font)
        painter.setPen(self.colours.colour("text" if entry.off else "muted"))
        width = QFontMetrics(font).horizontalAdvance(entry.off_words)
        painter.drawText(area, Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter, entry.off_words)
        return area.right() - width - 6

    @staticmethod
    def _elided(painter: QPainter, area: QRect, text: str) -> None:
        shown = painter.fontMetrics().elidedText(text, Qt.TextElideMode.ElideRight, area.width())
        painter.drawText(area, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, shown)


class _List(QListView):
    chosen = Signal(int)

    def currentChanged(self, current: QModelIndex, previous: QModelIndex) -> None:  # type: ignore[override]
        super().currentChanged(current, previous)
        entry = current.data(ENTRY_ROLE) if current.isValid() else None
        if entry is not None and entry.specimen >= 0:
            self.chosen.emit(entry.specimen)


class SpecimensView(QWidget):
    """List, and a field to find a specimen in it."""

    def __init__(self, reviewing: Reviewing, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._reviewing = reviewing
        self.model = SpecimenModel(self)
        self.list = _List(self)
        self._delegate = SpecimenDelegate(self.list)
        self.list.setModel(self.model)
        self.list.setItemDelegate(self._delegate)
        self.list.setFrameShape(QListView.Shape.NoFrame)
        self.list.setVerticalScrollMode(QListView.ScrollMode.ScrollPerPixel)
        self.list.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.list.setAccessibleName("Specimens")
        self.list.setAccessibleDescription("Specimens of the panel, with how many steps are off in each")
        self.list.chosen.connect(reviewing.choose_specimen)
        self.filter_edit = QLineEdit()
        self.filter_edit.setPlaceholderText("Find specimen")
        self.filter_edit.setAccessibleName("Find specimen")
        self.filter_edit.setClearButtonEnabled(True)
        self.filter_edit.textChanged.connect(self._fill)
        self.title = QLabel("<b>Specimens</b>")
        layout = QVBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(6)
        layout.addWidget(self.title)
        layout.addWidget(self.filter_edit)
        layout.addWidget(self.list, 1)
        reviewing.opened.connect(self._show_new)
        reviewing.reviewed.connect(self._fill)
        reviewing.specimen_changed.connect(self._point)

    def set_colours(self, colours: Colours) -> None:
        self._delegate.colours = colours
        self.list.viewport().update()

    def step_by(self, steps: int) -> None:
        """Choose the next (1) or previous (−1) specimen of the list."""
        row = self.list.currentIndex().row() + steps
        while 0 <= row < self.model.rowCount():
            entry = self.model.index(row).data(ENTRY_ROLE)
            if entry.specimen >= 0:
                self.list.setCurrentIndex(self.model.index(row))
                return
            row += steps

    def _show_new(self) -> None:
        self.filter_edit.blockSignals(True)
        self.filter_edit.clear()
        self.filter_edit.blockSignals(False)
        self._fill()

    def _fill(self) -> None:
        review = self._reviewing.review
        if review is None:
            return
        bar = self.list.verticalScrollBar().value()
        self.model.show(entries_of(review, self.filter_edit.text()))
        self.title.setText(f"<b>Specimens</b> · {len(review.specimens)}")
        self.list.verticalScrollBar().setValue(bar)
        self._point()

    def _point(self) -> None:
        """Mark the chosen specimen in the list, where the list shows it."""
        row = self.model.row_of(self._reviewing.specimen)
        if row >= 0 and self.list.currentIndex().row() != row:
            self.list.setCurrentIndex(self.model.index(row))
