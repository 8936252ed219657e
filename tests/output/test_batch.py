"""A review written into a folder: all of it or nothing."""

from __future__ import annotations

import errno
import json
import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from datetime import datetime
from pathlib import Path

import pytest

from panelview.assess.review import Review
from panelview.output import batch
from panelview.output.batch import OutputCancelled, OutputFailed, write_review

TABLES = {"steps.csv", "drivers.csv", "state.csv", "intake.csv", "review.json"}


def _names(folder: Path) -> set[str]:
    return {p.name for p in folder.iterdir()}


def test_tables_pages_and_overview_are_written(red_cells: Review, tmp_path: Path, when: datetime) -> None:
    out = tmp_path / "out"
    told: list[tuple[int, int, str]] = []
    written = write_review(red_cells, out, when=when, progress=lambda *step: told.append(step))
    assert {p.name for p in written} == _names(out)
    assert TABLES | {"cohort.pdf", "P1-a.pdf", "cmd___c_calc__A1.pdf"} < _names(out)
    assert len(_names(out)) == len(TABLES) + 1 + len(red_cells.specimens)
    assert [done for done, _, _ in told] == list(range(1, len(written) + 1))
    assert {total for _, total, _ in told} == {len(written)}
    assert _names(tmp_path) == {"out"}


def test_the_document_names_the_files_beside_it(plasma: Review, tmp_path: Path, when: datetime) -> None:
    write_review(plasma, tmp_path / "out", when=when)
    document = json.loads((tmp_path / "out" / "review.json").read_text(encoding="utf-8"))
    assert set(document["files"]) == _names(tmp_path / "out")


def test_without_pages_only_tables_are_written(red_cells: Review, tmp_path: Path) -> None:
    write_review(red_cells, tmp_path / "out", pdf=False)
    assert _names(tmp_path / "out") == TABLES


def test_two_specimens_have_no_overview(plasma: Review, tmp_path: Path) -> None:
    write_review(plasma, tmp_path / "out")
    assert _names(tmp_path / "out") == TABLES | {"D1.pdf", "D2.pdf"}


def test_several_processes_write_the_same_bytes_as_one(
    plasma: Review, tmp_path: Path, when: datetime
) -> None:
    write_review(plasma, tmp_path / "one", when=when)
    write_review(plasma, tmp_path / "two", when=when, jobs=2)
    for name in _names(tmp_path / "one"):
        assert (tmp_path / "one" / name).read_bytes() == (tmp_path / "two" / name).read_bytes()


def test_an_earlier_review_is_replaced_whole(red_cells: Review, plasma: Review, tmp_path: Path) -> None:
    out = tmp_path / "out"
    write_review(plasma, out)
    write_review(red_cells, out, pdf=False)
    assert _names(out) == TABLES
    assert "C01" in (out / "steps.csv").read_text(encoding="utf-8")
    assert _names(tmp_path) == {"out"}


