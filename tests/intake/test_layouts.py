"""Long, wide and transposed tables, and the same numbers from each."""

from __future__ import annotations

from pathlib import Path

import pytest
from panel_texts import LONG, by_name, problems, read, refusal, seen

from panelview.intake.panel import State
from panelview.intake.problems import Severity
from panelview.intake.read import read_panels

DATA = Path(__file__).parent / "data"

#: The invented panel that all files in data/ hold.
EXPECTED = {
    ("DEMO-01", "lactate"): ("measured", 1180e-6),
    ("DEMO-01", "pyruvate"): ("measured", 64.2e-6),
    ("DEMO-01", "hydroxybutyrate_3"): ("measured", 412e-6),
    ("DEMO-01", "acetoacetate"): ("measured", 151e-6),
    ("DEMO-01", "glucose"): ("measured", 4.9e-3),
    ("DEMO-01", "alanine"): ("measured", 288e-6),
    ("DEMO-02", "lactate"): ("measured", 2310e-6),
    ("DEMO-02", "pyruvate"): ("measured", 118e-6),
    ("DEMO-02", "hydroxybutyrate_3"): ("below_loq", 10e-6),
    ("DEMO-02", "acetoacetate"): ("below_loq", 5e-6),
    ("DEMO-02", "glucose"): ("measured", 7.4e-3),
    ("DEMO-02", "alanine"): ("measured", 455e-6),
    ("DEMO-03", "lactate"): ("measured", 1640e-6),
    ("DEMO-03", "pyruvate"): ("missing", -1.0),
    ("DEMO-03", "hydroxybutyrate_3"): ("measured", 38.5e-6),
    ("DEMO-03", "acetoacetate"): ("measured", 21.0e-6),
    ("DEMO-03", "glucose"): ("above_range", 30e-3),
    ("DEMO-03", "alanine"): ("measured", 371e-6),
}
FILES = ("long.csv", "wide_units_row.csv", "wide_excel_de.csv", "wide_analytes_in_rows.tsv")


@pytest.mark.parametrize("file", FILES)
def test_all_layouts_give_one_and_the_same_table(catalogue, file):
    panel = read_panels([DATA / file], catalogue)
    found = by_name(panel)
    assert {k: s for k, (s, _) in found.items()} == {k: s for k, (s, _) in EXPECTED.items()}
    for key, (_, mol_per_l) in EXPECTED.items():
        assert found[key][1] == pytest.approx(mol_per_l, rel=1e-12), key
    assert not problems(panel, Severity.VALUE)
    assert not problems(panel, Severity.SPECIMEN)


@pytest.mark.parametrize(
    ("file", "layout"),
    [
        ("long.csv", "long, comma-separated, UTF-8, decimal point"),
        ("wide_units_row.csv", "wide, one row a specimen, comma-separated, UTF-8, decimal point"),
        ("wide_excel_de.csv", "wide, one row a specimen, semicolon-separated, UTF-8, decimal comma"),
        ("wide_analytes_in_rows.tsv", "analytes in rows, tab-separated, UTF-8, decimal point"),
    ],
)
def test_the_layout_is_named(catalogue, file, layout):
    assert read_panels([DATA / file], catalogue).layout == layout


def test_metadata_come_along(catalogue):
    long = read_panels([DATA / "long.csv"], catalogue).specimens[1]
    assert (long.code, long.participant, long.matrix) == ("DEMO-02", "P02", "plasma")
    assert long.collected == "2026-03-04T10:40:00+01:00"
    german = read_panels([DATA / "wide_excel_de.csv"], catalogue).specimens
    assert [s.group for s in german] == ["fasting", "fed", "fed"]


