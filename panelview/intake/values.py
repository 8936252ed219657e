"""Numbers as laboratories write them: limits, flags, words for “not measured” and “not detected”."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from panelview.intake.decimal_marks import Mark, Marks, proven_mark, without_group_blanks
from panelview.intake.panel import State
from panelview.intake.units import is_unit


@dataclass(frozen=True, slots=True)
class Value:
    """One cell understood. number: NaN without one; flag: letters and signs taken off; why, remedy: for REFUSED;
    has_thousands: whether a thousands mark was taken out; is_zero: refused because it is zero."""

    state: State
    number: float
    flag: str = ""
    why: str = ""
    remedy: str = ""
    has_thousands: bool = False
    is_zero: bool = False


#: Cells that say that nothing was measured (common practice, no source), in lower case.
MISSING_WORDS = frozenset(
    "|-|--|–|—|.|..|na|n/a|n.a.|n.a|#n/a|nan|null|none|nf|n.b.|nb|missing|insufficient|qns|not measured|not done|"
    "no sample|insufficient sample|not available|nicht bestimmt".split("|")
)

#: Cells that say “looked for, not found”, below a limit that the cell does not state; blanks after < are dropped.
NOT_DETECTED = frozenset(
    "nd|n.d.|n.d|not detected|nn|n.n.|bql|blq|bloq|bdl|blod|<lod|<loq|<lloq|<dl|<ql|below lod|below loq|below lloq|"
    "nicht nachweisbar".split("|")
)

#: Of these, the words that other laboratories use for “not determined”: worth a word to the reader.
AMBIGUOUS_WORDS = frozenset(["nd", "n.d.", "n.d", "nn", "n.n."])

#: Cells that say “over the upper limit” without stating it.
_OVER = frozenset([">uloq", "alq", "aloq", ">loq", "above uloq", "above loq", "above range"])

#: What a status column may say, in place of the cell (common practice, no source).
STATUS_WORDS: dict[str, State] = {
    **dict.fromkeys((w for w in MISSING_WORDS if w.isalpha()), State.MISSING),
    **dict.fromkeys(NOT_DETECTED, State.BELOW_LOQ),
    **dict.fromkeys(_OVER, State.ABOVE_RANGE),
    "below_loq": State.BELOW_LOQ,
    "below_lod": State.BELOW_LOQ,
    "not_detected": State.BELOW_LOQ,
    "above_range": State.ABOVE_RANGE,
    "above_uloq": State.ABOVE_RANGE,
    "not_measured": State.MISSING,
}

_NUMBER = re.compile(r"[+-]?(?:[0-9][0-9.,]*|[.,][0-9]+)(?:[eE][+-]?[0-9]+)?\Z")
_WITH_UNIT = re.compile(r"[+-]?[0-9.,]*[0-9](?:[eE][+-]?[0-9]+)?\s*([^0-9\s.,+-].*)\Z")
_LIMIT = re.compile(r"(<=|>=|=<|=>|<|>|≤|≥)\s*")
_SIGNS = "*#†‡↑↓!"
_FLAG_WORD = re.compile(r"(?<![A-Za-z/])\(?(?:HH|LL|AA|H|L|A)\)?\Z")
_LEADING_FLAG = re.compile(r"(?:HH|LL|AA|H|L|A)\s+(?=[<>≤≥0-9.,+-])")
_SAME = str.maketrans({"\u00a0": " ", "\u202f": " ", "\u2009": " ", "−": "-", "－": "-", "\ufeff": None})


def read_value(cell: str, marks: Marks) -> Value:
    """Understand one cell with the file's decimal mark."""
    text = cell.translate(_SAME).strip()
    word = re.sub(r"([<>])\s+", r"\1", text.casefold())
    if word in MISSING_WORDS:
        return Value(State.MISSING, math.nan)
    if word in NOT_DETECTED:
        return Value(State.BELOW_LOQ, math.nan)
    if word in _OVER:
        return Value(State.ABOVE_RANGE, math.nan)
    text, flag = _take_flags(text)
    if not text:
        return Value(State.MISSING, math.nan, flag)
    limit = _LIMIT.match(text)
    if limit is None:
        return _number(text, marks, State.MEASURED, flag, cell)
    state = State.BELOW_LOQ if limit[1] in ("<", "<=", "=<", "≤") else State.ABOVE_RANGE
    return _number(text[limit.end() :], marks, state, flag, cell)


def _take_flags(text: str) -> tuple[str, str]:
    """The text without the flags before and after it, and the flags."""
    before: list[str] = []
    bare = text.lstrip(_SIGNS + " ")
    if len(bare) < len(text):
        before.append(text[: len(text) - len(bare)].strip())
    lead = _LEADING_FLAG.match(bare)
    if lead:
        before.append(lead[0].strip())
        bare = bare[lead.end() :]
    after: list[str] = []
    while bare:
        shorter = bare.rstrip(_SIGNS + " ")
        shorter = _FLAG_WORD.sub("", shorter) if len(shorter) < 60 else shorter
        if shorter == bare:
            break
        after.insert(0, bare[len(shorter) :].strip())
        bare = shorter
    return bare, " ".join(f for f in (*before, *after) if f)


