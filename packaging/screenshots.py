"""Takes the sheet of screenshots: every sample, light and dark, two sizes, at the scale of the screen.

    python packaging/screenshots.py FOLDER [--scale 2]

Works without a display. The pictures do not depend on the machine: the window brings its own font.
"""

from __future__ import annotations

import argparse
import os
import sys
import tempfile
from pathlib import Path

_SIZES = ((1280, 720), (1920, 1080))


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("folder", type=Path)
    parser.add_argument("--scale", type=float, default=1.0, help="device pixels per pixel (1 or 2)")
    wanted = parser.parse_args()
    os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")
    os.environ["QT_SCALE_FACTOR"] = str(wanted.scale)
    sys.path.insert(0, str(Path(__file__).resolve().parent.parent))
    wanted.folder.mkdir(parents=True, exist_ok=True)
    with tempfile.TemporaryDirectory() as settings:
        return _take_all(wanted.folder, wanted.scale, settings)


def _take_all(folder: Path, scale: float, settings: str) -> int:
    from PySide6.QtCore import QSettings

    QSettings.setDefaultFormat(QSettings.Format.IniFormat)
    QSettings.setPath(QSettings.Format.IniFormat, QSettings.Scope.UserScope, settings)
    from panelview.assess.settings import Settings
    from panelview.desktop.app import make_application
    from panelview.desktop.samples import SAMPLES, sample_path
    from panelview.desktop.theme import Choice
    from panelview.desktop.window import MainWindow, theme_of

    application = make_application()
    store = QSettings()
    theme = theme_of(application, store)
    window = MainWindow(Settings(), theme, store)
    window.show()
    taken = 0

    def take(name: str) -> None:
        nonlocal taken
        for _ in range(3):  # layouts settle in more than one round
            application.processEvents()
        path = folder / f"{name}@{scale:g}x.png"
        window.grab().save(str(path))
        taken += 1

    for choice in (Choice.LIGHT, Choice.DARK):
        theme.choose(choice)
        for width, height in _SIZES:
            window.resize(width, height)
            label = f"{choice.value}-{width}x{height}"
            window.desk.close_panel()
            take(f"start-{label}")
            for sample in SAMPLES:
                _open(window, sample_path(sample))
                stem = Path(sample.file).stem
                take(f"{stem}-shift-{label}")
                window.actions_["axis_distance"].trigger()
                window.actions_["order_pathway"].trigger()
                take(f"{stem}-distance-{label}")
                window.actions_["axis_shift"].trigger()
                window.actions_["order_far"].trigger()
    window.close()
    print(f"{taken} pictures in {folder}")
    return 0


def _open(window: object, path: Path) -> None:
    """Open a file and wait for its review."""
    from PySide6.QtCore import QEventLoop

    loop = QEventLoop()
    window.reviewing.opened.connect(loop.quit)  # type: ignore[attr-defined]
    window.reviewing.refused.connect(lambda _, error: sys.exit(str(error)))  # type: ignore[attr-defined]
    window.reviewing.asks_for_matrix = False  # type: ignore[attr-defined]
    window.desk.open([path])  # type: ignore[attr-defined]
    loop.exec()
    window.reviewing.opened.disconnect(loop.quit)  # type: ignore[attr-defined]


if __name__ == "__main__":
    sys.exit(main())
