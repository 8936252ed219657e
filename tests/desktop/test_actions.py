"""The table of actions: keys, menus and the keyboard help that is made from it."""

from __future__ import annotations

from collections import Counter

from PySide6.QtGui import QKeySequence
from PySide6.QtWidgets import QMainWindow

from panelview.desktop.actions import SPECS, Actions, keyboard_rows
from panelview.desktop.help_dialogs import keyboard_html


def test_no_key_is_given_twice():
    keys = Counter(QKeySequence(key).toString() for spec in SPECS for key in spec.keys)
    assert [key for key, count in keys.items() if count > 1] == []


def test_every_key_is_one_that_qt_knows():
    assert all(QKeySequence(key).toString() for spec in SPECS for key in spec.keys)


def test_no_menu_uses_a_mnemonic_twice():
    used = Counter((spec.menu, spec.text[spec.text.index("&") + 1].lower()) for spec in SPECS)
    assert [k for k, count in used.items() if count > 1] == []


def test_the_keyboard_help_lists_every_key():
    html = keyboard_html()
    for _, text, keys in keyboard_rows():
        assert text in html
        assert keys in html
    assert len(keyboard_rows()) == sum(bool(spec.keys) for spec in SPECS)


def test_actions_that_need_a_panel_are_grey_without_one(qtbot):
    window = QMainWindow()
    qtbot.addWidget(window)
    actions = Actions(window)
    actions.set_has_review(False)
    assert not actions["export_page"].isEnabled()
    assert actions["open"].isEnabled()
    actions.set_has_review(True)
    assert actions["export_page"].isEnabled()
