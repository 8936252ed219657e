"""What is said in words: only what the numbers say, with true signs, and never a diagnosis."""

from __future__ import annotations

import re

import numpy as np
import pytest
from panels import RED_CELL, Specimen, at, panel_of, spread

from panelview.assess.assess import assess
from panelview.assess.evidence import evidence
from panelview.assess.sentences import call_words, cautions, equation, signed

HELD_BACK = RED_CELL | {
    "phosphoglycerate_3": 0.36,
    "phosphoglycerate_2": 0.09,
    "phosphoenolpyruvate": 0.069,
    "pyruvate": 0.03,
    "lactate": 2.0,
    "atp": 1.2,
    "adp": 0.2,
}


@pytest.fixture(scope="module")
def review(catalogue):
    rng = np.random.default_rng(7)
    return assess(
        panel_of(
            [
                *spread(RED_CELL, 24, rng, sd=0.08),
                Specimen("held", HELD_BACK),
                Specimen("usual", RED_CELL),
                Specimen("limit", RED_CELL | {"fructose_1_6_bisphosphate": "<0.004"}),
                Specimen("few", {"lactate": 2.0, "pyruvate": 0.05}),
                Specimen("fluid", RED_CELL, matrix="plasma"),
            ]
        ),
        catalogue,
    )


def told(review, code: str, step: str):
    return evidence(review, *at(review, code, step))


@pytest.mark.parametrize(
    ("number", "text"), [(4.14, "+4.1"), (-4.16, "−4.2"), (0.04, "0.0"), (-0.04, "0.0"), (0.0, "0.0")]
)
def test_numbers_carry_true_signs_and_no_negative_zero(number, text):
    assert signed(number) == text


def test_a_pushed_step_says_which_way_how_far_against_whom_and_what_carries_it(review):
    said = told(review, "held", "pyruvate_kinase")
    assert said.call.startswith("pushed forward −6.")
    assert "Against 24 controls ΔG′ is shifted by −6." in said.sentence
    assert "more favourable than usual" in said.sentence
    assert "carried by PEP" in said.sentence


def test_a_usual_step_is_told_as_usual(review):
    said = told(review, "usual", "hexokinase")
    assert said.call == "as usual"
    assert "within what healthy specimens show" in said.sentence
    assert "far from equilibrium; it can run as written" in said.sentence


def test_a_bound_is_told_as_one(review):
    said = told(review, "limit", "phosphofructokinase_1")
    assert said.call.startswith("pushed forward at least −")
    assert "whatever the value beyond the limit is" in said.sentence
    assert "ΔG′ lies under −" in said.sentence


def test_a_step_with_no_usual_direction_is_not_called_turned_by_its_sign(review):
    said = told(review, "usual", "triose_phosphate_isomerase")
    assert "reversed" not in said.call
    assert "above zero, but the step has no usual direction" in said.sentence
    assert "backwards" not in said.sentence


def test_missing_and_refused_steps_say_why_and_nothing_else(review):
    missing = told(review, "few", "hexokinase")
    assert missing.call == "not measured"
    assert missing.sentence == "Not measured: ATP, ADP, Glc, G6P."
    assert missing.equation_numbers == ""
    refused = told(review, "fluid", "hexokinase")
    assert refused.call == "not assessable here"
    assert "kJ/mol" not in refused.sentence


def test_the_equation_shows_the_numbers_of_the_specimen(review):
    where = at(review, "held", "hexokinase")
    shown = told(review, "held", "hexokinase").equation_numbers
    g0, g = review.findings.delta_g0_prime[where], review.findings.delta_g[where]
    assert shown.startswith("ΔG′ = ΔrG′° + RT ln Γ = " + signed(g0, 2))
    assert shown.endswith(f"= {signed(g, 2)} kJ/mol")
    assert equation(review, where[1]) == "Glc + ATP ⇌ G6P + ADP"


def test_terms_show_each_reactant_once_with_where_it_comes_from(review):
    terms = {t.metabolite_id: t for t in told(review, "held", "gapdh_pgk_combined").terms}
    assert terms["nad"].origin == terms["nadh"].origin == "free, inferred"
    assert np.isnan(terms["nad"].concentration)
    assert terms["lactate"].nu == 0
    assert terms["lactate"].origin == "measured"
    assert terms["adp"].origin == "measured total"
    assert terms["phosphate"].concentration == pytest.approx(1e-3)


def test_the_turning_point_is_where_the_step_would_be_at_equilibrium(review, catalogue):
    """Putting the turning point in the reactant's place gives ΔG′ = 0."""
    term = next(t for t in told(review, "usual", "aldolase_fbp").terms if t.symbol == "FBP")
    turned = RED_CELL | {term.metabolite_id: term.turning_point * 1000}
    again = assess(panel_of([Specimen("X", turned)]), catalogue)
    assert again.findings.delta_g[at(again, "X", "aldolase_fbp")] == pytest.approx(0.0, abs=1e-6)


def all_words(review) -> list[str]:
    """Everything the evidence says of every step of every specimen that is no control."""
    words = []
    for i, specimen in enumerate(review.specimens):
        if specimen.group:
            continue
        for c in range(len(review.columns)):
            said = evidence(review, i, c)
            words += [said.call, said.sentence, said.equation_numbers, said.constant, *said.cautions, *said.pools]
    return words


def test_no_sentence_shows_a_hole_or_a_typewriter_minus(review):
    for text in all_words(review):
        assert not re.search(r"\bnan\b|\binf\b|None|[^\w]-\d", text), text
        assert "  " not in text, text
        assert ".." not in text, text


def test_nothing_diagnoses(review):
    for text in all_words(review):
        assert not re.search(r"diagnos|patient|disease|deficien", text, re.IGNORECASE), text


def test_committed_and_near_steps_carry_their_standing_caution(review):
    far = cautions(review, *at(review, "usual", "hexokinase"))
    near = cautions(review, *at(review, "usual", "glucose_6_phosphate_isomerase"))
    assert any("does not prove that it lies there" in text for text in far)
    assert any("says nothing of flux" in text for text in near)
    assert len(set(far)) == len(far)


def test_calls_are_final_text(review):
    for code in ("held", "usual", "limit", "few", "fluid"):
        for column in range(len(review.columns)):
            row = next(i for i, s in enumerate(review.specimens) if s.code == code)
            assert call_words(review, row, column)
