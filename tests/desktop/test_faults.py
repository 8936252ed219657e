"""Unforeseen errors: the report holds where it happened and nothing of what the panel held."""

from __future__ import annotations

import sys
from datetime import datetime

import pytest

from panelview.desktop import faults

SECRET = "participant 4711 lactate 9.13"


def fail_with_data():
    value = SECRET
    raise KeyError(value)


@pytest.fixture
def caught():
    with pytest.raises(KeyError) as caught:
        fail_with_data()
    return caught


def test_the_report_names_file_line_and_function_but_no_value(caught):
    text = faults.report_text(caught.type, caught.tb)
    assert "test_faults.py:" in text
    assert "fail_with_data" in text
    assert "KeyError" in text
    assert SECRET not in text
    assert "/" not in text.splitlines()[-1].strip()  # no folders, which can hold names of people


def test_an_uncaught_error_becomes_a_sentence_and_a_report(tmp_path, monkeypatch, caught):
    monkeypatch.setattr(sys, "excepthook", sys.excepthook)
    told = []
    faults.install(told.append, tmp_path)
    sys.excepthook(caught.type, caught.value, caught.tb)
    (report,) = tmp_path.glob("fault-*.txt")
    assert str(report) in told[0]
    assert SECRET not in told[0] + report.read_text(encoding="utf-8")


def test_a_folder_that_cannot_be_written_still_gives_the_sentence(tmp_path):
    blocked = tmp_path / "file"
    blocked.write_text("", encoding="utf-8")
    assert faults.write_report("x", blocked, datetime(2026, 1, 1)) is None
    assert "Something went wrong" in faults.fault_sentence(None)
