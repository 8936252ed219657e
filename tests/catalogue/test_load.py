"""What the shipped catalogue holds, and that nothing can change it."""

from __future__ import annotations

import csv
import json
import math
import pickle
import shutil
from collections import Counter
from pathlib import Path

import numpy as np
import pytest

from panelview import resource_files
from panelview.catalogue.chemistry_tables import UNTESTED_LEVEL_SD
from panelview.catalogue.formula import element_counts, molar_mass
from panelview.catalogue.load import Catalogue, load_catalogue
from panelview.thermo.physical import GAS_CONSTANT
from panelview.thermo.species import MAGNESIUM_FORMATION_ENERGY, MAGNESIUM_FORMATION_ENTHALPY


def test_everything_curated_is_there(catalogue: Catalogue) -> None:
    assert len(catalogue.metabolites) == 119
    assert len(catalogue.constants.species.charge) == 275 - 1  # magnesium ion is part of the transform
    assert len(catalogue.steps) == 102
    assert len(catalogue.matrices) == 11
    assert len(catalogue.applicability) == 102 * 11
    used = [m for m in catalogue.measurements if not m.set_aside]
    assert len(used) == 1117
    assert len(catalogue.measurements) - len(used) == 36
    assert len(catalogue.effectors) == 66
    assert len(catalogue.regulation) == 42


def test_magnesium_ion_of_the_table_is_the_one_of_the_transform() -> None:
    with (resource_files.resources() / "species.csv").open(newline="", encoding="utf-8") as stream:
        rows = [row for row in csv.DictReader(stream) if row["reactant"] == "magnesium_ion"]
    assert len(rows) == 1
    assert float(rows[0]["formation_energy_kj_per_mol"]) == MAGNESIUM_FORMATION_ENERGY
    assert float(rows[0]["formation_enthalpy_kj_per_mol"]) == MAGNESIUM_FORMATION_ENTHALPY


def test_every_step_is_balanced_in_every_element_and_in_charge(catalogue: Catalogue) -> None:
    for step in catalogue.steps:
        total: Counter[str] = Counter()
        for metabolite, nu in step.stoichiometry:
            for element, n in element_counts(catalogue.metabolites[metabolite].formula or "").items():
                total[element] += int(nu) * n
        assert not any(total.values()), step.id


def test_charge_is_balanced_once_hydrogen_ions_are_counted(catalogue: Catalogue) -> None:
    # Any species of a reactant will do: they differ by H⁺ and Mg²⁺, whose charge goes with them.
    species = catalogue.constants.species
    protons = species.charge - species.hydrogen - 2 * species.magnesium
    per_reactant = protons[species.first]
    assert np.array_equal(per_reactant[species.reactant], protons)
    hydrogen = np.array([_neutral_hydrogen(catalogue, reactant) for reactant in species.reactants])
    for nu in catalogue.constants.stoichiometry:
        # Σν(z − nH − 2nMg) of the species equals −Σν nH of the neutral forms, which the formulas balance.
        assert nu @ (per_reactant + hydrogen) == 0


def _neutral_hydrogen(catalogue: Catalogue, reactant: str) -> int:
    metabolite = catalogue.metabolites[reactant]
    if metabolite.formula is None or reactant == "hydrogen_ion":
        return 0
    hydrogen = element_counts(metabolite.formula)["H"]
    # A reduced-convention row leaves out the coenzyme's 35 other hydrogen atoms.
    return hydrogen - 35 if metabolite.count_convention == "reduced CoA" else hydrogen


def test_molar_masses_are_those_of_the_formulas(catalogue: Catalogue) -> None:
    for metabolite in catalogue.metabolites.values():
        if metabolite.formula is not None:
            assert metabolite.molar_mass == pytest.approx(molar_mass(metabolite.formula), rel=2e-6)


def test_only_water_and_glycogen_are_left_out_of_the_ratio(catalogue: Catalogue) -> None:
    left_out = {m.id for m in catalogue.metabolites.values() if m.unit_activity}
    assert left_out == {"water", "glycogen_glucosyl_residue"}


def test_steps_without_any_constant_are_listed_and_say_so(catalogue: Catalogue) -> None:
    constants = catalogue.constants
    without = {a.step_id for a in constants.anchors if a.basis == "none"}
    assert without == {
        "bisphosphoglycerate_mutase",
        "bisphosphoglycerate_phosphatase",
        "hmg_coa_synthase",
        "hmg_coa_lyase",
    }
    for step_id in without:
        k = constants.step_ids.index(step_id)
        assert math.isnan(constants.anchors[k].ln_k_prime)
        assert not constants.stoichiometry[k].any()
        assert constants.source(k) == "no constant known"


