"""What happens when something unforeseen goes wrong: a sentence, and a report that holds no data values."""

from __future__ import annotations

import sys
import threading
import traceback
from collections.abc import Callable
from datetime import datetime
from pathlib import Path
from types import TracebackType

from PySide6.QtCore import QStandardPaths, qVersion

import panelview


def report_text(kind: type[BaseException], trace: TracebackType | None) -> str:
    """Where it happened, as file, line and function; neither the error's message nor any variable is in it,
    for both can hold values of a panel."""
    import platform

    system = f"{platform.system()} {platform.release()}"
    python = platform.python_version()
    lines = [
        f"Panelview {panelview.__version__}, Python {python}, Qt {qVersion()}, {system}",
        f"{kind.__name__} in:",
    ]
    lines += [f"  {Path(frame.filename).name}:{frame.lineno} {frame.name}" for frame in traceback.extract_tb(trace)]
    return "\n".join(lines) + "\n"


def write_report(text: str, folder: Path, when: datetime) -> Path | None:
    """Write a report; None where the folder cannot be written (the fault itself matters more)."""
    path = folder / f"fault-{when:%Y%m%d-%H%M%S}.txt"
    try:
        folder.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")
    except OSError:
        return None
    return path


def report_folder() -> Path:
    """Where reports are kept: the user's own local data folder."""
    place = QStandardPaths.StandardLocation.AppLocalDataLocation
    return Path(QStandardPaths.writableLocation(place)) / "reports"


def fault_sentence(path: Path | None) -> str:
    where = f" A report without data values was saved as {path}." if path is not None else ""
    return (
        "Something went wrong in Panelview itself; what you last did may not have been carried out. "
        f"The numbers on screen are those of the last complete review.{where}"
    )


def install(tell: Callable[[str], None], folder: Path | None = None) -> None:
    """Catch every exception that nobody caught: write a report and tell the reader. `tell` is called on the
    thread that failed."""

    def handle(kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        if issubclass(kind, KeyboardInterrupt):
            sys.__excepthook__(kind, error, trace)
            return
        tell(fault_sentence(write_report(report_text(kind, trace), folder or report_folder(), datetime.now())))

    sys.excepthook = handle
    threading.excepthook = lambda args: handle(args.exc_type, args.exc_value or args.exc_type(), args.exc_traceback)
