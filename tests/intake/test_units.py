"""Units: what laboratories write, the power of ten and the basis; everything else refused with a reason.

Codes: UCUM's table of example codes (v1.5); the other spellings: common practice, no source.
"""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.intake.units import MASS_UNSTATED, Unit, UnknownUnit, read_unit

AMOUNTS = {
    # UCUM codes
    "mol/L": (0, "litre"),
    "mmol/L": (-3, "litre"),
    "umol/L": (-6, "litre"),
    "nmol/L": (-9, "litre"),
    "pmol/L": (-12, "litre"),
    "nmol/mL": (-6, "litre"),
    "umol/dL": (-5, "litre"),
    "nmol/g": (-6, MASS_UNSTATED),
    "umol/g": (-3, MASS_UNSTATED),
    "mmol/kg": (-3, MASS_UNSTATED),
    "nmol/mg": (-3, MASS_UNSTATED),
    "nmol/mg{prot}": (-3, "kg_protein"),
    "fmol/mg{prot}": (-9, "kg_protein"),
    "umol/g{Hb}": (-3, "kg_haemoglobin"),
    "mmol/g{Hb}": (0, "kg_haemoglobin"),
    "nmol/L{RBCs}": (-9, "litre_cells"),
    "umol/L{RBCs}": (-6, "litre_cells"),
    "mmol/L{RBCs}": (-3, "litre_cells"),
    "umol/10*6{RBC}": (-3, "billion_cells"),
    "nmol/g{dry_wt}": (-6, "kg_dry"),
    "MMOL/L": (-3, "litre"),
    # the trade's spellings
    "mM": (-3, "litre"),
    "M": (0, "litre"),
    "uM": (-6, "litre"),
    "µM": (-6, "litre"),
    "μM": (-6, "litre"),
    "nM": (-9, "litre"),
    "µmol/L": (-6, "litre"),
    "μmol/l": (-6, "litre"),
    "mMol/L": (-3, "litre"),
    "mcmol/L": (-6, "litre"),
    "micromol/L": (-6, "litre"),
    "umol / l": (-6, "litre"),
    "umol per L": (-6, "litre"),
    "µmol·L⁻¹": (-6, "litre"),
    "mmol L-1": (-3, "litre"),
    "mmol.l^-1": (-3, "litre"),
    "mmol/L cell water": (-3, "litre"),
    "nmol/mL RBC": (-6, "litre_cells"),
    "mmol/L packed cells": (-3, "litre_cells"),
    "µmol/L erythrocytes": (-6, "litre_cells"),
    "mmol/L (red cells)": (-3, "litre_cells"),
    "umol/g ww": (-3, "kg_wet"),
    "µmol/g wet weight": (-3, "kg_wet"),
    "µmol/g wet wt": (-3, "kg_wet"),
    "nmol/mg wet tissue": (-3, "kg_wet"),
    "mmol/kg dw": (-3, "kg_dry"),
    "mmol/kg dry weight": (-3, "kg_dry"),
    "mmol·kg⁻¹ dm": (-3, "kg_dry"),
    "mmol kg-1 dry muscle": (-3, "kg_dry"),
    "nmol/mg protein": (-3, "kg_protein"),
    "nmol/(mg protein)": (-3, "kg_protein"),
    "umol/g Hb": (-3, "kg_haemoglobin"),
    "µmol/gHb": (-3, "kg_haemoglobin"),
    "umol/100 g ww": (-5, "kg_wet"),
    "nmol/10^6 cells": (-6, "billion_cells"),
    "nmol/10⁶ cells": (-6, "billion_cells"),
    "nmol/1e6 cells": (-6, "billion_cells"),
    "nmol/million cells": (-6, "billion_cells"),
    "nmol/10*9 cells": (-9, "billion_cells"),
    "nmol/10^9 cells": (-9, "billion_cells"),
    "fmol/10^6 cells": (-12, "billion_cells"),
}
MASSES = {
    "mg/dL": (-2, "litre"),
    "MG/DL": (-2, "litre"),
    "g/L": (0, "litre"),
    "mg/L": (-3, "litre"),
    "ug/mL": (-3, "litre"),
    "µg/mL": (-3, "litre"),
    "mcg/mL": (-3, "litre"),
    "ng/mL": (-6, "litre"),
    "ug/dL": (-5, "litre"),
    "mg/100 mL": (-2, "litre"),
    "mg/dL{RBCs}": (-2, "litre_cells"),
    "ug/g{Hb}": (-3, "kg_haemoglobin"),
    "mg/g{wet_tissue}": (0, "kg_wet"),
}


