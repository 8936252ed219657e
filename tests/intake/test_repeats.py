"""One analyte of one specimen reported more than once: averaged as replicates, or not used at all."""

from __future__ import annotations

import math

import pytest
from panel_texts import LONG, problems, read, seen

from panelview.intake.panel import State
from panelview.intake.problems import Severity

REPLICATES = "specimen,matrix,analyte,value,unit,replicate,cv_percent\n"


@pytest.mark.parametrize(
    "second", ["1.9", "1.2", "1.20", "<5", "ND"], ids=["differs", "identical", "equal", "limit", "none"]
)
def test_repeats_are_refused_both_and_the_rows_of_both_named(catalogue, second):
    rows = f"A,plasma,lactate,1.2,mM\nA,plasma,pyruvate,0.1,mM\nA,plasma,lactate,{second},mM\n"
    panel = read(catalogue, LONG + rows)
    assert [r.state for r in seen(panel)] == [State.REFUSED, State.MEASURED, State.REFUSED]
    for reading in (seen(panel)[0], seen(panel)[2]):
        assert reading.note == "reported more than once (rows 2, 4)"
        assert math.isnan(reading.mol_per_l)
        assert math.isnan(reading.sd_ln)
    (problem,) = problems(panel, Severity.VALUE)
    assert (problem.row, problem.column, problem.specimen) == (4, "value", "A")
    assert "rows 2, 4" in problem.what
    assert "replicate column" in problem.remedy


def test_another_name_for_the_same_analyte_is_a_repeat(catalogue):
    panel = read(catalogue, LONG + "A,plasma,lactate,1.2,mM\nA,plasma,lactic acid,1.3,mM\n")
    assert {r.state for r in seen(panel)} == {State.REFUSED}


def test_two_columns_for_one_analyte_name_both_columns(catalogue):
    panel = read(catalogue, "specimen,matrix,Lac (mM),lactate (mM)\nA,plasma,1,2\n")
    (problem,) = problems(panel)
    assert "columns Lac (mM), lactate (mM)" in problem.what
    assert problem.remedy.startswith("keep one of the columns")


def test_a_specimen_in_two_rows_of_a_wide_table(catalogue):
    panel = read(catalogue, "specimen,matrix,lactate (mM)\nA,plasma,1\nB,plasma,2\nA,plasma,3\n")
    assert [r.state for r in seen(panel)] == [State.REFUSED, State.MEASURED, State.REFUSED]


def test_a_refused_cell_makes_the_other_no_better(catalogue):
    panel = read(catalogue, LONG + "A,plasma,lactate,1.2,mM\nA,plasma,lactate,-3,mM\n")
    first, second = seen(panel)
    assert (first.state, second.state) == (State.REFUSED, State.REFUSED)
    assert "negative" in second.note


def test_a_blank_cell_beside_a_value_is_no_repeat(catalogue):
    panel = read(catalogue, LONG + "A,plasma,lactate,1.2,mM\nA,plasma,lactate,,mM\n")
    assert [r.state for r in seen(panel)] == [State.MEASURED, State.MISSING]
    assert not problems(panel)


def test_unmatched_names_are_no_repeats(catalogue):
    panel = read(catalogue, LONG + "A,plasma,foo,1,mM\nA,plasma,foo,2,mM\n")
    assert {r.state for r in seen(panel)} == {State.UNMATCHED}


class TestReplicates:
    def test_numbered_replicates_become_their_geometric_mean(self, catalogue):
        panel = read(catalogue, REPLICATES + "A,plasma,lactate,1,mM,1,5\nA,plasma,lactate,4,mM,2,5\n")
        first, second = seen(panel)
        assert first.state is State.MEASURED
        assert first.mol_per_l == pytest.approx(2e-3)
        assert "geometric mean of 2 replicates (rows 2, 3)" in first.note
        assert second.state is State.MISSING
        assert second.note == "a replicate, used in the mean that stands in row 2"
        assert not problems(panel)

    def test_their_scatter_counts_where_it_exceeds_the_assay(self, catalogue):
        panel = read(catalogue, REPLICATES + "A,plasma,lactate,1,mM,1,\nA,plasma,lactate,4,mM,2,\n")
        reading = seen(panel)[0]
        assert reading.sd_ln == pytest.approx(math.log(4) / math.sqrt(2) / math.sqrt(2))
        assert not reading.sd_is_default

    def test_the_assay_counts_where_it_exceeds_their_scatter(self, catalogue):
        panel = read(catalogue, REPLICATES + "A,plasma,lactate,1,mM,1,10\nA,plasma,lactate,1,mM,2,10\n")
        assert seen(panel)[0].sd_ln == pytest.approx(math.sqrt(math.log1p(0.01)) / math.sqrt(2))

    @pytest.mark.parametrize(
        "rows",
        [
            "A,plasma,lactate,1,mM,1,\nA,plasma,lactate,4,mM,1,\n",
            "A,plasma,lactate,1,mM,1,\nA,plasma,lactate,4,mM,,\n",
            "A,plasma,lactate,1,mM,1,\nA,plasma,lactate,<4,mM,2,\n",
            "A,plasma,lactate,1,mM,1,\nA,plasma,lactate,0,mM,2,\n",
        ],
        ids=["one number twice", "one without a number", "one below its limit", "one refused"],
    )
    def test_what_cannot_be_averaged_is_refused(self, catalogue, rows):
        panel = read(catalogue, REPLICATES + rows)
        assert {r.state for r in seen(panel)} == {State.REFUSED}
        assert any("more than once" in p.what for p in problems(panel, Severity.VALUE))

    def test_in_a_wide_table(self, catalogue):
        panel = read(catalogue, "specimen,matrix,replicate,lactate (mM)\nA,plasma,1,1\nA,plasma,2,4\nB,plasma,1,7\n")
        assert [r.state for r in seen(panel)] == [State.MEASURED, State.MISSING, State.MEASURED]
