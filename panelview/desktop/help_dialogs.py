"""Help that works offline: keyboard, method and limits, about."""

from __future__ import annotations

import platform
from html import escape
from string import Template

from PySide6.QtCore import qVersion
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QTextBrowser, QVBoxLayout, QWidget

import panelview
from panelview.assess import calls
from panelview.catalogue.load import Catalogue
from panelview.desktop.actions import keyboard_rows
from panelview.output.text import CAUTION
from panelview.resource_files import resources


class HelpDialog(QDialog):
    """A page of help to read, scroll and copy."""

    def __init__(self, title: str, html: str, parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle(title)
        self.page = QTextBrowser()
        self.page.setOpenLinks(False)
        self.page.setAccessibleName(title)
        self.page.setHtml(html)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.addWidget(self.page)
        layout.addWidget(buttons)
        self.resize(680, 560)


def keyboard_html() -> str:
    """Every key of the window, and those that tables and fields have of themselves."""
    rows = "".join(
        f"<tr><td>{escape(menu)}</td><td>{escape(text)}</td><td><b>{escape(keys)}</b></td></tr>"
        for menu, text, keys in keyboard_rows()
    )
    own = (
        ("Lists and tables", "another row", "Up, Down, Page Up, Page Down, Home, End"),
        ("Tables", "copy the selected rows as text", "Ctrl+C"),
        ("Everywhere", "next, previous field", "Tab, Shift+Tab"),
        ("Number fields", "one step up, down; take what was typed", "Up, Down; Enter"),
        ("Menus", "open a menu by its underlined letter", "Alt and the letter"),
    )
    rows += "".join(f"<tr><td>{a}</td><td>{b}</td><td><b>{c}</b></td></tr>" for a, b, c in own)
    return f"<h2>Keyboard</h2><table cellspacing='0' cellpadding='4'>{rows}</table>"


def method_html() -> str:
    """The method in short; every limit is read from where the engine has it."""
    text = (resources() / "help" / "method.html").read_text(encoding="utf-8")
    return Template(text).substitute(
        caution=escape(CAUTION),
        direction_level=f"{calls.DIRECTION_LEVEL:.0%}".replace("%", " %"),
        near=f"{calls.NEAR_FACTOR:g}",
        far=f"{calls.FAR_FACTOR:g}",
        fdr=f"{calls.FALSE_DISCOVERY_RATE:.0%}".replace("%", " %"),
        floor=f"{calls.SHIFT_FLOOR:g}",
        least_test=calls.LEAST_CONTROLS_FOR_TEST,
        least_interval=calls.LEAST_CONTROLS_FOR_INTERVAL,
    )


def about_html(catalogue: Catalogue | None) -> str:
    """Versions, licences and the statement of use."""
    text = (resources() / "help" / "about.html").read_text(encoding="utf-8")
    data = "loaded with the first panel"
    if catalogue is not None:
        constants = catalogue.constants.version
        data = f"{catalogue.version} (SHA-256 {catalogue.sha256[:16]} …), constants {constants}"
    return Template(text).substitute(
        caution=escape(CAUTION),
        version=panelview.__version__,
        catalogue=escape(data),
        python=platform.python_version(),
        qt=qVersion(),
    )
