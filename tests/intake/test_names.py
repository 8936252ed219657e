"""Names: matched by table, tolerant of spelling, never guessed between two."""

from __future__ import annotations

import dataclasses

import pytest
from hypothesis import given
from hypothesis import strategies as st
from panel_texts import LONG, problems, read, seen

from panelview.catalogue.metabolites import Name
from panelview.intake.names import Names
from panelview.intake.panel import State
from panelview.intake.problems import Severity


@pytest.fixture(scope="module")
def names(catalogue) -> Names:
    return Names(catalogue)


@pytest.mark.parametrize(
    ("written", "analyte", "how"),
    [
        ("lactate", "lactate", "id"),
        ("glucose_6_phosphate", "glucose_6_phosphate", "id"),
        ("G6P", "glucose_6_phosphate", "abbreviation"),
        ("L-lactate", "lactate", "name"),
        ("lactic acid", "lactate", "synonym"),
        ("dextrose", "glucose", "synonym"),
        ("  lactate ", "lactate", "id"),
        ("LACTATE", "lactate", "spelling"),
        ("L lactate", "lactate", "spelling"),
        ("L-Lactic Acid", "lactate", "spelling"),
        ("g-6-p", "glucose_6_phosphate", "spelling"),
        ("Glucose 6 Phosphate", "glucose_6_phosphate", "spelling"),
        ("Phospho-enol-pyruvate", "phosphoenolpyruvate", "spelling"),
        ("2,3 BPG", "bisphosphoglycerate_2_3", "spelling"),
        ("β-OHB", "hydroxybutyrate_3", "synonym"),
        ("BETA-OHB", "hydroxybutyrate_3", "spelling"),
        ("nad⁺", "nad", "spelling"),
        ("Nadh", "nadh", "spelling"),
        ("ISOCITRATE", "isocitrate", "spelling"),
    ],
)
def test_a_name_is_matched_and_it_is_said_how(names, written, analyte, how):
    found = names.match(written)
    assert (found.analyte, found.how) == (analyte, how)


def test_every_metabolite_goes_by_its_id_and_its_full_name(names, catalogue):
    for metabolite in catalogue.metabolites.values():
        assert names.match(metabolite.id).analyte == metabolite.id
        assert names.match(metabolite.name).analyte == metabolite.id


def test_every_name_of_the_table_means_what_the_table_says(names, catalogue):
    for name in catalogue.names:
        found = names.match(name.text)
        meant = {found.analyte} if found.analyte else set(found.candidates)
        assert meant == set(name.candidates)
        assert (found.how == "sum") == name.is_sum


@pytest.mark.parametrize("written", ["Cit", "G3P", "Hyp", "Crea", "CP", "GLU", "glu", "G-3-P", "Ac"])
def test_a_short_name_of_two_analytes_is_matched_to_neither(names, written):
    found = names.match(written)
    assert (found.analyte, found.how) == ("", "ambiguous")
    assert len(found.candidates) > 1


@pytest.mark.parametrize(
    "written",
    ["hexose phosphate", "2PG/3PG", "2-PG/3-PG", "citrate+isocitrate", "Citrate / isocitrate", "G6P/F6P", "NAD(H)"],
)
def test_a_sum_is_a_sum(names, written):
    found = names.match(written)
    assert (found.analyte, found.how) == ("", "sum")
    assert len(found.candidates) > 1


@pytest.mark.parametrize("written", ["D-lactate", "D-Lactate", "d lactate"])
def test_the_other_enantiomer_is_another_analyte(names, written):
    assert names.match(written).analyte == "d_lactate"


@pytest.mark.parametrize(("written", "near"), [("glukose", "glucose"), ("piruvate", "pyruvate"), ("lactat", "lactate")])
def test_a_near_name_is_offered_and_not_taken(names, written, near):
    found = names.match(written)
    assert (found.analyte, found.how) == ("", "unknown")
    assert near in found.candidates
    assert len(found.candidates) <= 3


@pytest.mark.parametrize("written", ["lactate, venous", "Lactate conc.", "my (lactate)"])
def test_a_name_among_other_words_is_offered_and_not_taken(names, written):
    found = names.match(written)
    assert (found.analyte, found.how) == ("", "unknown")
    assert found.candidates[0] == "lactate"


