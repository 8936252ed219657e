"""Headings: which field they name, which analyte and unit they hold."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.intake.headings import field_of, split_unit


@pytest.mark.parametrize(
    ("heading", "field"),
    [
        ("specimen", "specimen"),
        ("Sample ID", "specimen"),
        ("sample_id", "specimen"),
        ("SAMPLE", "specimen"),
        ("Probe", "specimen"),
        ("subject", "participant"),
        ("Gruppe", "group"),
        ("Specimen type", "matrix"),
        ("Collection time", "collected"),
        ("pH", "ph"),
        ("Temperature (°C)", "temperature"),
        ("temperature_c", "temperature"),
        ("ionic_strength_mol_per_l", "ionic_strength"),
        ("Ionic strength (mol/L)", "ionic_strength"),
        ("pMg", "pmg"),
        ("Analyte", "analyte"),
        ("Result", "value"),
        ("Einheit", "unit"),
        ("comparator", "comparator"),
        ("status", "status"),
        ("CV (%)", "cv_percent"),
        ("cv_percent", "cv_percent"),
        ("LLOQ", "lloq"),
        ("Lactate", ""),
        ("", ""),
    ],
)
def test_a_heading_names_a_field(heading, field):
    assert field_of(heading) == field


@pytest.mark.parametrize(
    ("heading", "name", "unit"),
    [
        ("Lactate (mmol/L)", "Lactate", "mmol/L"),
        ("lactate [umol/L]", "lactate", "umol/L"),
        ("Lac (µmol/L)", "Lac", "µmol/L"),
        ("Lac_uM", "Lac", "uM"),
        ("Lac mM", "Lac", "mM"),
        ("Lactate, mmol/L", "Lactate", "mmol/L"),
        ("lactate_mmol_per_l", "lactate", "mmol/l"),
        ("lactate_mmol_l", "lactate", "mmol/l"),
        ("glucose_mg_dl", "glucose", "mg/dl"),
        ("G6P (nmol/mL RBC)", "G6P", "nmol/mL RBC"),
        ("G6P [umol/L (RBC)]", "G6P", "umol/L (RBC)"),
        ("ATP (µmol/g Hb)", "ATP", "µmol/g Hb"),
        ("Glucose (fasting) (mmol/L)", "Glucose (fasting)", "mmol/L"),
        ("2,3-BPG (mmol/L cells)", "2,3-BPG", "mmol/L cells"),
        ("HbA1c (%)", "HbA1c", "%"),
        ("Lactate (furlong/L)", "Lactate (furlong/L)", ""),
        ("Lactate (mmol/furlong)", "Lactate", "mmol/furlong"),
        ("NAD(H)", "NAD(H)", ""),
        ("NAD(P)", "NAD(P)", ""),
        ("Glx (Glu+Gln)", "Glx (Glu+Gln)", ""),
        ("Lactate", "Lactate", ""),
        ("(mmol/L)", "(mmol/L)", ""),
        ("mM", "mM", ""),
        ("", "", ""),
    ],
)
def test_name_and_unit_of_a_heading(heading, name, unit):
    assert split_unit(heading) == (name, unit)


@given(st.text("Lac ([_mM/])uo,%", max_size=30))
def test_any_heading_is_split_without_losing_its_letters(heading):
    name, unit = split_unit(heading)
    assert set(name) <= set(heading)
    assert len(name) + len(unit) <= len(heading) + 1
