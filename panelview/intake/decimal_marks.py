"""Which decimal mark a file uses, decided from all its numbers at once."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import Enum


class Mark(Enum):
    """A decimal mark."""

    POINT = "."
    COMMA = ","

    @property
    def other(self) -> Mark:
        return Mark.COMMA if self is Mark.POINT else Mark.POINT


@dataclass(frozen=True, slots=True)
class Marks:
    """The decimal mark of a file, and how sure that is.

    is_mixed: cells contradict one another, so that a mark before exactly three digits cannot be read;
    doubtful: index of the first cell, where the only evidence is a mark before exactly three digits
    (1.234 may be one thousand and more) and it was taken as decimal; −1 otherwise; is_ungrouped: whether numbers
    over a thousand stand without a thousands mark, so that no other number can be expected to carry one.
    """

    mark: Mark
    is_mixed: bool = False
    doubtful: int = -1
    is_ungrouped: bool = False


_NUMBER = re.compile(r"[<>≤≥=\s]*[+-]?(?P<digits>[0-9.,]+)(?:[eE][+-]?[0-9]+)?[\s*#†‡↑↓!()HLA]*\Z")
_UNGROUPED = re.compile(r"[0-9]{4}")
_GROUP_BLANKS = re.compile("(?<=[0-9])[ '’\u00a0\u2009\u202f](?=[0-9]{3}(?:[^0-9]|\\Z))")
_GROUPS = {mark: re.compile(rf"[0-9]{{1,3}}(?:{re.escape(mark.value)}[0-9]{{3}})+\Z") for mark in Mark}


def decimal_mark(cells: Sequence[str]) -> Marks:
    """The decimal mark of the cells of a file."""
    together = "".join(cells)
    has_point, has_comma = "." in together, "," in together
    if not has_point and not has_comma:
        return Marks(Mark.POINT)
    count = {Mark.POINT: 0, Mark.COMMA: 0}
    doubtful: dict[Mark, int] = {}
    is_ungrouped = False
    for k, digits in _numbers(cells):
        found = proven_mark(digits)
        is_ungrouped |= _UNGROUPED.match(digits) is not None
        if found is not None:
            count[found] += 1
            if has_point != has_comma:
                break  # the other mark occurs nowhere, so nothing can contradict this
        elif digits.count(".") + digits.count(",") == 1:
            doubtful.setdefault(Mark.POINT if "." in digits else Mark.COMMA, k)
    points, commas = count[Mark.POINT], count[Mark.COMMA]
    if points or commas:
        mark = Mark.POINT if points >= commas else Mark.COMMA
        return Marks(mark, is_mixed=bool(points and commas), is_ungrouped=is_ungrouped)
    if len(doubtful) == 2:
        return Marks(Mark.POINT, is_mixed=True)
    for mark, first in doubtful.items():
        # 1180 beside 1.234: thousands carry no mark here, so this one is decimal.
        return Marks(mark, doubtful=-1 if is_ungrouped else first)
    return Marks(Mark.POINT)


def without_group_blanks(text: str) -> str:
    """The text without the blanks and apostrophes that mark thousands: 1 234.5 → 1234.5."""
    return _GROUP_BLANKS.sub("", text)


def _numbers(cells: Sequence[str]) -> Iterator[tuple[int, str]]:
    for k, cell in enumerate(cells):
        found = _NUMBER.match(without_group_blanks(cell))
        if found and any(map(str.isdigit, found["digits"])):
            yield k, found["digits"]


def proven_mark(digits: str) -> Mark | None:
    """The decimal mark that these digits prove, None where they prove nothing."""
    points, commas = digits.count("."), digits.count(",")
    if points and commas:
        last = Mark.POINT if digits.rindex(".") > digits.rindex(",") else Mark.COMMA
        whole, _, fraction = digits.rpartition(last.value)
        is_number = "." not in fraction and "," not in fraction and bool(_GROUPS[last.other].match(whole))
        return last if is_number else None
    if not points and not commas:
        return None
    mark = Mark.POINT if points else Mark.COMMA
    if points + commas > 1:
        return mark.other if _GROUPS[mark].match(digits) else None
    whole, _, fraction = digits.partition(mark.value)
    is_group = len(fraction) == 3 and 1 <= len(whole) <= 3 and not whole.startswith("0")
    return None if is_group else mark
