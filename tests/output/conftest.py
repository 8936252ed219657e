"""Invented studies for the output tests: red cells with controls, and plasma with few values."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from datetime import UTC, datetime

import numpy as np
import pytest
from panels import RED_CELL, Assay, Specimen, panel_of, spread

from panelview.assess.assess import assess
from panelview.assess.review import Review
from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Panel, State
from panelview.intake.problems import Problem, Severity

#: Invented: the picture of a pyruvate kinase held back, with the intermediates above it raised.
HELD_BACK = RED_CELL | {
    "phosphoglycerate_3": 0.36,
    "phosphoglycerate_2": 0.09,
    "phosphoenolpyruvate": 0.069,
    "pyruvate": 0.03,
    "lactate": 2.0,
    "atp": 1.2,
    "adp": 0.2,
}

_ASSAY = Assay(sd=0.05, shared_sd=0.04)

_PROBLEMS = (
    Problem(
        Severity.VALUE, "study.csv", 26, "Odd", "“Odd” is no analyte we know", "rename the column", "P1-a"
    ),
    Problem(Severity.NOTE, "study.csv", 1, "", "no CV in the file", "5 % was taken for each assay"),
)


@pytest.fixture(scope="session")
def when() -> datetime:
    """The time that pages print."""
    return datetime(2026, 5, 4, 14, 30, tzinfo=UTC)


@pytest.fixture(scope="session")
def red_cells(catalogue: Catalogue) -> Review:
    """24 controls; held back; two values under a dangerous code; one value censored; one missing."""
    others = [
        Specimen("P1-a", HELD_BACK | {"odd": 1.0}, "patient"),
        Specimen("=cmd|'/c calc'!A1", {"lactate": 2.9, "pyruvate": 0.05}, "patient"),
        Specimen("P3 <ß & µ>", RED_CELL | {"pyruvate": "<0.01"}, "patient"),
        Specimen("P4", {k: v for k, v in RED_CELL.items() if k != "fructose_1_6_bisphosphate"}, "patient"),
    ]
    controls = spread(RED_CELL, 24, np.random.default_rng(7))
    panel = replace(panel_of([*controls, *others], _ASSAY), problems=_PROBLEMS)
    return assess(_with_unmatched(panel, "odd"), catalogue)


def _with_unmatched(panel: Panel, name: str) -> Panel:
    """The panel with the readings of this name not matched to any analyte."""
    readings = panel.readings
    is_odd = readings.analyte == name
    return replace(
        panel,
        readings=replace(
            readings,
            analyte=np.where(is_odd, "", readings.analyte),
            state=np.where(is_odd, State.UNMATCHED, readings.state).astype(np.int8),
            mol_per_l=np.where(is_odd, np.nan, readings.mol_per_l),
            sd_is_default=np.ones(len(readings), dtype=bool),
        ),
    )


@pytest.fixture(scope="session")
def plasma(catalogue: Catalogue) -> Review:
    """Two plasma specimens: too few for an overview, compared with published values."""
    blood: Mapping[str, float | str] = {
        "lactate": 4.1,
        "pyruvate": 0.11,
        "hydroxybutyrate_3": 0.4,
        "acetoacetate": 0.2,
        "glucose": 4.8,
    }
    days = [
        Specimen("D1", blood, matrix="plasma"),
        Specimen("D2", {**blood, "lactate": 1.2}, matrix="plasma"),
    ]
    return assess(panel_of(days, _ASSAY), catalogue)
