"""The textbook's red-cell table as a file, through the command line, to the printed ΔG′ in steps.csv."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import pytest

from panelview.command import DONE, main

DATA = json.loads((Path(__file__).parent / "data" / "worked_examples.json").read_text(encoding="utf-8"))

#: ΔG′ printed with the table's own constants, kJ/mol, and the free NAD⁺/NADH each was made with.
PRINTED = [case for case in DATA if case["kind"] == "step" and case["printed"] is not None]

#: The table as a laboratory would type it, mmol/L (Minakami and Yoshikawa 1965, as in Garrett and Grisham).
WIDE = """\
specimen,matrix,Glucose (mmol/L),G6P (mmol/L),F6P (mmol/L),FBP (mmol/L),DHAP (mmol/L),GAP (mmol/L),"1,3-BPG (mmol/L)",\
3PG (mmol/L),2PG (mmol/L),PEP (mmol/L),Pyruvate (mmol/L),Lactate (mmol/L),ATP (mmol/L),ADP (mmol/L),Pi (mmol/L)
RBC,erythrocyte,5.0,0.083,0.014,0.031,0.14,0.019,0.001,0.12,0.030,0.023,0.051,2.9,1.85,0.14,1.0
"""


def long_form(scale: float, unit: str) -> str:
    """The same table, one row a result, in another unit."""
    head, row = csv.reader(WIDE.splitlines())
    lines = ["specimen;matrix;analyte;value;unit"]
    for name, cell in zip(head[2:], row[2:], strict=True):
        number = f"{float(cell) * scale:.10g}".replace(".", ",")
        lines.append(f"RBC;erythrocyte;{name.removesuffix(' (mmol/L)')};{number};{unit}")
    return "\n".join(lines) + "\n"


@pytest.fixture(
    scope="module",
    params=[
        pytest.param(WIDE, id="wide, mmol/L"),
        pytest.param(long_form(1000, "µmol/L"), id="long, µmol/L, decimal comma"),
        pytest.param(long_form(0.001, "mol/L"), id="long, mol/L, decimal comma"),
    ],
)
def review(request, tmp_path_factory):
    """Runs the review with the table's constants at one free ratio: step id → row of steps.csv."""
    folder = tmp_path_factory.mktemp("table")
    panel = folder / "table.csv"
    panel.write_text(request.param, encoding="utf-8")
    constants = folder / "constants.csv"
    rows = {case["step"]: case["delta_g0_prime"] for case in PRINTED}
    lines = [f"{step},{g0},Garrett and Grisham" for step, g0 in rows.items()]
    constants.write_text("step,delta_g0_prime_kj_per_mol,source\n" + "\n".join(lines) + "\n", encoding="utf-8")

    def run(ratio: float) -> dict[str, dict[str, str]]:
        out = folder / f"out{ratio:g}"
        if not out.exists():
            words = ["review", str(panel), "--out", str(out), "--constants", str(constants)]
            words += ["--free-ratio", f"nad_cytosol={ratio:g}", "--no-pdf", "--quiet"]
            assert main(words) == DONE
        with (out / "steps.csv").open(encoding="utf-8-sig", newline="") as stream:
            return {row["step"]: row for row in csv.DictReader(stream)}

    return run


@pytest.mark.parametrize("case", PRINTED, ids=lambda case: f"{case['id']} {case['step']}")
def test_steps_csv_holds_the_printed_energy(review, case):
    """Within 0.1 kJ/mol of what the textbook prints; lactate dehydrogenase is printed for NAD⁺/NADH = 1."""
    row = review(case["free_ratios"].get("nad_cytosol", 1000.0))[case["step"]]
    assert float(row["delta_g_kj_per_mol"]) == pytest.approx(case["printed"], abs=0.1)
    assert float(row["delta_g_kj_per_mol"]) == pytest.approx(case["recomputed"], abs=0.05)
    assert row["assessability"] == "assessed"
    assert float(row["delta_g0_prime_kj_per_mol"]) == case["delta_g0_prime"]
    assert "Garrett and Grisham" in row["constant_source"]


@pytest.mark.parametrize("step", ["triose_phosphate_isomerase", "phosphoglycerate_mutase", "enolase"])
def test_healthy_steps_above_zero_are_not_called_reversed(review, step):
    """A05, A08, A09: +2.4, +0.8 and +1.1 kJ/mol in the printed table of a healthy cell."""
    row = review(1000.0)[step]
    assert float(row["delta_g_kj_per_mol"]) > 0
    assert row["direction"] == "undecided"
    assert row["distance"] == "near"


def test_lactate_dehydrogenase_with_the_ratio_of_its_neighbour_is_near_equilibrium(review):
    """A12: with the NAD⁺/NADH 1000 that GAPDH was printed with it lies at +3.0, not at −14.8 kJ/mol."""
    row = review(1000.0)["lactate_dehydrogenase"]
    assert float(row["delta_g_kj_per_mol"]) == pytest.approx(3.03, abs=0.05)
    assert row["distance"] == "near"


def test_steps_csv_says_which_steps_rest_on_the_free_ratio(review):
    rows = review(1000.0)
    assert rows["gapdh"]["inferred"] == "true"
    assert rows["hexokinase"]["inferred"] == "false"
