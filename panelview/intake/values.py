"""Numbers as laboratories write them: decimal marks, limits, flags, words for “not measured”."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass
from enum import Enum

from panelview.intake.panel import State


class Mark(Enum):
    """The decimal mark of a file."""

    POINT = "."
    COMMA = ","


@dataclass(frozen=True, slots=True)
class Value:
    """One cell understood. number: NaN without one; flag: letters and stars taken off; why: for REFUSED."""

    state: State
    number: float
    flag: str
    why: str = ""
    remedy: str = ""


#: Cells that say that nothing was measured (common practice, no source).
MISSING_WORDS = frozenset(
    "na n/a n.a. n.a nan null none nf n.b. nb - -- – — . .. #n/a missing insufficient qns "
    "not measured|not done|no sample|insufficient sample|nicht bestimmt".replace("|", " ").split()
) | {"not measured", "not done", "no sample", "insufficient sample", "nicht bestimmt", "not available", ""}

#: Cells that say “looked for, not found”: below a limit that the cell does not state.
NOT_DETECTED = frozenset(
    {
        "nd",
        "n.d.",
        "n.d",
        "not detected",
        "bql",
        "blq",
        "bloq",
        "bdl",
        "<lod",
        "<loq",
        "<lloq",
        "< lod",
        "< loq",
        "< lloq",
        "below lod",
        "below loq",
        "below lloq",
        "blod",
        "nn",
        "n.n.",
    }
)

#: Cells that say “over the upper limit” without stating it.
_OVER = frozenset({">uloq", "> uloq", "alq", "aloq", ">loq", "above uloq"})

_NUMBER = re.compile(r"[+-]?(?:\d[\d.,'’ ]*|[.,]\d+)(?:[eE][+-]?\d+)?\Z")
_LIMIT = re.compile(r"(<=|>=|<|>|≤|≥|=<|=>)\s*(.*)\Z", re.DOTALL)
_FLAGS = re.compile(r"(?:\s*(?:\*+|\(?\b(?:HH|LL|H|L|A|R)\b\)?|#|†|‡|↑|↓))+\s*\Z")
_LEADING_FLAGS = re.compile(r"\A(?:\*+|↑|↓|(?:HH|LL|H|L)\s+)\s*")
_SPACES = str.maketrans({"\u00a0": " ", "\u202f": " ", "\u2009": " ", "−": "-", "－": "-"})
_PLAIN = re.compile(r"\d+(?:\.\d+)?\Z")


def decimal_mark(cells: Iterable[str]) -> tuple[Mark, bool, bool]:
    """The decimal mark of a file from all its number cells.

    Returns (mark, mixed, doubtful): mixed where cells contradict one another; doubtful where the only
    evidence is a mark before exactly three digits (1.234 may be one thousand).
    """
    point = comma = three_point = three_comma = 0
    for cell in cells:
        text = cell.translate(_SPACES).strip().lstrip("<>≤≥= ").rstrip("*HL ")
        if not _NUMBER.match(text):
            continue
        points, commas = text.count("."), text.count(",")
        if points and commas:
            if text.rindex(".") > text.rindex(","):
                point += 1
            else:
                comma += 1
        elif points == 1:
            if _three_after(text, "."):
                three_point += 1
            else:
                point += 1
        elif commas == 1:
            if _three_after(text, ","):
                three_comma += 1
            else:
                comma += 1
        elif points > 1:
            comma += 1
        elif commas > 1:
            point += 1
    if point and comma:
        return (Mark.POINT if point >= comma else Mark.COMMA), True, False
    if point:
        return Mark.POINT, False, False
    if comma:
        return Mark.COMMA, False, False
    return Mark.POINT if three_point >= three_comma else Mark.COMMA, False, bool(three_point or three_comma)


def _three_after(text: str, mark: str) -> bool:
    whole, _, rest = text.partition(mark)
    digits = re.split("[eE]", rest)[0]
    return len(digits) == 3 and whole.strip("+-") not in ("", "0")


def read_value(cell: str, mark: Mark) -> Value:
    """Understand one cell with the file's decimal mark."""
    if mark is Mark.POINT and _PLAIN.match(cell):  # almost every cell
        number = float(cell)
        if number > 0 and math.isfinite(number):
            return Value(State.MEASURED, number, "")
    text = cell.translate(_SPACES).strip()
    word = text.casefold()
    if word in MISSING_WORDS:
        return Value(State.MISSING, math.nan, "")
    if word in NOT_DETECTED:
        return Value(State.BELOW_LOQ, math.nan, "")
    if word in _OVER:
        return Value(State.ABOVE_RANGE, math.nan, "")
    text, flag = _take_flags(text)
    if not text:
        return Value(State.MISSING, math.nan, flag)
    limit = _LIMIT.match(text)
    if limit:
        state = State.BELOW_LOQ if "<" in limit[1] or limit[1] == "≤" else State.ABOVE_RANGE
        return _number(limit[2].strip(), mark, state, flag, cell)
    return _number(text, mark, State.MEASURED, flag, cell)


def _take_flags(text: str) -> tuple[str, str]:
    flags = []
    lead = _LEADING_FLAGS.match(text)
    if lead:
        flags.append(lead[0].strip())
        text = text[lead.end() :]
    tail = _FLAGS.search(text)
    if tail and tail.start() >= 0 and tail[0].strip():
        flags.append(tail[0].strip())
        text = text[: tail.start()]
    return text.strip(), " ".join(flags)


def _number(text: str, mark: Mark, state: State, flag: str, cell: str) -> Value:
    if not _NUMBER.match(text):
        return Value(
            State.REFUSED,
            math.nan,
            flag,
            f"“{cell.strip()}” is not a number",
            "correct the cell or leave it blank",
        )
    plain = _plain(text, mark)
    if plain is None:
        other = "comma" if mark is Mark.POINT else "point"
        return Value(
            State.REFUSED,
            math.nan,
            flag,
            f"“{cell.strip()}” does not fit the file's decimal {'point' if mark is Mark.POINT else 'comma'}",
            f"write all numbers with one decimal mark (this one looks like a decimal {other})",
        )
    number = float(plain)
    if not math.isfinite(number):
        return Value(
            State.REFUSED, math.nan, flag, f"“{cell.strip()}” is too large for a number", "correct the cell"
        )
    if number <= 0:
        what = "a negative value" if number < 0 else "zero"
        return Value(
            State.REFUSED,
            math.nan,
            flag,
            f"{what} is not a concentration",
            "write the limit of quantification (<0.5), ND, or leave the cell blank",
        )
    return Value(state, number, flag)


def _plain(text: str, mark: Mark) -> str | None:
    """The number in Python's spelling; None where its marks contradict the file's."""
    thousands = "," if mark is Mark.POINT else "."
    text = re.sub(r"[ '’](?=\d{3}(?:\D|\Z))", "", text)
    if re.search(r"[ '’]", text):
        return None
    whole, _, exponent = re.sub("E", "e", text).partition("e")
    body, _, fraction = whole.partition(mark.value)
    if thousands in fraction or mark.value in fraction:
        return None
    if thousands in body:
        groups = body.lstrip("+-").split(thousands)
        if not (1 <= len(groups[0]) <= 3 and all(len(g) == 3 for g in groups[1:])):
            return None
        body = body.replace(thousands, "")
    return (body or "0") + "." + (fraction or "0") + (f"e{exponent}" if exponent else "")
