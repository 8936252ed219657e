"""The invented studies that ship with the program, as the window offers them."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from panelview.resource_files import sample_data


@dataclass(frozen=True, slots=True)
class Sample:
    """file: name in the sample folder; title, story: what the reader is offered."""

    file: str
    title: str
    story: str


SAMPLES = (
    Sample("red_cells.csv", "Red cells", "Four participants and 24 controls: which step is held back?"),
    Sample("plasma_series.csv", "Plasma over days", "Lactate, pyruvate and ketone bodies: how does redox move?"),
    Sample("muscle_biopsies.csv", "Muscle biopsies", "At rest and after exercise: does the energy state hold?"),
)


def sample_path(sample: Sample) -> Path:
    return sample_data() / sample.file
