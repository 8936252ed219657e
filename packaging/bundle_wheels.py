"""Fills a folder with the wheels that start.py and check.py install from with --offline.

    python3 packaging/bundle_wheels.py [FOLDER]

Run it on a machine with a network, of the same system and with the same Python version as the other one.
"""

from __future__ import annotations

import argparse
import subprocess
import sys
from pathlib import Path

from environment import (
    ROOT,
    RUN_REQUIREMENTS,
    TEST_REQUIREMENTS,
    CannotPrepare,
    as_command,
    child_environment,
    prepare,
    step,
)


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("folder", type=Path, nargs="?", default=ROOT / "panelview-wheels")
    folder = parser.parse_args().folder
    python = prepare()
    with step(f"Collecting wheels in {folder}"):
        done = subprocess.run(
            [
                str(python), "-m", "pip", "download", "--no-deps", "--only-binary=:all:", "--quiet",
                "--disable-pip-version-check", "-d", str(folder),
                "-r", str(RUN_REQUIREMENTS), "-r", str(TEST_REQUIREMENTS),
            ],
            check=False, env=child_environment(),
        )  # fmt: skip
    if done.returncode != 0:
        raise CannotPrepare("pip could not collect the wheels; what it said stands above")
    wheels = list(folder.glob("*.whl"))
    size = sum(path.stat().st_size for path in wheels) / 1e6
    print(f"{len(wheels)} wheels, {size:.0f} MB. There: python3 packaging/start.py --offline {folder.name}")
    return 0


if __name__ == "__main__":
    sys.exit(as_command(main))
