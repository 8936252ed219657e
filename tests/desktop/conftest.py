"""Invented panels put together by hand, so that these tests need no reader."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
import pytest

from panelview.assess.assess import assess
from panelview.assess.review import Review
from panelview.assess.settings import ReferenceChoice, Settings
from panelview.catalogue.load import Catalogue, load_catalogue
from panelview.desktop.app import make_application
from panelview.intake.panel import Panel, Readings, SourceFile, SpecimenFacts, State

#: mmol/L of cell water; Minakami and Yoshikawa (1965), as in the textbooks' red-cell table.
USUAL = {
    "glucose": 5.0,
    "glucose_6_phosphate": 0.083,
    "fructose_6_phosphate": 0.014,
    "fructose_1_6_bisphosphate": 0.031,
    "dihydroxyacetone_phosphate": 0.14,
    "glyceraldehyde_3_phosphate": 0.019,
    "phosphoglycerate_3": 0.12,
    "phosphoglycerate_2": 0.03,
    "phosphoenolpyruvate": 0.023,
    "pyruvate": 0.051,
    "lactate": 2.9,
    "atp": 1.85,
    "adp": 0.14,
    "phosphate": 1.0,
}

#: Invented: substrate piled up and product low at pyruvate kinase.
HELD_BACK = USUAL | {"phosphoenolpyruvate": 0.23, "pyruvate": 0.02, "atp": 1.4}


@pytest.fixture(scope="session")
def qapp():
    return make_application()


@pytest.fixture(scope="session")
def catalogue() -> Catalogue:
    return load_catalogue()


def panel_of(specimens: Mapping[str, tuple[str, Mapping[str, float | str]]], matrix: str = "erythrocyte") -> Panel:
    """A panel from code → (group, analyte → mmol/L or "<limit")."""
    facts, rows = [], []
    for index, (code, (group, values)) in enumerate(specimens.items()):
        participant = code.split("-")[0]
        facts.append(SpecimenFacts(code, participant, group, matrix, "", None, None, None, None, "made.csv", index + 2))
        rows += [(index, analyte, value) for analyte, value in values.items()]
    n = len(rows)
    is_below = np.array([isinstance(v, str) for _, _, v in rows])
    amount = np.array([float(v[1:]) if isinstance(v, str) else v for _, _, v in rows]) / 1000
    names = np.array([a for _, a, _ in rows], dtype=object)
    return Panel(
        sources=(SourceFile("made.csv", 100, "0" * 64),),
        layout="made by hand",
        specimens=tuple(facts),
        readings=Readings(
            specimen=np.array([i for i, _, _ in rows], dtype=np.intp),
            analyte=names,
            name=names,
            value=np.array([str(v) for _, _, v in rows], dtype=object),
            unit=np.full(n, "mmol/L", dtype=object),
            flag=np.full(n, "", dtype=object),
            state=np.where(is_below, State.BELOW_LOQ, State.MEASURED).astype(np.int8),
            mol_per_l=amount,
            sd_ln=np.full(n, 0.05),
            sd_is_default=np.ones(n, dtype=bool),
            shared_sd_ln=np.zeros(n),
            basis=np.full(n, "litre", dtype=object),
            row=np.arange(2, n + 2),
            column=names,
            note=np.full(n, "", dtype=object),
        ),
        matches=(),
        problems=(),
        refused_specimens=(),
    )


def controls(count: int) -> dict[str, tuple[str, dict[str, float]]]:
    """So many control specimens with a 10 % lognormal scatter."""
    rng = np.random.default_rng(11)
    return {
        f"C{k:02d}": ("control", {a: float(v * np.exp(rng.normal(0, 0.1))) for a, v in USUAL.items()})
        for k in range(count)
    }


@pytest.fixture(scope="session")
def review(catalogue: Catalogue) -> Review:
    """24 controls; P1 in two specimens, held back; P2 with pyruvate below its limit; P3 with two analytes."""
    return assess(
        panel_of(
            controls(24)
            | {
                "P1-a": ("patient", HELD_BACK),
                "P1-b": ("patient", USUAL),
                "P2": ("patient", USUAL | {"pyruvate": "<0.004"}),
                "P3": ("patient", {"lactate": 2.9, "pyruvate": 0.05}),
            }
        ),
        catalogue,
    )


@pytest.fixture(scope="session")
def few_controls(catalogue: Catalogue) -> Review:
    """Eight controls and one held back: too few for a reference interval, enough for a test."""
    return assess(panel_of(controls(8) | {"P1": ("patient", HELD_BACK)}), catalogue)


@pytest.fixture(scope="session")
def no_controls(catalogue: Catalogue) -> Review:
    """One specimen and no reference at all."""
    return assess(panel_of({"P1": ("patient", HELD_BACK)}), catalogue, Settings(reference=ReferenceChoice("none")))


@pytest.fixture
def specimen(review: Review):
    """Index of a specimen by its code."""
    return lambda code: [s.code for s in review.specimens].index(code)


@pytest.fixture
def column(review: Review):
    """Index of a column by its step's id."""
    return lambda step: [c.step.id for c in review.columns].index(step)