def test_an_empty_folder_is_filled(plasma: Review, tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    write_review(plasma, tmp_path / "out", pdf=False)
    assert _names(tmp_path / "out") == TABLES


def test_missing_folders_above_are_made(plasma: Review, tmp_path: Path) -> None:
    write_review(plasma, tmp_path / "a" / "b" / "out", pdf=False)
    assert _names(tmp_path / "a" / "b" / "out") == TABLES


@pytest.mark.parametrize("name", ["thesis.txt", "steps.csv", "review.json"])
def test_a_folder_with_files_of_others_is_refused_and_kept(plasma: Review, tmp_path: Path, name: str) -> None:
    out = tmp_path / "out"
    out.mkdir()
    (out / name).write_text("mine", encoding="utf-8")
    with pytest.raises(OutputFailed) as caught:
        write_review(plasma, out)
    assert name in str(caught.value)
    assert "new or an empty folder" in caught.value.remedy
    assert (out / name).read_text(encoding="utf-8") == "mine"


def test_a_note_put_beside_an_earlier_review_is_not_lost(plasma: Review, tmp_path: Path) -> None:
    out = tmp_path / "out"
    write_review(plasma, out, pdf=False)
    (out / "my notes.txt").write_text("call back", encoding="utf-8")
    with pytest.raises(OutputFailed, match="my notes"):
        write_review(plasma, out, pdf=False)
    assert (out / "my notes.txt").exists()


def test_a_file_in_the_place_of_the_folder_is_refused(plasma: Review, tmp_path: Path) -> None:
    (tmp_path / "out").write_text("mine", encoding="utf-8")
    with pytest.raises(OutputFailed, match="is not a folder"):
        write_review(plasma, tmp_path / "out")


def test_the_folder_that_the_program_runs_in_is_refused(
    plasma: Review, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    with pytest.raises(OutputFailed, match="name a folder inside it"):
        write_review(plasma, Path(), pdf=False)
    assert not list(tmp_path.iterdir())


def _failing_after(count: int, error: OSError) -> Callable[..., None]:
    """A writer of pages that fails at the page number `count`."""
    calls: list[int] = []

    def draw(_review: Review, specimen: int, path: Path, _when: datetime | None) -> None:
        calls.append(specimen)
        if len(calls) > count:
            raise error
        path.write_bytes(b"%PDF")

    return draw


@pytest.mark.parametrize(
    ("code", "words"),
    [
        (errno.ENOSPC, "the disk is full"),
        (errno.EACCES, "writing is not allowed"),
        (errno.EROFS, "the disk is read-only"),
        (errno.EIO, "cannot be written"),
    ],
)
def test_a_failure_midway_leaves_nothing_and_is_told(
    plasma: Review, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, code: int, words: str
) -> None:
    monkeypatch.setattr(batch, "_draw", _failing_after(1, OSError(code, os.strerror(code))))
    with pytest.raises(OutputFailed, match=words) as caught:
        write_review(plasma, tmp_path / "out")
    assert caught.value.remedy
    assert "partial" not in str(caught.value)
    assert not list(tmp_path.iterdir())


def test_a_failure_midway_leaves_the_earlier_review_as_it_was(
    plasma: Review, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    out = tmp_path / "out"
    write_review(plasma, out)
    before = {p.name: p.read_bytes() for p in out.iterdir()}
    monkeypatch.setattr(batch, "_draw", _failing_after(1, OSError(errno.ENOSPC, "no space")))
    with pytest.raises(OutputFailed):
        write_review(plasma, out)
    assert {p.name: p.read_bytes() for p in out.iterdir()} == before
    assert _names(tmp_path) == {"out"}


def test_a_failed_swap_puts_the_earlier_review_back(
    plasma: Review, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    out = tmp_path / "out"
    write_review(plasma, out, pdf=False)
    before = (out / "steps.csv").read_bytes()
    rename = Path.rename

    def refuse_the_new(self: Path, target: Path) -> Path:
        if "partial-" in str(self.parent):
            raise PermissionError(errno.EACCES, "in use", str(self))
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", refuse_the_new)
    with pytest.raises(OutputFailed):
        write_review(plasma, out, pdf=False)
    assert (out / "steps.csv").read_bytes() == before
    assert _names(tmp_path) == {"out"}


def test_cancelling_leaves_nothing(red_cells: Review, tmp_path: Path) -> None:
    told: list[str] = []

    def is_cancelled() -> bool:
        return len(told) >= 4

    with pytest.raises(OutputCancelled):
        write_review(
            red_cells,
            tmp_path / "out",
            progress=lambda _d, _t, name: told.append(name),
            cancelled=is_cancelled,
        )
    assert not list(tmp_path.iterdir())


_SCRIPT = """
import sys
sys.path.insert(0, {tests!r})
from pathlib import Path
from panels import RED_CELL, Specimen, panel_of
from panelview.assess.assess import assess
from panelview.catalogue.load import load_catalogue
from panelview.output.batch import write_review
review = assess(panel_of([Specimen(f"A{{k}}", RED_CELL) for k in range(200)]), load_catalogue())
write_review(review, Path(sys.argv[1]), progress=lambda done, total, name: print(done, flush=True))
"""


@pytest.mark.skipif(os.name == "nt", reason="Windows ends processes in another way")
def test_a_killed_run_leaves_no_folder_under_the_wanted_name(tmp_path: Path) -> None:
    script = _SCRIPT.format(tests=str(Path(__file__).parents[1]))
    environment = os.environ | {"PYTHONPATH": str(Path(__file__).parents[2])}
    out = tmp_path / "out"
    with subprocess.Popen(
        [sys.executable, "-c", script, str(out)], env=environment, stdout=subprocess.PIPE, text=True
    ) as run:
        assert run.stdout is not None
        for line in run.stdout:
            if int(line) >= 8:
                run.send_signal(signal.SIGKILL)
                break
    assert run.wait() == -signal.SIGKILL
    assert not out.exists()
    left = list(tmp_path.iterdir())
    assert len(left) == 1
    assert ".partial-" in left[0].name
    assert time.time() >= left[0].stat().st_mtime