class TestLong:
    def test_every_row_is_a_reading_with_its_line_and_column(self, catalogue):
        panel = read(catalogue, "Sample_ID,Metabolite,Result,Unit\nA,lactate,1,mM\n\nA,foo,,mM\nB,lactate,x,mM\n")
        assert [(r.state, r.row, r.column, r.value) for r in seen(panel)] == [
            (State.MEASURED, 2, "Result", "1"),
            (State.MISSING, 4, "Result", ""),
            (State.REFUSED, 5, "Result", "x"),
        ]

    def test_the_unit_may_stand_in_the_heading_of_the_values(self, catalogue):
        (reading,) = seen(read(catalogue, "specimen,analyte,concentration (mM)\nA,lactate,1.5\n"))
        assert reading.mol_per_l == pytest.approx(1.5e-3)

    def test_a_column_that_nobody_knows_is_named(self, catalogue):
        panel = read(catalogue, "specimen,matrix,analyte,value,unit,shoe size,method\nA,plasma,lactate,1,mM,42,LC\n")
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column) == (Severity.NOTE, 1, "shoe size")

    def test_the_columns_may_come_in_any_order(self, catalogue):
        shuffled = read(catalogue, "unit,value,matrix,specimen,analyte\nmM,1,plasma,A,lactate\n")
        assert by_name(shuffled) == by_name(read(catalogue, LONG + "A,plasma,lactate,1,mM\n"))

    @pytest.mark.parametrize(
        ("comparator", "value", "state", "number"),
        [
            ("<", "10", State.BELOW_LOQ, 10e-6),
            ("<=", "10", State.BELOW_LOQ, 10e-6),
            (">", "10", State.ABOVE_RANGE, 10e-6),
            ("=", "10", State.MEASURED, 10e-6),
            ("", "10", State.MEASURED, 10e-6),
            ("<", "<10", State.BELOW_LOQ, 10e-6),
            ("<", "", State.MISSING, None),
            ("<", ">10", State.REFUSED, None),
            ("~", "10", State.REFUSED, None),
        ],
    )
    def test_a_comparator_column(self, catalogue, comparator, value, state, number):
        text = f"specimen,analyte,comparator,value,unit\nA,lactate,{comparator},{value},umol/L\n"
        (reading,) = seen(read(catalogue, text))
        assert reading.state is state
        assert reading.value == value
        if number:
            assert reading.mol_per_l == pytest.approx(number)

    @pytest.mark.parametrize(
        ("status", "value", "state", "number"),
        [
            ("below_loq", "10", State.BELOW_LOQ, 10e-6),
            ("Below LOQ", "10", State.BELOW_LOQ, 10e-6),
            ("<LOQ", "10", State.BELOW_LOQ, 10e-6),
            ("below_loq", "0", State.BELOW_LOQ, None),
            ("below_loq", "", State.BELOW_LOQ, None),
            ("above_range", "10", State.ABOVE_RANGE, 10e-6),
            ("ok", "10", State.MEASURED, 10e-6),
            ("final", "10", State.MEASURED, 10e-6),
            ("missing", "", State.MISSING, None),
            ("missing", "10", State.REFUSED, None),
            ("below_loq", ">10", State.REFUSED, None),
            ("below_loq", "lots", State.REFUSED, None),
            ("ok", "0", State.REFUSED, None),
        ],
    )
    def test_a_status_column(self, catalogue, status, value, state, number):
        (reading,) = seen(read(catalogue, f"specimen,analyte,value,unit,status\nA,lactate,{value},umol/L,{status}\n"))
        assert reading.state is state
        if number:
            assert reading.mol_per_l == pytest.approx(number)
        else:
            assert reading.mol_per_l != reading.mol_per_l

    def test_flags_of_column_and_cell_are_kept_together(self, catalogue):
        (reading,) = seen(read(catalogue, "specimen,analyte,value,unit,flag\nA,lactate,5.1 H,mM,haemolysed\n"))
        assert reading.flag == "haemolysed H"
        assert reading.state is State.MEASURED

    def test_the_value_of_a_part_of_the_cell_is_not_taken_for_the_whole(self, catalogue):
        text = "specimen,matrix,analyte,value,unit,compartment\n"
        rows = "A,liver,malate,1,umol/g ww,mitochondria\nA,liver,citrate,1,umol/g ww,cytosol\n"
        first, second = seen(read(catalogue, text + rows))
        assert first.state is State.REFUSED
        assert "mitochondria" in first.note
        assert second.state is State.MEASURED


