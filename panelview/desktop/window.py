"""The main window: makes the views, wires them to the review and to the actions, and remembers its place."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QByteArray, QSettings, Qt
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent
from PySide6.QtWidgets import QApplication, QMainWindow, QSplitter, QStackedWidget, QVBoxLayout, QWidget

from panelview.assess.settings import Settings
from panelview.desktop import work
from panelview.desktop.actions import Actions
from panelview.desktop.below import BelowView
from panelview.desktop.conditions_bar import ConditionsBar
from panelview.desktop.desk import Desk
from panelview.desktop.evidence_view import EvidenceView
from panelview.desktop.notices import BottomLine, NoticeBar, Severity
from panelview.desktop.palette import Colours
from panelview.desktop.recent import RecentFiles
from panelview.desktop.reviewing import Reviewing
from panelview.desktop.specimens_view import SpecimensView
from panelview.desktop.start_view import StartView
from panelview.desktop.steps_view import StepsView
from panelview.desktop.strip_legend import StripLegend
from panelview.desktop.theme import Choice, Theme
from panelview.output.scale import Axis

_SIZE = (1280, 720)
_LEAST_SIZE = (1180, 620)


class MainWindow(QMainWindow):
    """See the module; `desk` carries out what the actions ask for."""

    def __init__(self, settings: Settings, theme: Theme, store: QSettings) -> None:
        super().__init__()
        self.setWindowTitle("Panelview")
        self.setAcceptDrops(True)
        self.store = store
        self.theme = theme
        self.recent = RecentFiles(store)
        self.reviewing = Reviewing(settings, self)
        self.actions_ = Actions(self)
        self._make_views()
        self._lay_out()
        self.desk = Desk(self)
        self._wire()
        theme.dress(self)
        self._dress(theme.colours)
        self._restore()
        self._show_start()

    # -- making ----------------------------------------------------------------------------------

    def _make_views(self) -> None:
        self.notice = NoticeBar()
        self.bottom = BottomLine()
        self.start = StartView()
        self.conditions = ConditionsBar(self.reviewing)
        self.specimens = SpecimensView(self.reviewing)
        self.steps = StepsView(self.reviewing)
        self.legend = StripLegend()
        self.below = BelowView(self.reviewing)
        self.evidence = EvidenceView(self.reviewing)

    def _lay_out(self) -> None:
        strips = QWidget()
        column = QVBoxLayout(strips)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.steps, 1)
        column.addWidget(self.legend)
        self._middle = QSplitter(Qt.Orientation.Vertical)
        self._middle.addWidget(strips)
        self._middle.addWidget(self.below)
        self._middle.setStretchFactor(0, 1)
        self._middle.setCollapsible(0, False)
        self._across = QSplitter(Qt.Orientation.Horizontal)
        for widget in (self.specimens, self._middle, self.evidence):
            self._across.addWidget(widget)
        self._across.setStretchFactor(1, 3)
        self._across.setStretchFactor(2, 1)
        self._across.setCollapsible(1, False)
        for splitter in (self._middle, self._across):
            splitter.setHandleWidth(9)
        review = QWidget()
        page = QVBoxLayout(review)
        page.setContentsMargins(10, 6, 10, 2)
        page.setSpacing(6)
        page.addWidget(self.conditions)
        page.addWidget(self._across, 1)
        self._pages = QStackedWidget()
        self._pages.addWidget(self.start)
        self._pages.addWidget(review)
        whole = QWidget()
        layout = QVBoxLayout(whole)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.setSpacing(0)
        layout.addWidget(self.notice)
        layout.addWidget(self._pages, 1)
        layout.addWidget(self.bottom)
        self.setCentralWidget(whole)
        self.setMinimumSize(*_LEAST_SIZE)

    def _wire(self) -> None:
        reviewing = self.reviewing
        reviewing.opened.connect(self._show_review)
        reviewing.refused.connect(self.desk.tell_refused)
        reviewing.choice_refused.connect(lambda text: self.notice.tell(Severity.REFUSAL, self.desk.choice_text(text)))
        reviewing.reviewed.connect(self.desk.note_followed)
        reviewing.matrix_wanted.connect(self.desk.ask_matrix)
        reviewing.faulted.connect(self.desk.raise_fault)
        reviewing.busy.connect(self.bottom.work_started)
        reviewing.idle.connect(self.bottom.work_ended)
        self.bottom.cancelled.connect(self.desk.cancel)
        self.start.open_asked.connect(self.desk.choose_file)
        self.start.file_chosen.connect(lambda path: self.desk.open([path]))
        self.conditions.ratios_asked.connect(self.desk.show_ratios)
        self.theme.changed.connect(self._dress)
        self.steps.axis_changed.connect(lambda _: self._dress(self.theme.colours))
        self.desk.connect_actions()

    # -- showing ---------------------------------------------------------------------------------

    def _show_start(self) -> None:
        self.setWindowTitle("Panelview")
        self.start.show_recent(self.recent.paths())
        self._pages.setCurrentIndex(0)
        self.actions_.set_has_review(False)
        self.start.open.setFocus()

    def show_start(self) -> None:
        """Put the panel away and invite to open another."""
        self.notice.hide()
        self._show_start()

    def _show_review(self) -> None:
        names = ", ".join(path.name for path in self.reviewing.paths)
        self.setWindowTitle(f"{names} – Panelview")
        self._pages.setCurrentIndex(1)
        self.actions_.set_has_review(True)
        for path in self.reviewing.paths:
            self.recent.add(path)
        self.desk.show_recent()
        self.desk.tell_read()
        self.steps.table.setFocus()

    def _dress(self, colours: Colours) -> None:
        for view in (self.specimens, self.steps, self.evidence):
            view.set_colours(colours)
        self.legend.set_look(self.steps.axis, colours)

    def areas(self) -> list[QWidget]:
        """Where F6 goes, in order."""
        places: list[QWidget] = [
            self.conditions.fields["ph"].value,
            self.specimens.list,
            self.steps.table,
            self.evidence.page,
            self.below.currentWidget(),
        ]
        return [place for place in places if place.isVisible()]

    def panels(self) -> dict[str, QWidget]:
        """Views that can be put away, by their action."""
        return {
            "show_specimens": self.specimens,
            "show_evidence": self.evidence,
            "show_below": self.below,
            "show_legend": self.legend,
        }

    # -- dropping --------------------------------------------------------------------------------

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        if any(url.isLocalFile() for url in event.mimeData().urls()):
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        paths = [Path(url.toLocalFile()) for url in event.mimeData().urls() if url.isLocalFile()]
        if paths:
            event.acceptProposedAction()
            self.desk.open(paths)

    # -- remembering -----------------------------------------------------------------------------

    def _restore(self) -> None:
        self.resize(*_SIZE)
        geometry = self.store.value("window/geometry")
        if isinstance(geometry, QByteArray):
            self.restoreGeometry(geometry)
        across, middle = self.store.value("window/across"), self.store.value("window/middle")
        if isinstance(across, QByteArray) and isinstance(middle, QByteArray):
            self._across.restoreState(across)
            self._middle.restoreState(middle)
        else:
            width, height = self.width(), self.height()
            self._across.setSizes([width * 14 // 100, width * 64 // 100, width * 22 // 100])
            self._middle.setSizes([height * 60 // 100, height * 22 // 100])
        if self.store.value("window/axis") == Axis.DISTANCE.value:
            self.steps.set_axis(Axis.DISTANCE)
        self.steps.hide_box.setChecked(self.store.value("window/hide_unread") == "true")
        for name, view in self.panels().items():
            shown = self.store.value(f"window/{name}", "true") == "true"
            self.actions_[name].setChecked(shown)
            view.setVisible(shown)

    def closeEvent(self, event: QCloseEvent) -> None:
        self.store.setValue("window/geometry", self.saveGeometry())
        self.store.setValue("window/across", self._across.saveState())
        self.store.setValue("window/middle", self._middle.saveState())
        self.store.setValue("window/axis", self.steps.axis.value)
        self.store.setValue("window/colours", self.theme.choice.value)
        hides = self.steps.hide_box.isChecked()
        self.store.setValue("window/hide_unread", "true" if hides else "false")
        for name in self.panels():
            self.store.setValue(f"window/{name}", "true" if self.actions_[name].isChecked() else "false")
        self.reviewing.cancel()
        work.shut_down()
        super().closeEvent(event)


def theme_of(application: QApplication, store: QSettings) -> Theme:
    """The theme as the user left it."""
    kept = store.value("window/colours", Choice.SYSTEM.value)
    known = {choice.value: choice for choice in Choice}
    return Theme(application, known.get(str(kept), Choice.SYSTEM))
