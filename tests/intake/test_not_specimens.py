"""Quality controls, blanks, statistics and footnotes among the specimens: left out, and told."""

from __future__ import annotations

import pytest
from panel_texts import problems, read, refusal, seen

from panelview.intake.not_specimens import not_a_specimen
from panelview.intake.problems import Severity


@pytest.mark.parametrize(
    ("code", "kind"),
    [
        ("QC", "a quality control"),
        ("QC1", "a quality control"),
        ("qc-02", "a quality control"),
        ("QC low", "a quality control"),
        ("Pooled QC 3", "a quality control"),
        ("quality  control", "a quality control"),
        ("Blank", "a blank"),
        ("BLK_1", "a blank"),
        ("solvent blank 2", "a blank"),
        ("Cal 3", "a calibrator"),
        ("STD-07", "a calibrator"),
        ("Standard", "a calibrator"),
        ("Mean", "a statistic of the others"),
        ("CV%", "a statistic of the others"),
        ("Reference range", "a statistic of the others"),
    ],
)
def test_the_words_of_laboratories(code, kind):
    assert not_a_specimen(code) == kind


@pytest.mark.parametrize(
    "code",
    ["", "A", "P01", "DEMO-01", "control 1", "Q-17", "QCM-2024-1", "Blanka", "blankets", "Calvin", "California-3",
     "standard diet", "STDY-1", "meaning", "P", "control sample 2",
     "SDF-3", "p1", "CV-Joint", "x" * 1000, "QC" + "1" * 50],
)  # fmt: skip
def test_codes_of_specimens(code):
    assert not_a_specimen(code) == ""


WIDE = "Sample,Matrix,Lac (mM)\n{}A,plasma,1\nB,plasma,2\n"


class TestInAFile:
    def test_their_rows_are_left_out_and_told_with_their_place(self, catalogue):
        panel = read(catalogue, WIDE.format("QC1,plasma,1.5\n"))
        assert [s.code for s in panel.specimens] == ["A", "B"]
        assert panel.refused_specimens == ("QC1",)
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column) == (Severity.SPECIMEN, 2, "Sample")
        assert problem.specimen == "QC1"
        assert problem.what == "“QC1” names a quality control, not a specimen, so QC1 is left out (1 value)"
        assert "another word" in problem.remedy

    @pytest.mark.parametrize("column", ["group", "matrix"])
    def test_the_word_may_stand_in_another_column(self, catalogue, column):
        text = f"specimen,{column},lactate (mM)\nA,,1\nS17,QC,1.5\n"
        panel = read(catalogue, text, matrix="plasma")
        assert panel.refused_specimens == ("S17",)
        problem = next(p for p in problems(panel) if p.severity is Severity.SPECIMEN)
        assert (problem.row, problem.column) == (3, column)

    @pytest.mark.parametrize("group", ["Standard", "standard 2", "P", "median", "control"])
    def test_a_group_may_be_called_a_standard(self, catalogue, group):
        panel = read(catalogue, f"specimen,group,lactate (mM)\nA,{group},1\n", matrix="plasma")
        assert panel.specimens[0].group == group

    def test_an_instrument_s_word_for_a_specimen_is_no_matrix(self, catalogue):
        panel = read(catalogue, "specimen,sample type,lactate (mM)\nA,Unknown,1\nB,Blank,1\n")
        assert [(s.code, s.matrix) for s in panel.specimens] == [("A", "")]

    def test_statistics_beside_a_table_with_analytes_in_rows(self, catalogue):
        panel = read(catalogue, "Compound,Unit,A,B,Mean,SD\nLac,mM,1,2,1.5,0.7\n", matrix="plasma")
        assert panel.refused_specimens == ("Mean", "SD")
        assert [p.column for p in problems(panel) if p.severity is Severity.SPECIMEN] == ["Mean", "SD"]

    def test_a_heading_that_is_repeated_is_no_specimen(self, catalogue):
        panel = read(catalogue, WIDE.format("") + "Sample,Matrix,Lac (mM)\nC,plasma,3\n")
        assert [s.code for s in panel.specimens] == ["A", "B", "C"]
        (problem,) = problems(panel)
        assert (problem.row, problem.column) == (4, "Sample")
        assert "names the heading" in problem.what

    def test_a_footnote_is_no_specimen(self, catalogue):
        panel = read(catalogue, WIDE.format("") + "* = haemolysed,,\n")
        assert [s.code for s in panel.specimens] == ["A", "B"]
        (problem,) = problems(panel)
        assert (problem.severity, problem.row) == (Severity.SPECIMEN, 4)
        assert "nothing but “* = haemolysed” stands in this row" in problem.what

    def test_a_specimen_whose_values_are_all_words_is_kept(self, catalogue):
        panel = read(catalogue, WIDE.format("C,,NA\n"))
        assert [s.code for s in panel.specimens] == ["C", "A", "B"]

    def test_a_blank_value_of_a_long_file_is_kept(self, catalogue):
        assert len(seen(read(catalogue, "specimen,analyte,value,unit\nA,lactate,,mM\n", matrix="plasma"))) == 1

    def test_a_file_of_nothing_else_is_refused(self, catalogue):
        assert "no specimen of it can be used" in refusal(catalogue, "specimen,lactate (mM)\nQC,1\nBlank,1\n").what


class TestPersons:
    @pytest.mark.parametrize("heading", ["Age", "Sex", "Date of birth", "Patient", "Surname", "MRN"])
    @pytest.mark.parametrize(
        "layout", ["specimen,{},lactate (mM)\nA,secret,1\n", "specimen,{},analyte,value,unit\nA,secret,Lac,1,mM\n"]
    )
    def test_what_describes_a_person_is_not_kept(self, catalogue, heading, layout):
        panel = read(catalogue, layout.format(heading), matrix="plasma")
        assert "secret" not in repr(panel) + "".join(map(str, panel.readings.value))
        problem = next(p for p in problems(panel) if p.column == heading)
        assert (problem.severity, problem.row) == (Severity.NOTE, 1)
        assert "nothing of it is kept" in problem.what

    @pytest.mark.parametrize("heading", ["Patient ID", "patient_code", "Subject", "participant"])
    def test_a_code_of_a_participant_is(self, catalogue, heading):
        panel = read(catalogue, f"specimen,{heading},lactate (mM)\nA,P1,1\n", matrix="plasma")
        assert panel.specimens[0].participant == "P1"