class TestWide:
    @pytest.mark.parametrize("first", ["#unit", "unit", "Units", "#Unit", "Einheit", ""])
    def test_a_row_of_units(self, catalogue, first):
        (reading,) = seen(read(catalogue, f"specimen,lactate\n{first},umol/L\nA,1500\n"))
        assert reading.mol_per_l == pytest.approx(1.5e-3)
        assert reading.row == 3

    def test_rows_of_limits_and_of_cv(self, catalogue):
        text = "specimen,lactate,pyruvate\n#unit,mM,uM\n#LLOQ,0.5,10\n#CV%,3,5\nA,ND,8\nB,2,60\n"
        a_lac, a_pyr, b_lac, b_pyr = seen(read(catalogue, text))
        assert (a_lac.state, a_lac.mol_per_l) == (State.BELOW_LOQ, 0.5e-3)
        assert (a_pyr.state, a_pyr.mol_per_l) == (State.BELOW_LOQ, 10e-6)
        assert "reported under the limit" in a_pyr.note
        assert b_lac.sd_ln == pytest.approx(0.03, rel=1e-3)
        assert b_pyr.sd_ln == pytest.approx(0.05, rel=2e-3)

    def test_heading_and_units_row_that_contradict_each_other_refuse_the_column(self, catalogue):
        panel = read(catalogue, "specimen,lactate (mmol/L)\n#unit,umol/L\nA,1.5\nB,2\n")
        assert {r.state for r in seen(panel)} == {State.REFUSED}
        (problem,) = problems(panel, Severity.VALUE)
        assert (problem.row, problem.column) == (3, "lactate (mmol/L)")
        assert "mmol/L" in problem.what
        assert "umol/L" in problem.what

    def test_heading_and_units_row_that_agree_in_other_words_do_not(self, catalogue):
        (reading,) = seen(read(catalogue, "specimen,lactate (µM)\n#unit,nmol/mL\nA,1500\n"))
        assert reading.mol_per_l == pytest.approx(1.5e-3)

    def test_a_column_without_heading_keeps_its_values_and_is_told_by_number(self, catalogue):
        panel = read(catalogue, "specimen,matrix,lactate (mM),\nA,plasma,1,7\n")
        assert [(r.state, r.column) for r in seen(panel)] == [(State.MEASURED, "lactate (mM)"), (State.UNMATCHED, "4")]
        (problem,) = problems(panel)
        assert (problem.severity, problem.column) == (Severity.VALUE, "4")

    def test_an_empty_column_without_heading_is_nothing(self, catalogue):
        assert not problems(read(catalogue, "specimen,matrix,lactate (mM),\nA,plasma,1,\n"))

    def test_a_column_of_the_long_layout_is_named_as_not_read(self, catalogue):
        panel = read(catalogue, "specimen,matrix,lactate (mM),status\nA,plasma,1,ok\n")
        (problem,) = problems(panel)
        assert (problem.severity, problem.column) == (Severity.NOTE, "status")

    def test_a_table_without_a_heading_for_the_specimens_is_read_if_its_first_column_can_be_nothing_else(
        self, catalogue
    ):
        panel = read(catalogue, ",lactate (mM),pyruvate (uM)\nA,1,50\nB,2,60\n", matrix="plasma")
        assert [s.code for s in panel.specimens] == ["A", "B"]
        assert "headed specimen" in problems(panel)[0].what

    def test_participants_stand_in_for_specimens_where_each_has_one(self, catalogue):
        panel = read(catalogue, "subject,age,lactate (mM)\nP1,30,1\nP2,40,2\n", matrix="plasma")
        assert [(s.code, s.participant) for s in panel.specimens] == [("P1", "P1"), ("P2", "P2")]

    def test_participants_with_several_rows_do_not(self, catalogue):
        assert "no column names the specimens" in refusal(catalogue, "subject,lactate (mM)\nP1,1\nP1,2\n").what

    def test_a_date_and_a_time_make_one_moment(self, catalogue):
        panel = read(catalogue, "specimen,date,time,lactate (mM)\nA,2026-03-04,08:15,1\n", matrix="plasma")
        assert panel.specimens[0].collected == "2026-03-04 08:15"
        assert len(panel.readings) == 1


