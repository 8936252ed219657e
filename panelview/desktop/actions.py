"""Every action of the window with its key: the menus and the keyboard help are made from this one table."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from PySide6.QtGui import QAction, QActionGroup, QKeySequence
from PySide6.QtWidgets import QMenu, QMenuBar, QWidget


@dataclass(frozen=True, slots=True)
class Spec:
    """One action. menu: its menu, with "&" for the mnemonic; keys: portable text of its shortcuts;
    group: actions of one group exclude one another; needs_review: only with a panel open; rule: a
    separator goes before it."""

    name: str
    menu: str
    text: str
    keys: tuple[str, ...] = ()
    group: str = ""
    checkable: bool = False
    needs_review: bool = True
    rule: bool = False


_FILE, _EDIT, _VIEW, _REVIEW, _HELP = "&File", "&Edit", "&View", "&Review", "&Help"

SPECS = (
    Spec("open", _FILE, "&Open panel …", ("Ctrl+O",), needs_review=False),
    Spec("export_page", _FILE, "Export &page of this specimen (PDF) …", ("Ctrl+E",), rule=True),
    Spec("export_tables", _FILE, "Export &tables and pages of all specimens …", ("Ctrl+Shift+E",)),
    Spec("export_figure", _FILE, "Export strips as &figure (SVG, PNG) …", ("Ctrl+Shift+F",)),
    Spec("close", _FILE, "&Close panel", ("Ctrl+W",), rule=True),
    Spec("quit", _FILE, "&Quit", ("Ctrl+Q",), needs_review=False),
    Spec("copy_text", _EDIT, "Copy step &table as text", ("Ctrl+Shift+C",)),
    Spec("copy_csv", _EDIT, "Copy step table as C&SV", ("Ctrl+Alt+C",)),
    Spec("copy_evidence", _EDIT, "Copy &evidence", ("Ctrl+Shift+D",)),
    Spec("find_step", _EDIT, "&Find step or analyte", ("Ctrl+F",), rule=True),
    Spec("find_specimen", _EDIT, "Find s&pecimen", ("Ctrl+L",)),
    Spec("axis_shift", _VIEW, "&Shift against controls", ("Ctrl+1",), "axis", True),
    Spec("axis_distance", _VIEW, "&Distance from equilibrium", ("Ctrl+2",), "axis", True),
    Spec("swap_axis", _VIEW, "Swap the &axis", ("Ctrl+D",)),
    Spec("order_far", _VIEW, "&Furthest off first", ("Ctrl+3",), "order", True, rule=True),
    Spec("order_pathway", _VIEW, "&Pathway order", ("Ctrl+4",), "order", True),
    Spec("hide_unread", _VIEW, "&Hide steps that cannot be read", ("Ctrl+H",), checkable=True),
    Spec("show_legend", _VIEW, "&Legend of the marks", ("Ctrl+G",), checkable=True, needs_review=False),
    Spec(
        "show_specimens",
        _VIEW,
        "Panel: spe&cimens",
        ("Ctrl+7",),
        checkable=True,
        needs_review=False,
        rule=True,
    ),
    Spec("show_evidence", _VIEW, "Panel: &evidence", ("Ctrl+8",), checkable=True, needs_review=False),
    Spec(
        "show_below",
        _VIEW,
        "Panel: s&tate and reading report",
        ("Ctrl+9",),
        checkable=True,
        needs_review=False,
    ),
    Spec("colours_system", _VIEW, "Colours of the s&ystem", (), "colours", True, False, True),
    Spec("colours_light", _VIEW, "L&ight colours", (), "colours", True, False),
    Spec("colours_dark", _VIEW, "Dar&k colours", (), "colours", True, False),
    Spec("next_specimen", _REVIEW, "&Next specimen", ("Ctrl+PgDown", "Alt+Down")),
    Spec("previous_specimen", _REVIEW, "&Previous specimen", ("Ctrl+PgUp", "Alt+Up")),
    Spec("next_area", _REVIEW, "Next &area of the window", ("F6",), rule=True),
    Spec("edit_conditions", _REVIEW, "Change &conditions", ("Ctrl+K",), rule=True),
    Spec("free_ratios", _REVIEW, "&Free cofactor ratios …", ("Ctrl+R",)),
    Spec("reset", _REVIEW, "&Reset all that was changed", ("Ctrl+Backspace",)),
    Spec("what_was_read", _REVIEW, "What was r&ead", ("Ctrl+I",), rule=True),
    Spec("cancel", _REVIEW, "&Stop what is running", ("Esc",), needs_review=False),
    Spec("keyboard", _HELP, "&Keyboard", ("F1",), needs_review=False),
    Spec("method", _HELP, "&Method and limits", ("Shift+F1",), needs_review=False),
    Spec("about", _HELP, "&About Panelview", (), needs_review=False),
)


class Actions:
    """The QActions of a window, by name."""

    def __init__(self, window: QWidget) -> None:
        self._window = window
        self._groups: dict[str, QActionGroup] = {}
        self._by_name = {spec.name: self._make(spec) for spec in SPECS}

    def __getitem__(self, name: str) -> QAction:
        return self._by_name[name]

    def _make(self, spec: Spec) -> QAction:
        action = QAction(spec.text, self._window)
        action.setObjectName(spec.name)
        action.setShortcuts([QKeySequence(key) for key in spec.keys])
        action.setCheckable(spec.checkable)
        if spec.group:
            group = self._groups.setdefault(spec.group, QActionGroup(self._window))
            group.addAction(action)
        if spec.name == "quit":
            action.setMenuRole(QAction.MenuRole.QuitRole)
        self._window.addAction(action)
        return action

    def fill(self, bar: QMenuBar) -> dict[str, QMenu]:
        """Put the actions into menus; returns the menus by name without mnemonic."""
        menus: dict[str, QMenu] = {}
        for spec in SPECS:
            name = spec.menu.replace("&", "")
            if name not in menus:
                menus[name] = bar.addMenu(spec.menu)
            if spec.rule:
                menus[name].addSeparator()
            menus[name].addAction(self._by_name[spec.name])
        return menus

    def connect(self, **slots: Callable[[], object]) -> None:
        """Connect actions by name; the checked state is not passed on."""
        for name, slot in slots.items():
            self._by_name[name].triggered.connect(lambda _=False, s=slot: s())

    def set_has_review(self, has_review: bool) -> None:
        """Grey out what needs a panel while none is open."""
        for spec in SPECS:
            if spec.needs_review:
                self._by_name[spec.name].setEnabled(has_review)


def keyboard_rows() -> list[tuple[str, str, str]]:
    """Menu, action and keys of every action that has a key, as shown by Help → Keyboard."""
    rows = []
    for spec in SPECS:
        if spec.keys:
            keys = " or ".join(QKeySequence(k).toString(QKeySequence.SequenceFormat.NativeText) for k in spec.keys)
            rows.append((spec.menu.replace("&", ""), spec.text.replace("&", "").removesuffix(" …"), keys))
    return rows
