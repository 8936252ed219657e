"""Everything that can be wrong with a file: told with file, row, column, what is wrong and a way out."""

from __future__ import annotations

from dataclasses import dataclass

import pytest
from panel_texts import LONG, problems, read, seen

from panelview.intake.panel import State
from panelview.intake.problems import InputRefused, Severity
from panelview.intake.read import read_panels

GOOD = "A,plasma,lactate,1.2,mmol/L\n"


@dataclass(frozen=True)
class Case:
    """A file and what must be told of it."""

    text: str | bytes
    severity: Severity
    row: int
    column: str
    what: str
    way_out: str


WIDE = "specimen,matrix,lactate (mmol/L),pyruvate (µmol/L)\n"
CASES = {
    "empty file": Case(b"", Severity.FILE, 0, "", "the file is empty", "export the panel again"),
    "no header": Case("A,1,2\nB,3,4\n", Severity.FILE, 1, "", "no column names the specimens", "head the column"),
    "header only": Case(LONG, Severity.FILE, 1, "", "a heading and no rows", "export the panel again"),
    "one column": Case("specimen\nA\n", Severity.FILE, 1, "", "a single column", "one column a field"),
    "ragged row": Case(LONG + GOOD + "B,plasma\n", Severity.FILE, 3, "", "this line has 2 cells", "make them equal"),
    "no column of values": Case(
        "specimen,analyte,amt\nA,x,1\n", Severity.FILE, 1, "", "and none of values", "head the column of values"
    ),
    "no analyte column": Case(
        "specimen,matrix\nA,plasma\n", Severity.FILE, 1, "", "no column holds an analyte", "add one"
    ),
    "two columns alike": Case(
        "specimen,Lac,lac\nA,1,2\n", Severity.FILE, 1, "lac", "two columns are headed “lac”", "rename or remove"
    ),
    "unknown column of a long file": Case(
        "specimen,matrix,analyte,value,unit,shoe size\nA,plasma,lactate,1.2,mM,42\n",
        Severity.NOTE,
        1,
        "shoe size",
        "this column is not read",
        "rename it",
    ),
    "unknown column of a wide file": Case(
        "specimen,matrix,lactate (mM),shoe size\nA,plasma,1,42\n",
        Severity.VALUE,
        2,
        "shoe size",
        "the analyte “shoe size” is not known",
        "rename it",
    ),
    "duplicate specimen and analyte": Case(
        LONG + GOOD + "A,plasma,lactate,1.9,mmol/L\n",
        Severity.VALUE,
        3,
        "value",
        "reported more than once (rows 2, 3)",
        "keep one value",
    ),
    "negative": Case(
        LONG + "A,plasma,lactate,-5,mM\n", Severity.VALUE, 2, "value", "a negative value", "leave the cell blank"
    ),
    "zero": Case(LONG + "A,plasma,lactate,0,mM\n", Severity.VALUE, 2, "value", "zero is not", "write the limit"),
    "not a number": Case(
        LONG + "A,plasma,lactate,lots,mM\n", Severity.VALUE, 2, "value", "“lots” is not a number", "correct the cell"
    ),
    "not finite": Case(
        LONG + "A,plasma,lactate,inf,mM\n", Severity.VALUE, 2, "value", "“inf” is not a number", "correct the cell"
    ),
    "not a number in a wide file": Case(
        WIDE + "A,plasma,1.2,x\n", Severity.VALUE, 2, "pyruvate (µmol/L)", "“x” is not a number", "correct the cell"
    ),
    "unknown unit": Case(
        LONG + "A,plasma,lactate,5,furlong\n",
        Severity.VALUE,
        2,
        "value",
        "the unit “furlong” is not known",
        "write it as mmol/L",
    ),
    "no unit": Case(
        "specimen,matrix,lactate\nA,plasma,5\n",
        Severity.VALUE,
        2,
        "lactate",
        "no unit is given",
        "add it in the heading",
    ),
    "unit of no concentration": Case(
        LONG + "A,plasma,lactate,5,%\n",
        Severity.VALUE,
        2,
        "value",
        "a percentage is no concentration",
        "export the concentrations",
    ),
    "unknown analyte": Case(
        LONG + "A,plasma,glukose,5,mM\n",
        Severity.VALUE,
        2,
        "value",
        "the analyte “glukose” is not known",
        "perhaps glucose",
    ),
    "ambiguous analyte": Case(
        LONG + "A,plasma,G3P,5,mM\n", Severity.VALUE, 2, "value", "“G3P” may mean", "write the full name"
    ),
    "no analyte": Case(
        LONG + "A,plasma,,5,mM\n", Severity.VALUE, 2, "value", "no analyte is named", "fill in the name"
    ),
    "mixed decimal marks": Case(
        WIDE.replace(",", ";") + "A;plasma;1.2;64.5\nB;plasma;1,4;70.5\n",
        Severity.VALUE,
        3,
        "lactate (mmol/L)",
        "“1,4” does not fit the decimal point",
        "one decimal mark",
    ),
    "doubtful decimal mark": Case(
        WIDE + "A,plasma,1.234,64\n",
        Severity.NOTE,
        2,
        "lactate (mmol/L)",
        "“1.234” may hold a decimal point",
        "one more decimal",
    ),
    "wrong encoding": Case(
        WIDE.encode("cp1252") + b"A,plasma,1.2,64\n",
        Severity.NOTE,
        1,
        "",
        "read as Windows-1252",
        "save the file as UTF-8",
    ),
    "no encoding": Case(
        b"specimen,\x81\nA,1\n", Severity.FILE, 1, "", "neither UTF-8 nor Windows-1252", "save it as CSV"
    ),
    "pH out of range": Case(
        "specimen,matrix,ph,lactate (mM)\nB,plasma,7.1,1\nA,plasma,4,1\n",
        Severity.SPECIMEN,
        3,
        "ph",
        "pH 4 is outside",
        "leave it blank",
    ),
    "temperature out of range": Case(
        "specimen,matrix,temperature_c,lactate (mM)\nB,plasma,,1\nA,plasma,60,1\n",
        Severity.SPECIMEN,
        3,
        "temperature_c",
        "temperature 60 °C is outside",
        "leave it blank",
    ),
    "ionic strength out of range": Case(
        "specimen,matrix,ionic_strength_mol_per_l,lactate (mM)\nB,plasma,,1\nA,plasma,0.5,1\n",
        Severity.SPECIMEN,
        3,
        "ionic_strength_mol_per_l",
        "ionic strength 0.5 mol/L is outside",
        "leave it blank",
    ),
    "unknown matrix": Case(
        LONG + GOOD + "B,marble,lactate,1,mM\n",
        Severity.SPECIMEN,
        3,
        "matrix",
        "the matrix “marble” is not known",
        "write one of",
    ),
    "two matrices": Case(
        LONG + "B,plasma,lactate,1,mM\nA,plasma,lactate,1,mM\nA,csf,pyruvate,1,mM\n",
        Severity.SPECIMEN,
        4,
        "matrix",
        "is “csf” here and “plasma” in row 3",
        "two specimen codes",
    ),
    "no specimen": Case(
        LONG + GOOD + ",plasma,lactate,1,mM\n",
        Severity.SPECIMEN,
        3,
        "specimen",
        "no specimen is named",
        "fill in its code",
    ),
    "nothing usable": Case(
        LONG + "A,marble,lactate,1,mM\n",
        Severity.FILE,
        0,
        "",
        "no specimen of it can be used",
        "mend what the other lines name",
    ),
}


