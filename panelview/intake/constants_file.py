"""Small CSV files that go with a review: constants of the reviewer's own, conditions to evaluate at."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from pathlib import Path

from panelview.catalogue.constants import OwnConstant
from panelview.catalogue.load import Catalogue
from panelview.intake.tabular import read_file, read_grid, refused, uneven
from panelview.thermo.conditions import FIELDS, LIMITS, OutOfModelRange
from panelview.thermo.physical import ZERO_CELSIUS

#: Column of an `--at` file for each condition.
AT_COLUMNS = {
    "ph": "ph",
    "temperature": "temperature_c",
    "ionic_strength": "ionic_strength_mol_per_l",
    "pmg": "pmg",
}

_NUMBER = re.compile(r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]{1,4})?\Z", re.ASCII)


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
        raise refused(
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
            raise refused(
                name,
                line,
                "step",
                f"“{step}” is no catalogued step",
                "use an id that panelview constants prints",
            )
        if step in own:
            raise refused(name, line, "step", f"{step} is given twice", "keep one row a step")
        column = "delta_g0_prime_kj_per_mol" if has_energy else "k_prime"
        value = _number(name, line, column, row[column])
        if has_k and value <= 0:
            raise refused(name, line, column, f"a K′ must be above zero, not {value:g}", "correct the value")
        shipped = catalogue.constants.anchors[steps[step]].sd
        sd = shipped if math.isfinite(shipped) else 0.0
        if row.get("sd_kj_per_mol", "").strip():
            sd = _number(name, line, "sd_kj_per_mol", row["sd_kj_per_mol"])
            if sd < 0:
                raise refused(name, line, "sd_kj_per_mol", "an uncertainty cannot be negative", "correct the value")
        own[step] = OwnConstant(
            step_id=step,
            delta_g0_prime=value if has_energy else None,
            ln_k_prime=math.log(value) if has_k else None,
            sd=sd,
            source=_source(row, name, stated=math.isfinite(shipped)),
        )
    return own


def _source(row: dict[str, str], name: str, *, stated: bool) -> str:
    """The reviewer's source; says so where neither they nor the program know an uncertainty (it counts as 0)."""
    source = row.get("source", "").strip() or name
    return source if stated or row.get("sd_kj_per_mol", "").strip() else f"{source}; no uncertainty stated"


def read_at(path: Path) -> list[AtRow]:
    """Rows of an `--at` file, in order. Raises InputRefused."""
    name = path.name
    header, rows = _table(path)
    if "step" not in header and "reaction" not in header:
        raise refused(name, 1, "", "the column step (or reaction) is missing", "name a step or a reaction in each row")
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
            raise refused(name, line, "step", "neither a step nor a reaction is named", "fill in one of the two")
        made.append(AtRow(line, step, reaction, conditions))
    return made


def _check(name: str, line: int, field: str, value: float) -> None:
    lower, upper = LIMITS[field]
    if not lower <= value <= upper:
        problem = OutOfModelRange(field, value, lower, upper)
        raise refused(name, line, AT_COLUMNS[field], str(problem), "give a value inside it")


def _table(path: Path) -> tuple[list[str], list[tuple[int, dict[str, str]]]]:
    """Heading (lower case, blanks to underscores) and (line, row) pairs of a file. Raises InputRefused."""
    name, data = path.name, read_file(path)
    if not data.strip():
        raise refused(name, 0, "", "the file is empty", "give a heading and at least one row")
    grid = read_grid(name, data)
    if grid.above:
        raise uneven(name, grid.lines[0], len(grid.rows[0]), len(grid.above[0][1]))
    header = [h.strip().lower().replace(" ", "_") for h in grid.rows[0]]
    for k, h in enumerate(header):
        if h and h in header[:k]:
            raise refused(name, grid.lines[0], h, f"two columns are headed “{h}”", "rename or remove one of them")
    rows = zip(grid.lines[1:], grid.rows[1:], strict=True)
    return header, [(line, dict(zip(header, cells, strict=True))) for line, cells in rows]


def _number(name: str, line: int, column: str, text: str) -> float:
    plain = text.strip().replace("−", "-")
    value = float(plain) if _NUMBER.match(plain) else math.nan
    if not math.isfinite(value):
        shown = text.strip()[:40]
        raise refused(name, line, column, f"“{shown}” is not a number", "write it with a decimal point")
    return value
