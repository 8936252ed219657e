"""Lines above the heading: passed over and told, or refused where the heading cannot be told."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st
from panel_texts import by_name, problems, read, refusal

TABLES = {
    "wide": "Sample,Matrix,Lac (mM),Pyr (mM)\nA,plasma,1.2,0.08\nB,plasma,1.4,0.09\n",
    "wide with units below": "Sample,Matrix,Lac,Pyr\n,,mM,mM\nA,plasma,1.2,0.08\nB,plasma,1.4,0.09\n",
    "long": "sample,matrix,analyte,value,unit\n"
    "A,plasma,Lac,1.2,mM\nA,plasma,Pyr,0.08,mM\nB,plasma,Lac,1.4,mM\nB,plasma,Pyr,0.09,mM\n",
    "analytes in rows": "Compound,Unit,A,B\nLac,mM,1.2,1.4\nPyr,mM,0.08,0.09\n",
    "analytes in rows, numbers as codes": "Compound,Unit,101,102\nLac,mM,1.2,1.4\nPyr,mM,0.08,0.09\n",
}
ABOVE = {
    "a title": "Panel of 3 March\n",
    "a title and a blank line": "Panel of 3 March\n\n",
    "a title in a padded sheet": "Panel of 3 March,,,\n",
    "pairs of words": "Laboratory:,X\nDate:,2026-03-04\n",
    "pairs in a padded sheet": "Laboratory:,X,,\nDate:,2026-03-04,,\n,,,\n",
    "headings of blocks": ",,Glycolysis,\n",
}


@pytest.mark.parametrize("above", ABOVE.values(), ids=ABOVE)
@pytest.mark.parametrize("table", TABLES.values(), ids=TABLES)
def test_lines_above_the_heading_change_nothing_but_the_rows_named(catalogue, table, above):
    if above.rstrip("\n").count(",") == 3:  # a sheet is padded to the width of its table
        above = above.replace(",,\n", "," * (table.split("\n", 1)[0].count(",") - 1) + "\n")
    plain, titled = (read(catalogue, text, matrix="plasma") for text in (table, above + table))
    assert by_name(titled) == by_name(plain)
    lines = above.count("\n")
    assert titled.readings.row.tolist() == [row + lines for row in plain.readings.row.tolist()]
    told = [p for p in problems(titled) if "above the heading" in p.what]
    assert [p.row for p in told] == [1]
    assert above.split(",")[0].strip() in told[0].what


@pytest.mark.parametrize("table", TABLES.values(), ids=TABLES)
def test_a_table_without_lines_above_it_tells_of_none(catalogue, table):
    assert not any("above the heading" in p.what for p in problems(read(catalogue, table, matrix="plasma")))


def test_two_headings_are_refused_with_the_lines_of_both(catalogue):
    problem = refusal(catalogue, "Panel,,\nSample,Matrix,Lac (mM)\nA,plasma,1\nSample,Matrix,Pyr (mM)\nA,plasma,1\n")
    assert problem.row == 4
    assert "lines 2 and 4" in problem.what
    assert "one table a file" in problem.remedy


def test_a_title_over_a_table_that_nobody_knows_is_refused_as_a_title(catalogue):
    problem = refusal(catalogue, "Panel of 3 March\nfoo,bar\nA,1\nB,2\n")
    assert (problem.row, problem.remedy) == (1, "remove the lines above the heading")


def test_a_heading_narrower_than_its_rows_is_not_taken_for_a_title(catalogue):
    problem = refusal(catalogue, "sample,matrix,Lac (mM)\nA,plasma,1,2\nB,plasma,1,4\n")
    assert problem.row == 2
    assert problem.what == "this line has 4 cells, the heading has 3"
    assert "decimal comma" in problem.remedy


def test_a_heading_far_down_is_not_looked_for(catalogue):
    assert refusal(catalogue, "remark\n" * 40 + TABLES["wide"]).row >= 1


@given(title=st.text(st.characters(codec="utf-8", exclude_categories=["C", "Z"]), min_size=1, max_size=20))
def test_a_title_of_any_words_is_a_title_or_a_refusal_that_names_it(catalogue, title):
    quoted = '"' + title.replace('"', '""') + '"'
    panel = read(catalogue, f"{quoted}\n\n" + TABLES["wide"])
    assert by_name(panel) == by_name(read(catalogue, TABLES["wide"]))
