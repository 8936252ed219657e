"""What ships and what sets it up: pinned versions, the wheel, and the environment of the two commands."""

from __future__ import annotations

import importlib
import os
import re
import subprocess
import sys
import tomllib
import zipfile
from importlib.metadata import PackageNotFoundError, distribution
from pathlib import Path
from types import ModuleType

import pytest
from hatchling.builders.wheel import WheelBuilder
from packaging.requirements import Requirement
from packaging.utils import canonicalize_name

ROOT = Path(__file__).resolve().parent.parent
REQUIREMENT_FILES = ("requirements.txt", "requirements-test.txt")


def pins() -> list[Requirement]:
    lines = [
        line
        for name in REQUIREMENT_FILES
        for line in (ROOT / "packaging" / name).read_text().splitlines()
        if line and not line.startswith("#")
    ]
    return [Requirement(line) for line in lines]


def pins_here() -> dict[str, Requirement]:
    """Pins that count for this Python and system, by normalised name."""
    return {canonicalize_name(p.name): p for p in pins() if p.marker is None or p.marker.evaluate()}


def project() -> dict[str, list[str]]:
    with (ROOT / "pyproject.toml").open("rb") as file:
        return tomllib.load(file)["project"]


def declared() -> list[Requirement]:
    extras = project()["optional-dependencies"]
    return [Requirement(r) for r in [*project()["dependencies"], *extras["test"]]]


@pytest.fixture
def environment(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> ModuleType:
    """packaging/environment.py, with its folder put where the test may make one."""
    monkeypatch.syspath_prepend(str(ROOT / "packaging"))
    module = importlib.import_module("environment")
    folder = tmp_path / ".venv"
    monkeypatch.setattr(module, "FOLDER", folder)
    monkeypatch.setattr(module, "_MARK", folder / module._MARK.name)
    return module


@pytest.mark.parametrize("pin", pins(), ids=str)
def test_every_package_is_pinned_to_one_exact_version_and_to_no_place(pin):
    assert re.fullmatch(r"==[0-9][0-9a-z.]*", str(pin.specifier))
    assert pin.url is None


@pytest.mark.parametrize("wanted", declared(), ids=str)
def test_every_declared_dependency_is_pinned_within_its_bounds(wanted):
    mine = [p for p in pins() if canonicalize_name(p.name) == canonicalize_name(wanted.name)]
    assert mine
    for pin in mine:
        (version,) = (s.version for s in pin.specifier)
        assert wanted.specifier.contains(version)


def test_whatever_a_pinned_package_needs_is_pinned_too():
    pinned = pins_here()
    looked_at = 0
    for name, pin in pinned.items():
        try:
            needs = distribution(name).requires or []
        except PackageNotFoundError:
            continue
        looked_at += 1
        for need in map(Requirement, needs):
            if need.marker is None or need.marker.evaluate({"extra": ""}):
                assert canonicalize_name(need.name) in pinned, f"{pin.name} needs {need.name}"
    assert looked_at >= len(declared())


def test_an_unpacked_wheel_carries_its_data_and_computes_constants(tmp_path):
    (built,) = WheelBuilder(str(ROOT)).build(directory=str(tmp_path))
    with zipfile.ZipFile(built) as wheel:
        wheel.extractall(tmp_path / "installed")
        names = wheel.namelist()
    assert {"panelview/resources/steps.csv", "panelview/sample_data/red_cells.csv"} <= set(names)
    assert any(name.startswith("panelview/resources/fonts/") and name.endswith(".ttf") for name in names)
    assert not any(name.startswith(("tests/", "packaging/")) for name in names)
    # -P and the working directory keep the checkout out of the search path.
    code = (
        "import pathlib, sys; sys.path.insert(0, 'installed'); import panelview.command as command;"
        "assert pathlib.Path(command.__file__).is_relative_to(pathlib.Path.cwd()), command.__file__;"
        "sys.exit(command.main(['constants', '--format', 'csv']))"
    )
    done = subprocess.run(
        [sys.executable, "-P", "-c", code], cwd=tmp_path, capture_output=True, text=True, check=False,
        env={**os.environ, "PYTHONUTF8": "1"},
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    assert done.stdout.startswith("step,")
    assert "hexokinase" in done.stdout


def test_the_console_command_names_a_function_that_exists():
    module, function = project()["scripts"]["panelview"].split(":")
    assert callable(getattr(importlib.import_module(module), function))


def test_an_environment_of_someone_elses_is_refused_and_left_as_it_is(environment):
    environment.FOLDER.mkdir()
    theirs = environment.FOLDER / "pyvenv.cfg"
    theirs.write_text("home = elsewhere\n")
    with pytest.raises(environment.CannotPrepare, match="move it away"):
        environment._make_folder()
    assert theirs.read_text() == "home = elsewhere\n"


def test_a_half_made_environment_counts_as_missing_until_its_last_step_is_stamped(environment):
    environment.python().parent.mkdir(parents=True)
    environment.python().touch()
    assert not environment._is_done("run", "digest of the pins")
    environment._mark_done("run", "digest of the pins")
    assert environment._is_done("run", "digest of the pins")
    assert not environment._is_done("run", "digest of newer pins")
    environment.python().unlink()
    assert not environment._is_done("run", "digest of the pins")


@pytest.mark.parametrize(
    ("said", "told"),
    [
        ("Failed to establish a new connection: [Errno -3] Temporary failure in name resolution", "--offline"),
        ("OSError: [Errno 28] No space left on device", "disk is full"),
        ("ERROR: No matching distribution found for numpy==2.4.6", "numpy==2.4.6"),
    ],
)
def test_a_failed_installation_is_told_with_a_way_out(environment, said, told):
    reason = environment._reason(f"Looking in links\n{said}\n", "the program's packages")
    assert told in reason


def test_an_empty_folder_of_wheels_is_refused_before_anything_is_made(environment, tmp_path):
    with pytest.raises(environment.CannotPrepare, match="holds no wheels"):
        environment.prepare(offline=tmp_path)
    assert not environment.FOLDER.exists()


@pytest.mark.skipif(sys.platform != "linux", reason="Windows and macOS always have a display")
@pytest.mark.parametrize(
    ("variables", "expected"),
    [({}, False), ({"DISPLAY": ":0"}, True), ({"WAYLAND_DISPLAY": "wayland-0"}, True), ({"DISPLAY": ""}, False)],
)
def test_a_display_is_seen_by_the_variable_that_names_it(environment, monkeypatch, variables, expected):
    for name in ("DISPLAY", "WAYLAND_DISPLAY"):
        monkeypatch.delenv(name, raising=False)
    for name, value in variables.items():
        monkeypatch.setenv(name, value)
    assert importlib.import_module("qt_libraries").has_display() is expected
