"""The program as started from outside: it leaves once the review is painted, or says why not."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

from panelview.desktop.samples import SAMPLES, sample_path


def start(tmp_path: Path, *words: str) -> subprocess.CompletedProcess[str]:
    environment = os.environ | {"QT_QPA_PLATFORM": "offscreen", "XDG_CONFIG_HOME": str(tmp_path)}
    return subprocess.run(
        [sys.executable, "-m", "panelview", *words, "--exit-after-paint"],
        capture_output=True,
        text=True,
        timeout=120,
        check=False,
        env=environment,
        cwd=Path(__file__).parents[2],
    )


@pytest.mark.parametrize("sample", SAMPLES, ids=lambda s: s.file)
def test_it_leaves_with_0_once_a_review_is_painted(sample, tmp_path):
    ended = start(tmp_path, str(sample_path(sample)))
    assert ended.returncode == 0, ended.stderr
    assert "Traceback" not in ended.stderr


def test_it_leaves_with_3_and_a_sentence_when_the_file_is_refused(tmp_path):
    path = tmp_path / "empty.csv"
    path.write_bytes(b"")
    ended = start(tmp_path, str(path))
    assert ended.returncode == 3
    assert "empty.csv" in ended.stderr
    assert ";" in ended.stderr
    assert "Traceback" not in ended.stderr


def test_conditions_of_the_command_line_reach_the_window(tmp_path):
    ended = start(tmp_path, str(sample_path(SAMPLES[0])), "--ph", "7.1")
    assert ended.returncode == 0, ended.stderr


def test_an_unstated_matrix_does_not_hold_up_a_timed_start(tmp_path):
    path = tmp_path / "unstated.csv"
    path.write_text("specimen,analyte,value,unit\nS1,lactate,2.1,mmol/L\nS1,pyruvate,0.06,mmol/L\n")
    assert start(tmp_path, str(path)).returncode == 0
