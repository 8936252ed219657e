"""Which specimens or published values a panel is compared with."""

from __future__ import annotations

import numpy as np
import pytest
from panels import RED_CELL, Specimen, at, panel_of, spread, value

from panelview.assess.assess import assess
from panelview.assess.calls import Shift
from panelview.assess.reference import control_rows
from panelview.assess.settings import ConditionChoice, ReferenceChoice, Settings, UnknownReference


def study(catalogue, group: str = "control", choice: ReferenceChoice | None = None):
    controls = spread(RED_CELL, 7, np.random.default_rng(3), group=group)
    panel = panel_of([*controls, Specimen("X", RED_CELL, group="ward 3")])
    return assess(panel, catalogue, Settings(reference=choice or ReferenceChoice()))


@pytest.mark.parametrize("word", ["control", "Controls", " CTRL ", "healthy", "Kontrolle", "témoins", "sano"])
def test_a_group_whose_name_means_controls_is_the_reference(catalogue, word):
    review = study(catalogue, word)
    assert review.reference.kind == "group"
    assert review.reference.specimens == tuple(range(7))
    assert word in review.reference.label
    assert "7 specimens" in review.reference.label


def test_a_group_with_another_name_has_to_be_chosen(catalogue):
    assert study(catalogue, "batch A").reference.kind == "published"
    review = study(catalogue, "batch A", ReferenceChoice("group", "Batch a"))
    assert review.reference.specimens == tuple(range(7))


def test_a_group_that_does_not_exist_is_refused_with_those_that_do(catalogue):
    with pytest.raises(UnknownReference) as caught:
        study(catalogue, choice=ReferenceChoice("group", "volunteers"))
    assert str(caught.value) == "no specimen belongs to the group “volunteers” (groups in the file: control, ward 3)"


def test_without_controls_published_concentrations_stand_in_and_say_so(catalogue):
    review = assess(panel_of([Specimen("X", RED_CELL)]), catalogue)
    assert review.reference.kind == "published"
    assert "not this laboratory's own controls" in review.reference.label
    assert np.isfinite(value(review, "shift", "X", "glucose_6_phosphate_isomerase"))


def test_published_shift_is_against_the_published_means(catalogue):
    """RT ln(Γ/Γ published), from the default set of the matrix."""
    review = assess(panel_of([Specimen("X", RED_CELL)]), catalogue)
    of_set = {p.metabolite_id: p for p in catalogue.published if p.is_default and p.matrix_id == "erythrocyte"}
    pair = ("glucose_6_phosphate", "fructose_6_phosphate")
    published = of_set[pair[1]].ln_mean - of_set[pair[0]].ln_mean
    expected = 8.314462618e-3 * 310.15 * (np.log(RED_CELL[pair[1]] / RED_CELL[pair[0]]) - published)
    step = "glucose_6_phosphate_isomerase"
    assert value(review, "shift", "X", step) == pytest.approx(expected)


def test_none_means_none(catalogue):
    review = study(catalogue, choice=ReferenceChoice("none"))
    f = review.findings
    assert review.reference.kind == "none"
    assert np.isnan(f.shift).all()
    assert (f.shift_call == Shift.NO_REFERENCE).all()
    assert not f.highlighted.any()


def test_controls_of_another_matrix_are_no_reference(catalogue):
    controls = spread(RED_CELL, 7, np.random.default_rng(3))
    panel = panel_of([*controls, Specimen("X", RED_CELL, matrix="liver")])
    review = assess(panel, catalogue)
    assert np.isnan(value(review, "shift", "X", "hexokinase"))
    assert value(review, "shift_call", "X", "hexokinase") == Shift.NO_REFERENCE


def test_a_file_without_a_control_group_is_all_controls(catalogue):
    controls = panel_of(spread(RED_CELL, 6, np.random.default_rng(3), group=""))
    panel = panel_of([Specimen("X", RED_CELL)])
    choice = ReferenceChoice("file", "ours.csv", controls)
    review = assess(panel, catalogue, Settings(reference=choice))
    assert value(review, "reference_n", "X", "hexokinase") == 6
    assert "controls from ours.csv, 6 specimens" in review.reference.label


def test_four_controls_show_values_and_no_call(catalogue):
    panel = panel_of([*spread(RED_CELL, 4, np.random.default_rng(3)), Specimen("X", RED_CELL | {"pyruvate": 9.0})])
    review = assess(panel, catalogue)
    where = at(review, "X", "pyruvate_kinase")
    assert np.isfinite(review.findings.shift[where])
    assert review.findings.shift_call[where] == Shift.NO_REFERENCE
    assert not review.findings.highlighted[where]


def test_the_floor_of_a_highlight_is_the_reviewers(catalogue):
    controls = spread(RED_CELL, 12, np.random.default_rng(3), sd=0.05)
    panel = panel_of([*controls, Specimen("X", RED_CELL | {"pyruvate": 0.12})])
    step = "pyruvate_kinase"  # RT ln(0.12/0.051) = 2.2 kJ/mol
    assert not value(assess(panel, catalogue), "highlighted", "X", step)
    lower = assess(panel, catalogue, Settings(shift_floor=2.0))
    assert value(lower, "highlighted", "X", step)
    assert lower.shift_floor == 2.0


def test_control_rows_match_the_whole_word(catalogue):
    panel = panel_of([Specimen("A", {}, group="controlled"), Specimen("B", {}, group="control")])
    assert control_rows(panel).tolist() == [1]


def test_a_healthy_table_of_another_laboratory_is_not_called_off(catalogue):
    """The textbook's healthy red cells against another published table: laboratories differ, nothing is displaced."""
    review = study(catalogue, "batch A")
    assert review.reference.kind == "published"
    assert not review.findings.highlighted.any()


def test_the_shift_of_a_defining_couple_is_that_of_the_free_ratio_when_ph_differs(catalogue):
    """RT Δln K′ belongs to it: at equal lactate/pyruvate a lower pH means another free NAD⁺/NADH."""
    pair = {"lactate": 2.9, "pyruvate": 0.051}
    controls = spread(pair, 7, np.random.default_rng(3))
    acid = Settings(specimen_conditions={"X": {"ph": ConditionChoice(6.5, None, "set by the reviewer")}})
    review = assess(panel_of([*controls, Specimen("X", pair)]), catalogue, acid)
    ratio = {r.specimen: r.value for r in review.state if r.quantity == "nad_nadh_free"}
    usual = np.mean([np.log(ratio[k]) for k in range(7)])
    expected = -8.314462618e-3 * 310.15 * (np.log(ratio[7]) - usual)
    assert abs(expected) > 3
    assert value(review, "shift", "X", "lactate_dehydrogenase") == pytest.approx(expected, abs=1e-6)
