"""What `panelview inspect` prints and intake.csv holds."""

from __future__ import annotations

import json
import math

from panel_texts import LONG, read

from panelview.intake.summary import INTAKE_COLUMNS, describe, intake_rows

TEXT = LONG + (
    "A,RBC,Lac,1.5,mmol/L RBC\nA,RBC,pyruvate,<60,umol/L RBC\nA,RBC,glucose,,mM\nA,RBC,2PG/3PG,60,uM\nA,RBC,foo,1,mM\n"
    "A,RBC,ATP,0,mM\nA,RBC,ADP,>5,mM\nB,marble,Lac,1,mM\n"
)


def test_the_columns_are_those_of_the_contract():
    assert INTAKE_COLUMNS == (
        "specimen",
        "analyte_as_written",
        "analyte",
        "value_as_written",
        "unit_as_written",
        "mol_per_l",
        "sd_ln",
        "state",
        "row",
        "column",
        "note",
    )


def test_there_is_one_row_a_value_in_file_order_with_the_contract_s_words(catalogue):
    rows = list(intake_rows(read(catalogue, TEXT)))
    assert [(r[1], r[3], r[7], r[8]) for r in rows] == [
        ("Lac", "1.5", "measured", 2),
        ("pyruvate", "<60", "below_loq", 3),
        ("glucose", "", "missing", 4),
        ("2PG/3PG", "60", "sum", 5),
        ("foo", "1", "unmatched", 6),
        ("ATP", "0", "refused", 7),
        ("ADP", ">5", "above_range", 8),
    ]
    assert all(len(r) == len(INTAKE_COLUMNS) for r in rows)
    assert rows[0][2] == "lactate"
    assert rows[0][5] == 1.5e-3 / 0.70
    assert "program's default" in rows[0][10]
    assert math.isnan(rows[2][5])


def test_the_description_is_plain_data_that_json_can_hold(catalogue):
    told = describe(read(catalogue, TEXT), catalogue)
    assert json.loads(json.dumps(told, allow_nan=False)) == told


def test_the_description_says_what_was_read_and_what_was_not(catalogue):
    told = describe(read(catalogue, TEXT), catalogue)
    assert told["files"][0]["name"] == "panel.csv"
    assert len(told["files"][0]["sha256"]) == 64
    assert told["layout"] == "long, comma-separated, UTF-8, decimal point"
    (specimen,) = told["specimens"]
    assert (specimen["specimen"], specimen["matrix"], specimen["values"]) == ("A", "erythrocyte", 7)
    assert told["refused_specimens"] == ["B"]
    assert {a["as_written"]: a["matched_by"] for a in told["analytes"]}["2PG/3PG"] == "sum"
    assert told["states"]["below_loq"] == 1
    assert told["below_loq"] == [
        {"specimen": "A", "analyte": "pyruvate", "as_written": "<60 umol/L RBC", "row": 3, "column": "value"}
    ]
    assert {(u["unit"], u["basis"], u["values"]) for u in told["units"]} == {
        ("mmol/L RBC", "litre_cells", 1),
        ("umol/L RBC", "litre_cells", 1),
        ("mM", "litre", 1),
    }
    assert {p["severity"] for p in told["assumed"]} == {"note"}
    assert {p["severity"] for p in told["refused"]} == {"value left out", "specimen left out"}
    assert all(p["what"] and p["remedy"] for p in told["assumed"] + told["refused"])
