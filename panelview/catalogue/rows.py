"""Rows of a catalogue table, each cell checked as it is read."""

from __future__ import annotations

import csv
import difflib
import math
from collections.abc import Collection, Iterable, Sequence
from pathlib import Path


class CatalogueError(Exception):
    """A catalogue table cannot be used.

    file: name without folders; row: line of the file, 0 where it concerns the whole file; column: heading,
    "" where it concerns the whole row; what is wrong; remedy: what to do.
    """

    def __init__(self, file: str, row: int, column: str, what: str, remedy: str) -> None:
        super().__init__(file, row, column, what, remedy)
        self.file = file
        self.row = row
        self.column = column
        self.what = what
        self.remedy = remedy

    def __str__(self) -> str:
        return f"{self.file}:{self.row}:{self.column}: {self.what}; {self.remedy}"


class Row:
    """One row of a table; cells are read by column name. Every reader raises CatalogueError."""

    __slots__ = ("_index", "_values", "file", "number")

    def __init__(self, file: str, number: int, index: dict[str, int], values: list[str]) -> None:
        self.file = file
        self.number = number
        self._index = index
        self._values = values

    def error(self, column: str, what: str, remedy: str) -> CatalogueError:
        return CatalogueError(self.file, self.number, column, what, remedy)

    def text(self, column: str) -> str:
        """The cell as it is; may be empty."""
        return self._values[self._index[column]]

    def texts(self, columns: Sequence[str]) -> tuple[str, ...]:
        """Several cells as they are."""
        return tuple([self._values[self._index[column]] for column in columns])

    def required(self, column: str) -> str:
        """The cell, which must not be empty."""
        value = self._values[self._index[column]]
        if not value:
            raise self.error(column, "the cell is empty", "fill it in")
        return value

    def number_in(self, column: str, low: float = -math.inf, high: float = math.inf) -> float:
        """A finite number with low ≤ number ≤ high."""
        value = self._number(column, self.required(column))
        if not low <= value <= high:
            raise self.error(
                column,
                f"{value:g} lies outside {low:g} to {high:g}",
                "check the value and its unit",
            )
        return value

    def positive(self, column: str) -> float:
        """A finite number above zero."""
        value = self._number(column, self.required(column))
        if value <= 0:
            raise self.error(column, f"{value:g} is not positive", "write a number above zero")
        return value

    def number_or_nan(self, column: str, low: float = -math.inf, high: float = math.inf) -> float:
        """As number_in; NaN for an empty cell."""
        return self.number_in(column, low, high) if self.text(column) else math.nan

    def integer(self, column: str, low: int = 0) -> int:
        """A whole number, at least `low`."""
        value = self.number_in(column, low)
        if value != int(value):
            raise self.error(column, f"{value:g} is not a whole number", "write a whole number")
        return int(value)

    def flag(self, column: str) -> bool:
        """yes or no."""
        return self.choice(column, ("yes", "no")) == "yes"

    def choice(self, column: str, allowed: Sequence[str]) -> str:
        """One of the allowed words ("" among them where the cell may be empty)."""
        value = self.text(column)
        if value not in allowed:
            words = ", ".join(word or "nothing" for word in allowed)
            raise self.error(column, f"“{value}” is not one of: {words}", "use one of these words")
        return value

    def known(self, column: str, ids: Collection[str], kind: str) -> str:
        """An id that exists; `kind` says of what ("metabolite")."""
        return self._check_known(column, self.required(column), ids, kind)

    def many(self, column: str) -> tuple[str, ...]:
        """Words separated by semicolons, none of them twice; may be empty."""
        value = self._values[self._index[column]]
        if not value:
            return ()
        if ";" not in value:
            return (value,)
        words = tuple(word.strip() for word in value.split(";"))
        if "" in words:
            raise self.error(column, "there is nothing between two semicolons", "remove one of them")
        if len(set(words)) < len(words):
            raise self.error(column, f"a word stands twice in “{value}”", "write each word once")
        return words

    def many_known(self, column: str, ids: Collection[str], kind: str) -> tuple[str, ...]:
        """Ids separated by semicolons; may be empty."""
        return tuple([self._check_known(column, word, ids, kind) for word in self.many(column)])

    def _number(self, column: str, text: str) -> float:
        try:
            value = float(text)
        except ValueError:
            value = math.nan
        if not math.isfinite(value) or "_" in text:
            raise self.error(
                column, f"“{text}” is not a finite number", "write a plain number with a decimal point"
            )
        return value

    def _check_known(self, column: str, value: str, ids: Collection[str], kind: str) -> str:
        if value not in ids:
            near = difflib.get_close_matches(value, [i for i in ids if i], n=1)
            hint = f"; perhaps {near[0]}" if near else ""
            raise self.error(column, f"no {kind} has the id “{value}”{hint}", "use an id that exists")
        return value


def read_table(folder: Path, name: str, columns: Sequence[str]) -> list[Row]:
    """All rows of `folder`/`name`, whose columns must be exactly `columns`. Raises CatalogueError."""
    path = folder / name
    try:
        with path.open(newline="", encoding="utf-8-sig") as stream:
            reader = csv.reader(stream, strict=True)
            header = next(reader, [])
            _check_header(name, header, columns)
            index = {column: k for k, column in enumerate(header)}
            rows = []
            for values in reader:
                if len(values) != len(header):
                    raise CatalogueError(
                        name,
                        reader.line_num,
                        "",
                        f"{len(values)} cells under {len(header)} headings",
                        "give every row one cell a column; quote cells that hold a comma",
                    )
                rows.append(Row(name, reader.line_num, index, values))
            return rows
    except FileNotFoundError:
        raise CatalogueError(name, 0, "", "the table is missing", "install the program again") from None
    except UnicodeDecodeError:
        raise CatalogueError(name, 0, "", "the table is not UTF-8 text", "save it as UTF-8") from None
    except csv.Error as problem:
        raise CatalogueError(name, reader.line_num, "", f"not CSV ({problem})", "check the quotes") from None


def unique(rows: Iterable[Row], columns: Sequence[str]) -> None:
    """Raise CatalogueError where two rows agree in all of `columns`."""
    seen: dict[tuple[str, ...], int] = {}
    for row in rows:
        key = row.texts(columns)
        if seen.setdefault(key, row.number) != row.number:
            raise row.error(
                columns[-1],
                f"“{', '.join(key)}” already stands in row {seen[key]}",
                "remove one of the two rows",
            )


def _check_header(name: str, header: Sequence[str], columns: Sequence[str]) -> None:
    for column in header:
        if column not in columns:
            raise CatalogueError(name, 1, column, f"unknown column “{column}”", "remove or rename it")
    for column in columns:
        if column not in header:
            raise CatalogueError(name, 1, column, f"the column “{column}” is missing", "add it")
    if len(set(header)) < len(header):
        twice = next(column for column in header if header.count(column) > 1)
        raise CatalogueError(name, 1, twice, f"the column “{twice}” stands twice", "remove one")
