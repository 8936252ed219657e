"""A review as one JSON document: everything used and found, with versions and hashes, in a stable order."""

from __future__ import annotations

import json
import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from datetime import datetime
from pathlib import Path
from typing import Any

from panelview.assess import calls
from panelview.assess.review import Review
from panelview.output.rows import Row
from panelview.output.tables import TABLES, table_rows
from panelview.output.text import CAUTION, CAUTIONS
from panelview.thermo.conditions import FIELDS
from panelview.thermo.physical import ZERO_CELSIUS

#: Tells our documents from others; the version rises when a key changes its meaning.
FORMAT = "panelview review"
FORMAT_VERSION = 1

#: Key of each table in the document.
_KEYS = {"steps.csv": "steps", "drivers.csv": "drivers", "state.csv": "state", "intake.csv": "readings"}

_CONDITION_NAMES = {
    "ph": "ph",
    "temperature": "temperature_c",
    "ionic_strength": "ionic_strength_mol_per_l",
    "pmg": "pmg",
}


def write_document(review: Review, path: Path, *, when: datetime | None, files: Sequence[str]) -> None:
    """Write review.json; `files` are the names written beside it. Raises OSError."""
    with path.open("w", encoding="utf-8", newline="\n") as stream:
        stream.writelines(chunks(review, when=when, files=files))


def chunks(review: Review, *, when: datetime | None, files: Sequence[str]) -> Iterator[str]:
    """The document in pieces, one key or one row a line, so that it is never in memory as a whole.

    Numbers that are not known are null; an open side is "inf" or "-inf", as in the tables.
    """
    yield "{\n"
    for key, value in _header(review, when, files).items():
        yield f"{_dump(key)}: {_dump(value)},\n"
    yield from _list("specimens", (_specimen(review, i) for i in range(len(review.specimens))))
    yield from _list("problems", (_problem(p) for p in review.panel.problems))
    for name in TABLES:
        columns, rows = table_rows(review, name)
        yield from _list(_KEYS[name], _objects(columns, rows), last=name == TABLES[-1])
    yield "}\n"


def _list(key: str, items: Iterable[Mapping[str, Any]], *, last: bool = False) -> Iterator[str]:
    yield f"{_dump(key)}: ["
    before = "\n"
    for item in items:
        yield f"{before}{_dump(item)}"
        before = ",\n"
    yield "]\n" if last else "],\n"


def _objects(columns: Sequence[str], rows: Iterable[Row]) -> Iterator[dict[str, Any]]:
    return (dict(zip(columns, row, strict=True)) for row in rows)


def _dump(value: Any) -> str:
    return json.dumps(_known(value), ensure_ascii=False, allow_nan=False)


def _known(value: Any) -> Any:
    """NaN → null, ±inf → text, −0.0 → 0.0; everything else as it is."""
    if isinstance(value, float):
        if math.isfinite(value):
            return value + 0.0
        return None if math.isnan(value) else ("inf" if value > 0 else "-inf")
    if isinstance(value, Mapping):
        return {k: _known(v) for k, v in value.items()}
    if isinstance(value, (list, tuple)):
        return [_known(v) for v in value]
    return value


def _header(review: Review, when: datetime | None, files: Sequence[str]) -> dict[str, Any]:
    constants = review.catalogue.constants
    return {
        "format": FORMAT,
        "format_version": FORMAT_VERSION,
        "files": list(files),
        "caution": CAUTION,
        "cautions": list(CAUTIONS),
        "program": {"name": "panelview", "version": review.program_version},
        "catalogue": {"version": review.catalogue.version, "sha256": review.catalogue.sha256},
        "constants": {
            "version": constants.version,
            "sha256": constants.sha256,
            "own": [
                {
                    "step": step,
                    "delta_g0_prime_kj_per_mol": own.delta_g0_prime,
                    "ln_k_prime": own.ln_k_prime,
                    "sd_kj_per_mol": own.sd,
                    "source": own.source,
                }
                for step, own in sorted(constants.own.items())
            ],
        },
        "written": None if when is None else when.isoformat(),
        "inputs": [{"name": s.name, "size": s.size, "sha256": s.sha256} for s in review.panel.sources],
        "layout": review.panel.layout,
        "refused_specimens": list(review.panel.refused_specimens),
        "matches": [
            {"written": m.written, "analyte": m.analyte, "how": m.how, "candidates": list(m.candidates)}
            for m in review.panel.matches
        ],
        "reference": _reference(review),
        "limits": {
            "direction_level": calls.DIRECTION_LEVEL,
            "near_factor": calls.NEAR_FACTOR,
            "far_factor": calls.FAR_FACTOR,
            "false_discovery_rate": calls.FALSE_DISCOVERY_RATE,
            "shift_floor_kj_per_mol": review.shift_floor,
            "least_controls_for_test": calls.LEAST_CONTROLS_FOR_TEST,
            "least_controls_for_interval": calls.LEAST_CONTROLS_FOR_INTERVAL,
        },
    }


def _reference(review: Review) -> dict[str, Any]:
    used = review.reference
    return {
        "kind": used.kind,
        "label": used.label,
        "count": used.count,
        "specimens": [review.specimens[i].code for i in used.specimens],
    }


def _specimen(review: Review, specimen: int) -> dict[str, Any]:
    facts = review.specimens[specimen]
    return {
        "specimen": facts.code,
        "participant": facts.participant,
        "group": facts.group,
        "matrix": facts.matrix,
        "collected": facts.collected,
        "source": facts.source,
        "row": facts.row,
        "conditions": {_CONDITION_NAMES[f]: _condition(review, specimen, f) for f in FIELDS},
        "pools": [
            {"pool": use.pool, "kind": use.kind, "couple": use.couple.step_id if use.couple else ""}
            for use in review.plans[review.plan_of[specimen]].pools
        ],
        "highlighted": int(review.findings.highlighted[specimen].sum()),
    }


def _condition(review: Review, specimen: int, field: str) -> dict[str, Any]:
    value = float(getattr(review.conditions, field)[specimen])
    if field == "temperature":
        value = round(value - ZERO_CELSIUS, 9)
    return {
        "value": value,
        "sd": float(getattr(review.conditions, f"{field}_sd")[specimen]),
        "origin": review.condition_origin[field][specimen],
    }


def _problem(problem: Any) -> dict[str, Any]:
    return {
        "severity": problem.severity.value,
        "specimen": problem.specimen,
        "file": problem.file,
        "row": problem.row,
        "column": problem.column,
        "what": problem.what,
        "remedy": problem.remedy,
    }
