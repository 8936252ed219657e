"""Tables of steps: reactions, constants, measurements, effectors, regulation, indicator couples."""

from __future__ import annotations

import math
import re
from collections import Counter, defaultdict
from collections.abc import Mapping
from pathlib import Path

from panelview.catalogue.constants import Anchor
from panelview.catalogue.couples import RATIO_POOLS, IndicatorCouple
from panelview.catalogue.effectors import Effector, Regulation
from panelview.catalogue.formula import element_counts
from panelview.catalogue.matrices import Matrix
from panelview.catalogue.measurements import MeasuredConstant
from panelview.catalogue.metabolites import Metabolite
from panelview.catalogue.rows import Row, read_table, unique
from panelview.catalogue.steps import COMPARTMENTS, Step
from panelview.thermo.conditions import LIMITS

_TERM = re.compile(r"(?:([1-9]\d*) )?([a-z][a-z0-9_]*)\Z")
_POOLS = (*RATIO_POOLS, "adp_cytosol", "amp_cytosol")


def read_steps(folder: Path, metabolites: Mapping[str, Metabolite]) -> tuple[Step, ...]:
    """steps.csv, in its order; every reaction is checked for balance."""
    columns = (
        "id",
        "enzyme",
        "short",
        "ec",
        "pathways",
        "compartments",
        "reaction",
        "usual_direction",
        "disposition",
        "reason",
        "tier",
        "source",
        "note",
    )
    rows = read_table(folder, "steps.csv", columns)
    unique(rows, ("id",))
    unique(rows, ("short",))
    unique(rows, ("reaction",))
    return tuple(_step(row, metabolites) for row in rows)


def _step(row: Row, metabolites: Mapping[str, Metabolite]) -> Step:
    stoichiometry = _reaction(row, metabolites)
    _check_balance(row, stoichiometry, metabolites)
    pathways = row.many("pathways")
    compartments = row.many_known("compartments", COMPARTMENTS, "compartment")
    for column, words in (("pathways", pathways), ("compartments", compartments)):
        if not words:
            raise row.error(column, "the cell is empty", "name at least one")
    return Step(
        id=row.required("id"),
        enzyme=row.required("enzyme"),
        short=row.required("short"),
        ec=row.required("ec"),
        pathways=pathways,
        compartments=compartments,
        stoichiometry=tuple(stoichiometry.items()),
        usual_direction=row.choice("usual_direction", ("forward", "either")),
        disposition=row.choice("disposition", ("near-equilibrium", "committed")),
        reason=row.required("reason"),
        tier=row.choice("tier", ("core", "extra")),
        source=row.required("source"),
        note=row.text("note"),
    )


def _reaction(row: Row, metabolites: Mapping[str, Metabolite]) -> dict[str, float]:
    """ν of each reactant, substrates (on the left) negative."""
    sides = row.required("reaction").split(" = ")
    if len(sides) != 2:
        raise row.error(
            "reaction", "a reaction needs one “ = ”", "write it as pyruvate + nadh = lactate + nad"
        )
    nu: dict[str, float] = {}
    for sign, side in zip((-1.0, 1.0), sides, strict=True):
        for term in side.split(" + "):
            match = _TERM.match(term)
            if match is None:
                raise row.error("reaction", f"“{term}” is not a reactant", "write an id, or 2 and an id")
            metabolite = match[2]
            if metabolite not in metabolites:
                raise row.error(
                    "reaction", f"no metabolite has the id “{metabolite}”", "use an id of metabolites.csv"
                )
            if metabolite in ("hydrogen_ion", "magnesium_ion"):
                raise row.error(
                    "reaction", f"{metabolite} is held by pH or pMg and is no reactant", "leave it out"
                )
            if metabolite in nu:
                raise row.error("reaction", f"{metabolite} stands twice", "write it once, with its number")
            nu[metabolite] = sign * float(match[1] or 1)
    return nu


