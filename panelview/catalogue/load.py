"""resources/ → Catalogue: every row checked, errors with file, row and column."""

from __future__ import annotations

import functools
import hashlib
import json
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from panelview import resource_files
from panelview.catalogue import chemistry_tables, specimen_tables, step_tables
from panelview.catalogue.chemistry_tables import read_only
from panelview.catalogue.constants import ConstantSet
from panelview.catalogue.couples import IndicatorCouple
from panelview.catalogue.effectors import Effector, Regulation
from panelview.catalogue.frozen import FrozenDict
from panelview.catalogue.matrices import Applicability, Conversion, Matrix
from panelview.catalogue.measurements import MeasuredConstant
from panelview.catalogue.metabolites import KnownAnalyte, Metabolite, Name
from panelview.catalogue.published import PublishedConcentration
from panelview.catalogue.rows import CatalogueError
from panelview.catalogue.steps import Step


@dataclass(frozen=True)
class Catalogue:
    """All that is known, immutable. `version` and `sha256` identify the data files it was read from."""

    version: str
    sha256: str
    metabolites: Mapping[str, Metabolite]
    names: tuple[Name, ...]
    known_analytes: tuple[KnownAnalyte, ...]
    steps: tuple[Step, ...]
    constants: ConstantSet
    measurements: tuple[MeasuredConstant, ...]
    matrices: Mapping[str, Matrix]
    conversions: Mapping[tuple[str, str], Conversion]
    applicability: Mapping[tuple[str, str], Applicability]
    effectors: tuple[Effector, ...]
    regulation: tuple[Regulation, ...]
    couples: tuple[IndicatorCouple, ...]
    published: tuple[PublishedConcentration, ...]


#: Tables of the constants and of what carries them to other conditions.
_CONSTANT_TABLES = ("constants.csv", "levels.csv", "metabolites.csv", "species.csv", "steps.csv")


def load_catalogue(folder: Path | None = None) -> Catalogue:
    """The catalogue in `folder`, or the program's own (read once). Raises CatalogueError."""
    return _default() if folder is None else _read(folder)


@functools.cache
def _default() -> Catalogue:
    return _read(resource_files.resources())


def _read(folder: Path) -> Catalogue:
    metabolites = chemistry_tables.read_metabolites(folder)
    known_analytes = chemistry_tables.read_known_analytes(folder, metabolites)
    analytes = frozenset(metabolites) | {analyte.id for analyte in known_analytes}
    matrices = specimen_tables.read_matrices(folder)
    steps = step_tables.read_steps(folder, metabolites)
    step_ids = frozenset(step.id for step in steps)
    version = _version(folder)
    return Catalogue(
        version=version,
        sha256=_sha256(sorted(folder.glob("*.csv"))),
        metabolites=FrozenDict(metabolites),
        names=chemistry_tables.read_names(folder, analytes),
        known_analytes=known_analytes,
        steps=steps,
        constants=_constants(folder, version, metabolites, steps),
        measurements=step_tables.read_measurements(folder, step_ids),
        matrices=FrozenDict(matrices),
        conversions=FrozenDict(specimen_tables.read_conversions(folder, matrices)),
        applicability=FrozenDict(specimen_tables.read_applicability(folder, steps, matrices)),
        effectors=step_tables.read_effectors(folder, step_ids, metabolites),
        regulation=step_tables.read_regulation(folder, step_ids),
        couples=step_tables.read_couples(folder, steps, matrices),
        published=specimen_tables.read_published(folder, metabolites, matrices),
    )


def _constants(
    folder: Path, version: str, metabolites: Mapping[str, Metabolite], steps: tuple[Step, ...]
) -> ConstantSet:
    species = chemistry_tables.read_species(folder, metabolites)
    level, level_sd = chemistry_tables.read_levels(folder, species.reactants)
    position = {reactant: k for k, reactant in enumerate(species.reactants)}
    stoichiometry = np.zeros((len(steps), len(position)))
    for s, step in enumerate(steps):
        if all(metabolite in position for metabolite in step.metabolite_ids):
            for metabolite, nu in step.stoichiometry:
                stoichiometry[s, position[metabolite]] = nu
    return ConstantSet(
        version=version,
        sha256=_sha256(folder / name for name in _CONSTANT_TABLES),
        step_ids=tuple(step.id for step in steps),
        anchors=step_tables.read_anchors(folder, steps, frozenset(position)),
        species=species,
        stoichiometry=read_only(stoichiometry),
        level=level,
        level_sd=level_sd,
        own=FrozenDict(),
    )


def _version(folder: Path) -> str:
    """The version in catalogue.json."""
    name = "catalogue.json"
    try:
        version = json.loads((folder / name).read_text(encoding="utf-8"))["version"]
    except FileNotFoundError:
        raise CatalogueError(name, 0, "", "the file is missing", "install the program again") from None
    except (ValueError, KeyError, TypeError):
        version = None
    if not isinstance(version, str) or not version:
        raise CatalogueError(name, 1, "version", "no version is given", 'write {"version": "2026.12"}')
    return version


def _sha256(tables: Iterable[Path]) -> str:
    """SHA-256 over the names and bytes of the tables, in the order given."""
    digest = hashlib.sha256()
    for table in tables:
        digest.update(table.name.encode() + b"\0")
        digest.update(table.read_bytes())
    return digest.hexdigest()
