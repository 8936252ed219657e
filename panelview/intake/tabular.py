"""Bytes of a text table to rows of text: encoding, delimiter, equal widths; what cannot be one is refused."""

from __future__ import annotations

import csv
import hashlib
import io
import itertools
import re
import stat
from collections import Counter
from dataclasses import dataclass
from pathlib import Path

from panelview.intake.panel import SourceFile
from panelview.intake.problems import InputRefused, Problem, Severity

#: Larger files than this are refused unread; a study of 100,000 specimens stays under it.
LARGEST_FILE = 200 * 1024 * 1024

#: A table wider than this is no panel.
MOST_COLUMNS = 5000

#: So many first rows tell how wide the table is; so many lines may stand above the heading.
_LOOKED_AT = 50
MOST_ABOVE = 20

#: Where two delimiters cut equally well, the first wins: a comma is a decimal mark as well.
_DELIMITERS = {"\t": "tab", ";": "semicolon", "|": "bar", ",": "comma"}

_AS_CSV = "save the sheet as CSV (UTF-8) and open that"
_NOT_TEXT = (
    (b"PK\x03\x04", "a spreadsheet or another zipped file", _AS_CSV),
    (b"\xd0\xcf\x11\xe0", "an old binary spreadsheet", _AS_CSV),
    (b"%PDF", "a PDF", "ask the laboratory for its export as CSV, or type the values into one"),
    (b"PAR1", "a Parquet file", "export it as CSV (UTF-8) and open that"),
    (b"SQLite format 3\x00", "a database", "export the panel as CSV (UTF-8) and open that"),
    (b"\x1f\x8b", "a gzipped file", "unpack it first"),
)
_MARKUP = (
    (re.compile(r"<(?:!doctype|html|table|meta)\b", re.IGNORECASE), "a web page", _AS_CSV),
    (re.compile(r"<\?xml\b"), "an XML document", "export it as CSV (UTF-8) and open that"),
    (re.compile(r"[{\[]\s*[\"{\[]"), "a JSON document", "export it as CSV (UTF-8) and open that"),
    (re.compile(r"MTD\t"), "an mzTab file", "export the panel as CSV (UTF-8) and open that"),
)

#: Characters that no text table holds. XML forbids most of them, so no later output could carry them.
_CONTROL = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f]")


@dataclass(frozen=True)
class Grid:
    """A table as text: rows[k] are the cells of the row that starts on line lines[k] (1-based); all rows
    have one width and at least one cell that is not blank.

    above: (line, cells) of rows at the top that are narrower than the table: a title, or a heading that does not fit.
    """

    source: SourceFile
    rows: list[list[str]]
    lines: list[int]
    layout: str
    problems: tuple[Problem, ...]
    above: tuple[tuple[int, list[str]], ...] = ()


def no_such_file(path: Path) -> InputRefused:
    """The refusal of a path that names nothing."""
    return refused(path.name or str(path), 0, "", "there is no such file", "check the path")


def read_file(path: Path) -> bytes:
    """The bytes of a file of bearable size. Raises InputRefused."""
    name = path.name or str(path)
    try:
        found = path.stat()
        if stat.S_ISDIR(found.st_mode):
            raise refused(name, 0, "", "this is a folder, not a file", "give the files in it one by one")
        if not stat.S_ISREG(found.st_mode):
            raise refused(name, 0, "", "this is a device or a pipe, not a file", "save the panel to a file first")
        if found.st_size > LARGEST_FILE:
            size, most = (f"{n / 2**20:,.0f} MB" for n in (found.st_size, LARGEST_FILE))
            remedy = "split it, or export only the analytes needed"
            raise refused(name, 0, "", f"the file has {size}, more than the {most} that are read", remedy)
        return path.read_bytes()
    except FileNotFoundError as error:
        raise no_such_file(path) from error
    except (OSError, ValueError) as error:
        why = getattr(error, "strerror", None) or str(error)
        raise refused(name, 0, "", f"the file cannot be read ({why})", "check its name and permissions") from error


def read_grid(name: str, data: bytes) -> Grid:
    """The table in `data`. Raises InputRefused."""
    source = SourceFile(name, len(data), hashlib.sha256(data).hexdigest())
    if not data.strip():
        raise refused(name, 0, "", "the file is empty", "export the panel again")
    for magic, what, remedy in _NOT_TEXT:
        if data.startswith(magic):
            raise refused(name, 0, "", f"the file is {what}, which is not read yet", remedy)
    text, encoding, problems = _decode(name, data)
    control = _CONTROL.search(text)
    if control:
        line = text.count("\n", 0, control.start()) + 1
        what = f"the file holds the control character U+{ord(control[0]):04X}, so it is no plain text"
        raise refused(name, line, "", what, "export it as CSV in UTF-8")
    start = text[:256].lstrip()
    for pattern, what, remedy in _MARKUP:
        if pattern.match(start):
            raise refused(name, 0, "", f"the file is {what}, which is not read yet", remedy)
    delimiter = _delimiter(text)
    rows, lines = _rows(name, text, delimiter)
    top = _top(rows)
    _make_even(name, rows, lines, top)
    above = tuple(zip(lines[:top], rows[:top], strict=True))
    return Grid(source, rows[top:], lines[top:], f"{_DELIMITERS[delimiter]}-separated, {encoding}", problems, above)


