"""Transformed formation energies of the shipped species table against the published ones."""

from __future__ import annotations

import pytest

from panelview.catalogue.load import load_catalogue
from panelview.thermo.conditions import Conditions
from panelview.thermo.transform import formation_energies

# ΔfG′°, kJ/mol, 298.15 K, pH 7, I = 0.25 mol/L, without magnesium.
# Read in Alberty, Thermodynamics of Biochemical Reactions (2003), pages 122 and 84.
READ = {
    "glucose": (-426.71, "Alberty 2003, p. 122"),
    "glucose_6_phosphate": (-1318.92, "Alberty 2003, p. 122"),
    "fructose_6_phosphate": (-1315.74, "Alberty 2003, p. 122"),
    "fructose_1_6_bisphosphate": (-2206.78, "Alberty 2003, p. 122"),
    "glyceraldehyde_3_phosphate": (-1088.04, "Alberty 2003, p. 122"),
    "dihydroxyacetone_phosphate": (-1095.70, "Alberty 2003, p. 122"),
    "serine": (-225.51, "Alberty 2003, p. 84"),
    "succinate": (-530.64, "Alberty 2003, p. 84"),
    "succinyl_coa": (-347.47, "Alberty 2003, p. 84"),
    "ubiquinone": (3668.94, "Alberty 2003, p. 84"),
    "ubiquinol": (3660.55, "Alberty 2003, p. 84"),
    "urate": (-204.41, "Alberty 2003, p. 84, anion only"),
    "urea": (-39.74, "Alberty 2003, p. 84"),
    "xylulose": (-338.49, "Alberty 2003, p. 84"),
    "adp": (-1424.70, "Alberty's table, read in a secondary source"),
    "atp": (-2292.50, "Alberty's table, read in a secondary source"),
    "phosphate": (-1059.49, "Alberty's table, read in a secondary source"),
    "coa": (-7.26, "Alberty's table, read in a secondary source"),
}

# The same table's values from memory.
REMEMBERED = {
    "water": -155.66,
    "amp": -554.83,
    "pyruvate": -350.78,
    "lactate": -313.70,
    "nad": 1059.11,
    "nadh": 1120.09,
    "malate": -682.83,
    "fumarate": -523.58,
    "oxaloacetate": -714.99,
    "citrate": -966.23,
    "isocitrate": -959.58,
    "acetyl_coa": -58.06,
    "co2_total": -547.10,
    "ammonia": 82.93,
    "glutamate": -372.16,
    "oxoglutarate_2": -633.58,
    "phosphoenolpyruvate": -1189.73,
    "phosphoglycerate_3": -1347.73,
    "phosphoglycerate_2": -1341.79,
    "bisphosphoglycerate_1_3": -2207.30,
    "glycerol_3_phosphate": -1077.14,
    "acetate": -247.83,
    "alanine": -85.64,
    "glutamine": -120.36,
    "pyrophosphate": -1940.66,
    "glucose_1_phosphate": -1311.89,
}

#: The shipped table follows a later edition for these two: all their species lie lower by this, kJ/mol.
EDITION_CHANGE = -13.21
OTHER_EDITION = {"ribose_1_phosphate": -1211.14, "ribose_5_phosphate": -1219.22}  # Alberty 2003, p. 84

NO_MAGNESIUM = 20.0


def computed(reactant: str, ph: float = 7.0) -> float:
    species = load_catalogue().constants.species
    at = Conditions.of(ph=ph, temperature=298.15, ionic_strength=0.25, pmg=NO_MAGNESIUM)
    return float(formation_energies(species, at).value[0, species.reactants.index(reactant)])


@pytest.mark.parametrize(
    ("reactant", "published"),
    [pytest.param(r, value, id=f"{r} ({source})") for r, (value, source) in READ.items()],
)
def test_formation_energies_at_ph_7_are_those_of_the_book(reactant: str, published: float) -> None:
    assert computed(reactant) == pytest.approx(published, abs=0.05)


@pytest.mark.parametrize(
    ("reactant", "published"),
    [pytest.param(r, value, id=f"{r} (Alberty's table, memory)") for r, value in REMEMBERED.items()],
)
def test_formation_energies_at_ph_7_are_those_remembered(reactant: str, published: float) -> None:
    assert computed(reactant) == pytest.approx(published, abs=0.05)


@pytest.mark.parametrize(("reactant", "published"), OTHER_EDITION.items())
def test_ribose_phosphates_differ_from_the_2003_book_by_the_change_of_edition(
    reactant: str, published: float
) -> None:
    assert computed(reactant) == pytest.approx(published + EDITION_CHANGE, abs=0.05)


def test_ribose_phosphates_keep_their_difference_whatever_the_edition() -> None:
    # Alberty 2003, p. 84: −1211.14 − (−1219.22) = 8.08 kJ/mol
    difference = computed("ribose_1_phosphate") - computed("ribose_5_phosphate")
    assert difference == pytest.approx(8.08, abs=0.02)
