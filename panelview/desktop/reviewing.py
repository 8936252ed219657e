"""The panel under review, the reviewer's settings and what is chosen; views watch its signals.

Reading and assessing run off the GUI thread. A change of settings keeps the last review until the new
one is there; changes that come in meanwhile are taken together.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal

from panelview.desktop import choices, work

if TYPE_CHECKING:
    from panelview.assess.evidence import Evidence
    from panelview.assess.review import Review
    from panelview.assess.settings import Settings
    from panelview.intake.panel import Panel


class Reviewing(QObject):
    """Signals: see the comments; all are sent on the GUI thread."""

    #: A new panel is in: `review`, `specimen` and `column` are set.
    opened = Signal()
    #: The same panel with new numbers.
    reviewed = Signal()
    #: Another specimen, another step is chosen.
    specimen_changed = Signal()
    column_changed = Signal()
    #: The file as a whole cannot be used: the file's name, the InputRefused.
    refused = Signal(str, object)
    #: A choice lies where the model does not hold: a sentence; the last valid review stays.
    choice_refused = Signal(str)
    #: The file does not say what kind of specimen it holds: the Panel. Answer with `use_matrix`.
    matrix_wanted = Signal(object)
    #: Work started (what it is, its Token) and ended.
    busy = Signal(str, object)
    idle = Signal()
    #: Something unforeseen went wrong: the exception.
    faulted = Signal(object)

    def __init__(self, settings: Settings, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.start = settings
        self.settings = settings
        self.review: Review | None = None
        self.paths: tuple[Path, ...] = ()
        self.specimen = 0
        self.column = 0
        self.asks_for_matrix = True
        self._matrix_said: frozenset[str] = frozenset()
        self._wanted = settings
        self._assessing = False
        self._opening: work.Token | None = None
        self._pending: tuple[tuple[Path, ...], Panel, frozenset[str]] | None = None

    # -- opening ---------------------------------------------------------------------------------

    def open(self, paths: Sequence[Path], matrix: str | None = None) -> None:
        """Read and assess files as one panel; the present review stays until the new one is there."""
        self.cancel()
        self._pending = None
        files = tuple(paths)

        def read(token: work.Token) -> Panel:
            from panelview.catalogue.load import load_catalogue
            from panelview.intake.read import read_panels

            panel = read_panels(list(files), load_catalogue(), matrix=matrix)
            token.check()
            return panel

        name = files[0].name if len(files) == 1 else f"{len(files)} files"
        self._begin(f"Reading {name} …", read, partial(self._read, files, matrix))

    def _read(self, files: tuple[Path, ...], matrix: str | None, panel: Panel) -> None:
        unstated = frozenset(s.code for s in panel.specimens if not s.matrix)
        if unstated and matrix is None and self.asks_for_matrix:
            self._pending = files, panel, unstated
            self.matrix_wanted.emit(panel)
            return
        self._assess_new(files, panel, frozenset())

    def use_matrix(self, matrix: str) -> None:
        """The reviewer's answer to `matrix_wanted`; "" leaves it open."""
        if self._pending is None:
            return
        files, panel, unstated = self._pending
        self._pending = None
        if not matrix:
            self._assess_new(files, panel, frozenset())
            return

        def read(_token: work.Token) -> Panel:
            from panelview.catalogue.load import load_catalogue
            from panelview.intake.read import read_panels

            return read_panels(list(files), load_catalogue(), matrix=matrix)

        self._begin("Reading …", read, lambda again: self._assess_new(files, again, unstated))

    def _assess_new(self, files: tuple[Path, ...], panel: Panel, said: frozenset[str]) -> None:
        def judge(_token: work.Token) -> Review:
            from panelview.assess.assess import assess
            from panelview.catalogue.load import load_catalogue

            return assess(panel, load_catalogue(), self.start)

        def show(review: Review) -> None:
            self.paths = files
            self._matrix_said = said
            self.settings = self._wanted = self.start
            self.review = review
            self.specimen = _first_to_look_at(review)
            self.column = _first_column(review, self.specimen)
            self.opened.emit()

        self._begin("Assessing …", judge, show)

    def _begin(self, what: str, task: Callable[[work.Token], object], on_done: Callable[..., None]) -> None:
        def done(result: object) -> None:
            self._opening = None
            self.idle.emit()
            on_done(result)

        self._opening = work.run(task, done, self._failed, on_cancelled=None)
        self.busy.emit(what, self._opening)

    def _failed(self, error: Exception) -> None:
        from panelview.intake.problems import InputRefused
        from panelview.thermo.conditions import OutOfModelRange

        self._opening = None
        self.idle.emit()
        if isinstance(error, InputRefused):
            self.refused.emit(error.problems[0].file, error)
        elif isinstance(error, (OutOfModelRange, ValueError)) and _is_sentence(error):
            self.choice_refused.emit(str(error))
        else:
            self.faulted.emit(error)

    def cancel(self) -> None:
        """Stop opening; the present review stays as it is."""
        if self._opening is not None:
            self._opening.cancel()
            self._opening = None
            self.idle.emit()

    def close(self) -> None:
        """Put the panel away."""
        self.cancel()
        self.review = None
        self.paths = ()
        self.settings = self._wanted = self.start

    # -- choosing --------------------------------------------------------------------------------

    def choose_specimen(self, specimen: int) -> None:
        if self.review is not None and specimen != self.specimen:
            self.specimen = specimen
            self.specimen_changed.emit()

    def choose_column(self, column: int) -> None:
        if self.review is not None and column != self.column:
            self.column = column
            self.column_changed.emit()

    # -- settings --------------------------------------------------------------------------------

    def apply(self, settings: Settings) -> None:
        """Assess with new settings; the review follows when it is there."""
        if self.review is None:
            return
        self._wanted = settings
        if not self._assessing:
            self._assess_again()

    @property
    def wanted(self) -> Settings:
        """The settings asked for last (the review may still be on its way)."""
        return self._wanted

    @property
    def is_changed(self) -> bool:
        """Whether the reviewer has changed any setting since opening."""
        return choices.is_changed(self.settings, self.start)

    def _assess_again(self) -> None:
        review, wanted = self.review, self._wanted
        assert review is not None
        self._assessing = True

        def judge(_token: work.Token) -> Review:
            from panelview.assess.assess import assess
            from panelview.catalogue.load import load_catalogue

            return assess(review.panel, load_catalogue(), wanted)

        work.run(judge, partial(self._assessed, review, wanted), partial(self._not_assessed, wanted))

    def _assessed(self, before: Review, used: Settings, review: Review) -> None:
        self._assessing = False
        if self.review is None or self.review.panel is not before.panel:
            return  # another panel came in meanwhile
        self.review = review
        self.settings = used
        self.reviewed.emit()
        if self._wanted is not used:
            self._assess_again()

    def _not_assessed(self, used: Settings, error: Exception) -> None:
        self._assessing = False
        if self._wanted is used:
            self._wanted = self.settings
        else:
            self._assess_again()
        if _is_sentence(error):
            self.choice_refused.emit(str(error))
        else:
            self.faulted.emit(error)

    # -- reading ---------------------------------------------------------------------------------

    def evidence(self) -> Evidence | None:
        """The evidence for the chosen step of the chosen specimen."""
        if self.review is None:
            return None
        from panelview.assess.evidence import evidence

        return evidence(self.review, self.specimen, self.column)

    def matrix_origin(self, specimen: int) -> str:
        """Where the matrix of a specimen comes from, in words."""
        from panelview.assess.review import ORIGIN_FILE, ORIGIN_REVIEWER

        assert self.review is not None
        facts = self.review.specimens[specimen]
        if not facts.matrix:
            return "not stated"
        return ORIGIN_REVIEWER if facts.code in self._matrix_said else ORIGIN_FILE


def _is_sentence(error: Exception) -> bool:
    """Whether the error is one that explains itself to the reader."""
    from panelview.assess.settings import UnknownReference
    from panelview.thermo.conditions import OutOfModelRange

    return isinstance(error, (OutOfModelRange, UnknownReference))


def _first_to_look_at(review: Review) -> int:
    """The first specimen that is no control."""
    controls = set(review.reference.specimens)
    return next((i for i in range(len(review.specimens)) if i not in controls), 0)


def _first_column(review: Review, specimen: int) -> int:
    from panelview.desktop.arrangement import Arrangement, Order, arranged

    rows = arranged(review, specimen, Arrangement(Order.HOW_FAR))
    return next((row for row in rows if isinstance(row, int)), 0)
