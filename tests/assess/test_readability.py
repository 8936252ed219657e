"""Where a step can be read, where it stands in for something else, and where it is refused with a reason."""

from __future__ import annotations

import numpy as np
import pytest
from panels import RED_CELL, Specimen, at, panel_of

from panelview.assess.assess import assess
from panelview.assess.calls import Assessability, Direction, Distance, Shift

PLASMA = {"lactate": 1.5, "pyruvate": 0.1, "hydroxybutyrate_3": 0.3, "acetoacetate": 0.2, "glucose": 5.0}


def reviewed(catalogue, values, matrix):
    return assess(panel_of([Specimen("X", values, matrix=matrix)]), catalogue)


@pytest.mark.parametrize("matrix", ["plasma", "csf", "urine"])
@pytest.mark.parametrize("step", ["hexokinase", "phosphofructokinase_1", "pyruvate_kinase", "adenylate_kinase"])
def test_phosphorylated_intermediates_are_refused_in_fluids(catalogue, matrix, step):
    review = reviewed(catalogue, RED_CELL, matrix)
    where = at(review, "X", step)
    assert review.findings.assessability[where] == Assessability.NOT_ASSESSABLE
    assert len(review.reason(*where)) > 20


@pytest.mark.parametrize("matrix", ["plasma", "csf", "urine"])
def test_a_refused_step_says_nothing_at_all(catalogue, matrix):
    """No number, no call, no highlight: whatever is refused cannot be misread."""
    f = reviewed(catalogue, RED_CELL | PLASMA, matrix).findings
    refused = f.assessability == Assessability.NOT_ASSESSABLE
    assert refused.any()
    for name in ("ln_gamma", "delta_g", "delta_g_sd", "p_reversed", "p_near", "shift", "q_value", "band_lower"):
        assert np.isnan(getattr(f, name)[refused]).all(), name
    assert (f.direction[refused] == Direction.NONE).all()
    assert (f.distance[refused] == Distance.NONE).all()
    assert (f.shift_call[refused] == Shift.NO_REFERENCE).all()
    assert not f.highlighted[refused].any()
    assert (f.reference_n[refused] == 0).all()


def test_refused_goes_before_missing(catalogue):
    """In plasma hexokinase is no matter of a missing assay: measuring more would not help."""
    review = reviewed(catalogue, PLASMA, "plasma")
    assert review.findings.assessability[at(review, "X", "hexokinase")] == Assessability.NOT_ASSESSABLE


@pytest.mark.parametrize(
    ("step", "matrix"),
    [("hydroxybutyrate_dehydrogenase", "erythrocyte"), ("hydroxybutyrate_dehydrogenase", "skeletal_muscle"),
     ("citrate_synthase", "erythrocyte"), ("creatine_kinase", "erythrocyte")],
)  # fmt: skip
def test_enzymes_that_are_not_there_are_not_read(catalogue, step, matrix):
    """No mitochondria and no creatine kinase in red cells; little 3-hydroxybutyrate dehydrogenase in muscle."""
    values = {"hydroxybutyrate_3": 0.5, "acetoacetate": 0.2, "creatine": 0.4, "phosphocreatine": 0.1, **RED_CELL}
    review = reviewed(catalogue, values, matrix)
    assert review.findings.assessability[at(review, "X", step)] == Assessability.NOT_ASSESSABLE


def test_the_couple_that_defines_a_ratio_says_so_and_has_no_position(catalogue):
    review = reviewed(catalogue, PLASMA, "plasma")
    where = at(review, "X", "lactate_dehydrogenase")
    f = review.findings
    assert f.assessability[where] == Assessability.PROXY
    assert review.reason(*where).startswith("defines the ratio: free NAD⁺/NADH of the cytosol")
    assert f.defines_pool[where]
    assert np.isnan(f.delta_g[where])
    assert f.direction[where] == Direction.NONE


def test_every_readable_step_of_every_matrix_is_weighed_in_the_catalogue(catalogue):
    for matrix in catalogue.matrices:
        for step in catalogue.steps:
            assert (step.id, matrix) in catalogue.applicability


def test_reasons_are_shared_and_the_empty_one_comes_first(catalogue):
    review = assess(panel_of([Specimen(f"S{k}", RED_CELL) for k in range(5)]), catalogue)
    assert review.reasons[0] == ""
    assert len(set(review.reasons)) == len(review.reasons)


def test_an_empty_panel_reviews_to_nothing_missing_a_reason(catalogue):
    review = reviewed(catalogue, {}, "erythrocyte")
    f = review.findings
    assert set(f.assessability[0]) <= {Assessability.NOT_ASSESSABLE, Assessability.MISSING}
    assert all(review.reason(0, c) for c in range(len(review.columns)))
    assert review.state_of(0) == ()
