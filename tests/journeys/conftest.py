"""A window of its own for every journey, and the invented sample files."""

from __future__ import annotations

from pathlib import Path

import pytest
from PySide6.QtCore import QSettings
from PySide6.QtWidgets import QApplication

from panelview.assess.settings import Settings
from panelview.desktop.app import make_application
from panelview.desktop.samples import SAMPLES, sample_path
from panelview.desktop.theme import Choice, Theme
from panelview.desktop.window import MainWindow


@pytest.fixture(scope="session")
def qapp():
    return make_application()


@pytest.fixture(scope="session")
def theme(qapp) -> Theme:
    return Theme(qapp, Choice.LIGHT)


@pytest.fixture
def window(qtbot, theme: Theme, tmp_path: Path) -> MainWindow:
    """The window as at the first start, in front."""
    store = QSettings(str(tmp_path / "settings.ini"), QSettings.Format.IniFormat)
    made = MainWindow(Settings(), theme, store)
    qtbot.addWidget(made)
    made.show()
    made.activateWindow()
    qtbot.waitUntil(lambda: QApplication.activeWindow() is made)
    return made


@pytest.fixture
def red_cells() -> Path:
    return sample_path(SAMPLES[0])


@pytest.fixture
def opened(qtbot, window: MainWindow, red_cells: Path) -> MainWindow:
    """The window with the red-cell sample open."""
    with qtbot.waitSignal(window.reviewing.opened):
        window.desk.open([red_cells])
    return window
