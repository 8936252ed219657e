"""What the actions do: opening, exporting, copying, asking, telling. The window makes, the desk does."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QApplication, QFileDialog, QMenu

from panelview.desktop import work
from panelview.desktop.arrangement import Order
from panelview.desktop.notices import Severity
from panelview.desktop.reading_report import counted, left_out
from panelview.desktop.reference_menu import ReferenceMenu
from panelview.desktop.samples import SAMPLES, sample_path
from panelview.desktop.theme import Choice
from panelview.output.file_names import safe_name
from panelview.output.scale import Axis

if TYPE_CHECKING:
    from panelview.desktop.window import MainWindow
    from panelview.intake.panel import Panel
    from panelview.intake.problems import InputRefused

#: So many problems of a refused file are told at once; the rest are counted.
_MOST_TOLD = 6


class Desk:
    """Carries out the actions of one window."""

    def __init__(self, window: MainWindow) -> None:
        self._window = window
        self._token: work.Token | None = None

    def connect_actions(self) -> None:
        """Fill the menus and connect every action."""
        w, actions = self._window, self._window.actions_
        menus = actions.fill(w.menuBar())
        self._add_file_menus(menus["File"])
        menus["Review"].insertMenu(actions["reset"], ReferenceMenu(w.reviewing, w))
        steps = w.steps
        actions.connect(
            open=self.choose_file,
            export_page=self.export_page,
            export_tables=self.export_tables,
            export_figure=self.export_figure,
            close=self.close_panel,
            quit=w.close,
            copy_text=lambda: self.copy_table("\t"),
            copy_csv=lambda: self.copy_table(","),
            copy_evidence=self.copy_evidence,
            find_step=lambda: steps.filter_edit.setFocus(),
            find_specimen=lambda: w.specimens.filter_edit.setFocus(),
            axis_shift=lambda: steps.set_axis(Axis.SHIFT),
            axis_distance=lambda: steps.set_axis(Axis.DISTANCE),
            swap_axis=lambda: steps.set_axis(Axis.DISTANCE if steps.axis is Axis.SHIFT else Axis.SHIFT),
            order_far=lambda: steps.set_order(Order.HOW_FAR),
            order_pathway=lambda: steps.set_order(Order.PATHWAY),
            hide_unread=lambda: steps.hide_box.setChecked(actions["hide_unread"].isChecked()),
            next_specimen=lambda: w.specimens.step_by(1),
            previous_specimen=lambda: w.specimens.step_by(-1),
            next_area=self.next_area,
            edit_conditions=w.conditions.start_editing,
            free_ratios=self.show_ratios,
            reset=w.conditions.reset_all,
            what_was_read=self.show_reading,
            cancel=self.cancel,
            keyboard=self.show_keyboard,
            method=self.show_method,
            about=self.show_about,
        )
        for name, view in w.panels().items():
            actions[name].toggled.connect(view.setVisible)
        for choice in Choice:
            actions[f"colours_{choice.value}"].triggered.connect(lambda _=False, c=choice: w.theme.choose(c))
        actions[f"colours_{w.theme.choice.value}"].setChecked(True)
        steps.axis_changed.connect(lambda axis: actions[f"axis_{axis.value}"].setChecked(True))
        steps.order_changed.connect(
            lambda order: actions["order_far" if order is Order.HOW_FAR else "order_pathway"].setChecked(True)
        )
        steps.hide_changed.connect(actions["hide_unread"].setChecked)
        actions[f"axis_{steps.axis.value}"].setChecked(True)
        actions["order_far"].setChecked(True)

    def _add_file_menus(self, file_menu: QMenu) -> None:
        before = self._window.actions_["export_page"]
        samples = QMenu("Open &sample", file_menu)
        for sample in SAMPLES:
            action = samples.addAction(sample.title)
            action.triggered.connect(lambda _=False, s=sample: self.open([sample_path(s)]))
        self._recent_menu = QMenu("Open &recent", file_menu)
        file_menu.insertMenu(before, samples)
        file_menu.insertMenu(before, self._recent_menu)
        self.show_recent()

    def show_recent(self) -> None:
        """Refill File → Open recent."""
        self._recent_menu.clear()
        paths = self._window.recent.paths()
        for path in paths:
            action = self._recent_menu.addAction(path.name)
            action.setToolTip(str(path))
            action.triggered.connect(lambda _=False, p=path: self.open([p]))
        self._recent_menu.setEnabled(bool(paths))

    # -- opening ---------------------------------------------------------------------------------

    def choose_file(self) -> None:
        names, _ = QFileDialog.getOpenFileNames(
            self._window, "Open panel", self._folder(), "Panels (*.csv *.tsv *.txt);;All files (*)"
        )
        if names:
            self.open([Path(name) for name in names])

    def open(self, paths: Sequence[Path]) -> None:
        self._window.notice.hide()
        self._window.reviewing.open(paths)

    def close_panel(self) -> None:
        self._window.reviewing.close()
        self._window.show_start()

    def ask_matrix(self, panel: Panel) -> None:
        """Ask what kind of specimen the file holds; the review waits for the answer."""
        from panelview.catalogue.load import load_catalogue
        from panelview.desktop.matrix_dialog import MatrixDialog

        unstated = sum(not s.matrix for s in panel.specimens)
        dialog = MatrixDialog(load_catalogue().matrices, unstated, len(panel.specimens), self._window)
        dialog.finished.connect(lambda _: self._window.reviewing.use_matrix(dialog.chosen))
        dialog.finished.connect(dialog.deleteLater)
        dialog.open()

    def tell_refused(self, name: str, error: InputRefused) -> None:
        """Say why a file was not opened; what was open before stays."""
        lines = [str(problem) for problem in error.problems[:_MOST_TOLD]]
        if len(error.problems) > _MOST_TOLD:
            lines.append(f"and {len(error.problems) - _MOST_TOLD} more")
        self._window.notice.tell(Severity.REFUSAL, f"{name} was not opened.\n" + "\n".join(lines))

    def tell_read(self) -> None:
        """After opening: what was left out stands in the bar, the rest in the line."""
        review = self._window.reviewing.review
        assert review is not None
        out = left_out(review.panel)
        if out:
            self._window.notice.tell(
                Severity.CAUTION,
                f"Left out while reading: {out}. Each is listed with its row, its column and a way out.",
                "What was read",
                self.show_reading,
            )
        off = int(review.findings.highlighted.sum())
        self._window.bottom.say(f"{counted(len(review.specimens), 'specimen')} read, {counted(off, 'step')} off in all")

    def show_reading(self) -> None:
        self._window.actions_["show_below"].setChecked(True)
        self._window.below.show_reading()

    # -- telling ---------------------------------------------------------------------------------

    @staticmethod
    def choice_text(text: str) -> str:
        """A refused choice as a sentence."""
        is_symbol = text.startswith(("pH", "pMg"))
        return f"{text if is_symbol else text[:1].upper() + text[1:]}. The last valid value stays."

    def note_followed(self) -> None:
        """The review has followed a change: an earlier refusal no longer holds."""
        if self._window.notice.property("severity") == Severity.REFUSAL.value:
            self._window.notice.hide()

    @staticmethod
    def raise_fault(error: Exception) -> None:
        """Hand an unforeseen error of a worker to the one place that reports such errors."""
        raise error

    # -- exporting -------------------------------------------------------------------------------

    def export_page(self) -> None:
        reviewing = self._window.reviewing
        assert reviewing.review is not None
        code = reviewing.review.specimens[reviewing.specimen].code
        path = self._ask_target("Export page", f"{safe_name(code)}.pdf", "PDF (*.pdf)")
        if path is not None:
            self.write_page(path)

    def write_page(self, path: Path) -> None:
        """Write the page of the chosen specimen to `path`."""
        from panelview.desktop.export import write_page_file

        reviewing = self._window.reviewing
        review, specimen = reviewing.review, reviewing.specimen
        assert review is not None
        when = datetime.now().astimezone()
        self._run("Writing page", path, lambda token: write_page_file(review, specimen, path, when, token))

    def export_tables(self) -> None:
        folder = QFileDialog.getExistingDirectory(
            self._window, "Folder in which to make the new folder of tables", self._folder()
        )
        if folder:
            stem = self._window.reviewing.paths[0].stem if self._window.reviewing.paths else "panel"
            self.write_tables(_free_name(Path(folder) / f"{stem}-review"))

    def write_tables(self, folder: Path) -> None:
        """Write tables and pages of all specimens into the new folder `folder`."""
        from panelview.desktop.export import write_folder

        review = self._window.reviewing.review
        assert review is not None
        when = datetime.now().astimezone()
        self._run("Writing tables", folder, lambda token: write_folder(review, folder, when, token))

    def export_figure(self) -> None:
        reviewing = self._window.reviewing
        assert reviewing.review is not None
        code = reviewing.review.specimens[reviewing.specimen].code
        path = self._ask_target("Export strips", f"{safe_name(code)}-strips.svg", "SVG (*.svg);;PNG (*.png)")
        if path is not None:
            self.write_figure(path)

    def write_figure(self, path: Path) -> None:
        """Write the strips as shown to `path` (SVG or PNG by its ending)."""
        from panelview.desktop.export import StripFigure

        reviewing = self._window.reviewing
        assert reviewing.review is not None
        figure = StripFigure(
            reviewing.review, reviewing.specimen, self._shown(), self._window.steps.axis, self._window.font()
        )
        try:
            figure.write(path)
        except OSError as error:
            self._tell_not_written(path, error)
        else:
            self._window.bottom.say(f"Written: {path}")

    def _run(self, what: str, path: Path, task: Callable[[work.Token], Path]) -> None:
        """Write something off the GUI thread, with progress and a way to stop."""
        bottom = self._window.bottom

        def ended(then: Callable[[], None]) -> None:
            self._token = None
            bottom.work_ended()
            then()

        def failed(error: Exception) -> None:
            ended(lambda: self._tell_not_written(path, error))

        self._token = work.run(
            task,
            on_done=lambda written: ended(lambda: bottom.say(f"Written: {written}")),
            on_failed=failed,
            on_progress=bottom.work_advanced,
            on_cancelled=lambda: ended(lambda: bottom.say("Stopped; nothing was written")),
        )
        bottom.work_started(f"{what} …", self._token)

    def _tell_not_written(self, path: Path, error: Exception) -> None:
        from panelview.output.batch import OutputFailed

        if isinstance(error, OutputFailed):
            text = str(error)
        elif isinstance(error, OSError):
            text = f"{path}: {error.strerror or error}; choose another place and try again"
        else:
            raise error
        self._window.notice.tell(Severity.REFUSAL, f"Nothing was written. {text}.")

    def _ask_target(self, title: str, name: str, kinds: str) -> Path | None:
        start = str(Path(self._folder()) / name)
        chosen, kind = QFileDialog.getSaveFileName(self._window, title, start, kinds)
        if not chosen:
            return None
        path = Path(chosen)
        return path if path.suffix else path.with_suffix(kind[kind.index("*") + 1 :].rstrip(")"))

    def _folder(self) -> str:
        """Where dialogs start: beside the open panel, else the user's home."""
        paths = self._window.reviewing.paths
        is_sample = bool(paths) and any(paths[0] == sample_path(s) for s in SAMPLES)
        return str(paths[0].parent if paths and not is_sample else Path.home())

    # -- copying ---------------------------------------------------------------------------------

    def _shown(self) -> list[int]:
        return [row for row in self._window.steps.model.rows if isinstance(row, int)]

    def copy_table(self, delimiter: str) -> None:
        """Put the shown steps on the clipboard."""
        from panelview.desktop.export import table_text

        reviewing = self._window.reviewing
        assert reviewing.review is not None
        shown = self._shown()
        text = table_text(reviewing.review, reviewing.specimen, shown, self._window.steps.axis, delimiter)
        QApplication.clipboard().setText(text)
        self._window.bottom.say(f"{len(shown)} steps copied")

    def copy_evidence(self) -> None:
        QApplication.clipboard().setText(self._window.evidence.page.toPlainText())
        self._window.bottom.say("Evidence copied")

    # -- going about -----------------------------------------------------------------------------

    def cancel(self) -> None:
        """Stop what is running; with nothing running, put the notice away."""
        if self._token is not None:
            self._token.cancel()
            self._window.bottom.say("Stopping …")
        elif self._window.bottom.token is not None:
            self._window.reviewing.cancel()
            self._window.bottom.say("Stopped; nothing was changed")
        else:
            self._window.notice.hide()

    def next_area(self) -> None:
        """Move the focus to the next area of the window."""
        areas = self._window.areas()
        if not areas:
            return
        focus = QApplication.focusWidget()
        inside = (k for k, area in enumerate(areas) if area is focus or (focus and area.isAncestorOf(focus)))
        areas[(next(inside, -1) + 1) % len(areas)].setFocus()

    def show_ratios(self) -> None:
        from panelview.desktop.free_ratios import FreeRatiosDialog

        dialog = FreeRatiosDialog(self._window.reviewing, self._window)
        dialog.finished.connect(dialog.deleteLater)
        dialog.open()

    def show_keyboard(self) -> None:
        from panelview.desktop.help_dialogs import keyboard_html

        self._show_help("Keyboard", keyboard_html())

    def show_method(self) -> None:
        from panelview.desktop.help_dialogs import method_html

        self._show_help("Method and limits", method_html())

    def show_about(self) -> None:
        from panelview.desktop.help_dialogs import about_html

        review = self._window.reviewing.review
        self._show_help("About Panelview", about_html(review.catalogue if review is not None else None))

    def _show_help(self, title: str, html: str) -> None:
        from panelview.desktop.help_dialogs import HelpDialog

        dialog = HelpDialog(title, html, self._window)
        dialog.finished.connect(dialog.deleteLater)
        dialog.open()


def _free_name(path: Path) -> Path:
    """`path`, or the first of path-2, path-3 … that does not exist."""
    number = 2
    made = path
    while made.exists():
        made = path.with_name(f"{path.name}-{number}")
        number += 1
    return made
