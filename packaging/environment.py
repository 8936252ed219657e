"""The program's own Python environment in `.venv`: made from exact versions, kept, and mended when stale."""

from __future__ import annotations

import sys

if sys.version_info < (3, 11):  # noqa: UP036 - whoever starts this may well have an older Python
    sys.exit(
        "Panelview needs Python 3.11 or newer; this is Python {}.{} ({}). "
        "Install a newer Python and start this file with it.".format(*sys.version_info[:2], sys.executable)
    )

import hashlib
import importlib.util
import os
import shutil
import subprocess
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path

import system_packages

ROOT = Path(__file__).resolve().parent.parent
FOLDER = ROOT / ".venv"
RUN_REQUIREMENTS = ROOT / "packaging" / "requirements.txt"
TEST_REQUIREMENTS = ROOT / "packaging" / "requirements-test.txt"

#: Written before anything else goes into the folder, so that only a folder of our own is ever removed.
_MARK = FOLDER / "made-by-panelview"
_PIP_LOG = FOLDER / "pip-output.txt"

_NO_NETWORK = (
    "NewConnectionError",
    "ConnectTimeoutError",
    "ReadTimeoutError",
    "NameResolutionError",
    "ProxyError",
    "SSLError",
    "Network is unreachable",
    "name resolution",
    "Connection refused",
)
_NO_ROOM = ("No space left on device", "not enough space", "Disk quota exceeded")


class CannotPrepare(Exception):
    """The environment cannot be made; the text says why and what to do."""


def python() -> Path:
    """The environment's interpreter."""
    return FOLDER / ("Scripts/python.exe" if os.name == "nt" else "bin/python")


def child_environment(**more: str) -> dict[str, str]:
    """Environment variables for what runs inside: no other Python's packages, UTF-8 everywhere."""
    kept = {name: value for name, value in os.environ.items() if name not in ("PYTHONPATH", "PYTHONHOME")}
    return {**kept, "PYTHONNOUSERSITE": "1", "PYTHONUTF8": "1", **more}


def prepare(with_tests: bool = False, offline: Path | None = None) -> Path:
    """Make the environment, or find it as it should be; returns its interpreter.

    with_tests: the packages of the checks too. offline: a folder of wheels to install from, without network.
    Raises CannotPrepare.
    """
    if offline is not None and not any(offline.glob("*.whl")):
        raise CannotPrepare(
            f"{offline} holds no wheels; packaging/bundle_wheels.py fills such a folder, given a network"
        )
    source = [] if offline is None else ["--no-index", "--find-links", str(offline.resolve())]
    base = _digest(_text(RUN_REQUIREMENTS), sys.version, str(ROOT))
    project = _digest(base, _text(ROOT / "pyproject.toml"), _text(ROOT / "panelview" / "__init__.py"))
    digests = {"run": base, "project": project}
    if with_tests:
        digests["test"] = _digest(base, _text(TEST_REQUIREMENTS))
    if all(_is_done(stage, digest) for stage, digest in digests.items()):
        # Nothing is written, so whoever may only read the checkout can run what was set up for them.
        return python()
    install: dict[str, tuple[str, list[str]]] = {
        "run": ("the program's packages", [*source, "-r", str(RUN_REQUIREMENTS)]),
        "project": ("the checkout itself", ["--no-index", "--no-build-isolation", "--editable", str(ROOT)]),
        "test": ("the packages of the checks", [*source, "-r", str(TEST_REQUIREMENTS)]),
    }
    with _alone():
        if not _is_done("run", base):
            _make_folder()
        for stage, digest in digests.items():
            if not _is_done(stage, digest):
                _install(*install[stage])
                _mark_done(stage, digest)
    return python()


@contextmanager
def step(what: str) -> Iterator[None]:
    """Say what begins and, once it is done, how long it took."""
    print(f"{what} ...", flush=True)
    start = time.monotonic()
    yield
    print(f"{what}: done in {time.monotonic() - start:.0f} s", flush=True)


def as_command(run: Callable[[], int]) -> int:
    """Run a command of this folder: a reason instead of a traceback, 130 when interrupted."""
    try:
        return run()
    except (CannotPrepare, system_packages.CannotInstall) as reason:
        print(f"\nStopped: {reason}", file=sys.stderr)
        return 1
    except KeyboardInterrupt:
        print("\nInterrupted. Start it again: it goes on from what is finished.", file=sys.stderr)
        return 130


def _digest(*parts: str) -> str:
    return hashlib.sha256("\0".join(parts).encode()).hexdigest()


def _text(path: Path) -> str:
    return path.read_text(encoding="utf-8")


def _is_done(stage: str, digest: str) -> bool:
    stamp = FOLDER / f"{stage}-installed"
    return python().exists() and stamp.is_file() and stamp.read_text() == digest


