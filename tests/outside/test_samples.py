"""The shipped samples: made by their program byte for byte, and telling the stories their README tells."""

from __future__ import annotations

import csv
import importlib.util
import re
import sys
from pathlib import Path

import numpy as np
import pytest
from panels import at, value

from panelview.assess.assess import assess
from panelview.assess.calls import Assessability, Direction, Shift
from panelview.assess.review import Review
from panelview.intake.panel import State
from panelview.intake.problems import Severity
from panelview.intake.read import read_panels
from panelview.resource_files import sample_data

ROOT = Path(__file__).resolve().parents[2]
FILES = ("red_cells.csv", "plasma_series.csv", "muscle_biopsies.csv")


@pytest.fixture(scope="module")
def maker():
    path = ROOT / "packaging" / "make_samples.py"
    spec = importlib.util.spec_from_file_location("make_samples", path)
    module = importlib.util.module_from_spec(spec)
    sys.modules["make_samples"] = module  # dataclasses look their module up
    spec.loader.exec_module(module)
    return module


@pytest.fixture(scope="module")
def reviews(catalogue) -> dict[str, Review]:
    return {name: assess(read_panels([sample_data() / name], catalogue), catalogue) for name in FILES}


@pytest.mark.parametrize("name", FILES)
def test_the_shipped_file_is_what_the_program_makes(maker, name):
    assert maker.all_samples()[name] == (ROOT / "sample_data" / name).read_bytes()


def test_the_window_offers_every_sample():
    from panelview.desktop.samples import SAMPLES

    assert {sample.file for sample in SAMPLES} == set(FILES)
    assert all((sample_data() / sample.file).is_file() for sample in SAMPLES)


@pytest.mark.parametrize("name", FILES)
def test_everything_is_read_and_nothing_refused(reviews, name):
    panel = reviews[name].panel
    states = panel.readings.state
    assert panel.refused_specimens == ()
    assert not [p for p in panel.problems if p.severity is not Severity.NOTE]
    assert not np.isin(states, (State.UNMATCHED, State.REFUSED, State.SUM)).any()
    assert (states == State.BELOW_LOQ).sum() == 1
    assert (states == State.MISSING).sum() == 1


@pytest.mark.parametrize("name", FILES)
def test_healthy_controls_are_quiet(reviews, name):
    review = reviews[name]
    controls = list(review.reference.specimens)
    assert len(controls) == {"red_cells.csv": 24, "plasma_series.csv": 12, "muscle_biopsies.csv": 10}[name]
    assert not review.findings.highlighted[controls].any()
    assert not np.isin(review.findings.shift_call[controls], (Shift.PUSHED_BACK, Shift.PUSHED_FORWARD)).any()


def highlighted(review: Review, code: str) -> dict[str, Shift]:
    row, _ = at(review, code, "hexokinase")
    return {
        review.columns[c].step.id: Shift(int(review.findings.shift_call[row, c]))
        for c in np.flatnonzero(review.findings.highlighted[row])
    }


FORWARD, BACK = Shift.PUSHED_FORWARD, Shift.PUSHED_BACK
STORIES = [
    ("red_cells.csv", "RC-P1", {"pyruvate_kinase": FORWARD}),
    ("red_cells.csv", "RC-P2", {"phosphofructokinase_1": FORWARD, "hexokinase": BACK}),
    ("red_cells.csv", "RC-P3", {"triose_phosphate_isomerase": FORWARD, "phosphofructokinase_1": BACK}),
    ("red_cells.csv", "RC-P4", {"lactate_dehydrogenase": BACK}),
    ("plasma_series.csv", "PS-A-1", {"hydroxybutyrate_dehydrogenase": FORWARD}),
    ("plasma_series.csv", "PS-A-5", {}),
    ("plasma_series.csv", "PS-B-1", {}),
    ("plasma_series.csv", "PS-B-4", {"lactate_dehydrogenase": BACK}),
    ("muscle_biopsies.csv", "MB-P1-rest", {}),
    ("muscle_biopsies.csv", "MB-P2-rest", {"atp_hydrolysis": BACK}),
    ("muscle_biopsies.csv", "MB-P3-rest", {"glycogen_phosphorylase": FORWARD}),
]


@pytest.mark.parametrize(("name", "code", "expected"), STORIES, ids=[code for _, code, _ in STORIES])
def test_the_story_of_a_specimen_comes_out(reviews, name, code, expected):
    assert highlighted(reviews[name], code) == expected


