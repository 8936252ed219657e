"""Panels put together in a test, without a file: values in mmol/L, as the engine would get them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

import numpy as np

from panelview.assess.review import Review
from panelview.intake.panel import Panel, Readings, SourceFile, SpecimenFacts, State

#: The textbook's red-cell table, mmol/L (Minakami and Yoshikawa 1965, as retabulated in Garrett and Grisham).
RED_CELL: dict[str, float] = {
    "glucose": 5.0,
    "glucose_6_phosphate": 0.083,
    "fructose_6_phosphate": 0.014,
    "fructose_1_6_bisphosphate": 0.031,
    "dihydroxyacetone_phosphate": 0.14,
    "glyceraldehyde_3_phosphate": 0.019,
    "bisphosphoglycerate_1_3": 0.001,
    "phosphoglycerate_3": 0.12,
    "phosphoglycerate_2": 0.03,
    "phosphoenolpyruvate": 0.023,
    "pyruvate": 0.051,
    "lactate": 2.9,
    "atp": 1.85,
    "adp": 0.14,
    "phosphate": 1.0,
}


@dataclass(frozen=True)
class Specimen:
    """One specimen of a test: analyte id → mmol/L, or "<limit" for a value below its limit."""

    code: str
    values: Mapping[str, float | str]
    group: str = ""
    matrix: str = "erythrocyte"
    ph: float | None = None
    temperature: float | None = None
    ionic_strength: float | None = None
    pmg: float | None = None


@dataclass(frozen=True)
class Assay:
    """Uncertainty of every value: of ln c from the assay, and of the factor shared by a specimen's values."""

    sd: float = 0.05
    by_analyte: Mapping[str, float] = field(default_factory=dict)
    shared_sd: float = 0.0
    basis: str = "litre_cells"


def panel_of(specimens: Iterable[Specimen], assay: Assay = Assay()) -> Panel:
    """The panel of these specimens, readings in the order given."""
    made = list(specimens)
    rows = [(i, a, v) for i, s in enumerate(made) for a, v in s.values.items()]
    is_below = [isinstance(v, str) for _, _, v in rows]
    amounts = [float(v.removeprefix("<")) if isinstance(v, str) else v for _, _, v in rows]
    n = len(rows)

    def texts(values: Iterable[str]) -> np.ndarray:
        filled = np.empty(n, dtype=object)
        filled[:] = list(values)
        return filled

    names = [a for _, a, _ in rows]
    readings = Readings(
        specimen=np.array([i for i, _, _ in rows], dtype=np.intp),
        analyte=texts(names),
        name=texts(names),
        value=texts(str(v) for _, _, v in rows),
        unit=texts("mmol/L" for _ in rows),
        flag=texts("" for _ in rows),
        state=np.where(is_below, State.BELOW_LOQ, State.MEASURED).astype(np.int8),
        mol_per_l=np.array(amounts) / 1000,
        sd_ln=np.array([assay.by_analyte.get(a, assay.sd) for a in names]),
        sd_is_default=np.zeros(n, dtype=bool),
        shared_sd_ln=np.full(n, assay.shared_sd),
        basis=texts(assay.basis for _ in rows),
        row=np.array([i + 2 for i, _, _ in rows], dtype=np.int64),
        column=texts(names),
        note=texts("" for _ in rows),
    )
    facts = tuple(
        SpecimenFacts(
            code=s.code,
            participant=s.code,
            group=s.group,
            matrix=s.matrix,
            collected="",
            ph=s.ph,
            temperature=s.temperature,
            ionic_strength=s.ionic_strength,
            pmg=s.pmg,
            source="study.csv",
            row=k + 2,
        )
        for k, s in enumerate(made)
    )
    source = SourceFile("study.csv", 1, "0" * 64)
    return Panel((source,), "made in a test", facts, readings, (), (), ())


def spread(
    values: Mapping[str, float], count: int, rng: np.random.Generator, sd: float = 0.1, group: str = "control"
) -> list[Specimen]:
    """Controls scattered lognormally around the values, each analyte on its own."""
    return [
        Specimen(
            f"C{k + 1:02d}",
            {a: float(v * np.exp(rng.normal(0, sd))) for a, v in values.items()},
            group=group,
        )
        for k in range(count)
    ]


def at(review: Review, code: str, step: str, compartment: str | None = None) -> tuple[int, int]:
    """Row and column of a specimen and step (in its first compartment where none is named)."""
    row = next(i for i, s in enumerate(review.specimens) if s.code == code)
    for c, column in enumerate(review.columns):
        if column.step.id == step and compartment in (None, column.compartment):
            return row, c
    raise KeyError(step)


def value(review: Review, field_name: str, code: str, step: str) -> float:
    """One number of the findings."""
    return float(getattr(review.findings, field_name)[at(review, code, step)])
