"""Values a hundredfold off all published ones: told as a likely slip of the unit, and never changed."""

from __future__ import annotations

import math

import pytest
from panel_texts import LONG, problems, read, seen

from panelview.intake.problems import Severity

WIDE = "specimen,matrix,lactate (mM),ATP (mM)\n"


def slips(panel):
    return [p for p in problems(panel) if "published" in p.what]


def test_a_column_in_the_wrong_unit_is_told_once_and_used_as_it_stands(catalogue):
    panel = read(catalogue, WIDE + "A,plasma,1200,\nB,plasma,1400,\nC,plasma,900,\n")
    assert [r.mol_per_l for r in seen(panel)][::2] == [1.2, 1.4, 0.9]
    (problem,) = slips(panel)
    assert (problem.severity, problem.row, problem.column) == (Severity.NOTE, 2, "lactate (mM)")
    assert "above what is published for plasma" in problem.what
    assert problem.what.endswith("probably a slip of the unit (3 values)")
    assert problem.remedy == "check it; nothing was changed"


def test_a_single_value_among_others_may_be_a_slip_of_the_point(catalogue):
    panel = read(catalogue, WIDE + "A,plasma,1.2,\nB,plasma,1400,\nC,plasma,0.9,\n")
    (problem,) = slips(panel)
    assert (problem.row, problem.specimen) == (3, "B")
    assert problem.what.endswith("perhaps a slip of the unit or the point")


def test_values_far_below_are_told_too(catalogue):
    (problem,) = slips(read(catalogue, LONG + "A,plasma,lactate,1.2,umol/L\n"))
    assert "below what is published" in problem.what


@pytest.mark.parametrize("factor", [1 / 90, 1 / 10, 1, 10, 90])
def test_what_disease_can_do_is_not_doubted(catalogue, factor):
    published = [p for p in catalogue.published if (p.metabolite_id, p.matrix_id) == ("lactate", "plasma")]
    for p in published:
        mmol = math.exp(p.ln_mean) * 1000 * factor
        assert not slips(read(catalogue, LONG + f"A,plasma,lactate,{mmol:.6g},mmol/L\n"))


def test_every_published_value_is_plausible_itself(catalogue):
    rows = [
        f"S{k},{p.matrix_id},{p.metabolite_id},{math.exp(p.ln_mean) * 1000:.6g},mmol/L"
        for k, p in enumerate(catalogue.published)
        if math.isfinite(p.ln_mean)
    ]
    assert not slips(read(catalogue, LONG + "\n".join(rows) + "\n"))


def test_every_analyte_with_a_published_mean_is_compared(catalogue):
    smallest: dict[tuple[str, str], float] = {}
    for p in catalogue.published:
        if math.isfinite(p.ln_mean):
            key = (p.metabolite_id, p.matrix_id)
            smallest[key] = min(smallest.get(key, math.inf), math.exp(p.ln_mean))
    rows = [
        f"S{k},{matrix},{analyte},{low * 1e9 / 1000:.6g},nmol/L"
        for k, ((analyte, matrix), low) in enumerate(smallest.items())
    ]
    assert {p.row for p in slips(read(catalogue, LONG + "\n".join(rows) + "\n"))} == set(range(2, len(rows) + 2))


def test_ketone_bodies_of_ketoacidosis_are_explained_by_fasting_values(catalogue):
    """Over 200-fold an overnight fast's concentration, but not 100-fold that of fasting children (both published)."""
    assert not slips(read(catalogue, LONG + "A,plasma,3-hydroxybutyrate,9.4,mmol/L\n"))


@pytest.mark.parametrize("row", ["A,,lactate,1200,mM", "A,plasma,lactate,<1200,mM", "A,plasma,foo,1200,mM"])
def test_without_matrix_measurement_or_name_nothing_is_compared(catalogue, row):
    assert not slips(read(catalogue, LONG + row + "\n"))


def test_the_samples_we_ship_need_no_word(catalogue):
    from panelview.resource_files import sample_data

    for path in sorted(sample_data().glob("*.csv")):
        assert not slips(read(catalogue, path.read_bytes()))
