"""Sets Panelview up on a fresh machine and runs its main job on a sample.

    python3 packaging/start.py                    the window with the sample; without a display: the pages
    python3 packaging/start.py PANEL.csv          the same for a panel of your own
    python3 packaging/start.py --no-window        pages and tables, written to ./panelview-sample-review

Needs Python 3.11 or newer and, the first time, a network. It makes its own environment in .venv.
"""

from __future__ import annotations

import argparse
import subprocess
import sys
from pathlib import Path

import qt_libraries
from environment import ROOT, as_command, child_environment, prepare

SAMPLE = ROOT / "sample_data" / "red_cells.csv"


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("panel", type=Path, nargs="?", default=SAMPLE, help="a panel file (CSV)")
    parser.add_argument("--no-window", action="store_true", help="write pages and tables instead")
    parser.add_argument("--out", type=Path, metavar="DIR", help="where to write them (means --no-window)")
    parser.add_argument("--offline", type=Path, metavar="DIR", help="install from this folder of wheels")
    wanted = parser.parse_args()
    python = prepare(offline=wanted.offline)
    if not (wanted.no_window or wanted.out) and _window_is_possible(python):
        print(f"Opening {wanted.panel}", flush=True)
        return _run(python, [str(wanted.panel)])
    return _write(python, wanted.panel, wanted.out or Path("panelview-sample-review"))


def _window_is_possible(python: Path) -> bool:
    if not qt_libraries.has_display():
        print("There is no display here: writing pages and tables instead of opening the window.", flush=True)
        return False
    qt_libraries.ensure_importable(python)
    if qt_libraries.can_open_window(python):
        return True
    print("The display does not answer: writing pages and tables instead of opening the window.", flush=True)
    return False


def _write(python: Path, panel: Path, out: Path) -> int:
    print(f"Reviewing {panel}", flush=True)
    status = _run(python, ["review", str(panel), "--out", str(out)])
    if out.is_dir() and status in (0, 4):
        pages = sorted(path.name for path in out.glob("*.pdf"))
        tables = sorted(path.name for path in out.iterdir() if path.suffix != ".pdf")
        print(f"Written to {out.resolve()}: {len(pages)} PDF files; {', '.join(tables)}")
        print(f"The program's own command: {python.with_stem('panelview')} --help")
    return status


def _run(python: Path, arguments: list[str]) -> int:
    return subprocess.run([str(python), "-m", "panelview", *arguments], check=False, env=child_environment()).returncode


if __name__ == "__main__":
    sys.exit(as_command(main))
