"""What leaves the window: text for the clipboard that no spreadsheet runs, files whole or not at all."""

from __future__ import annotations

import csv
import io
from datetime import UTC, datetime

import pytest

from panelview.desktop import work
from panelview.desktop.export import table_text, write_page_file
from panelview.output.scale import Axis
from panelview.output.text import CAUTION

WHEN = datetime(2026, 5, 4, tzinfo=UTC)


def test_the_copied_table_has_a_line_a_step_and_the_caution(review, specimen, column):
    columns = [column("pyruvate_kinase"), column("pyruvate_carboxylase")]
    text = table_text(review, specimen("P1-a"), columns, Axis.SHIFT, ",")
    rows = list(csv.reader(io.StringIO(text)))
    assert len(rows) == 4
    assert rows[0][:2] == ["Specimen", "Step"]
    assert rows[1][0] == "P1-a"
    assert any(cell.startswith("pushed forward") for cell in rows[1])
    assert rows[2][-1] == review.reason(specimen("P1-a"), columns[1])
    assert rows[3] == [CAUTION]


def test_copied_text_is_no_formula(review, specimen, column):
    text = table_text(review, specimen("P1-a"), [column("hexokinase")], Axis.SHIFT, "\t")
    for row in csv.reader(io.StringIO(text), delimiter="\t"):
        for cell in row:
            is_number = cell.replace("+", "").split(" ")[0].replace(".", "").isdigit()
            assert not cell.startswith(("=", "+", "-", "@")) or is_number


def test_a_page_replaces_an_older_one_only_as_a_whole(review, specimen, tmp_path):
    path = tmp_path / "page.pdf"
    path.write_bytes(b"older")
    token = work.Token(lambda *_: None)
    token.cancel()
    with pytest.raises(work.Cancelled):
        write_page_file(review, specimen("P1-a"), path, WHEN, token)
    assert path.read_bytes() == b"older"
    write_page_file(review, specimen("P1-a"), path, WHEN, work.Token(lambda *_: None))
    assert path.read_bytes().startswith(b"%PDF")
    assert list(tmp_path.iterdir()) == [path]