def _check_balance(row: Row, nu: Mapping[str, float], metabolites: Mapping[str, Metabolite]) -> None:
    """Elements must balance; with neutral formulas the hydrogen balance is the charge balance too."""
    total: Counter[str] = Counter()
    families: defaultdict[str, float] = defaultdict(float)
    for reactant, n in nu.items():
        metabolite = metabolites[reactant]
        if metabolite.formula is None:
            return  # proteins on reduced counts carry no formula
        for element, count in element_counts(metabolite.formula).items():
            total[element] += n * count  # type: ignore[assignment]
        if metabolite.zero_family:
            families[metabolite.zero_family] += n
    off = [f"{element} {n:+g}" for element, n in sorted(total.items()) if n]
    if off:
        raise row.error(
            "reaction",
            f"the reaction is not balanced (right minus left: {', '.join(off)}; H stands for charge too)",
            "check coefficients, reactants and formulas",
        )
    for family, n in families.items():
        if n:
            raise row.error(
                "reaction",
                f"the reaction crosses the {family} family, whose zero of energy is arbitrary",
                f"keep as many {family} compounds on the right as on the left",
            )


def read_anchors(folder: Path, steps: tuple[Step, ...], with_species: frozenset[str]) -> tuple[Anchor, ...]:
    """constants.csv in the order of the steps; with_species: reactants that have species."""
    columns = (
        "step",
        "k_prime",
        "sd_kj_per_mol",
        "temperature_k",
        "ph",
        "ionic_strength_mol_per_l",
        "pmg",
        "enthalpy_kj_per_mol",
        "enthalpy_sd_kj_per_mol",
        "uses_species_enthalpy",
        "enthalpy_basis",
        "basis",
        "measurements",
        "references",
        "source",
        "note",
    )
    rows = read_table(folder, "constants.csv", columns)
    unique(rows, ("step",))
    by_id = {step.id: step for step in steps}
    made = {}
    for row in rows:
        step = by_id[row.known("step", by_id, "step")]
        made[step.id] = _anchor(row, step, with_species)
    for step in steps:
        if step.id not in made:
            raise rows[-1].error(
                "step", f"{step.id} has no row", "add one (basis “none” where no constant is known)"
            )
    return tuple(made[step.id] for step in steps)


def _anchor(row: Row, step: Step, with_species: frozenset[str]) -> Anchor:
    basis = row.choice("basis", ("measured", "estimated", "none"))
    lacking = [i for i in step.metabolite_ids if i not in with_species]
    if basis == "none":
        for column in ("k_prime", "sd_kj_per_mol", "enthalpy_kj_per_mol", "enthalpy_sd_kj_per_mol"):
            if row.text(column):
                raise row.error(
                    column, "a value, but the basis is “none”", "empty the cell or name the basis"
                )
    elif lacking:
        raise row.error(
            "basis",
            f"{lacking[0]} has no species, so the constant cannot be carried to other conditions",
            "add its species or write “none”",
        )
    known = basis != "none"
    return Anchor(
        step_id=step.id,
        ln_k_prime=math.log(row.positive("k_prime")) if known else math.nan,
        sd=row.number_in("sd_kj_per_mol", 0, 50) if known else math.nan,
        temperature=row.number_in("temperature_k", *LIMITS["temperature"]),
        ph=row.number_in("ph", *LIMITS["ph"]),
        ionic_strength=row.number_in("ionic_strength_mol_per_l", *LIMITS["ionic_strength"]),
        pmg=row.number_in("pmg", *LIMITS["pmg"]),
        enthalpy=row.number_in("enthalpy_kj_per_mol", -300, 300) if known else math.nan,
        enthalpy_sd=row.number_in("enthalpy_sd_kj_per_mol", 0, 100) if known else math.nan,
        uses_species_enthalpy=row.flag("uses_species_enthalpy"),
        enthalpy_basis=row.text("enthalpy_basis"),
        basis=basis,
        measurements=row.integer("measurements"),
        references=row.required("references"),
        source=row.required("source") if known else row.text("source"),
        note=row.text("note"),
    )


