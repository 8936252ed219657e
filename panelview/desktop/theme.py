"""Light and dark: which is in use, and how the application is dressed in it."""

from __future__ import annotations

from enum import Enum
from string import Template

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QWidget

from panelview.desktop.palette import Colours, colours_of, qt_palette
from panelview.resource_files import resources


class Choice(Enum):
    SYSTEM = "system"
    LIGHT = "light"
    DARK = "dark"


class Theme(QObject):
    """Dresses the application; `changed` is sent with the new colours."""

    changed = Signal(object)

    def __init__(self, application: QApplication, choice: Choice = Choice.SYSTEM) -> None:
        super().__init__(application)
        self._application = application
        self._sheet = Template((resources() / "window.qss").read_text(encoding="utf-8"))
        self.choice = choice
        self.colours = colours_of(self._is_dark())
        self._window: QWidget | None = None
        application.setStyle("Fusion")
        application.setPalette(qt_palette(self.colours))
        QGuiApplication.styleHints().colorSchemeChanged.connect(lambda _: self._follow())

    def dress(self, window: QWidget) -> None:
        """Dress a window that is complete: a style sheet set earlier is worked out anew for every widget added."""
        self._window = window
        window.setStyleSheet(style_sheet(self._sheet, self.colours))

    def choose(self, choice: Choice) -> None:
        self.choice = choice
        self._follow()

    def _follow(self) -> None:
        wanted = colours_of(self._is_dark())
        if wanted is not self.colours:
            self.colours = wanted
            self._application.setPalette(qt_palette(wanted))
            if self._window is not None:
                self.dress(self._window)
            self.changed.emit(wanted)

    def _is_dark(self) -> bool:
        if self.choice is Choice.SYSTEM:
            return QGuiApplication.styleHints().colorScheme() == Qt.ColorScheme.Dark
        return self.choice is Choice.DARK


def style_sheet(sheet: Template, colours: Colours) -> str:
    """The style sheet with the palette's colours put in."""
    names = [name for name in Colours.__slots__ if name != "is_dark"]
    return sheet.substitute({name: getattr(colours, name) for name in names})
