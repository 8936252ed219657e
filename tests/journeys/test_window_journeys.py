"""Journeys through the window, as a reviewer takes them."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from pypdf import PdfReader
from PySide6.QtCore import QMimeData, QPoint, QPointF, Qt, QUrl
from PySide6.QtGui import QDropEvent
from PySide6.QtWidgets import QApplication, QFileDialog

from panelview.assess.assess import assess
from panelview.assess.review import ORIGIN_DEFAULT, ORIGIN_FILE, ORIGIN_REVIEWER
from panelview.assess.settings import ConditionChoice, Settings
from panelview.catalogue.load import load_catalogue
from panelview.desktop.cells import Cell
from panelview.intake.read import read_panels
from panelview.output.text import CAUTION


def first_with_steps_off(window) -> int:
    """The first specimen, not a control, with a step that is off."""
    review = window.reviewing.review
    controls = set(review.reference.specimens)
    return next(i for i in range(len(review.specimens)) if i not in controls and review.findings.highlighted[i].any())


def click_specimen(qtbot, window, specimen: int) -> None:
    view = window.specimens.list
    index = window.specimens.model.index(window.specimens.model.row_of(specimen))
    view.scrollTo(index)
    qtbot.mouseClick(view.viewport(), Qt.MouseButton.LeftButton, pos=view.visualRect(index).center())


def click_row(qtbot, window, row: int, cell: Cell = Cell.STRIP) -> None:
    table = window.steps.table
    index = window.steps.model.index(row, cell)
    table.scrollTo(index)
    qtbot.mouseClick(table.viewport(), Qt.MouseButton.LeftButton, pos=table.visualRect(index).center())


def type_number(qtbot, field, text: str) -> None:
    field.setFocus()
    field.selectAll()
    qtbot.keyClicks(field, text)
    qtbot.keyClick(field, Qt.Key.Key_Return)


def test_from_a_sample_to_a_page(qtbot, window, tmp_path, monkeypatch):
    """Sample, specimen, furthest off first, evidence, another pH, reset, page."""
    with qtbot.waitSignal(window.reviewing.opened):
        qtbot.mouseClick(window.start.samples[0], Qt.MouseButton.LeftButton)
    review = window.reviewing.review
    specimen = first_with_steps_off(window)
    click_specimen(qtbot, window, specimen)
    assert window.reviewing.specimen == specimen
    code = review.specimens[specimen].code
    assert window.steps.code.text() == code

    window.actions_["order_pathway"].trigger()
    window.actions_["order_far"].trigger()
    first = window.steps.model.rows[0]
    assert review.findings.highlighted[specimen, first]

    click_row(qtbot, window, 0)
    step = review.columns[first].step
    shown = window.evidence.page.toPlainText()
    assert step.enzyme.casefold() in shown.casefold()
    assert "What carries the shift" in shown
    assert "What K′eq rests on" in shown

    before = window.steps.model.rows
    text_before = window.steps.model.text(first, Cell.DELTA_G)
    with qtbot.waitSignal(window.reviewing.reviewed):
        type_number(qtbot, window.conditions.fields["ph"].value, "6.80")
    assert window.conditions.fields["ph"].origin.text() == f"● {ORIGIN_REVIEWER}"
    assert window.steps.model.rows == before  # rows keep their place
    assert window.reviewing.column == first
    assert window.reviewing.review.conditions.ph[specimen] == pytest.approx(6.8)

    with qtbot.waitSignal(window.reviewing.reviewed):
        qtbot.mouseClick(window.conditions.reset, Qt.MouseButton.LeftButton)
    assert window.conditions.fields["ph"].origin.text() in (ORIGIN_DEFAULT, ORIGIN_FILE)
    assert window.steps.model.text(first, Cell.DELTA_G) == text_before
    assert not window.conditions.reset.isEnabled()

    target = tmp_path / "page.pdf"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(target), "PDF (*.pdf)"))
    window.actions_["export_page"].trigger()
    qtbot.waitUntil(target.exists, timeout=20000)
    pages = PdfReader(target).pages
    assert all(CAUTION in " ".join(page.extract_text().split()) for page in pages)
    assert code in pages[0].extract_text()


def test_a_changed_condition_gives_the_engines_own_numbers(qtbot, opened, red_cells):
    """What the window shows after an edit is what the engine says for the same settings."""
    specimen = opened.reviewing.specimen
    with qtbot.waitSignal(opened.reviewing.reviewed):
        type_number(qtbot, opened.conditions.fields["pmg"].value, "2.6")
    code = opened.reviewing.review.specimens[specimen].code
    choice = ConditionChoice(2.6, None, ORIGIN_REVIEWER)
    catalogue = load_catalogue()
    expected = assess(
        read_panels([red_cells], catalogue), catalogue, Settings(specimen_conditions={code: {"pmg": choice}})
    )
    np.testing.assert_array_equal(opened.reviewing.review.findings.delta_g, expected.findings.delta_g)
    assert opened.reviewing.review.condition_origin["pmg"][specimen] == ORIGIN_REVIEWER
    others = [i for i in range(len(expected.specimens)) if i != specimen]
    assert all(opened.reviewing.review.condition_origin["pmg"][i] != ORIGIN_REVIEWER for i in others)


def test_several_quick_changes_end_with_the_last(qtbot, opened):
    field = opened.conditions.fields["ph"].value
    for _ in range(7):
        field.stepUp()
    wanted = field.value()
    qtbot.waitUntil(lambda: abs(opened.reviewing.review.conditions.ph[opened.reviewing.specimen] - wanted) < 1e-9)
    assert field.value() == pytest.approx(wanted)


def test_a_condition_out_of_range_is_a_sentence_and_the_last_value_stays(qtbot, opened):
    ph = opened.conditions.fields["ph"].value
    before = ph.value()
    with qtbot.waitSignal(opened.reviewing.choice_refused):
        type_number(qtbot, ph, "9.5")
    assert "pH 9.5 is outside the model's range (5 to 9)" in opened.notice.text.text()
    assert opened.notice.isVisible()
    assert ph.value() == pytest.approx(before)
    with qtbot.waitSignal(opened.reviewing.reviewed):
        type_number(qtbot, ph, "7,4")  # a decimal comma is understood
    assert opened.reviewing.review.conditions.ph[opened.reviewing.specimen] == pytest.approx(7.4)
    assert not opened.notice.isVisible()


def test_the_whole_review_by_keyboard_alone(qtbot, window, red_cells, monkeypatch, tmp_path):
    """Open, go to another specimen, another step, swap the axis, find, copy, export: no mouse."""
    monkeypatch.setattr(QFileDialog, "getOpenFileNames", lambda *_: ([str(red_cells)], ""))
    with qtbot.waitSignal(window.reviewing.opened):
        qtbot.keyClick(window, Qt.Key.Key_O, Qt.KeyboardModifier.ControlModifier)
    table = window.steps.table
    assert QApplication.focusWidget() is table

    specimen = window.reviewing.specimen
    qtbot.keyClick(table, Qt.Key.Key_PageDown, Qt.KeyboardModifier.ControlModifier)
    assert window.reviewing.specimen != specimen
    qtbot.keyClick(table, Qt.Key.Key_Home)
    column = window.reviewing.column
    qtbot.keyClick(table, Qt.Key.Key_Down)
    assert window.reviewing.column != column

    axis = window.steps.axis
    qtbot.keyClick(table, Qt.Key.Key_D, Qt.KeyboardModifier.ControlModifier)
    assert window.steps.axis is not axis

    qtbot.keyClick(table, Qt.Key.Key_F, Qt.KeyboardModifier.ControlModifier)
    qtbot.keyClicks(QApplication.focusWidget(), "2.7.1.40")
    assert [window.reviewing.review.columns[c].step.id for c in window.steps.model.rows if isinstance(c, int)] == [
        "pyruvate_kinase"
    ]
    qtbot.keyClick(window, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier)
    assert CAUTION in QApplication.clipboard().text()

    seen = set()
    for _ in window.areas():
        qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_F6)
        seen.add(QApplication.focusWidget())
    assert seen == set(window.areas())

    target = tmp_path / "page.pdf"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *_: (str(target), "PDF (*.pdf)"))
    qtbot.keyClick(window, Qt.Key.Key_E, Qt.KeyboardModifier.ControlModifier)
    qtbot.waitUntil(target.exists, timeout=20000)


def test_headings_are_passed_over_by_the_keyboard(qtbot, opened):
    opened.actions_["order_pathway"].trigger()
    table, model = opened.steps.table, opened.steps.model
    qtbot.keyClick(table, Qt.Key.Key_Home)
    for _ in range(len(model.rows)):
        assert isinstance(model.rows[table.currentIndex().row()], int)
        qtbot.keyClick(table, Qt.Key.Key_Down)
    assert table.currentIndex().row() == len(model.rows) - 1


def test_a_bad_file_is_a_sentence_and_the_window_stays_usable(qtbot, opened, tmp_path, red_cells):
    review = opened.reviewing.review
    bad = tmp_path / "empty.csv"
    bad.write_bytes(b"")
    with qtbot.waitSignal(opened.reviewing.refused):
        opened.desk.open([bad])
    assert opened.notice.isVisible()
    text = opened.notice.text.text()
    assert "empty.csv" in text
    assert ";" in text  # what is wrong; what to do
    assert "Traceback" not in text
    assert opened.reviewing.review is review  # what was open stays
    with qtbot.waitSignal(opened.reviewing.opened):
        opened.desk.open([red_cells])
    assert not opened.notice.isVisible() or "empty.csv" not in opened.notice.text.text()


def test_stopping_the_opening_leaves_no_trace(qtbot, opened, red_cells):
    review, title = opened.reviewing.review, opened.windowTitle()
    sent = []
    opened.reviewing.opened.connect(lambda: sent.append("opened"))
    opened.desk.open([red_cells])
    opened.actions_["cancel"].trigger()
    qtbot.wait(400)
    assert sent == []
    assert opened.reviewing.review is review
    assert opened.windowTitle() == title
    assert not opened.bottom.progress.isVisible()


def test_stopping_an_export_leaves_no_file(qtbot, opened, tmp_path):
    target = tmp_path / "out" / "tables"
    target.parent.mkdir()
    opened.desk.write_tables(target)
    opened.actions_["cancel"].trigger()
    qtbot.waitUntil(lambda: "nothing was written" in opened.bottom.message.whole, timeout=30000)
    assert list(target.parent.iterdir()) == []


def test_tables_of_all_specimens_are_written_into_a_new_folder(qtbot, opened, tmp_path, monkeypatch):
    monkeypatch.setattr(QFileDialog, "getExistingDirectory", lambda *_: str(tmp_path))
    opened.actions_["export_tables"].trigger()
    qtbot.waitUntil(lambda: opened.bottom.message.whole.startswith("Written"), timeout=60000)
    (folder,) = [p for p in tmp_path.iterdir() if p.is_dir()]
    assert {"steps.csv", "intake.csv", "review.json"} <= {p.name for p in folder.iterdir()}


def test_a_place_that_cannot_be_written_is_a_sentence(qtbot, opened, tmp_path):
    opened.desk.write_page(tmp_path / "missing" / "page.pdf")
    qtbot.waitUntil(opened.notice.isVisible)
    assert "Nothing was written" in opened.notice.text.text()
    assert "choose another place" in opened.notice.text.text()


@pytest.mark.parametrize("name", ["strips.svg", "strips.png"])
def test_the_strips_are_saved_as_a_figure(opened, tmp_path, name):
    opened.desk.write_figure(tmp_path / name)
    content = (tmp_path / name).read_bytes()
    assert content.startswith(b"\x89PNG") or b"<svg" in content[:400]
    assert len(content) > 5000


def test_a_file_can_be_dropped_anywhere(qtbot, window, red_cells):
    data = QMimeData()
    data.setUrls([QUrl.fromLocalFile(str(red_cells))])
    event = QDropEvent(
        QPointF(QPoint(200, 200)),
        Qt.DropAction.CopyAction,
        data,
        Qt.MouseButton.LeftButton,
        Qt.KeyboardModifier.NoModifier,
    )
    with qtbot.waitSignal(window.reviewing.opened):
        window.dropEvent(event)
    assert red_cells.name in window.windowTitle()


def test_the_window_asks_for_a_matrix_that_the_file_does_not_state(qtbot, window, tmp_path):
    from panelview.desktop.matrix_dialog import MatrixDialog

    path = tmp_path / "unstated.csv"
    path.write_text("specimen,analyte,value,unit\nS1,lactate,2.1,mmol/L\nS1,pyruvate,0.06,mmol/L\n", encoding="utf-8")
    with qtbot.waitSignal(window.reviewing.matrix_wanted):
        window.desk.open([path])
    dialog = window.findChild(MatrixDialog)
    names = [dialog.list.item(k).data(Qt.ItemDataRole.UserRole) for k in range(dialog.list.count())]
    dialog.list.setCurrentRow(names.index("erythrocyte"))
    with qtbot.waitSignal(window.reviewing.opened):
        dialog.accept()
    assert window.reviewing.review.specimens[0].matrix == "erythrocyte"
    assert window.conditions.matrix_origin.text() == f"● {ORIGIN_REVIEWER}"


def test_a_matrix_left_open_is_said_to_be_not_stated(qtbot, window, tmp_path):
    from panelview.desktop.matrix_dialog import MatrixDialog

    path = tmp_path / "unstated.csv"
    path.write_text("specimen,analyte,value,unit\nS1,lactate,2.1,mmol/L\nS1,pyruvate,0.06,mmol/L\n", encoding="utf-8")
    with qtbot.waitSignal(window.reviewing.matrix_wanted):
        window.desk.open([path])
    with qtbot.waitSignal(window.reviewing.opened):
        window.findChild(MatrixDialog).reject()
    assert "not stated" in window.conditions.matrix.text()


def test_a_free_ratio_of_ones_own_is_used_and_marked(qtbot, opened):
    from panelview.desktop.free_ratios import FreeRatiosDialog

    opened.actions_["free_ratios"].trigger()
    dialog = opened.findChild(FreeRatiosDialog)
    dialog.edits["nad_cytosol"].setText("nonsense")
    dialog._set("nad_cytosol")
    assert "nonsense" in dialog.problem.text()
    dialog.edits["nad_cytosol"].setText("900")
    with qtbot.waitSignal(opened.reviewing.reviewed):
        dialog._set("nad_cytosol")
    assert opened.conditions.ratios_origin.text() == f"● {ORIGIN_REVIEWER}"
    assert opened.reviewing.settings.free_ratios["nad_cytosol"].value == pytest.approx(900)
    with qtbot.waitSignal(opened.reviewing.reviewed):
        dialog._reset("nad_cytosol")
    assert "nad_cytosol" not in opened.reviewing.settings.free_ratios
    dialog.reject()


def test_the_caution_is_always_in_sight(qtbot, window, red_cells):
    assert window.bottom.caution.isVisible()
    with qtbot.waitSignal(window.reviewing.opened):
        window.desk.open([red_cells])
    assert window.bottom.caution.isVisible()
    assert window.bottom.caution.text() == CAUTION
    window.resize(window.minimumSize())
    assert window.bottom.caution.width() >= window.bottom.caution.sizeHint().width()


def test_the_window_remembers_its_place_and_the_files(qtbot, opened, theme, red_cells):
    from panelview.desktop.window import MainWindow

    opened.actions_["axis_distance"].trigger()
    opened.actions_["show_below"].trigger()
    opened.close()
    again = MainWindow(Settings(), theme, opened.store)
    qtbot.addWidget(again)
    assert again.steps.axis.value == "distance"
    assert not again.actions_["show_below"].isChecked()
    assert again.recent.paths() == [red_cells.resolve()]


def test_several_files_open_as_one_panel(qtbot, window, tmp_path):
    head = "specimen,matrix,analyte,value,unit\n"
    paths = []
    for code in ("S1", "S2"):
        path = Path(tmp_path / f"{code}.csv")
        path.write_text(
            f"{head}{code},plasma,lactate,2.1,mmol/L\n{code},plasma,pyruvate,0.06,mmol/L\n", encoding="utf-8"
        )
        paths.append(path)
    with qtbot.waitSignal(window.reviewing.opened):
        window.desk.open(paths)
    assert [s.code for s in window.reviewing.review.specimens] == ["S1", "S2"]


def test_every_part_of_the_window_has_a_name_for_screen_readers(opened):
    """Tables, lists, fields and buttons: none is announced as nothing."""
    from PySide6.QtWidgets import QAbstractButton, QAbstractItemView, QAbstractSpinBox, QComboBox, QLineEdit

    unnamed = []
    for kind in (QAbstractItemView, QAbstractSpinBox, QComboBox, QLineEdit, QAbstractButton):
        for widget in opened.findChildren(kind):
            inner = isinstance(widget.parent(), (QAbstractSpinBox, QLineEdit, QComboBox, QAbstractItemView))
            is_internal = inner or widget.objectName().startswith("qt_") or not widget.isVisible()
            text = widget.text() if isinstance(widget, QAbstractButton) else ""
            if not is_internal and not (widget.accessibleName() or text):
                unnamed.append(widget)
    assert [type(w).__name__ for w in unnamed] == []


def test_the_tab_key_goes_through_every_field_and_comes_back(qtbot, opened):
    start = opened.conditions.fields["ph"].value
    start.setFocus()
    seen = []
    for _ in range(60):
        qtbot.keyClick(QApplication.focusWidget(), Qt.Key.Key_Tab)
        if QApplication.focusWidget() is start:
            break
        seen.append(QApplication.focusWidget())
    assert QApplication.focusWidget() is start
    for widget in (opened.steps.table, opened.specimens.list, opened.evidence.page, opened.below.state):
        assert widget in seen


def test_light_and_dark_are_chosen_from_the_menu(qtbot, opened):
    opened.actions_["colours_dark"].trigger()
    dark = opened.grab().toImage().pixelColor(640, 5).lightness()
    opened.actions_["colours_light"].trigger()
    assert opened.grab().toImage().pixelColor(640, 5).lightness() > dark + 100


def test_a_condition_can_be_changed_for_all_specimens_at_once(qtbot, opened):
    opened.conditions.scope.setCurrentIndex(1)
    with qtbot.waitSignal(opened.reviewing.reviewed):
        type_number(qtbot, opened.conditions.fields["temperature"].value, "25")
    assert opened.reviewing.review.conditions.temperature == pytest.approx(298.15)
    assert set(opened.reviewing.review.condition_origin["temperature"]) == {ORIGIN_REVIEWER}


def test_the_floor_of_a_highlight_can_be_set(qtbot, opened):
    before = int(opened.reviewing.review.findings.highlighted.sum())
    with qtbot.waitSignal(opened.reviewing.reviewed):
        type_number(qtbot, opened.conditions.floor, "100")
    assert before > 0
    assert not opened.reviewing.review.findings.highlighted.any()
    assert opened.conditions.floor_origin.text() == f"● {ORIGIN_REVIEWER}"


def test_closing_a_panel_goes_back_to_the_start(opened):
    opened.actions_["close"].trigger()
    assert opened.start.isVisible()
    assert not opened.actions_["export_page"].isEnabled()
    assert opened.windowTitle() == "Panelview"


def test_what_was_left_out_is_told_and_one_click_away(qtbot, window, tmp_path):
    path = tmp_path / "faulty.csv"
    path.write_text(
        "specimen,matrix,analyte,value,unit\n"
        "S1,plasma,lactate,2.1,mmol/L\nS1,plasma,pyruvate,-3,mmol/L\nS1,plasma,glucose,5.1,mmol/L\n",
        encoding="utf-8",
    )
    with qtbot.waitSignal(window.reviewing.opened):
        window.desk.open([path])
    assert "Left out while reading: 1 value" in window.notice.text.text()
    qtbot.mouseClick(window.notice.more, Qt.MouseButton.LeftButton)
    assert window.below.problems.isVisible()
    (row,) = [r for r in window.below.problems.texts.rows if r[0] == "value left out"]
    assert row[1] == "3"
    assert row[5]  # what to do


@pytest.mark.parametrize("name", ["keyboard", "method", "about"])
def test_help_opens_offline_and_holds_the_caution_or_the_keys(opened, name):
    from panelview.desktop.help_dialogs import HelpDialog

    opened.actions_[name].trigger()
    (dialog,) = [d for d in opened.findChildren(HelpDialog) if d.isVisible()]
    text = " ".join(dialog.page.toPlainText().split())
    assert ("Ctrl+O" if name == "keyboard" else CAUTION) in text
    assert "$" not in text
    dialog.reject()


def test_specimens_can_be_compared_with_published_values_instead(qtbot, opened):
    from panelview.desktop.reference_menu import ReferenceMenu

    menu = opened.findChild(ReferenceMenu)
    action = next(a for a in menu.actions() if a.text() == "Published concentrations")
    with qtbot.waitSignal(opened.reviewing.reviewed):
        action.trigger()
    assert opened.reviewing.review.reference.kind == "published"
    assert ORIGIN_REVIEWER in opened.steps.heading.whole
    with qtbot.waitSignal(opened.reviewing.reviewed):
        opened.actions_["reset"].trigger()
    assert opened.reviewing.review.reference.kind == "group"
    assert ORIGIN_REVIEWER not in opened.steps.heading.whole


def test_rows_of_any_table_are_copied_with_the_usual_key(qtbot, opened):
    table = opened.steps.table
    table.setFocus()
    qtbot.keyClick(table, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    row = opened.steps.model.row_of(opened.reviewing.column)
    assert opened.steps.model.index(row, Cell.CALL).data() in QApplication.clipboard().text()
    state = opened.below.state
    state.selectAll()
    qtbot.keyClick(state, Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)
    lines = QApplication.clipboard().text().splitlines()
    assert lines[0].split("\t")[0] == "Quantity"
    assert len(lines) == 1 + len(state.texts.rows)