def read_measurements(folder: Path, step_ids: frozenset[str]) -> tuple[MeasuredConstant, ...]:
    """measurements.csv."""
    columns = (
        "step",
        "k_prime",
        "temperature_k",
        "ionic_strength_mol_per_l",
        "ionic_strength_basis",
        "ph",
        "pmg",
        "pmg_basis",
        "evaluation",
        "reference",
        "method",
        "k_printed",
        "flipped",
        "buffer",
        "database_row",
        "twins",
        "set_aside",
        "source",
        "note",
    )
    rows = read_table(folder, "measurements.csv", columns)
    unique(rows, ("step", "database_row"))
    return tuple(
        MeasuredConstant(
            step_id=row.known("step", step_ids, "step"),
            k_prime=row.positive("k_prime"),
            temperature=row.number_in("temperature_k", 260, 370),
            ionic_strength=row.number_in("ionic_strength_mol_per_l", 0, 5),
            ionic_strength_basis=row.required("ionic_strength_basis"),
            ph=row.number_in("ph", 2, 12),
            pmg=row.number_in("pmg", 0, 20),
            pmg_basis=row.required("pmg_basis"),
            evaluation=row.choice("evaluation", ("A", "B", "C", "D")),
            reference_id=row.required("reference"),
            method=row.text("method"),
            k_printed=row.required("k_printed"),
            flipped=row.flag("flipped"),
            buffer=row.text("buffer"),
            database_row=row.required("database_row"),
            twins=row.many("twins"),
            set_aside=row.text("set_aside"),
            source=row.required("source"),
            note=row.text("note"),
        )
        for row in rows
    )


def read_effectors(
    folder: Path, step_ids: frozenset[str], metabolites: Mapping[str, Metabolite]
) -> tuple[Effector, ...]:
    """effectors.csv."""
    columns = (
        "step",
        "effector",
        "metabolite",
        "effect",
        "kind",
        "tissue",
        "usual_range",
        "source",
        "basis",
        "note",
    )
    rows = read_table(folder, "effectors.csv", columns)
    unique(rows, ("step", "effector", "effect"))
    return tuple(
        Effector(
            step_id=row.known("step", step_ids, "step"),
            effector=row.required("effector"),
            metabolite_id=row.known("metabolite", metabolites, "metabolite")
            if row.text("metabolite")
            else None,
            effect=row.choice("effect", ("inhibits", "activates")),
            kind=row.required("kind"),
            tissue=row.required("tissue"),
            usual_range=row.text("usual_range"),
            source=row.required("source"),
            basis=row.required("basis"),
        )
        for row in rows
    )


def read_regulation(folder: Path, step_ids: frozenset[str]) -> tuple[Regulation, ...]:
    """regulation.csv."""
    columns = (
        "enzyme",
        "gene",
        "ec",
        "steps",
        "pathway",
        "inhibitors",
        "activators",
        "product_inhibition",
        "level_control",
        "panel_shows",
        "source",
        "basis",
        "note",
    )
    rows = read_table(folder, "regulation.csv", columns)
    unique(rows, ("enzyme",))
    return tuple(
        Regulation(
            enzyme=row.required("enzyme"),
            gene=row.required("gene"),
            ec=row.required("ec"),
            step_ids=row.many_known("steps", step_ids, "step"),
            pathway=row.required("pathway"),
            inhibitors=row.text("inhibitors"),
            activators=row.text("activators"),
            product_inhibition=row.text("product_inhibition"),
            level_control=row.text("level_control"),
            panel_shows=row.text("panel_shows"),
            source=row.required("source"),
            basis=row.required("basis"),
        )
        for row in rows
    )


def read_couples(
    folder: Path, steps: tuple[Step, ...], matrices: Mapping[str, Matrix]
) -> tuple[IndicatorCouple, ...]:
    """couples.csv."""
    columns = ("pool", "step", "priority", "matrices", "assumption", "limits", "source", "note")
    rows = read_table(folder, "couples.csv", columns)
    unique(rows, ("pool", "step"))
    unique(rows, ("pool", "priority"))
    by_id = {step.id: step for step in steps}
    made = []
    for row in rows:
        pool = row.choice("pool", _POOLS)
        step = by_id[row.known("step", by_id, "step")]
        forms = RATIO_POOLS[pool][:2] if pool in RATIO_POOLS else (pool.removesuffix("_cytosol"),)
        for form in forms:
            if form not in step.metabolite_ids:
                raise row.error(
                    "step", f"{form} takes no part in {step.id}", "name a step that turns it over"
                )
        compartment = RATIO_POOLS[pool][2] if pool in RATIO_POOLS else "cytosol"
        if compartment not in step.compartments:
            raise row.error("step", f"{step.id} does not run in the {compartment}", "name another step")
        made.append(
            IndicatorCouple(
                pool=pool,
                step_id=step.id,
                priority=row.integer("priority", 1),
                matrices=row.many_known("matrices", matrices, "matrix"),
                assumption=row.required("assumption"),
                limits=row.required("limits"),
                source=row.required("source"),
            )
        )
    return tuple(made)
