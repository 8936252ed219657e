"""Sets Panelview up on a fresh machine and runs every check: ruff, mypy, pytest.

    python3 packaging/check.py

Needs Python 3.11 or newer and, the first time, a network. It makes its own environment in .venv.
All checks run even when one fails; the exit status is that of the first that failed.
"""

from __future__ import annotations

import argparse
import subprocess
import sys
import time
from pathlib import Path

import qt_libraries
from environment import ROOT, as_command, child_environment, prepare

#: Tests last, so that pytest's own closing line closes the run.
_CHECKS = {
    "ruff (style and likely mistakes)": ["ruff", "check", "--output-format=concise", "."],
    "mypy (types)": ["mypy"],
    "pytest (tests)": ["pytest"],
}


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--offline", type=Path, metavar="DIR", help="install from this folder of wheels")
    wanted = parser.parse_args()
    python = prepare(with_tests=True, offline=wanted.offline)
    qt_libraries.ensure_importable(python)
    first_failure = 0
    for number, (name, command) in enumerate(_CHECKS.items(), start=1):
        print(f"\n[{number}/{len(_CHECKS)}] {name}", flush=True)
        start = time.monotonic()
        status = subprocess.run(
            [str(python), "-m", *command],
            cwd=ROOT,
            env=child_environment(QT_QPA_PLATFORM="offscreen"),
            check=False,
        ).returncode
        if number < len(_CHECKS):
            verdict = "passed" if status == 0 else f"FAILED (status {status})"
            print(f"{name}: {verdict}, {time.monotonic() - start:.0f} s", flush=True)
        first_failure = first_failure or status
    return first_failure


if __name__ == "__main__":
    sys.exit(as_command(main))
