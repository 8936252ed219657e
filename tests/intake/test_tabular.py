"""Bytes to rows: encodings, delimiters, widths; what is no text table is refused with a way out."""

from __future__ import annotations

import gzip
import os
import sqlite3
import zipfile
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.intake.problems import InputRefused, Severity
from panelview.intake.tabular import LARGEST_FILE, MOST_COLUMNS, read_file, read_grid

TEXT = "sample,µ\nA,1\n"


def refused_as(data: bytes):
    with pytest.raises(InputRefused) as caught:
        read_grid("panel.csv", data)
    (problem,) = caught.value.problems
    assert problem.severity is Severity.FILE
    assert problem.file == "panel.csv"
    assert problem.remedy
    return problem


class TestEncodings:
    @pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "cp1252"])
    def test_usual_encodings(self, encoding):
        assert read_grid("p.csv", TEXT.encode(encoding)).rows == [["sample", "µ"], ["A", "1"]]

    def test_utf_16_by_its_mark_in_both_orders(self):
        for mark, order in ((b"\xff\xfe", "utf-16-le"), (b"\xfe\xff", "utf-16-be")):
            assert read_grid("p.csv", mark + TEXT.encode(order)).rows[1] == ["A", "1"]

    def test_windows_1252_is_an_assumption_that_is_told_with_its_line(self):
        (problem,) = read_grid("p.csv", b"sample,x\nA,\xb5\n").problems
        assert (problem.severity, problem.row) == (Severity.NOTE, 2)
        assert "Windows-1252" in problem.what

    def test_bytes_of_neither_are_refused_with_their_line(self):
        assert refused_as(b"sample,x\nA,\x81\n").row == 2

    @pytest.mark.parametrize("char", ["\x00", "\x07", "\x0b", "\x1a", "\x7f", "\x85"], ids=lambda c: f"U+{ord(c):04X}")
    def test_control_characters_are_refused_with_their_line(self, char):
        problem = refused_as(f"sample,x\nA,1\nB,{char}2\n".encode())
        assert problem.row == 3
        assert f"U+{ord(char):04X}" in problem.what

    def test_a_control_character_far_down_is_found(self):
        assert refused_as(b"a,b\n" + b"1,2\n" * 100_000 + b"1,\x01\n").row == 100_002


class TestDelimiters:
    @pytest.mark.parametrize("delimiter", list(",;\t|"), ids=["comma", "semicolon", "tab", "bar"])
    def test_each_is_found(self, delimiter):
        text = "\n".join(delimiter.join(row) for row in (["sample", "x", "y"], ["A", "1", "2"]))
        assert read_grid("p.csv", text.encode()).rows[1] == ["A", "1", "2"]

    def test_a_decimal_comma_in_every_cell_is_no_delimiter(self):
        grid = read_grid("p.csv", b"sample;a,x;b\nA;1,5;2,5\nB;3,5;4,5\n")
        assert grid.rows[0] == ["sample", "a,x", "b"]

    def test_one_uneven_line_does_not_change_the_delimiter(self):
        assert "3 cells" in refused_as(b"sample;x\nA;1,5\nB;2,5;7\nC;3,5\nD;1,5\n").what

    @pytest.mark.parametrize("end", ["\n", "\r\n", "\r"], ids=["unix", "windows", "old mac"])
    def test_line_ends(self, end):
        assert read_grid("p.csv", f"sample,x{end}A,1{end}".encode()).rows[1] == ["A", "1"]


class TestRows:
    def test_quoted_cells_keep_delimiters_and_line_ends(self):
        grid = read_grid("p.csv", b'sample,"2,3-BPG\n(mmol/L)"\nA,"1,5"\nB,2\n')
        assert grid.rows == [["sample", "2,3-BPG\n(mmol/L)"], ["A", "1,5"], ["B", "2"]]
        assert grid.lines == [1, 3, 4]

    def test_blank_lines_are_passed_over_and_lines_counted_right(self):
        assert read_grid("p.csv", b"\nsample,x\n\n,\nA,1\n\n").lines == [2, 5]

    def test_blank_cells_beyond_the_heading_are_cut_off(self):
        assert read_grid("p.csv", b"sample,x\nA,1,,\n").rows[1] == ["A", "1"]

    @pytest.mark.parametrize("row", [b"B,1,2", b"B"], ids=["too long", "too short"])
    def test_uneven_rows_are_refused_by_line(self, row):
        problem = refused_as(b"sample,x\nA,1\n" + row + b"\n")
        assert problem.row == 3
        assert "the heading has 2" in problem.what
        assert "decimal comma" in problem.remedy

    def test_narrow_lines_above_the_table_are_kept_apart_with_their_lines(self):
        grid = read_grid("p.csv", b"Panel of 3 March\n\nLab,X\nsample,x,y\nA,1,2\nB,2,3\n")
        assert grid.above == ((1, ["Panel of 3 March"]), (3, ["Lab", "X"]))
        assert (grid.rows[0], grid.lines) == (["sample", "x", "y"], [4, 5, 6])

    def test_a_table_without_lines_above_it_has_none(self):
        assert read_grid("p.csv", b"sample,x\nA,1\n").above == ()

    def test_an_open_quote_is_refused_by_the_line_where_it_opens(self):
        problem = refused_as(b'sample,x\nA,"1\nB,2\n')
        assert problem.row == 2
        assert "quote" in problem.remedy

    def test_too_many_columns(self):
        assert "columns" in refused_as(b",".join([b"x"] * (MOST_COLUMNS + 1)) + b"\n").what