@pytest.mark.parametrize("name", CASES)
def test_it_is_told_with_file_row_column_and_a_way_out(catalogue, name):
    case = CASES[name]
    try:
        found = problems(read(catalogue, case.text, name="lab.csv"))
    except InputRefused as error:
        assert case.severity is Severity.FILE
        found = list(error.problems)
    (problem,) = [p for p in found if case.what in p.what]
    assert (problem.severity, problem.file, problem.row, problem.column) == (
        case.severity,
        "lab.csv",
        case.row,
        case.column,
    )
    assert case.way_out in problem.remedy
    assert "\n" not in str(problem)
    assert str(problem).startswith(f"lab.csv:{case.row or ''}:{case.column}: ")


@pytest.mark.parametrize("name", [n for n, c in CASES.items() if c.severity is Severity.VALUE])
def test_a_refused_value_stays_in_the_panel_without_a_concentration(catalogue, name):
    case = CASES[name]
    at = [r for r in seen(read(catalogue, case.text)) if (r.row, r.column) == (case.row, case.column)]
    assert len(at) == 1
    assert at[0].state in (State.REFUSED, State.UNMATCHED)
    assert at[0].mol_per_l != at[0].mol_per_l
    assert at[0].note
    assert at[0].value


@pytest.mark.parametrize("name", [n for n, c in CASES.items() if c.severity is Severity.SPECIMEN])
def test_a_refused_specimen_is_named_and_the_others_read(catalogue, name):
    panel = read(catalogue, CASES[name].text)
    assert len(panel.specimens) == 1
    assert len(panel.refused_specimens) == 1