def test_nothing_in_any_sample_is_called_reversed(reviews):
    for review in reviews.values():
        assert not (review.findings.direction == Direction.REVERSED).any()


def test_the_held_back_phosphofructokinase_is_called_on_a_bound(reviews):
    review = reviews["red_cells.csv"]
    where = at(review, "RC-P2", "phosphofructokinase_1")
    assert review.findings.censored[where]
    assert np.isneginf(review.findings.shift_lower[where])
    assert value(review, "shift_call", "RC-P2", "aldolase_fbp") == Shift.WITHIN


def ratio(review: Review, code: str, quantity: str) -> float:
    row, _ = at(review, code, "hexokinase")
    return next(r.value for r in review.state_of(row) if r.quantity == quantity)


def test_ketosis_fades_and_lactate_over_pyruvate_climbs(reviews):
    review = reviews["plasma_series.csv"]
    ketones = [ratio(review, f"PS-A-{k}", "hydroxybutyrate_acetoacetate_ratio") for k in range(1, 6)]
    assert ketones == sorted(ketones, reverse=True)
    assert (ketones[0], ketones[-1]) == pytest.approx((5.3, 1.5), abs=0.1)
    lactate = [ratio(review, f"PS-B-{k}", "lactate_pyruvate_ratio") for k in range(1, 5)]
    assert lactate == sorted(lactate)
    assert (lactate[0], lactate[-1]) == pytest.approx((14.2, 38.4), abs=0.1)


def test_plasma_refuses_the_inside_of_the_cell(reviews):
    review = reviews["plasma_series.csv"]
    for step in ("hexokinase", "pyruvate_kinase", "citrate_synthase"):
        assert value(review, "assessability", "PS-A-1", step) == Assessability.NOT_ASSESSABLE


def test_exercise_costs_atp_hydrolysis_its_energy(reviews):
    """About −60 kJ/mol at rest, −50 to −53 after hard exercise; conditions from the file's own pH."""
    review = reviews["muscle_biopsies.csv"]
    for k in (1, 2, 3):
        rest = value(review, "delta_g", f"MB-P{k}-rest", "atp_hydrolysis")
        spent = value(review, "delta_g", f"MB-P{k}-exercise", "atp_hydrolysis")
        assert spent - rest > 7
        assert value(review, "shift_call", f"MB-P{k}-exercise", "atp_hydrolysis") == Shift.PUSHED_BACK
    row, _ = at(review, "MB-P1-exercise", "hexokinase")
    assert review.conditions.ph[row] == 6.7
    assert review.condition_origin["ph"][row] == "from the file"


def test_only_the_blocked_participant_keeps_phosphorylase_pushed_forward(reviews):
    review = reviews["muscle_biopsies.csv"]
    step = "glycogen_phosphorylase"
    assert value(review, "shift", "MB-P3-exercise", step) < -7
    assert value(review, "shift_call", "MB-P1-exercise", step) == Shift.WITHIN
    assert value(review, "shift_call", "MB-P2-exercise", step) == Shift.WITHIN


def test_healthy_medians_lie_where_published_concentrations_do(reviews, catalogue):
    """Geometric means of the red-cell controls within a fifth of the published set they follow."""
    review = reviews["red_cells.csv"]
    used = review.concentrations
    values = used.ln_c[list(review.reference.specimens)]
    compared = 0
    for figure in catalogue.published:
        if figure.is_default and figure.matrix_id == "erythrocyte":
            k = used.analytes.index(figure.metabolite_id)
            measured = values[np.isfinite(values[:, k]), k]
            if len(measured):
                assert abs(measured.mean() - figure.ln_mean) < np.log(1.2), figure.metabolite_id
                compared += 1
    assert compared > 12


@pytest.mark.parametrize("name", FILES)
def test_codes_are_codes_and_nothing_names_a_person(name):
    text = (ROOT / "sample_data" / name).read_text(encoding="utf-8")
    delimiter = ";" if name == "plasma_series.csv" else ","
    rows = list(csv.DictReader(text.splitlines(), delimiter=delimiter))
    for row in rows:
        assert re.fullmatch(r"((RC|PS|MB)-[A-Z0-9]+(-[a-z0-9]+)?)?", row["specimen"])
        assert re.fullmatch(r"((RC|PS|MB)-[A-Z0-9]+)?", row["participant"])
    assert not {"name", "sex", "age", "birth", "hospital"} & set(rows[0])