class TestAnalytesInRows:
    def test_specimens_are_columns(self, catalogue):
        text = "Compound,Unit,A,B\nlactate,mM,1,<2\npyruvate,uM,50,\n"
        panel = read(catalogue, text, matrix="plasma")
        assert [(r.state, r.row, r.column) for r in seen(panel)] == [
            (State.MEASURED, 2, "A"),
            (State.BELOW_LOQ, 2, "B"),
            (State.MEASURED, 3, "A"),
            (State.MISSING, 3, "B"),
        ]

    def test_it_is_told_by_the_names_where_the_heading_says_nothing(self, catalogue):
        panel = read(catalogue, ",A,B\nlactate (mM),1,2\npyruvate (uM),50,60\n", matrix="plasma")
        assert [s.code for s in panel.specimens] == ["A", "B"]
        assert by_name(panel)["B", "pyruvate"] == ("measured", pytest.approx(60e-6))

    def test_a_column_of_words_is_no_specimen(self, catalogue):
        panel = read(catalogue, "Compound,Class of it,Unit,A\nlactate,acid,mM,1\n", matrix="plasma")
        assert [s.code for s in panel.specimens] == ["A"]
        assert "Class of it" in {p.column for p in problems(panel)}

    def test_a_specimen_without_any_value_is_kept(self, catalogue):
        panel = read(catalogue, "Compound,Unit,A,B\nlactate,mM,1,NA\n", matrix="plasma")
        assert [s.code for s in panel.specimens] == ["A", "B"]

    def test_rows_may_say_what_the_specimens_are(self, catalogue):
        text = "Compound;Unit;S1;S2\nGroup;;control;case\nMatrix;;RBC;serum\npH;;7,2;\nLac;mM;1,2;1,4\n"
        panel = read(catalogue, text)
        assert [(s.group, s.matrix, s.ph) for s in panel.specimens] == [
            ("control", "erythrocyte", 7.2),
            ("case", "plasma", None),
        ]
        assert [(r.value, r.row) for r in seen(panel)] == [("1,2", 5), ("1,4", 5)]

    def test_what_such_a_row_says_is_refused_by_its_place(self, catalogue):
        panel = read(catalogue, "Compound,Unit,S1,S2\nMatrix,,bone,plasma\nLac,mM,1.2,1.4\n")
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column, problem.specimen) == (
            Severity.SPECIMEN,
            2,
            "Matrix",
            "S1",
        )

    def test_a_table_of_nothing_else_is_refused(self, catalogue):
        assert refusal(catalogue, "Compound,Unit,S1\nMatrix,,plasma\nGroup,,a\n").row == 1

    def test_limits_and_cv_in_columns(self, catalogue):
        (reading,) = seen(read(catalogue, "Compound,Unit,LLOQ,CV %,A\nlactate,mM,0.5,3,ND\n", matrix="plasma"))
        assert (reading.state, reading.mol_per_l) == (State.BELOW_LOQ, 0.5e-3)
        assert not reading.sd_is_default


class TestTwoColumnsForOneField:
    def test_the_one_with_the_plain_heading_is_read_and_the_other_named(self, catalogue):
        panel = read(catalogue, "id,specimen,matrix,lactate (mM)\n17,A,plasma,1\n")
        assert [s.code for s in panel.specimens] == ["A"]
        (problem,) = problems(panel)
        assert (problem.severity, problem.column) == (Severity.NOTE, "id")

    def test_of_two_other_headings_none_is_picked(self, catalogue):
        problem = refusal(catalogue, "id,sample,lactate (mM)\n17,A,1\n")
        assert "“id” and “sample” both look like the specimen" in problem.what
        assert problem.remedy == "head the one to be read with specimen, or remove the others"