def test_a_folder_is_refused(catalogue, tmp_path):
    with pytest.raises(InputRefused, match=rf"{tmp_path.name}::: this is a folder, not a file; give the files"):
        read_panels([tmp_path], catalogue)


def test_two_gigabytes_are_refused_unread(catalogue, tmp_path):
    with (tmp_path / "huge.csv").open("wb") as stream:
        stream.truncate(2 * 2**30)
    with pytest.raises(InputRefused, match=r"huge\.csv::: the file has 2,048 MB, more than the .*; split it"):
        read_panels([tmp_path / "huge.csv"], catalogue)


class TestMixedMarks:
    def test_no_number_that_reads_two_ways_is_used(self, catalogue):
        panel = read(catalogue, WIDE.replace(",", ";") + "A;plasma;1.5;1,234\nB;plasma;2.5;2.345\nC;plasma;3,5;70\n")
        assert [(r.value, r.state) for r in seen(panel)] == [
            ("1.5", State.MEASURED),
            ("1,234", State.REFUSED),
            ("2.5", State.MEASURED),
            ("2.345", State.REFUSED),
            ("3,5", State.REFUSED),
            ("70", State.MEASURED),
        ]
        assert "decimal points and commas are mixed" in problems(panel)[0].what

    def test_dates_in_another_column_do_not_count(self, catalogue):
        panel = read(catalogue, "specimen;matrix;lactate (mM);born\nA;plasma;1.5;04.03.2026\nB;plasma;2.5;1,5\n")
        assert [r.state for r in seen(panel)] == [State.MEASURED, State.UNMATCHED] * 2
        assert panel.layout.endswith("decimal point")

    def test_thousands_marks_are_told_once(self, catalogue):
        panel = read(catalogue, LONG + 'A,plasma,lactate,"1,180.5",uM\nA,plasma,pyruvate,64.5,uM\n')
        assert seen(panel)[0].mol_per_l == pytest.approx(1180.5e-6)
        (problem,) = problems(panel)
        assert problem.what == "“1,180.5” was read as 1180.5, its mark taken as one of thousands"


def test_many_refused_values_of_one_analyte_are_told_one_by_one_up_to_a_point(catalogue):
    panel = read(catalogue, WIDE + "".join(f"S{k},plasma,0,{k + 1}\n" for k in range(100)))
    told = problems(panel, Severity.VALUE)
    assert len(told) == 21
    assert told[-1].what == "from here on 80 more values of lactate cannot be used"
    assert (told[-1].row, told[-1].column) == (22, "lactate (mmol/L)")
    assert sum(r.state is State.REFUSED for r in seen(panel)) == 100


def test_an_unknown_unit_is_told_once_with_the_number_of_values(catalogue):
    panel = read(catalogue, "specimen,matrix,lactate (mmol/X)\nA,plasma,1\nB,plasma,2\nC,plasma,\n")
    (problem,) = problems(panel)
    assert problem.what == "the unit “mmol/X” is not known (2 values)"
    assert [r.state for r in seen(panel)] == [State.REFUSED, State.REFUSED, State.MISSING]


def test_problems_come_in_the_order_of_rows(catalogue):
    rows = "A,plasma,lactate,0,mM\nA,plasma,foo,1,mM\nA,plasma,pyruvate,1,X\nA,plasma,glucose,lots,mM\n"
    found = [p.row for p in problems(read(catalogue, LONG + rows))]
    assert found == [2, 3, 4, 5]