@pytest.mark.parametrize("text", AMOUNTS)
def test_an_amount_keeps_its_power_of_ten_and_its_basis(text):
    exponent, basis = AMOUNTS[text]
    unit = read_unit(text)
    assert (unit.exponent, unit.basis, unit.is_mass) == (exponent, basis, False)


@pytest.mark.parametrize("text", MASSES)
def test_a_mass_keeps_its_power_of_ten_and_its_basis(text):
    exponent, basis = MASSES[text]
    unit = read_unit(text)
    assert (unit.exponent, unit.basis, unit.is_mass) == (exponent, basis, True)


def test_the_basis_is_part_of_the_meaning():
    assert read_unit("nmol/mg{prot}") != read_unit("nmol/mg{dry_wt}")
    assert read_unit("mmol/L") != read_unit("mmol/L{RBCs}")


@pytest.mark.parametrize(
    ("text", "matrix"),
    [("mmol/L plasma", "plasma"), ("µmol/L serum", "plasma"), ("mmol/L blood", "whole_blood"), ("umol/L CSF", "csf")],
)
def test_a_unit_may_name_its_matrix(text, matrix):
    assert read_unit(text).matrix == matrix


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("%", "a percentage is no concentration"),
        ("a.u.", "a peak area or intensity is no concentration"),
        ("AU", "a peak area or intensity is no concentration"),
        ("peak area", "a peak area or intensity is no concentration"),
        ("area ratio", "a peak area or intensity is no concentration"),
        ("counts", "a peak area or intensity is no concentration"),
        ("ratio", "a ratio is no concentration"),
        ("fold change", "a ratio is no concentration"),
        ("IU/L", "an enzyme activity is no concentration"),
        ("U/g Hb", "an enzyme activity is no concentration"),
        ("nkat/L", "an enzyme activity is no concentration"),
        ("nmol/min", "a rate is no concentration"),
        ("mmol/h", "a rate is no concentration"),
        ("mmol/24h", "a rate is no concentration"),
        ("mEq/L", "an equivalent is no amount of substance"),
        ("mg%", "mg% may mean mg/dL"),
        ("mmol/mol creatinine", "per creatinine"),
        ("umol/mmol{creat}", "per creatinine"),
        ("nmol/10e6 cells", "10⁶ or 10⁷"),
        ("", "no unit is given"),
        ("   ", "no unit is given"),
    ],
)
def test_what_is_no_concentration_is_refused_with_its_reason(text, reason):
    with pytest.raises(UnknownUnit) as caught:
        read_unit(text)
    assert reason in caught.value.what
    assert caught.value.remedy


@pytest.mark.parametrize(
    "text",
    ["furlong", "mmol", "mol", "mmol/", "/L", "mmol/X", "mM/L", "kmol/L", "MM", "mm", "nmol/ML", "mmol/L/h", "m mol L",
     "mmol/m3", "mmol/cell", "ppm", "g", "mmol/l foo", "mol/L mol/L", "mmol//L", "x" * 5000, "a/" * 5000, "½/L"],
)  # fmt: skip
def test_what_the_grammar_does_not_know_is_refused(text):
    with pytest.raises(UnknownUnit) as caught:
        read_unit(text)
    assert caught.value.remedy
    assert len(caught.value.what) < 150


@given(st.text(max_size=30))
def test_any_text_gives_a_unit_or_a_reason(text):
    try:
        found: Unit | UnknownUnit = read_unit(text)
    except UnknownUnit as error:
        found = error
    assert isinstance(found, Unit) or (found.what and found.remedy)