class TestNotATable:
    @pytest.mark.parametrize(
        "data", [b"", b"   \n\n", b"\xef\xbb\xbf", b",,\n,,\n"], ids=["empty", "blank", "bom", "commas"]
    )
    def test_nothing_in_it(self, data):
        assert refused_as(data).remedy == "export the panel again"

    def test_a_spreadsheet(self, tmp_path):
        with zipfile.ZipFile(tmp_path / "x.xlsx", "w") as archive:
            archive.writestr("xl/workbook.xml", "<workbook/>")
        problem = refused_as((tmp_path / "x.xlsx").read_bytes())
        assert "spreadsheet" in problem.what
        assert "CSV" in problem.remedy

    def test_a_database(self, tmp_path):
        with sqlite3.connect(tmp_path / "x.db") as database:
            database.execute("create table t (x)")
        database.close()
        assert "database" in refused_as((tmp_path / "x.db").read_bytes()).what

    def test_a_gzipped_table(self):
        assert "unpack" in refused_as(gzip.compress(TEXT.encode())).remedy

    @pytest.mark.parametrize(
        ("data", "what"),
        [
            (b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(500), "an old binary spreadsheet"),
            (b"%PDF-1.7\n", "a PDF"),
            (b"PAR1\x15\x04", "a Parquet file"),
            (b"<html><table><tr><td>1</td></tr></table>", "a web page"),
            (b"\n<!DOCTYPE html>", "a web page"),
            (b'<?xml version="1.0"?>', "an XML document"),
            (b'{\n "resourceType": "Bundle"}', "a JSON document"),
            (b"MTD\tmzTab-version\t2.0.0-M\n", "an mzTab file"),
        ],
    )
    def test_other_formats_are_named(self, data, what):
        problem = refused_as(data)
        assert what in problem.what
        assert "CSV" in problem.remedy


class TestFiles:
    def refusal(self, path):
        with pytest.raises(InputRefused) as caught:
            read_file(path)
        (problem,) = caught.value.problems
        assert problem.file == path.name
        assert problem.remedy
        return problem

    def test_a_folder(self, tmp_path):
        assert "folder" in self.refusal(tmp_path).what

    def test_a_missing_file(self, tmp_path):
        assert "no such file" in self.refusal(tmp_path / "gone.csv").what

    def test_a_file_that_is_too_large_is_not_read(self, tmp_path):
        with (tmp_path / "huge.csv").open("wb") as stream:
            stream.truncate(2 * 2**30)
        assert "2,048 MB" in self.refusal(tmp_path / "huge.csv").what

    def test_the_largest_file_holds_a_cohort(self):
        """100,000 specimens of 60 analytes, up to 30 characters a value."""
        assert LARGEST_FILE >= 100_000 * 60 * 30

    @pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="no named pipes here")
    def test_a_pipe_does_not_hold_the_reader_up(self, tmp_path):
        os.mkfifo(tmp_path / "pipe.csv")
        assert "pipe" in self.refusal(tmp_path / "pipe.csv").what

    def test_a_name_that_no_file_can_have(self, tmp_path):
        assert self.refusal(tmp_path / "a\x00b").what

    def test_a_file_that_may_not_be_read(self, tmp_path, monkeypatch):
        path = tmp_path / "secret.csv"
        path.write_text(TEXT)

        def denied(_: Path) -> bytes:
            raise PermissionError(13, "Permission denied")

        monkeypatch.setattr(Path, "read_bytes", denied)
        problem = self.refusal(path)
        assert "cannot be read (Permission denied)" in problem.what
        assert "permissions" in problem.remedy


@given(st.binary(max_size=300))
def test_any_bytes_are_a_grid_of_even_rows_or_a_refusal(data):
    try:
        grid = read_grid("p.csv", data)
    except InputRefused as error:
        problems, grid = error.problems, None
    if grid is None:
        assert all(p.what and p.remedy for p in problems)
        return
    assert len({len(row) for row in grid.rows}) == 1
    assert grid.lines == sorted(grid.lines)


@given(
    st.lists(st.lists(st.text("ab1 .,;\t|\"'\n", max_size=5), min_size=3, max_size=3), min_size=2, max_size=6),
    st.sampled_from(list(",;\t|")),
)
def test_quoted_tables_come_back_cell_by_cell(rows, delimiter):
    rows = [["sample", "x", "y"], *(["A", *row[1:]] for row in rows)]
    text = "\n".join(delimiter.join('"' + c.replace('"', '""') + '"' for c in row) for row in rows)
    assert read_grid("p.csv", text.encode()).rows == rows
