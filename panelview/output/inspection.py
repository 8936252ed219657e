"""What `panelview inspect` prints: what was read, matched, converted, assumed and refused."""

from __future__ import annotations

import csv
import json
from typing import Any, TextIO

from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Panel
from panelview.intake.summary import INTAKE_COLUMNS, describe, intake_rows
from panelview.output.tables import cell


def print_inspection(panel: Panel, catalogue: Catalogue, how: str, to: TextIO) -> None:
    """how: "table" (sections for a reader), "csv" (one row a value) or "json" (all of it)."""
    if how == "csv":
        writer = csv.writer(to, lineterminator="\n")
        writer.writerow(INTAKE_COLUMNS)
        for row in intake_rows(panel):
            writer.writerow([cell(value) for value in row])
    elif how == "json":
        json.dump(describe(panel, catalogue), to, ensure_ascii=False, indent=1)
        to.write("\n")
    else:
        _print_sections(describe(panel, catalogue), to)


def _print_sections(told: dict[str, Any], to: TextIO) -> None:
    for file in told["files"]:
        print(f"{file['name']}: {file['bytes']:,} bytes, SHA-256 {file['sha256']}", file=to)
    print(f"Read as: {told['layout']}\n", file=to)
    print(f"Specimens ({len(told['specimens'])})", file=to)
    for s in told["specimens"]:
        facts = [s["matrix_name"] or "matrix not stated", s["group"], s["collected"], f"{s['values']} values"]
        print(f"  {s['specimen']}  {', '.join(f for f in facts if f)}", file=to)
    for code in told["refused_specimens"]:
        print(f"  {code}  left out", file=to)
    print(f"\nAnalytes ({len(told['analytes'])})", file=to)
    for a in told["analytes"]:
        found = a["analyte"] or "not matched"
        offered = f" (candidates: {', '.join(a['candidates'])})" if a["candidates"] else ""
        print(f"  {a['as_written']} → {found}, by {a['matched_by']}{offered}", file=to)
    print("\nUnits", file=to)
    for u in told["units"]:
        print(
            f"  {u['unit']} → mol/L by the basis “{u['basis'].replace('_', ' ')}”, {u['values']} values",
            file=to,
        )
    states = ", ".join(f"{n} {state.replace('_', ' ')}" for state, n in told["states"].items())
    print(f"\nValues: {states}", file=to)
    for b in told["below_loq"]:
        print(
            f"  below LOQ: {b['specimen']} {b['analyte']} {b['as_written']} (row {b['row']}, {b['column']})",
            file=to,
        )
    for title, problems in (("Assumed or worth knowing", told["assumed"]), ("Refused", told["refused"])):
        print(f"\n{title} ({len(problems)})", file=to)
        for p in problems:
            print(f"  {p['file']}:{p['row'] or ''}:{p['column']}: {p['what']}; {p['remedy']}", file=to)
