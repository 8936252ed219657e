"""What files say of specimens: matrix, conditions, contradictions within and between files."""

from __future__ import annotations

import pytest
from panel_texts import LONG, problems, read, refusal, seen

from panelview.intake.panel import State
from panelview.intake.problems import InputRefused, Severity
from panelview.intake.read import read_panels

HEAD = "specimen,matrix,{},analyte,value,unit\n"


class TestMatrix:
    @pytest.mark.parametrize(
        ("word", "matrix"),
        [
            ("erythrocyte", "erythrocyte"),
            ("RBC", "erythrocyte"),
            ("red cells", "erythrocyte"),
            ("Red blood cells", "erythrocyte"),
            ("erythrocytes", "erythrocyte"),
            ("whole blood", "whole_blood"),
            ("Plasma", "plasma"),
            ("CSF", "csf"),
            ("liquor", "csf"),
            ("muscle", "skeletal_muscle"),
            ("Muscle biopsy", "skeletal_muscle"),
            ("liver biopsy", "liver"),
            ("PBMC", "platelet_or_pbmc"),
            ("cultured cells", "cultured_cells"),
        ],
    )
    def test_usual_words(self, catalogue, word, matrix):
        panel = read(catalogue, LONG + f"A,{word},lactate,1,mmol/L\n")
        assert panel.specimens[0].matrix == matrix
        assert not [p for p in problems(panel) if "read as the matrix" in p.what]

    @pytest.mark.parametrize(("word", "matrix"), [("serum", "plasma"), ("Fibroblasts", "cultured_cells")])
    def test_what_is_only_read_as_a_matrix_is_told_once(self, catalogue, word, matrix):
        panel = read(catalogue, LONG + f"A,{word},lactate,1,mmol/L\nB,{word},lactate,1,mmol/L\n")
        assert {s.matrix for s in panel.specimens} == {matrix}
        (problem,) = [p for p in problems(panel, Severity.NOTE) if "read as" in p.what]
        assert (problem.row, problem.column) == (2, "matrix")

    def test_every_matrix_goes_by_its_id(self, catalogue):
        for matrix in catalogue.matrices:
            assert read(catalogue, LONG + f"A,{matrix},lactate,1,mmol/L\n").specimens[0].matrix == matrix

    def test_an_unknown_word_leaves_its_specimen_out_and_names_what_is_known(self, catalogue):
        panel = read(
            catalogue, LONG + "A,marble,lactate,1,mmol/L\nA,marble,pyruvate,1,mmol/L\nB,plasma,lactate,2,mmol/L\n"
        )
        assert [s.code for s in panel.specimens] == ["B"]
        assert panel.refused_specimens == ("A",)
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column, problem.specimen) == (
            Severity.SPECIMEN,
            2,
            "matrix",
            "A",
        )
        assert "left out (2 values)" in problem.what
        assert all(m in problem.remedy for m in catalogue.matrices)

    def test_an_unstated_matrix_stays_open_and_is_told(self, catalogue):
        panel = read(catalogue, "specimen,lactate (mM)\nA,1\nB,2\n")
        assert {s.matrix for s in panel.specimens} == {""}
        (problem,) = problems(panel)
        assert problem.severity is Severity.NOTE
        assert "matrix of 2 specimens is not stated" in problem.what
        assert "--matrix" in problem.remedy

    def test_the_default_is_an_assumption_that_is_told(self, catalogue):
        panel = read(catalogue, "specimen,lactate (mM)\nA,1\n", matrix="csf")
        assert panel.specimens[0].matrix == "csf"
        (problem,) = problems(panel)
        assert problem.severity is Severity.NOTE
        assert "csf was taken" in problem.what

    def test_the_file_goes_before_the_default(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,lactate,1,mM\nB,,lactate,1,mM\n", matrix="csf")
        assert [s.matrix for s in panel.specimens] == ["plasma", "csf"]
        assert "1 specimen;" in problems(panel)[0].what

    def test_an_unknown_default_is_refused(self, catalogue):
        with pytest.raises(InputRefused, match="marble"):
            read(catalogue, "specimen,lactate (mM)\nA,1\n", matrix="marble")


class TestConditions:
    @pytest.mark.parametrize(
        ("column", "text", "field", "value"),
        [
            ("ph", "7.2", "ph", 7.2),
            ("pH", "7,2", "ph", 7.2),
            ("temperature_c", "25", "temperature", 298.15),
            ("Temperature (°C)", "38.5 °C", "temperature", 311.65),
            ("ionic_strength_mol_per_l", "0.15", "ionic_strength", 0.15),
            ("ionic strength", "0.15 M", "ionic_strength", 0.15),
            ("ionic_strength_mol_per_l", "0", "ionic_strength", 0.0),
            ("temperature_c", "0", "temperature", 273.15),
            ("pmg", "3.1", "pmg", 3.1),
            ("ph", "", "ph", None),
            ("ph", "NA", "ph", None),
        ],
    )
    def test_they_are_read_with_their_units(self, catalogue, column, text, field, value):
        panel = read(catalogue, HEAD.format(column) + f'A,plasma,"{text}",lactate,1,mM\n')
        found = getattr(panel.specimens[0], field)
        assert found == (None if value is None else pytest.approx(value))

    @pytest.mark.parametrize(
        ("column", "text", "words"),
        [
            ("ph", "4.9", "pH 4.9 is outside the model's range (5 to 9)"),
            ("ph", "9.1", "pH 9.1 is outside the model's range (5 to 9)"),
            ("ph", "72", "pH 72 is outside"),
            ("temperature_c", "51", "temperature 51 °C is outside the model's range (0 to 50 °C)"),
            ("temperature_c", "-1", "temperature -1 °C is outside"),
            ("temperature_c", "310.15", "outside the model's range"),
            ("ionic_strength_mol_per_l", "0.36", "ionic strength 0.36 mol/L is outside the model's range"),
            ("pmg", "0.5", "pMg 0.5 is outside"),
            ("ph", "acid", "“acid” is not a number"),
            ("ph", "<7", "“<7” is not a number"),
            ("ph", "7_2", "“7_2” is not a number"),
            ("ph", "inf", "“inf” is not a number"),
        ],
    )
    def test_what_the_model_cannot_hold_leaves_the_specimen_out_by_row_and_column(self, catalogue, column, text, words):
        rows = f"A,plasma,,lactate,1,mM\nB,plasma,{text},lactate,1,mM\n"
        panel = read(catalogue, HEAD.format(column) + rows)
        assert [s.code for s in panel.specimens] == ["A"]
        assert panel.refused_specimens == ("B",)
        (problem,) = problems(panel)
        assert (problem.severity, problem.file, problem.row, problem.column, problem.specimen) == (
            Severity.SPECIMEN,
            "panel.csv",
            3,
            column,
            "B",
        )
        assert words in problem.what
        assert "leave it blank" in problem.remedy


class TestContradictions:
    @pytest.mark.parametrize(
        ("column", "first", "later"),
        [
            ("ph", "7.2", "7.3"),
            ("group", "control", "case"),
            ("participant", "P1", "P2"),
            ("collected", "Monday", "Tuesday"),
        ],
    )
    def test_two_facts_of_one_specimen_leave_it_out(self, catalogue, column, first, later):
        rows = f"A,plasma,{first},lactate,1,mM\nA,plasma,{later},pyruvate,1,mM\nB,plasma,{first},lactate,1,mM\n"
        panel = read(catalogue, HEAD.format(column) + rows)
        assert [s.code for s in panel.specimens] == ["B"]
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column) == (Severity.SPECIMEN, 3, column)
        assert f"“{later}” here and “{first}” in row 2" in problem.what
        assert problem.remedy == "give one value a specimen, or two specimen codes"

    def test_two_matrices(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,lactate,1,mM\nA,csf,pyruvate,1,mM\nB,csf,lactate,1,mM\n")
        assert panel.refused_specimens == ("A",)

    @pytest.mark.parametrize(
        ("column", "first", "later"),
        [
            ("matrix2", "", ""),
            ("ph", "7.20", "7.2"),
            ("ph", "", "7.2"),
            ("group", "Control", "control"),
            ("collected", "2026-03-04", "2026-03-04T08:15"),
        ],
    )
    def test_the_same_in_other_words_is_none(self, catalogue, column, first, later):
        rows = f"A,plasma,{first},lactate,1,mM\nA,plasma,{later},pyruvate,1,mM\n"
        assert not read(catalogue, HEAD.format(column) + rows).refused_specimens

    def test_the_same_matrix_in_other_words_is_none(self, catalogue):
        panel = read(catalogue, LONG + "A,RBC,lactate,1,mM\nA,red cells,pyruvate,1,mM\n")
        assert panel.specimens[0].matrix == "erythrocyte"


class TestNamelessRows:
    def test_a_row_without_a_specimen_is_told_and_counts_as_refused(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,lactate,1,mM\n,plasma,lactate,2,mM\n")
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column) == (Severity.SPECIMEN, 3, "specimen")
        assert problem.remedy == "fill in its code"
        assert panel.refused_specimens == ("(no code, row 3)",)

    def test_a_file_of_nothing_else_is_refused(self, catalogue):
        assert "no specimen of it can be used" in refusal(catalogue, LONG + ",plasma,lactate,2,mM\n").what


class TestSeveralFiles:
    def files(self, tmp_path, **texts: str):
        paths = []
        for name, text in texts.items():
            paths.append(tmp_path / f"{name}.csv")
            paths[-1].write_text(text)
        return paths

    def test_one_code_in_two_files_is_one_specimen(self, catalogue, tmp_path):
        paths = self.files(
            tmp_path,
            one=LONG + "A,plasma,lactate,1,mM\nB,plasma,lactate,2,mM\n",
            two="specimen;pyruvate (µM)\nB;60,5\nC;70\n",
        )
        panel = read_panels(paths, catalogue, matrix="plasma")
        assert [s.code for s in panel.specimens] == ["A", "B", "C"]
        assert [s.name for s in panel.sources] == ["one.csv", "two.csv"]
        assert {int(k) for k in panel.readings.specimen} == {0, 1, 2}
        assert panel.layout.count("decimal comma") == 1

    def test_a_matrix_stated_in_one_file_holds_for_the_specimen_in_the_other(self, catalogue, tmp_path):
        paths = self.files(
            tmp_path, one="specimen,G6P (mmol/L RBC)\nA,0.05\n", two=LONG + "A,erythrocyte,F6P,0.01,mmol/L RBC\n"
        )
        panel = read_panels(paths, catalogue)
        assert panel.specimens[0].matrix == "erythrocyte"
        assert [r.basis for r in seen(panel)] == ["litre_cells", "litre_cells"]

    @pytest.mark.parametrize(
        ("one", "two"),
        [
            ("specimen,matrix", "specimen,matrix"),
            ("specimen,participant", "specimen,participant"),
            ("specimen,ph", "specimen,ph"),
        ],
    )
    def test_contradictions_between_files_leave_the_specimen_out_of_both(self, catalogue, tmp_path, one, two):
        values = {"matrix": ("plasma", "csf"), "participant": ("P1", "P2"), "ph": ("7.1", "7.3")}[one.split(",")[1]]
        paths = self.files(
            tmp_path,
            one=f"{one},lactate (mM)\nA,{values[0]},1\nB,{values[0]},1\n",
            two=f"{two},pyruvate (mM)\nA,{values[1]},1\n",
        )
        panel = read_panels(paths, catalogue)
        assert [s.code for s in panel.specimens] == ["B"]
        assert len(panel.readings) == 1
        assert panel.refused_specimens == ("A",)
        (problem,) = problems(panel, Severity.SPECIMEN)
        assert (problem.file, problem.row) == ("two.csv", 2)
        assert "row 2 of one.csv" in problem.what
        assert "left out (2 values)" in problem.what

    def test_a_value_in_both_files_is_used_from_neither(self, catalogue, tmp_path):
        paths = self.files(
            tmp_path, one=LONG + "A,plasma,lactate,1,mM\nA,plasma,pyruvate,1,mM\n", two=LONG + "A,plasma,Lac,2,mM\n"
        )
        panel = read_panels(paths, catalogue)
        assert [r.state for r in seen(panel)] == [State.REFUSED, State.MEASURED, State.REFUSED]
        (problem,) = problems(panel)
        assert (problem.file, problem.row) == ("two.csv", 2)
        assert "one.csv row 2, two.csv row 2" in problem.what
        assert problem.remedy == "keep it in one of the files"

    def test_the_same_file_twice_is_read_once(self, catalogue, tmp_path):
        paths = self.files(tmp_path, one=LONG + "A,plasma,lactate,1,mM\n", copy=LONG + "A,plasma,lactate,1,mM\n")
        panel = read_panels(paths, catalogue)
        assert [r.state for r in seen(panel)] == [State.MEASURED]
        assert [s.name for s in panel.sources] == ["one.csv"]
        assert "same content as one.csv" in problems(panel)[0].what

    def test_every_file_that_cannot_be_read_is_named(self, catalogue, tmp_path):
        (good,) = self.files(tmp_path, good=LONG + "A,plasma,lactate,1,mM\n")
        (tmp_path / "empty.csv").write_bytes(b"")
        with pytest.raises(InputRefused) as caught:
            read_panels([good, tmp_path / "empty.csv", tmp_path / "gone.csv", tmp_path], catalogue)
        assert [p.file for p in caught.value.problems] == ["empty.csv", "gone.csv", tmp_path.name]
        assert all(p.severity is Severity.FILE for p in caught.value.problems)

    def test_no_file_at_all(self, catalogue):
        with pytest.raises(InputRefused, match="no file"):
            read_panels([], catalogue)
