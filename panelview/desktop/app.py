"""Starts the window: application, font, colours, faults, and the file of the command line."""

from __future__ import annotations

import gc
import sys
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QCoreApplication, QSettings, Qt, QTimer
from PySide6.QtGui import QIcon
from PySide6.QtWidgets import QApplication

from panelview.desktop import faults
from panelview.desktop.fonts import register_fonts
from panelview.desktop.notices import Severity
from panelview.desktop.window import MainWindow, theme_of
from panelview.resource_files import resources

if TYPE_CHECKING:
    from panelview.assess.settings import Settings
    from panelview.intake.problems import InputRefused

#: What can wait is done then, ms.
_STARTED_AFTER = 3000

#: Exit statuses of the contract: done, a fault of ours, input refused.
_DONE, _FAILED, _REFUSED = 0, 1, 3


def run(
    argv_file: Path | None,
    exit_after_paint: bool = False,
    matrix: str | None = None,
    settings: Settings | None = None,
) -> int:
    """Show the window until it is closed; returns the exit status.

    exit_after_paint: leave once the review of `argv_file` (or, without a file, the window) is painted, with
    status 3 and a sentence on stderr where the file is refused.
    """
    from panelview.assess.settings import Settings

    # Nothing made before the first review becomes garbage, but the collector would look for it some dozen times.
    gc.disable()
    application = make_application()
    store = QSettings()
    window = MainWindow(settings or Settings(), theme_of(application, store), store)
    faults.install(lambda text: QTimer.singleShot(0, window, lambda: window.notice.tell(Severity.REFUSAL, text)))
    window.show()
    if exit_after_paint:
        _leave_when_painted(window, argv_file is not None)
    if argv_file is not None:
        window.reviewing.open([argv_file], matrix)
    QTimer.singleShot(_STARTED_AFTER, window, lambda: _after_start(application))
    status = application.exec()
    gc.freeze()  # the interpreter ends here: it need not look through all that is left for cycles
    return status


def _after_start(application: QApplication) -> None:
    """Collect memory as usual from here on; load the icon, whose format needs a library of its own."""
    gc.enable()
    application.setWindowIcon(QIcon(str(resources() / "icons" / "panelview.svg")))


def make_application() -> QApplication:
    """The one QApplication, named and in the program's own font."""
    QCoreApplication.setOrganizationName("Panelview")
    QCoreApplication.setApplicationName("Panelview")
    QApplication.setHighDpiScaleFactorRoundingPolicy(Qt.HighDpiScaleFactorRoundingPolicy.PassThrough)
    existing = QApplication.instance()
    application = existing if isinstance(existing, QApplication) else QApplication(sys.argv[:1])
    application.setApplicationDisplayName("Panelview")
    application.setFont(register_fonts())
    return application


def _leave_when_painted(window: MainWindow, has_file: bool) -> None:
    """Leave with 0 after the first paint of the steps, with 3 where the file or a choice is refused."""
    window.reviewing.asks_for_matrix = False
    if not has_file:
        QTimer.singleShot(0, window, lambda: QCoreApplication.exit(_DONE))
        return

    def refused(_name: str, error: InputRefused) -> None:
        print(error, file=sys.stderr)
        QCoreApplication.exit(_REFUSED)

    def choice_refused(text: str) -> None:
        print(f"panelview: {text}", file=sys.stderr)
        QCoreApplication.exit(_REFUSED)

    def faulted(error: Exception) -> None:
        print(f"panelview: an internal fault ({type(error).__name__}) stopped the review", file=sys.stderr)
        QCoreApplication.exit(_FAILED)

    window.steps.table.painted.connect(lambda: QCoreApplication.exit(_DONE), Qt.ConnectionType.QueuedConnection)
    window.reviewing.refused.connect(refused)
    window.reviewing.choice_refused.connect(choice_refused)
    window.reviewing.faulted.connect(faulted)
