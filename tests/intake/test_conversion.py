"""Reported values to mol/L of the pool's water: masses, bases, matrices, assay uncertainty, limits."""

from __future__ import annotations

import math

import pytest
from panel_texts import LONG, one, problems, read, seen

from panelview.intake.conversion import DEFAULT_CV
from panelview.intake.panel import State
from panelview.intake.problems import Severity


class TestMasses:
    @pytest.mark.parametrize(
        ("analyte", "value", "unit", "mmol_per_l"),
        [
            # Factors from mg/dL to mmol/L of clinical chemistry's conversion tables (common practice, no source).
            ("pyruvate", "1", "mg/dL", 0.1136),
            ("lactate", "1", "mg/dL", 0.1110),
            ("glucose", "1", "mg/dL", 0.05551),
            ("glucose", "1", "g/L", 5.551),
            ("3-hydroxybutyrate", "1", "mg/dL", 0.0961),
            ("acetoacetate", "1", "mg/dL", 0.0980),
            ("citrate", "1", "mg/dL", 0.05205),
            ("ammonia", "1", "ug/dL", 0.000587),
            ("BUN", "1", "mg/dL", 0.357),
            ("phosphate", "1", "mg/dL", 0.3229),
            ("lactate", "1", "µg/mL", 0.01110),
        ],
    )
    def test_a_mass_becomes_an_amount_by_what_it_is_the_mass_of(self, catalogue, analyte, value, unit, mmol_per_l):
        reading = one(catalogue, value, unit, analyte=analyte)
        assert reading.mol_per_l * 1e3 == pytest.approx(mmol_per_l, rel=1e-3)
        assert "molar mass" in reading.note

    def test_urea_by_mass_is_not_urea_nitrogen(self, catalogue):
        assert one(catalogue, "6.006", "mg/dL", analyte="urea").mol_per_l == pytest.approx(1e-3, rel=1e-3)

    def test_a_mass_of_something_else_than_the_molecule_is_an_assumption(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,phosphate,3,mg/dL\n")
        (problem,) = problems(panel)
        assert problem.severity is Severity.NOTE
        assert "taken as the mass of what its name says (30.97" in problem.what

    def test_an_analyte_without_a_molar_mass_cannot_be_given_by_mass(self, catalogue):
        protein = next(m.id for m in catalogue.metabolites.values() if m.molar_mass is None)
        reading = one(catalogue, "1", "mg/L", analyte=protein)
        assert reading.state is State.REFUSED
        assert "no molar mass" in reading.note


class TestBases:
    @pytest.mark.parametrize(
        ("matrix", "unit", "basis", "litres"),
        [
            ("erythrocyte", "mmol/L", "litre", 1.0),
            ("erythrocyte", "mmol/L cell water", "litre", 1.0),
            ("erythrocyte", "mmol/L RBC", "litre_cells", 0.70),
            ("erythrocyte", "mmol/kg Hb", "kg_haemoglobin", 0.70 / 0.330),
            ("skeletal_muscle", "mmol/kg dw", "kg_dry", 3.0),
            ("skeletal_muscle", "mmol/kg ww", "kg_wet", 0.66),
            ("skeletal_muscle", "mmol/kg", "kg_dry", 3.0),
            ("liver", "mmol/kg", "kg_wet", 0.67),
            ("liver", "mmol/kg wet weight", "kg_wet", 0.67),
            ("cultured_cells", "mmol/10^9 cells", "billion_cells", 2e-3),
            ("cultured_cells", "mmol/kg protein", "kg_protein", 5.0),
            ("plasma", "mmol/L", "litre", 1.0),
        ],
    )
    def test_the_basis_is_kept_and_its_water_divided_out(self, catalogue, matrix, unit, basis, litres):
        """Litres of water per unit of the basis: textbooks and reviews, as in resources/conversions.csv."""
        reading = one(catalogue, "6", unit, analyte="ATP", matrix=matrix)
        assert reading.basis == basis
        assert reading.mol_per_l == pytest.approx(6e-3 / litres, rel=1e-3)
        assert reading.shared_sd_ln == catalogue.conversions[matrix, basis].relative_sd

    def test_the_water_is_said_in_the_note(self, catalogue):
        assert (
            one(catalogue, "6", "mmol/kg dw", matrix="skeletal_muscle").note
            == "3 L of the pool's water per kg dry weight"
        )

    @pytest.mark.parametrize(
        ("matrix", "unit"),
        [("plasma", "umol/g ww"), ("plasma", "nmol/mg protein"), ("liver", "umol/L RBC"), ("urine", "mmol/L"),
         ("platelet_or_pbmc", "nmol/10^6 cells")],
    )  # fmt: skip
    def test_a_basis_that_the_matrix_does_not_know_is_refused(self, catalogue, matrix, unit):
        panel = read(catalogue, LONG + f"A,{matrix},lactate,6,{unit}\n")
        (reading,) = seen(panel)
        assert reading.state is State.REFUSED
        (problem,) = problems(panel)
        assert (problem.severity, problem.row, problem.column) == (Severity.VALUE, 2, "value")
        assert f"no conversion of “{unit}” to mol/L is known for the matrix {matrix}" in problem.what
        assert problem.remedy == "report the value per litre"

    @pytest.mark.parametrize("unit", ["umol/g", "mmol/kg"])
    def test_a_weight_that_is_neither_wet_nor_dry_is_assumed_once_a_file(self, catalogue, unit):
        rows = "".join(f"{s},liver,{a},6,{unit}\n" for s in "AB" for a in ("ATP", "ADP"))
        panel = read(catalogue, LONG + rows)
        assert {r.note for r in seen(panel)} == {
            "weight taken as wet, as usual for liver; 0.67 L of the pool's water per kg wet weight"
        }
        (problem,) = problems(panel)
        assert problem.severity is Severity.NOTE
        assert "wet weight was taken, as usual for liver" in problem.what

    def test_a_weight_where_no_kind_is_usual_is_refused(self, catalogue):
        reading = one(catalogue, "6", "umol/g", matrix="plasma")
        assert reading.state is State.REFUSED
        assert "does not say of what the weight is" in reading.note

    def test_a_plain_amount_per_litre_of_cells_is_taken_per_litre_of_their_water_and_told(self, catalogue):
        panel = read(catalogue, LONG + "A,erythrocyte,ATP,1.5,mmol/L\nA,erythrocyte,ADP,0.2,mmol/L\n")
        (problem,) = problems(panel)
        assert problem.severity is Severity.NOTE
        assert "per litre of the cells' water, though litre of packed cells is usual for erythrocyte" in problem.what

    def test_in_plasma_a_plain_amount_per_litre_needs_no_word(self, catalogue):
        assert not problems(read(catalogue, LONG + "A,plasma,lactate,1,mmol/L\n"))

    @pytest.mark.parametrize(
        ("matrix", "unit"), [("erythrocyte", "mmol/L blood"), ("csf", "mmol/L plasma"), ("plasma", "mmol/L CSF")]
    )
    def test_a_unit_that_names_another_matrix_is_refused(self, catalogue, matrix, unit):
        reading = one(catalogue, "1", unit, matrix=matrix)
        assert reading.state is State.REFUSED
        assert f"the matrix is {matrix}" in reading.note

    def test_without_a_matrix_an_amount_per_litre_is_taken_with_more_doubt(self, catalogue):
        reading = one(catalogue, "1", "mmol/L", matrix="")
        assert (reading.mol_per_l, reading.shared_sd_ln, reading.basis) == (1e-3, 0.10, "litre")
        assert "matrix not stated" in reading.note

    @pytest.mark.parametrize("unit", ["umol/g ww", "mmol/L RBC", "nmol/mg protein", "umol/g"])
    def test_without_a_matrix_any_other_basis_is_refused(self, catalogue, unit):
        assert one(catalogue, "1", unit, matrix="").state is State.REFUSED


class TestAssayUncertainty:
    def test_the_default_is_marked_and_told_once(self, catalogue):
        panel = read(catalogue, LONG + "A,plasma,lactate,1,mM\nA,plasma,pyruvate,1,mM\n")
        for reading in seen(panel):
            assert reading.sd_is_default
            assert reading.sd_ln == math.sqrt(math.log1p(DEFAULT_CV**2))
        (problem,) = panel.problems
        assert problem.what == "no assay CV is stated for 2 values; 8% was taken"

    @pytest.mark.parametrize(("text", "cv"), [("4", 0.04), ("4.0", 0.04), ("4 %", 0.04), ("4,5", 0.045), ("150", 1.5)])
    def test_a_stated_cv_is_in_percent(self, catalogue, text, cv):
        panel = read(catalogue, f"specimen;analyte;value;unit;cv_percent\nA;lactate;1;mM;{text}\n")
        (reading,) = seen(panel)
        assert reading.sd_ln == pytest.approx(math.sqrt(math.log1p(cv**2)))
        assert not reading.sd_is_default

    @pytest.mark.parametrize("text", ["0", "-3", "0.04", "500", "small"])
    def test_a_cv_that_can_be_no_percentage_is_told_and_the_default_taken(self, catalogue, text):
        panel = read(catalogue, f"specimen,matrix,analyte,value,unit,cv_percent\nA,plasma,lactate,1,mM,{text}\n")
        (reading,) = seen(panel)
        assert reading.sd_is_default
        assert [p.severity for p in problems(panel)] == [Severity.NOTE]
        assert f"“{text}”" in problems(panel)[0].what

    def test_values_without_a_number_have_no_uncertainty(self, catalogue):
        for text in ("", "ND", "0", "lots"):
            reading = one(catalogue, text)
            assert math.isnan(reading.sd_ln)
            assert math.isnan(reading.shared_sd_ln)
            assert not reading.sd_is_default


class TestLimits:
    def read(self, catalogue, value: str, lloq: str):
        return read(catalogue, f"specimen;matrix;analyte;value;unit;lloq\nA;plasma;lactate;{value};umol/L;{lloq}\n")

    @pytest.mark.parametrize("word", ["ND", "<LOQ", "<LOD", "BLQ", "n.d."])
    def test_not_detected_takes_the_limit_of_the_file(self, catalogue, word):
        (reading,) = seen(self.read(catalogue, word, "5"))
        assert (reading.state, reading.mol_per_l) == (State.BELOW_LOQ, 5e-6)

    @pytest.mark.parametrize("word", ["ND", "<LOQ", "<LOD", "BLQ", "n.d."])
    def test_without_a_limit_it_stays_without_a_number(self, catalogue, word):
        (reading,) = seen(self.read(catalogue, word, ""))
        assert reading.state is State.BELOW_LOQ
        assert math.isnan(reading.mol_per_l)
        assert "nothing can be said of its size" in reading.note

    def test_a_limit_in_the_cell_goes_before_that_of_the_column(self, catalogue):
        (reading,) = seen(self.read(catalogue, "<3", "5"))
        assert reading.mol_per_l == 3e-6

    def test_a_value_under_the_limit_is_below_it(self, catalogue):
        (reading,) = seen(self.read(catalogue, "4.9", "5"))
        assert (reading.state, reading.mol_per_l) == (State.BELOW_LOQ, 5e-6)
        (reading,) = seen(self.read(catalogue, "5", "5"))
        assert reading.state is State.MEASURED

    def test_a_limit_that_is_no_number_is_told(self, catalogue):
        panel = self.read(catalogue, "4", "low")
        assert "the limit “low” is no number" in problems(panel)[0].what
        assert seen(panel)[0].state is State.MEASURED

    def test_n_d_is_told_once_because_laboratories_mean_two_things_by_it(self, catalogue):
        panel = read(
            catalogue, LONG + "A,plasma,lactate,n.d.,mM\nA,plasma,pyruvate,n.d.,mM\nA,plasma,glucose,<LOQ,mM\n"
        )
        (problem,) = problems(panel)
        assert problem.severity is Severity.NOTE
        assert problem.what.startswith("“n.d.” was read as not detected")
        assert "(2 values)" in problem.what

    def test_not_detected_needs_no_unit(self, catalogue):
        reading = one(catalogue, "ND", "")
        assert reading.state is State.BELOW_LOQ

    def test_over_an_unstated_limit(self, catalogue):
        reading = one(catalogue, ">ULOQ")
        assert reading.state is State.ABOVE_RANGE
        assert math.isnan(reading.mol_per_l)


@pytest.mark.parametrize(
    ("value", "unit"), [("60", "mol/L"), ("1e300", "mol/L"), ("1e-30", "mmol/L"), ("1e308", "mol/mL")]
)
def test_what_no_solution_can_hold_is_refused(catalogue, value, unit):
    reading = one(catalogue, value, unit)
    assert reading.state is State.REFUSED
    assert "is no concentration that a cell can hold" in reading.note


def test_equal_amounts_in_different_units_are_equal(catalogue):
    found = {
        one(catalogue, v, u).mol_per_l for v, u in (("1180", "umol/L"), ("1180", "nmol/mL"), ("1180000", "nmol/L"))
    }
    assert found == {0.00118}
