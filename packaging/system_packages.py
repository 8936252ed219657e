"""Debian packages a bare system lacks: installed where that may be done, named everywhere else."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Sequence

#: What Qt's widgets load on Linux, display or not (tried on Debian 12).
QT_ANYWHERE = (
    "libgl1",
    "libegl1",
    "libxkbcommon0",
    "libglib2.0-0",
    "libfreetype6",
    "libfontconfig1",
    "libdbus-1-3",
)
#: What Qt's X11 platform loads besides.
QT_ON_X11 = (
    "libxcb-cursor0",
    "libxcb-icccm4",
    "libxcb-image0",
    "libxcb-keysyms1",
    "libxcb-render-util0",
    "libxcb-shape0",
    "libxcb-xkb1",
    "libxkbcommon-x11-0",
)


class CannotInstall(Exception):
    """System packages are missing and were not installed; the text says which and what to do."""


def is_here() -> bool:
    """Whether this is Debian or one of its children."""
    return sys.platform == "linux" and shutil.which("apt-get") is not None


def install(packages: Sequence[str], why: str) -> None:
    """Install packages with apt-get as root; otherwise raise CannotInstall with the command to type."""
    names = " ".join(packages)
    if not is_here():
        raise CannotInstall(
            f"{why} needs system libraries that are missing; Debian calls their packages: {names}. "
            "Install your system's packages of the same libraries, then start again"
        )
    if sys.platform != "win32" and os.geteuid() != 0:
        raise CannotInstall(
            f"{why} needs system packages that are missing. Install them with\n"
            f"  sudo apt-get update && sudo apt-get install {names}\nand start again"
        )
    print(f"Installing system packages for {why}: {names}", flush=True)
    quiet = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
    for command in (
        ["apt-get", "update", "-q"],
        ["apt-get", "install", "-q", "-y", "--no-install-recommends", *packages],
    ):
        done = subprocess.run(
            command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, check=False, env=quiet
        )
    # A failed update may leave lists that are good enough: only the installation decides.
    if done.returncode != 0:
        raise CannotInstall(
            f"apt-get could not install {names} (is there a network?). It said at the end:\n"
            f"{done.stdout.strip()[-1200:]}"
        )