def _refused(flag: str, why: str, remedy: str) -> Value:
    return Value(State.REFUSED, math.nan, flag, why, remedy)


def _number(text: str, marks: Marks, state: State, flag: str, cell: str) -> Value:
    shown = cell.strip() if len(cell) <= 60 else cell.strip()[:57] + "…"
    digits = without_group_blanks(text)
    if len(text) > 60 or not _NUMBER.match(digits):
        return _no_number(text, shown, flag)
    mark = marks.mark
    plain = _plain(digits, mark)
    if plain is None:
        why = f"“{shown}” does not fit the decimal {mark.name.lower()} that the file uses"
        return _refused(flag, why, "write all numbers with one decimal mark and no thousands mark")
    has_thousands = digits != text or mark.other.value in digits
    bare = re.split("[eE]", digits.lstrip("+-"))[0]
    if marks.is_mixed and not bare.isdigit() and proven_mark(bare) is None:
        why = f"“{shown}” cannot be told from one thousand and more, because the file mixes decimal points and commas"
        return _refused(flag, why, "write all numbers with one decimal mark and no thousands mark")
    if marks.is_ungrouped and bare.count(mark.other.value) == 1 and mark.value not in bare:
        why = f"“{shown}” may hold a decimal {mark.other.name.lower()} or a thousands mark, and no other number has one"
        return _refused(flag, why, "write it without a thousands mark")
    number = float(plain)
    if not math.isfinite(number):
        return _refused(flag, f"“{shown}” is too large for a number", "correct the cell")
    if number <= 0:
        what = "a negative value" if number < 0 else "zero"
        remedy = "write the limit of quantification (<0.5), ND, or leave the cell blank"
        why = f"{what} is not a concentration"
        return Value(State.REFUSED, math.nan, flag, why, remedy, is_zero=number == 0)
    return Value(state, number, flag, has_thousands=has_thousands)


def _no_number(text: str, shown: str, flag: str) -> Value:
    words = _WITH_UNIT.match(text) if len(text) <= 60 else None
    if words and is_unit(words[1]):
        why = f"“{shown}” holds a unit beside the number"
        return _refused(flag, why, "write the number alone, and the unit in the heading or in a column of units")
    return _refused(flag, f"“{shown}” is not a number", "correct the cell or leave it blank")


def _plain(text: str, mark: Mark) -> str | None:
    """The number in Python's spelling; None where its marks contradict the file's."""
    body, _, exponent = text.replace("E", "e").partition("e")
    whole, _, fraction = body.partition(mark.value)
    thousands = mark.other.value
    if thousands in fraction or mark.value in fraction:
        return None
    if thousands in whole:
        groups = whole.lstrip("+-").split(thousands)
        if not (1 <= len(groups[0]) <= 3 and all(len(group) == 3 for group in groups[1:])):
            return None
        whole = whole.replace(thousands, "")
    return (whole or "0") + "." + (fraction or "0") + (f"e{exponent}" if exponent else "")


@dataclass
class Column:
    """Many cells understood. state, number: [cell]; odd: by cell, those that are no plain positive number."""

    state: NDArray[np.int8]
    number: NDArray[np.float64]
    odd: dict[int, Value] = field(default_factory=dict)

    def flag(self, k: int) -> str:
        """The flags that were taken off cell k."""
        return self.odd[k].flag if k in self.odd else ""

    def put(self, k: int, value: Value) -> None:
        """Replace what cell k was understood as."""
        self.state[k], self.number[k], self.odd[k] = value.state, value.number, value


def read_values(cells: Sequence[str], marks: Marks) -> Column:
    """Understand many cells with the file's decimal mark: plain numbers in one sweep, the odd ones singly."""
    number = _plain_numbers(cells, marks)
    usable = np.isfinite(number) & (number > 0)
    state = np.full(len(number), State.MEASURED, dtype=np.int8)
    made = Column(state, number)
    seen: dict[str, Value] = {}
    for k in np.flatnonzero(~usable).tolist():
        cell = cells[k]
        value = seen.get(cell)
        if value is None:
            value = seen[cell] = read_value(cell, marks)
        made.odd[k] = value
        state[k] = value.state
        number[k] = value.number
    return made


def _plain_numbers(cells: Sequence[str], marks: Marks) -> NDArray[np.float64]:
    """Numbers in plain spelling, NaN for every other cell.

    float() also takes 1_000 and digits of other scripts, and a mark that stands for thousands: cells that
    hold any of these are not plain.
    """
    together = "".join(cells)
    texts: Sequence[str] = cells
    if marks.is_mixed:
        return np.full(len(cells), np.nan)
    if "_" in together or not together.isascii():
        texts = [cell if cell.isascii() and "_" not in cell else "" for cell in texts]
    if marks.mark is Mark.COMMA:
        texts = [cell.replace(",", ".") if "." not in cell else "" for cell in texts]
    numbers = []
    for text in texts:
        try:
            numbers.append(float(text))
        except ValueError:
            numbers.append(math.nan)
    return np.array(numbers, dtype=np.float64)