def refused(name: str, row: int, column: str, what: str, remedy: str) -> InputRefused:
    """A refusal of the whole file."""
    return InputRefused((Problem(Severity.FILE, name, row, column, what, remedy),))


def _decode(name: str, data: bytes) -> tuple[str, str, tuple[Problem, ...]]:
    """Text, name of the encoding, what was assumed. By mark, else UTF-8, else Windows-1252: no guesser, because
    those take one Western code page for another."""
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        try:
            return data.decode("utf-16"), "UTF-16", ()
        except UnicodeDecodeError as error:
            raise refused(name, 0, "", "the file is damaged UTF-16 text", "save it as CSV in UTF-8") from error
    try:
        return data.decode("utf-8-sig"), "UTF-8", ()
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
    try:
        text = data.decode("cp1252")
    except UnicodeDecodeError as error:
        what = "the text is neither UTF-8 nor Windows-1252"
        raise refused(name, line, "", what, "save it as CSV in UTF-8") from error
    what = "the text is not UTF-8 and was read as Windows-1252"
    remedy = "check names with accents or µ, or save the file as UTF-8"
    return text, "Windows-1252", (Problem(Severity.NOTE, name, line, "", what, remedy),)


def _delimiter(text: str) -> str:
    """The delimiter that cuts the first rows without a fault, most of them into one number (over one) of cells."""
    head = text[:65536]
    best, best_score = ",", (False, -1.0, 0)
    for delimiter in _DELIMITERS:
        widths: list[int] = []
        is_whole = True
        reader = csv.reader(io.StringIO(head, newline=""), delimiter=delimiter, strict=True)
        try:
            widths.extend(len(row) for row in itertools.islice(reader, 50) if any(map(str.strip, row)))
        except csv.Error:
            is_whole = len(head) < len(text)  # where the head is cut short, a quote may stand open
        if len(head) < len(text) and len(widths) > 1 and len(widths) < 50:
            widths.pop()  # cut short
        width, rows = max(Counter(widths).items(), key=lambda item: (item[1], item[0]), default=(0, 0))
        score = (is_whole, rows / max(len(widths), 1), width)
        if width > 1 and score > best_score:
            best, best_score = delimiter, score
    return best


def _rows(name: str, text: str, delimiter: str) -> tuple[list[list[str]], list[int]]:
    """The rows that are not blank, and the lines on which they start."""
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=delimiter, strict=True)
    rows: list[list[str]] = []
    lines: list[int] = []
    line = 1
    try:
        for cells in reader:
            if any(map(str.strip, cells)):
                rows.append(cells)
                lines.append(line)
            line = reader.line_num + 1
    except csv.Error as error:
        what = f"the table cannot be cut into cells ({error})"
        raise refused(name, line, "", what, "check this line for an open quote") from error
    if not rows:
        raise refused(name, 0, "", "the file holds no text", "export the panel again")
    return rows, lines


def _top(rows: list[list[str]]) -> int:
    """Index of the first row that is as wide as most are; 0 where none of the first rows is."""
    widths = Counter(len(cells) for cells in rows[:_LOOKED_AT] if len(cells) > 1)
    usual = widths.most_common(1)[0][0] if widths else 1
    return next((k for k, cells in enumerate(rows[: MOST_ABOVE + 1]) if len(cells) >= usual), 0)


def _make_even(name: str, rows: list[list[str]], lines: list[int], top: int) -> None:
    """Cut blank cells off the end of rows that are too long; raise InputRefused for any other width."""
    width = len(rows[top])
    if width > MOST_COLUMNS:
        what = f"the table has {width:,} columns, more than the {MOST_COLUMNS:,} that are read"
        raise refused(name, lines[top], "", what, "export fewer columns, or one value a row")
    for k in range(top + 1, len(rows)):
        cells = rows[k]
        if len(cells) != width:
            if len(cells) < width or any(map(str.strip, cells[width:])):
                raise uneven(name, lines[k], len(cells), width)
            del cells[width:]


def uneven(name: str, line: int, cells: int, width: int) -> InputRefused:
    """The refusal of a file one of whose rows does not fit its heading."""
    what = f"this line has {cells} cell{'s' if cells != 1 else ''}, the heading has {width}"
    remedy = "make them equal (a decimal comma in a comma-separated file needs quotes)"
    return refused(name, line, "", what, remedy)
