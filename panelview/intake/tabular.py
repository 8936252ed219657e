"""Bytes of a text table to rows of text: encoding, delimiter, equal widths; what cannot be one is refused."""

from __future__ import annotations

import csv
import hashlib
import io
from dataclasses import dataclass
from pathlib import Path

from panelview.intake.panel import SourceFile
from panelview.intake.problems import InputRefused, Problem, Severity

#: Larger files than this are refused unread; a study of 100,000 specimens stays under it.
LARGEST_FILE = 200 * 1024 * 1024

#: A table wider than this is no panel.
MOST_COLUMNS = 5000

_DELIMITERS = {",": "comma", ";": "semicolon", "\t": "tab", "|": "bar"}

_NOT_TEXT = (
    (b"PK\x03\x04", "a spreadsheet or another zipped file", "save the sheet as CSV (UTF-8) and open that"),
    (b"\xd0\xcf\x11\xe0", "an old binary spreadsheet", "save the sheet as CSV (UTF-8) and open that"),
    (b"%PDF", "a PDF", "ask the laboratory for its export as CSV, or type the values into one"),
    (b"PAR1", "a Parquet file", "export it as CSV (UTF-8) and open that"),
    (b"SQLite format 3\x00", "a database", "export the panel as CSV (UTF-8) and open that"),
    (b"\x1f\x8b", "a gzipped file", "unpack it first"),
)


@dataclass(frozen=True)
class Grid:
    """A table as text: rows[k] are the cells of line lines[k] (1-based); all rows have one width."""

    source: SourceFile
    rows: list[list[str]]
    lines: list[int]
    delimiter: str
    encoding: str
    problems: tuple[Problem, ...]

    @property
    def layout(self) -> str:
        return f"{_DELIMITERS[self.delimiter]}-separated, {self.encoding}"


def read_file(path: Path) -> bytes:
    """The bytes of a file of bearable size. Raises InputRefused."""
    name = path.name or str(path)
    try:
        if path.is_dir():
            raise refused(
                name, 0, "", "this is a folder, not a panel file", "give the files in it one by one"
            )
        size = path.stat().st_size
        if size > LARGEST_FILE:
            raise refused(
                name,
                0,
                "",
                f"the file has {size / 2**20:,.0f} MB, more than the {LARGEST_FILE / 2**20:,.0f} MB read",
                "split it, or export only the analytes needed",
            )
        return path.read_bytes()
    except FileNotFoundError as error:
        raise refused(name, 0, "", "there is no such file", "check the path") from error
    except OSError as error:
        why = error.strerror or type(error).__name__
        raise refused(name, 0, "", f"the file cannot be read ({why})", "check its permissions") from error


def read_grid(name: str, data: bytes) -> Grid:
    """The table in `data`. Raises InputRefused."""
    source = SourceFile(name, len(data), hashlib.sha256(data).hexdigest())
    if not data.strip():
        raise refused(name, 0, "", "the file is empty", "export the panel again")
    for magic, what, remedy in _NOT_TEXT:
        if data.startswith(magic):
            raise refused(name, 0, "", f"the file is {what}, which is not read yet", remedy)
    text, encoding, notes = _decode(name, data)
    delimiter = _delimiter(text)
    rows, lines = _rows(name, text, delimiter)
    return Grid(source, rows, lines, delimiter, encoding, notes)


def refused(name: str, row: int, column: str, what: str, remedy: str) -> InputRefused:
    """A refusal of the whole file."""
    return InputRefused((Problem(Severity.FILE, name, row, column, what, remedy),))


def _decode(name: str, data: bytes) -> tuple[str, str, tuple[Problem, ...]]:
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        try:
            return _clean(name, data.decode("utf-16")), "UTF-16", ()
        except UnicodeDecodeError as error:
            raise refused(
                name, 0, "", "the file is damaged UTF-16 text", "save it as CSV in UTF-8"
            ) from error
    try:
        return _clean(name, data.decode("utf-8-sig")), "UTF-8", ()
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
    try:
        text = data.decode("cp1252")
    except UnicodeDecodeError as error:
        raise refused(
            name, line, "", "the text is neither UTF-8 nor Windows-1252", "save it as CSV in UTF-8"
        ) from error
    note = Problem(
        Severity.NOTE,
        name,
        line,
        "",
        "the text is not UTF-8 and was read as Windows-1252",
        "check names with accents or µ, or save the file as UTF-8",
    )
    return _clean(name, text), "Windows-1252", (note,)


def _clean(name: str, text: str) -> str:
    """Refuse control characters, which mean that this is no text table."""
    for k, char in enumerate(text):
        if char < " " and char not in "\t\r\n":
            line = text.count("\n", 0, k) + 1
            raise refused(
                name,
                line,
                "",
                f"the file holds the control character U+{ord(char):04X}",
                "export it as plain CSV",
            )
        if k > 200_000:  # what passes this far is text; the rest is checked in one sweep
            break
    if "\x00" in text:
        line = text.count("\n", 0, text.index("\x00")) + 1
        raise refused(name, line, "", "the file holds the control character U+0000", "export it as plain CSV")
    return text


def _delimiter(text: str) -> str:
    """The delimiter that cuts the first lines into the same number (over one) of cells; else the commonest."""
    head = [line for line in text[:65536].splitlines()[:50] if line.strip()]
    best, best_score = ",", (-1.0, -1)
    for delimiter in _DELIMITERS:
        widths = [len(row) for row in csv.reader(head, delimiter=delimiter)]
        if not widths or widths[0] < 2:
            continue
        score = (sum(w == widths[0] for w in widths) / len(widths), widths[0])
        if score > best_score:
            best, best_score = delimiter, score
    return best


def _rows(name: str, text: str, delimiter: str) -> tuple[list[list[str]], list[int]]:
    csv.field_size_limit(131072)
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter, strict=True)
    rows: list[list[str]] = []
    lines: list[int] = []
    width = 0
    try:
        for cells in reader:
            if not any(c.strip() for c in cells):
                continue
            if not rows:
                width = len(cells)
                if width > MOST_COLUMNS:
                    raise refused(
                        name, reader.line_num, "", f"the table has {width:,} columns", "export fewer"
                    )
            elif len(cells) != width:
                spare = cells[width:]
                if len(cells) < width or any(c.strip() for c in spare):
                    raise refused(
                        name,
                        reader.line_num,
                        "",
                        f"this line has {len(cells)} cells, the heading {width}",
                        "make them equal (a decimal comma in a comma-separated file needs quotes)",
                    )
                del cells[width:]
            rows.append(cells)
            lines.append(reader.line_num)
    except csv.Error as error:
        raise refused(
            name,
            reader.line_num,
            "",
            f"the table cannot be cut into cells ({error})",
            "check for an open quote",
        ) from error
    if not rows:
        raise refused(name, 0, "", "the file holds no text", "export the panel again")
    return rows, lines