def test_reactants_without_species_are_the_four_that_say_so(catalogue: Catalogue) -> None:
    species = set(catalogue.constants.species.reactants)
    without = {m.id for m in catalogue.metabolites.values() if m.id not in species} - {"magnesium_ion"}
    assert without == {"hmg_coa", "fructose_2_6_bisphosphate", "galactitol", "bisphosphoglycerate_2_3"}
    assert all(catalogue.metabolites[i].species_data == "none" for i in without)


def test_levels_without_evidence_are_wide(catalogue: Catalogue) -> None:
    constants = catalogue.constants
    at = constants.species.reactants.index
    assert constants.level[at("glycerol_3_phosphate")] == 17.87
    assert constants.level_sd[at("glucose")] == UNTESTED_LEVEL_SD
    assert constants.level_sd[at("gdp")] == 0  # a zero by convention cannot be wrong


def test_every_matrix_has_at_most_one_published_set_to_compare_with(catalogue: Catalogue) -> None:
    sets = {(p.matrix_id, p.set_id) for p in catalogue.published if p.is_default}
    assert sets == {
        ("erythrocyte", "beutler_1984"),
        ("plasma", "plasma_adult"),
        ("csf", "csf_reference"),
        ("skeletal_muscle", "muscle_biopsy_rest"),
        ("heart", "heart_mrs"),
        ("liver", "liver_rat_fed"),
    }
    of = Counter((p.set_id, p.matrix_id, p.metabolite_id) for p in catalogue.published)
    assert set(of.values()) == {1}


def test_a_published_mean_with_sd_is_read_as_lognormal(catalogue: Catalogue) -> None:
    atp = next(p for p in catalogue.published if p.set_id == "beutler_1984" and p.metabolite_id == "atp")
    assert (atp.mean, atp.spread, atp.unit) == (1438, "SD 99", "µmol/L")
    assert atp.ln_sd == pytest.approx(math.sqrt(math.log1p((99 / 1438) ** 2)), abs=1e-5)
    mean_of_c = math.exp(atp.ln_mean + atp.ln_sd**2 / 2)
    assert mean_of_c == pytest.approx(1438e-6 / 0.70, rel=1e-4)  # per L of cells → per L of cell water


def test_published_figures_without_spread_claim_none(catalogue: Catalogue) -> None:
    for p in catalogue.published:
        if not p.spread or (p.spread.startswith(("SE", "CV_I", "<", "≤")) and "IQR" not in p.spread):
            assert math.isnan(p.ln_sd), (p.set_id, p.metabolite_id)


def test_indicator_couples_are_read_nowhere_that_the_step_cannot_be(catalogue: Catalogue) -> None:
    for couple in catalogue.couples:
        for matrix in couple.matrices:
            entry = catalogue.applicability[couple.step_id, matrix]
            assert entry.assessability != "not_assessable", (couple.step_id, matrix)


def test_ketone_bodies_never_report_a_matrix_in_red_cells_or_muscle(catalogue: Catalogue) -> None:
    for couple in catalogue.couples:
        if couple.pool == "nad_mitochondrial_matrix":
            assert not {"erythrocyte", "skeletal_muscle", "urine"} & set(couple.matrices)


def test_names_that_differ_only_in_case_mean_the_same(catalogue: Catalogue) -> None:
    meanings: dict[str, set[tuple[tuple[str, ...], bool]]] = {}
    for name in catalogue.names:
        meanings.setdefault(name.text.casefold(), set()).add((name.candidates, name.is_sum))
    assert [text for text, found in meanings.items() if len(found) > 1] == []


@pytest.mark.parametrize(
    ("text", "candidates", "is_sum"),
    [
        ("Lac", {"lactate"}, False),
        ("lactic acid", {"lactate"}, False),
        ("BHB", {"hydroxybutyrate_3"}, False),
        ("3-OHB", {"hydroxybutyrate_3"}, False),
        ("α-KG", {"oxoglutarate_2"}, False),
        ("bicarbonate", {"co2_total"}, False),
        ("Cit", {"citrate", "citrulline"}, False),
        ("G3P", {"glyceraldehyde_3_phosphate", "glycerol_3_phosphate"}, False),
        ("Hyp", {"hypoxanthine", "trans_4_hydroxy_l_proline"}, False),
        ("Crea", {"creatine", "creatinine"}, False),
        ("CP", {"carbamoyl_phosphate", "phosphocreatine"}, False),
        ("GLU", {"glucose", "glutamate"}, False),
        ("G6P/F6P", {"glucose_6_phosphate", "fructose_6_phosphate"}, True),
        ("2/3-PG", {"phosphoglycerate_2", "phosphoglycerate_3"}, True),
        ("citrate/isocitrate", {"citrate", "isocitrate"}, True),
        ("glutamate + glutamine", {"glutamate", "glutamine"}, True),
    ],
)
def test_names_of_laboratories(catalogue: Catalogue, text: str, candidates: set[str], is_sum: bool) -> None:
    name = next(n for n in catalogue.names if n.text == text)
    assert set(name.candidates) == candidates
    assert name.is_sum is is_sum