def _mark_done(stage: str, digest: str) -> None:
    (FOLDER / f"{stage}-installed").write_text(digest)


def _make_folder() -> None:
    """An empty environment with pip; a half-made or outdated one of ours is replaced."""
    if FOLDER.exists() and any(FOLDER.iterdir()):
        if not _MARK.exists():
            raise CannotPrepare(f"{FOLDER} was not made by this program; move it away or remove it, then start again")
        print("The environment in .venv is incomplete or outdated: making it anew.", flush=True)
        try:
            shutil.rmtree(FOLDER)
        except OSError as error:
            raise CannotPrepare(
                f"{FOLDER} must be made anew but cannot be removed ({error}); "
                "close every window of the program, then start again"
            ) from error
    _need_ensurepip()
    FOLDER.mkdir(exist_ok=True)
    _MARK.write_text("packaging/start.py and packaging/check.py made this folder and may replace it.\n")
    with step(f"Making a Python {sys.version_info[0]}.{sys.version_info[1]} environment in {FOLDER}"):
        made = subprocess.run(
            [_base_python(), "-m", "venv", str(FOLDER)],
            capture_output=True, text=True, check=False, env=child_environment(),
        )  # fmt: skip
    if made.returncode != 0:
        raise CannotPrepare(f"python -m venv failed:\n{(made.stdout + made.stderr).strip()}")


def _base_python() -> str:
    """The interpreter behind this one: who starts with .venv's own must not lose it while it is replaced."""
    return getattr(sys, "_base_executable", None) or sys.executable


def _need_ensurepip() -> None:
    """Debian keeps what `venv` needs in a package of its own."""
    if importlib.util.find_spec("venv") and importlib.util.find_spec("ensurepip"):
        return
    package = f"python3.{sys.version_info[1]}-venv"
    if not system_packages.is_here():
        raise CannotPrepare(
            f"this Python ({sys.executable}) lacks the standard modules venv and ensurepip; "
            "install your system's package that holds them, or Python from python.org"
        )
    system_packages.install([package], why="the Python environment")


def _install(what: str, arguments: list[str]) -> None:
    """`pip install`, told as it goes, its whole output kept for the case that it fails.

    Every package is named with its version, so nothing is resolved, and nothing is compiled from source.
    """
    command = [
        str(python()), "-m", "pip", "install", "--no-deps", "--only-binary=:all:", "--no-input",
        "--disable-pip-version-check", "--progress-bar=off", *arguments,
    ]  # fmt: skip
    with step(f"Installing {what}"):
        lines: list[str] = []
        with subprocess.Popen(
            command, stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True,
            encoding="utf-8", errors="replace", env=child_environment(),
        ) as pip:  # fmt: skip
            assert pip.stdout is not None
            for line in pip.stdout:
                lines.append(line)
                if line.lstrip().startswith(("Downloading", "Installing collected")):
                    print(f"  {line.strip()[:100]}", flush=True)
        _PIP_LOG.write_text("".join(lines), encoding="utf-8")
        if pip.returncode != 0:
            raise CannotPrepare(_reason("".join(lines), what))


def _reason(output: str, what: str) -> str:
    """Why pip failed, in a sentence that says what to do."""
    if any(sign in output for sign in _NO_ROOM):
        return f"the disk is full while installing {what}; about 1 GB is needed in {ROOT} and in the temporary folder"
    if any(sign in output for sign in _NO_NETWORK):
        return (
            f"{what} could not be fetched: the package index does not answer. Connect to the network (or set "
            "the proxy that pip shall use) and start again; without any network, fill a folder elsewhere "
            "with packaging/bundle_wheels.py and give it here with --offline FOLDER"
        )
    last = "\n".join(line for line in output.splitlines() if line.strip())[-1500:]
    return f"pip could not install {what} (its whole output is in {_PIP_LOG}). It said at the end:\n{last}"


@contextmanager
def _alone() -> Iterator[None]:
    """One at a time: a second start waits until the first has finished its environment.

    The lock is the operating system's, so it goes when its holder ends, however it ends.
    """
    try:
        lock = (ROOT / ".venv.lock").open("w")
    except OSError as error:
        raise CannotPrepare(
            f"{ROOT} cannot be written to ({error.strerror}); copy the program to a folder of your own"
        ) from error
    with lock:
        if sys.platform == "win32":
            import msvcrt

            # Tries for ten seconds, then raises OSError: try on.
            while True:
                try:
                    msvcrt.locking(lock.fileno(), msvcrt.LK_LOCK, 1)
                    break
                except OSError:
                    print("Waiting for another start of this program to finish ...", flush=True)
        else:
            import fcntl

            try:
                fcntl.flock(lock, fcntl.LOCK_EX | fcntl.LOCK_NB)
            except BlockingIOError:
                print("Waiting for another start of this program to finish ...", flush=True)
                fcntl.flock(lock, fcntl.LOCK_EX)
        yield