def test_no_more_names_are_looked_up_than_a_reader_could_use(catalogue):
    names = Names(catalogue)
    offered = [names.match(f"glukose {'x' * (k % 2)}{k}").candidates for k in range(300)]
    assert not any(offered[200:])


@pytest.mark.parametrize("written", ["", "   ", "x" * 100_000, "\u200b"])
def test_what_is_no_name_is_unknown(names, written):
    assert names.match(written).how == "unknown"
    assert not names.knows(written)


def test_two_names_that_differ_by_punctuation_only_and_mean_two_things_are_ambiguous(catalogue):
    made = (Name("ab-1", ("lactate",), False, "made"), Name("a b1", ("pyruvate",), False, "made"))
    names = Names(dataclasses.replace(catalogue, names=made))
    assert names.match("ab-1").analyte == "lactate"
    assert names.match("AB1").how == "ambiguous"
    assert names.match("AB1").candidates == ("lactate", "pyruvate")


def test_what_a_mass_is_the_mass_of(names):
    assert names.mass_of("BUN") == pytest.approx(28.01, abs=0.01)  # two nitrogen atoms a urea
    assert names.mass_of("lactate") is None


@given(written=st.text(max_size=60))
def test_any_text_gets_a_match_of_one_kind(names, written):
    found = names.match(written)
    assert found.written == written
    assert bool(found.analyte) == (found.how in ("id", "name", "abbreviation", "synonym", "spelling"))


class TestInAFile:
    def test_an_unknown_name_is_kept_unmatched_and_told_once(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,glukose,5,mmol/L\nB,plasma,glukose,5,mmol/L\n")
        assert [(r.state, r.analyte) for r in seen(panel)] == [(State.UNMATCHED, "")] * 2
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column) == (Severity.VALUE, 2, "value")
        assert problem.what == "the analyte “glukose” is not known (2 values)"
        assert problem.remedy == "rename it (perhaps glucose)"

    def test_an_ambiguous_name_says_what_it_may_mean(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,Glu,5,mmol/L\n")
        (reading,) = seen(panel)
        assert reading.state is State.UNMATCHED
        assert reading.note == "“Glu” may mean glucose or glutamate"
        (problem,) = problems(panel)
        assert problem.severity is Severity.VALUE
        assert problem.specimen == "A"
        assert problem.remedy == "write the full name"

    def test_a_sum_is_kept_as_a_sum_without_a_concentration(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,G6P/F6P,5,mmol/L\n")
        (reading,) = seen(panel)
        assert (reading.state, reading.analyte) == (State.SUM, "")
        assert reading.mol_per_l != reading.mol_per_l
        assert "sum of glucose_6_phosphate, fructose_6_phosphate" in reading.note
        assert [p.severity for p in problems(panel)] == [Severity.NOTE]

    def test_a_known_analyte_outside_the_steps_is_recognised_and_not_used(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,D-lactate,5,mmol/L\n")
        (reading,) = seen(panel)
        assert (reading.state, reading.analyte) == (State.UNMATCHED, "d_lactate")
        assert "takes part in no step" in reading.note
        assert [p.severity for p in problems(panel)] == [Severity.NOTE]

    def test_every_name_is_listed_with_how_it_was_matched(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,Lac,5,mmol/L\nA,plasma,PYRUVATE,5,mmol/L\nA,plasma,foo,5,mmol/L\n")
        assert [(m.written, m.analyte, m.how) for m in panel.matches] == [
            ("Lac", "lactate", "abbreviation"),
            ("PYRUVATE", "pyruvate", "spelling"),
            ("foo", "", "unknown"),
        ]

    def test_text_in_an_unmatched_column_is_one_problem_not_many(self, catalogue):
        panel = read(catalogue, "specimen,matrix,lactate (mM),diet\nA,plasma,1,f\nB,plasma,2,m\n")
        assert [r.state for r in seen(panel)] == [State.MEASURED, State.UNMATCHED] * 2
        (problem,) = problems(panel)
        assert problem.column == "diet"
