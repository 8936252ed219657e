"""Small CSV files that go with a review: constants of the reviewer's own, conditions to evaluate at."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from panelview.catalogue.constants import OwnConstant
from panelview.catalogue.load import Catalogue
from panelview.intake.problems import InputRefused, Problem, Severity
from panelview.thermo.conditions import FIELDS, LIMITS, OutOfModelRange
from panelview.thermo.physical import ZERO_CELSIUS

#: Column of an `--at` file for each condition.
AT_COLUMNS = {
    "ph": "ph",
    "temperature": "temperature_c",
    "ionic_strength": "ionic_strength_mol_per_l",
    "pmg": "pmg",
}


@dataclass(frozen=True, slots=True)
class AtRow:
    """One row of a file of conditions: a step id or a reaction, and the conditions stated (else None)."""

    row: int
    step: str
    reaction: str
    conditions: dict[str, float]


def read_own_constants(path: Path, catalogue: Catalogue) -> dict[str, OwnConstant]:
    """Constants by step id from `step, delta_g0_prime_kj_per_mol | k_prime [, sd_kj_per_mol, source]`.

    Where no uncertainty is stated, that of the program's own constant is kept. Raises InputRefused.
    """
    name = path.name
    header, rows = _table(path)
    has_energy, has_k = "delta_g0_prime_kj_per_mol" in header, "k_prime" in header
    if "step" not in header or has_energy == has_k:
        raise _refused(
            name,
            1,
            "",
            "a constants file needs the column step and one of delta_g0_prime_kj_per_mol and k_prime",
            "name the columns so",
        )
    steps = {s.id: k for k, s in enumerate(catalogue.steps)}
    own: dict[str, OwnConstant] = {}
    for line, row in rows:
        step = row["step"].strip()
        if step not in steps:
            raise _refused(
                name,
                line,
                "step",
                f"“{step}” is no catalogued step",
                "use an id that panelview constants prints",
            )
        if step in own:
            raise _refused(name, line, "step", f"{step} is given twice", "keep one row a step")
        column = "delta_g0_prime_kj_per_mol" if has_energy else "k_prime"
        value = _number(name, line, column, row[column])
        if has_k and value <= 0:
            raise _refused(name, line, column, f"a K′ must be above zero, not {value:g}", "correct the value")
        shipped = catalogue.constants.anchors[steps[step]].sd
        sd = shipped if math.isfinite(shipped) else 0.0
        if row.get("sd_kj_per_mol", "").strip():
            sd = _number(name, line, "sd_kj_per_mol", row["sd_kj_per_mol"])
            if sd < 0:
                raise _refused(name, line, "sd_kj_per_mol", "an uncertainty cannot be negative", "correct the value")
        own[step] = OwnConstant(
            step_id=step,
            delta_g0_prime=value if has_energy else None,
            ln_k_prime=math.log(value) if has_k else None,
            sd=sd,
            source=row.get("source", "").strip() or name,
        )
    return own


def read_at(path: Path) -> list[AtRow]:
    """Rows of an `--at` file, in order. Raises InputRefused."""
    name = path.name
    header, rows = _table(path)
    if "step" not in header and "reaction" not in header:
        raise _refused(name, 1, "", "the column step (or reaction) is missing", "name a step or a reaction in each row")
    made = []
    for line, row in rows:
        conditions = {}
        for field in FIELDS:
            text = row.get(AT_COLUMNS[field], "").strip()
            if text:
                value = _number(name, line, AT_COLUMNS[field], text)
                conditions[field] = value + ZERO_CELSIUS if field == "temperature" else value
                _check(name, line, field, conditions[field])
        step, reaction = row.get("step", "").strip(), row.get("reaction", "").strip()
        if not step and not reaction:
            raise _refused(name, line, "step", "neither a step nor a reaction is named", "fill in one of the two")
        made.append(AtRow(line, step, reaction, conditions))
    return made


def _check(name: str, line: int, field: str, value: float) -> None:
    lower, upper = LIMITS[field]
    if not lower <= value <= upper:
        problem = OutOfModelRange(field, value, lower, upper)
        raise _refused(name, line, AT_COLUMNS[field], str(problem), "give a value inside it")


def _table(path: Path) -> tuple[Sequence[str], Iterator[tuple[int, dict[str, str]]]]:
    """Heading (lower case, blanks to underscores) and (line, row) pairs of a comma-separated file."""
    name = path.name
    try:
        text = path.read_bytes().decode("utf-8-sig")
    except OSError as error:
        raise _refused(
            name, 0, "", f"the file cannot be read ({error.strerror})", "check the path and its permissions"
        ) from error
    except UnicodeDecodeError as error:
        raise _refused(name, 0, "", "the file is not UTF-8 text", "save it as CSV in UTF-8") from error
    reader = csv.reader(io.StringIO(text))
    header = [h.strip().lower().replace(" ", "_") for h in next(reader, [])]
    if not any(header):
        raise _refused(name, 0, "", "the file is empty", "give a heading and at least one row")

    def rows() -> Iterator[tuple[int, dict[str, str]]]:
        for cells in reader:
            if not any(c.strip() for c in cells):
                continue
            if len(cells) != len(header):
                raise _refused(
                    name,
                    reader.line_num,
                    "",
                    f"the row has {len(cells)} cells, the heading {len(header)}",
                    "make them equal",
                )
            yield reader.line_num, dict(zip(header, cells, strict=True))

    return header, rows()


def _number(name: str, line: int, column: str, text: str) -> float:
    try:
        value = float(text.strip().replace("−", "-"))
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise _refused(name, line, column, f"“{text.strip()}” is not a number", "write it with a decimal point")
    return value


def _refused(name: str, row: int, column: str, what: str, remedy: str) -> InputRefused:
    return InputRefused((Problem(Severity.FILE, name, row, column, what, remedy),))