def test_every_metabolite_can_be_named(catalogue: Catalogue) -> None:
    alone = {n.candidates[0] for n in catalogue.names if len(n.candidates) == 1}
    assert set(catalogue.metabolites) <= alone


def test_a_symbol_of_the_catalogue_never_means_another_metabolite(catalogue: Catalogue) -> None:
    names = {n.text: n for n in catalogue.names}
    for metabolite in catalogue.metabolites.values():
        name = names.get(metabolite.symbol)
        if name is not None:
            assert metabolite.id in name.candidates


def test_masses_by_custom_weigh_only_the_nitrogen_or_phosphorus(catalogue: Catalogue) -> None:
    masses = {n.text: n.molar_mass for n in catalogue.names}
    # 1 mg/dL is 0.357 mmol/L urea and 0.3229 mmol/L phosphate (common practice, no source).
    urea_nitrogen, phosphorus = masses["BUN"], masses["phosphorus"]
    assert urea_nitrogen is not None
    assert phosphorus is not None
    assert 10 / urea_nitrogen == pytest.approx(0.357, abs=0.0005)
    assert 10 / phosphorus == pytest.approx(0.3229, abs=0.0001)
    assert masses["urea"] is None


@pytest.mark.parametrize("table", ["identifiers.csv", "loinc.csv"])
def test_every_identifier_belongs_to_an_analyte(catalogue: Catalogue, table: str) -> None:
    analytes = set(catalogue.metabolites) | {k.id for k in catalogue.known_analytes}
    with (resource_files.resources() / table).open(newline="", encoding="utf-8") as stream:
        rows = list(csv.DictReader(stream))
    assert rows
    assert {row["analyte"] for row in rows} <= analytes
    assert all(row["source"] for row in rows)


def test_every_table_is_plain_utf8_with_unix_line_ends() -> None:
    for path in resource_files.resources().glob("*.csv"):
        content = path.read_bytes()
        content.decode("utf-8")
        assert b"\r" not in content, path.name
        assert content.endswith(b"\n"), path.name


def test_the_shipped_catalogue_is_read_once() -> None:
    assert load_catalogue() is load_catalogue()


def test_nothing_in_the_catalogue_can_be_changed(catalogue: Catalogue) -> None:
    with pytest.raises(TypeError):
        catalogue.metabolites["new"] = catalogue.metabolites["water"]  # type: ignore[index]
    with pytest.raises(TypeError):
        catalogue.matrices.clear()  # type: ignore[attr-defined]
    constants, species = catalogue.constants, catalogue.constants.species
    arrays = (
        constants.stoichiometry,
        constants.level,
        constants.level_sd,
        species.formation_energy,
        species.formation_enthalpy,
        species.charge,
        species.hydrogen,
        species.magnesium,
        species.reactant,
    )
    for array in arrays:
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 0


def test_the_catalogue_can_be_sent_to_another_process(catalogue: Catalogue) -> None:
    received = pickle.loads(pickle.dumps(catalogue))
    assert received.sha256 == catalogue.sha256
    assert received.metabolites == catalogue.metabolites
    with pytest.raises(TypeError):
        received.metabolites.update({})


def test_version_and_fingerprint_tell_the_tables_apart(tmp_path: Path, catalogue: Catalogue) -> None:
    folder = tmp_path / "resources"
    folder.mkdir()
    for path in resource_files.resources().glob("*.*"):
        if path.is_file():
            shutil.copy(path, folder)
    same = load_catalogue(folder)
    assert (same.version, same.sha256) == (catalogue.version, catalogue.sha256)
    assert same.version == json.loads((folder / "catalogue.json").read_text())["version"]
    table = folder / "effectors.csv"
    table.write_bytes(table.read_bytes().replace(b"all isoforms", b"every isoform"))
    changed = load_catalogue(folder)
    assert changed.sha256 != catalogue.sha256
    assert changed.constants.sha256 == catalogue.constants.sha256  # the constants are the same


def test_constants_at_their_own_conditions_are_those_of_the_table(catalogue: Catalogue) -> None:
    with (resource_files.resources() / "constants.csv").open(newline="", encoding="utf-8") as stream:
        rows = {row["step"]: row for row in csv.DictReader(stream)}
    for anchor in catalogue.constants.anchors:
        if anchor.basis != "none":
            assert anchor.ln_k_prime == pytest.approx(math.log(float(rows[anchor.step_id]["k_prime"])))
            assert anchor.sd > 0
            assert abs(GAS_CONSTANT * anchor.temperature * anchor.ln_k_prime) < 60
