"""Whether Qt can start here: its system libraries, and the display when a window is wanted."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import system_packages
from environment import child_environment, step

_IMPORT = "import PySide6.QtWidgets, PySide6.QtSvg, PySide6.QtTest"
_OPEN = "from PySide6.QtGui import QGuiApplication; QGuiApplication([])"

#: Qt's words when its platform plugin itself cannot be loaded (a library is missing), as against a display
#: that does not answer.
_PLUGIN_LACKS_LIBRARY = ("even though it was found", "xcb-cursor0 or libxcb-cursor0 is needed")


def has_display() -> bool:
    """Whether a window could be shown: always on Windows and macOS, on Linux where a display is named."""
    if sys.platform != "linux":
        return True
    return bool(os.environ.get("DISPLAY") or os.environ.get("WAYLAND_DISPLAY"))


def ensure_importable(python: Path) -> None:
    """Let Qt's widgets be imported, installing what is missing. Raises system_packages.CannotInstall."""
    problem = _try(python, _IMPORT)
    if problem and sys.platform == "linux":
        print(f"Qt cannot start yet: {_last_line(problem)}", flush=True)
        with step("Adding system libraries"):
            system_packages.install(system_packages.QT_ANYWHERE, why="Qt")
        problem = _try(python, _IMPORT)
    if problem:
        raise system_packages.CannotInstall(f"Qt does not start on this system: {_last_line(problem)}")


def can_open_window(python: Path) -> bool:
    """Whether Qt opens the display, its libraries installed first where they are missing.

    Call after ensure_importable. Raises system_packages.CannotInstall where libraries stay missing.
    """
    problem = _try(python, _OPEN)
    if sys.platform == "linux" and any(sign in problem for sign in _PLUGIN_LACKS_LIBRARY):
        if "could not connect" in problem:
            return False
        with step("Adding system libraries"):
            system_packages.install(system_packages.QT_ON_X11, why="Qt's windows")
        problem = _try(python, _OPEN)
    return not problem


def _try(python: Path, code: str) -> str:
    """Run code in the environment; the complaint, empty when it ran."""
    try:
        done = subprocess.run(
            [str(python), "-c", code], capture_output=True, text=True, errors="replace", check=False,
            env=child_environment(), timeout=120,
        )  # fmt: skip
    except subprocess.TimeoutExpired:
        return "it did not answer within two minutes"
    return "" if done.returncode == 0 else done.stderr.strip() or f"it ended with status {done.returncode}"


def _last_line(text: str) -> str:
    return text.splitlines()[-1]
