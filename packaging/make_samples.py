"""Makes the invented studies in sample_data/: the same bytes every time.

    python packaging/make_samples.py            writes sample_data/*.csv
    python packaging/make_samples.py --check    tells whether the files there are what this program makes

Every number is invented: medians and spreads follow published concentrations (resources/
published_concentrations.csv), a lognormal spread stands for people and another for the assay.
"""

from __future__ import annotations

import argparse
import csv
import io
import sys
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np

_SAMPLES = Path(__file__).resolve().parent.parent / "sample_data"

#: Starting points of the random numbers, one a study, so that a change of one leaves the others alone.
_START = {"red_cells.csv": 20_260_301, "plasma_series.csv": 20_260_332, "muscle_biopsies.csv": 20_260_303}


@dataclass(frozen=True, slots=True)
class Analyte:
    """One invented analyte: median in the unit of its heading; spreads are standard deviations of ln c.

    pool: analytes of one pool rise and fall together in a person, by pool_sd; own_sd: each by itself;
    cv: of the assay.
    """

    name: str
    unit: str
    median: float
    pool: str
    pool_sd: float
    own_sd: float
    cv: float


@dataclass(frozen=True, slots=True)
class Person:
    """One specimen: factors on the medians, and cells written otherwise than as a number.

    after: put behind the number, such as a flag; instead: put in its place, such as a limit or nothing.
    """

    code: str
    participant: str
    group: str
    collected: str = ""
    factors: Mapping[str, float] = field(default_factory=dict)
    after: Mapping[str, str] = field(default_factory=dict)
    instead: Mapping[str, str] = field(default_factory=dict)
    ph: str = ""


def factors(story: str) -> dict[str, float]:
    """`A 2, B 0.5` → {"A": 2.0, "B": 0.5}."""
    words = [term.rsplit(" ", 1) for term in story.split(", ")]
    return {name: float(factor) for name, factor in words}


def draw(
    people: Sequence[Person], analytes: Sequence[Analyte], rng: np.random.Generator
) -> list[dict[str, float]]:
    """Values of every person, analyte name → number in the analyte's unit.

    Specimens of one participant share what the person brings along; the assay is drawn anew.
    """
    pools = sorted({a.pool for a in analytes})
    brought: dict[str, tuple[dict[str, float], dict[str, float]]] = {}
    drawn = []
    for person in people:
        if person.participant not in brought:
            of_pool = dict(zip(pools, rng.standard_normal(len(pools)).tolist(), strict=True))
            of_own = dict(
                zip([a.name for a in analytes], rng.standard_normal(len(analytes)).tolist(), strict=True)
            )
            brought[person.participant] = (of_pool, of_own)
        of_pool, of_own = brought[person.participant]
        assay = rng.standard_normal(len(analytes)).tolist()
        values = {}
        for analyte, noise in zip(analytes, assay, strict=True):
            ln_c = (
                analyte.pool_sd * of_pool[analyte.pool]
                + analyte.own_sd * of_own[analyte.name]
                + analyte.cv * noise
            )
            values[analyte.name] = float(
                analyte.median * person.factors.get(analyte.name, 1.0) * np.exp(ln_c)
            )
        drawn.append(values)
    return drawn


def as_lab(value: float) -> str:
    """Three significant digits, without exponents."""
    if value >= 1000:
        return f"{round(value, -1):.0f}"
    digits = max(0, 2 - int(np.floor(np.log10(value))))
    return f"{value:.{digits}f}"


def _cell(person: Person, name: str, value: float) -> str:
    if name in person.instead:
        return person.instead[name]
    return as_lab(value) + person.after.get(name, "")


# --- Red cells -------------------------------------------------------------------------------------

_CELLS = "umol/L cells"
RED_CELL_ANALYTES = (
    Analyte("Glucose", "mmol/L cells", 3.5, "glucose", 0.07, 0.0, 0.02),
    Analyte("G6P", _CELLS, 27.8, "hexose", 0.18, 0.05, 0.05),
    Analyte("F6P", _CELLS, 9.3, "hexose", 0.18, 0.05, 0.05),
    Analyte("FBP", _CELLS, 1.9, "fbp", 0.20, 0.0, 0.08),
    Analyte("DHAP", _CELLS, 9.4, "triose", 0.17, 0.05, 0.05),
    Analyte("GA3P", _CELLS, 0.56, "triose", 0.17, 0.05, 0.10),
    Analyte("3PG", _CELLS, 44.9, "glycerate", 0.10, 0.03, 0.04),
    Analyte("2PG", _CELLS, 7.3, "glycerate", 0.10, 0.05, 0.08),
    Analyte("PEP", _CELLS, 12.2, "glycerate", 0.10, 0.06, 0.06),
    Analyte("Pyruvate", _CELLS, 53.3, "end", 0.15, 0.18, 0.05),
    Analyte("Lactate", _CELLS, 932, "end", 0.15, 0.08, 0.03),
    Analyte("ATP", _CELLS, 1438, "atp", 0.06, 0.0, 0.03),
    Analyte("ADP", _CELLS, 216, "adp", 0.11, 0.05, 0.05),
    Analyte("AMP", _CELLS, 21.1, "adp", 0.11, 0.08, 0.06),
    Analyte("Pi", _CELLS, 700, "phosphate", 0.10, 0.0, 0.03),
    Analyte("2,3-BPG", _CELLS, 4171, "bpg", 0.14, 0.0, 0.03),
    Analyte("GSH", _CELLS, 2234, "glutathione", 0.14, 0.03, 0.04),
    Analyte("GSSG", _CELLS, 4.2, "gssg", 0.25, 0.0, 0.10),
)


def red_cell_people() -> list[Person]:
    """24 controls and four participants: one with each of three steps displaced, one with redox moved."""
    people = [
        Person(f"RC-C{k:02d}", f"RC-C{k:02d}", "control", f"2026-02-{2 + (k - 1) // 6:02d}")
        for k in range(1, 25)
    ]
    people[8] = replace(people[8], after={"Pyruvate": " *"})
    people[16] = replace(people[16], instead={"AMP": ""})
    stories = [
        "3PG 2.7, 2PG 2.7, PEP 2.8, Pyruvate 0.7, Lactate 0.6, ATP 0.7, ADP 1.35, AMP 1.7, 2,3-BPG 2.1",
        "G6P 3.4, F6P 3.4, DHAP 0.55, GA3P 0.55, 2,3-BPG 0.7, 3PG 0.8, ATP 0.92",
        "DHAP 26, FBP 14, ATP 0.85, ADP 1.1",
        "Lactate 3.0, Pyruvate 0.75, DHAP 2.6, GA3P 2.6, FBP 3.1, G6P 1.4, F6P 1.4, GSSG 1.6",
    ]
    for k, story in enumerate(stories, 1):
        people.append(Person(f"RC-P{k}", f"RC-P{k}", "participant", "2026-02-06", factors(story)))
    people[25] = replace(people[25], instead={"FBP": "<0.50"})
    return people


def red_cells(rng: np.random.Generator) -> str:
    """Wide, commas, the unit in each heading."""
    people = red_cell_people()
    head = ["specimen", "participant", "group", "matrix", "collected"]
    rows = [head + [f"{a.name} ({a.unit})" for a in RED_CELL_ANALYTES]]
    for person, values in zip(people, draw(people, RED_CELL_ANALYTES, rng), strict=True):
        facts = [person.code, person.participant, person.group, "erythrocyte", person.collected]
        rows.append(facts + [_cell(person, name, value) for name, value in values.items()])
    return _csv(rows, ",")


# --- Plasma, a series of days ----------------------------------------------------------------------

PLASMA_ANALYTES = (
    Analyte("Lactate", "mmol/L", 0.92, "lactate", 0.20, 0.0, 0.03),
    Analyte("Pyruvate", "µmol/L", 68, "lactate", 0.20, 0.12, 0.05),
    Analyte("3-Hydroxybutyrate", "mmol/L", 0.085, "ketone", 0.35, 0.10, 0.05),
    Analyte("Acetoacetate", "mmol/L", 0.060, "ketone", 0.35, 0.12, 0.07),
    Analyte("Glucose", "mmol/L", 4.9, "glucose", 0.06, 0.0, 0.02),
    Analyte("Alanine", "µmol/L", 320, "alanine", 0.16, 0.0, 0.04),
)

#: What the invented laboratory states with each value: limit of quantification in the analyte's unit.
_PLASMA_LIMIT = {
    "Lactate": 0.10, "Pyruvate": 10.0, "3-Hydroxybutyrate": 0.02,
    "Acetoacetate": 0.02, "Glucose": 0.3, "Alanine": 5.0,
}  # fmt: skip

#: The invented laboratory prints H above these.
_PLASMA_HIGH = {"Lactate": 2.2, "Pyruvate": 120.0, "3-Hydroxybutyrate": 0.5, "Glucose": 6.1, "Alanine": 500.0}


def plasma_people() -> list[Person]:
    """12 fasting controls; PS-A recovers from ketosis, PS-B's lactate/pyruvate rises."""
    people = [
        Person(f"PS-C{k:02d}", f"PS-C{k:02d}", "control", f"2026-03-{2 + (k - 1) // 4:02d}")
        for k in range(1, 13)
    ]
    people[3] = replace(people[3], factors={"3-Hydroxybutyrate": 0.3}, instead={"Acetoacetate": "<0,02"})
    people[7] = replace(people[7], instead={"Alanine": ""})
    ketosis = {
        9: "3-Hydroxybutyrate 75, Acetoacetate 26, Glucose 2.6, Alanine 0.55, Lactate 1.5, Pyruvate 1.4",
        10: "3-Hydroxybutyrate 46, Acetoacetate 21, Glucose 2.0, Alanine 0.65, Lactate 1.3, Pyruvate 1.3",
        11: "3-Hydroxybutyrate 17, Acetoacetate 10.5, Glucose 1.5, Alanine 0.8, Lactate 1.1, Pyruvate 1.15",
        12: "3-Hydroxybutyrate 4.5, Acetoacetate 3.6, Glucose 1.2, Alanine 0.95",
        14: "3-Hydroxybutyrate 1.1, Acetoacetate 1.1, Glucose 1.1",
    }
    rising = {
        9: "Lactate 1.6, Pyruvate 1.5, Alanine 1.15",
        11: "Lactate 2.9, Pyruvate 1.9, Alanine 1.4",
        13: "Lactate 4.4, Pyruvate 2.1, Alanine 1.7, 3-Hydroxybutyrate 1.9, Acetoacetate 1.3",
        16: "Lactate 6.3, Pyruvate 2.3, Alanine 1.9, 3-Hydroxybutyrate 2.6, Acetoacetate 1.3",
    }
    for who, days in (("PS-A", ketosis), ("PS-B", rising)):
        for k, (day, story) in enumerate(days.items(), 1):
            people.append(Person(f"{who}-{k}", who, "participant", f"2026-03-{day:02d}", factors(story)))
    return people


def plasma_series(rng: np.random.Generator) -> str:
    """Long, semicolons, decimal commas, as European laboratories export."""
    people = plasma_people()
    rows = [
        ["specimen", "participant", "group", "matrix", "collected", "analyte", "value", "unit", "flag",
         "cv_percent", "lloq"]
    ]  # fmt: skip
    for person, values in zip(people, draw(people, PLASMA_ANALYTES, rng), strict=True):
        for analyte in PLASMA_ANALYTES:
            number = values[analyte.name]
            text = _cell(person, analyte.name, number).replace(".", ",")
            is_high = analyte.name not in person.instead and number > _PLASMA_HIGH.get(analyte.name, np.inf)
            facts = [
                person.code,
                person.participant,
                person.group,
                "plasma",
                person.collected,
                analyte.name,
                text,
            ]
            limit = f"{_PLASMA_LIMIT[analyte.name]:g}".replace(".", ",")
            rows.append([*facts, analyte.unit, "H" if is_high else "", f"{100 * analyte.cv:g}", limit])
    return _csv(rows, ";")


# --- Muscle biopsies -------------------------------------------------------------------------------

_DRY = "mmol/kg dw"
MUSCLE_ANALYTES = (
    Analyte("PCr", _DRY, 75.5, "creatine", 0.05, 0.04, 0.03),
    Analyte("Cr", _DRY, 49.0, "creatine", 0.05, 0.07, 0.03),
    Analyte("ATP", _DRY, 24.0, "atp", 0.07, 0.0, 0.03),
    Analyte("ADP", _DRY, 3.2, "adp", 0.10, 0.0, 0.06),
    Analyte("AMP", _DRY, 0.10, "amp", 0.18, 0.0, 0.10),
    Analyte("IMP", _DRY, 0.08, "imp", 0.25, 0.0, 0.10),
    Analyte("Pi", _DRY, 12.0, "phosphate", 0.12, 0.0, 0.04),
    Analyte("G1P", _DRY, 0.07, "hexose", 0.20, 0.06, 0.07),
    Analyte("G6P", _DRY, 1.2, "hexose", 0.20, 0.04, 0.05),
    Analyte("F6P", _DRY, 0.20, "hexose", 0.20, 0.06, 0.06),
    Analyte("FBP", _DRY, 0.20, "fbp", 0.20, 0.0, 0.08),
    Analyte("DHAP", _DRY, 0.14, "triose", 0.18, 0.0, 0.08),
    Analyte("Glycerol-3-P", _DRY, 1.1, "g3p", 0.22, 0.0, 0.06),
    Analyte("Pyruvate", _DRY, 0.40, "end", 0.18, 0.10, 0.06),
    Analyte("Lactate", _DRY, 4.5, "end", 0.18, 0.08, 0.04),
    Analyte("Glucose", _DRY, 1.5, "glucose", 0.15, 0.0, 0.05),
)


def muscle_people() -> list[Person]:
    """10 resting controls; three participants at rest and after hard exercise."""
    people = [
        Person(f"MB-C{k:02d}", f"MB-C{k:02d}", "control", f"2026-04-{6 + (k - 1) // 5:02d}", ph="7.05")
        for k in range(1, 11)
    ]
    people[2] = replace(people[2], instead={"IMP": "<0.05"})
    people[6] = replace(people[6], after={"Lactate": " *"})
    people[7] = replace(people[7], instead={"DHAP": ""})
    usual = factors(
        "PCr 0.26, Cr 2.12, ATP 0.84, ADP 1.05, AMP 1.6, IMP 35, Pi 3.6, G1P 5.5, G6P 6, F6P 6.2, FBP 5, "
        "DHAP 1.7, Glycerol-3-P 8, Pyruvate 2.3, Lactate 17, Glucose 3"
    )
    strained = usual | factors(
        "PCr 0.13, Cr 2.3, ATP 0.7, IMP 75, Pi 4.6, Lactate 22, Pyruvate 2.0, DHAP 1.3, Glycerol-3-P 11"
    )
    blocked = factors(
        "PCr 0.24, Cr 2.15, ATP 0.82, ADP 1.25, AMP 3, IMP 42, Pi 4.2, G1P 0.18, G6P 0.3, F6P 0.3, FBP 0.5, "
        "DHAP 0.7, Glycerol-3-P 0.7, Pyruvate 0.5, Lactate 0.6, Glucose 1.4"
    )
    strained_rest = factors(
        "PCr 0.74, Cr 1.4, Pi 1.7, Lactate 2.9, Pyruvate 1.05, Glycerol-3-P 2.5, ADP 1.1, IMP 2"
    )
    blocked_rest = factors("G1P 0.35, G6P 0.45, F6P 0.45, FBP 0.8, Lactate 0.7, Pyruvate 0.75, Pi 1.1")
    stories = [({}, usual, "6.70"), (strained_rest, strained, "6.70"), (blocked_rest, blocked, "7.02")]
    for k, (rest, after, ph) in enumerate(stories, 1):
        day = f"2026-04-{12 + k:02d}"
        people.append(Person(f"MB-P{k}-rest", f"MB-P{k}", "participant", f"{day} 09:00", rest, ph="7.05"))
        people.append(Person(f"MB-P{k}-exercise", f"MB-P{k}", "participant", f"{day} 09:40", after, ph=ph))
    return people


def muscle_biopsies(rng: np.random.Generator) -> str:
    """Wide, commas, the units in a row under the heading."""
    people = muscle_people()
    head = ["specimen", "participant", "group", "matrix", "collected", "ph"]
    rows = [head + [a.name for a in MUSCLE_ANALYTES], [""] * len(head) + [a.unit for a in MUSCLE_ANALYTES]]
    for person, values in zip(people, draw(people, MUSCLE_ANALYTES, rng), strict=True):
        facts = [
            person.code,
            person.participant,
            person.group,
            "skeletal_muscle",
            person.collected,
            person.ph,
        ]
        rows.append(facts + [_cell(person, name, value) for name, value in values.items()])
    return _csv(rows, ",")


def _csv(rows: Sequence[Sequence[str]], delimiter: str) -> str:
    stream = io.StringIO()
    csv.writer(stream, delimiter=delimiter, lineterminator="\n").writerows(rows)
    return stream.getvalue()


def all_samples() -> dict[str, bytes]:
    """File name → content, UTF-8."""
    makers = {
        "red_cells.csv": red_cells,
        "plasma_series.csv": plasma_series,
        "muscle_biopsies.csv": muscle_biopsies,
    }
    return {name: make(np.random.default_rng(_START[name])).encode() for name, make in makers.items()}


def main() -> int:
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--check", action="store_true", help="compare with the files instead of writing them")
    wanted = parser.parse_args()
    differs = []
    for name, content in all_samples().items():
        path = _SAMPLES / name
        if wanted.check:
            if not path.exists() or path.read_bytes() != content:
                differs.append(name)
        else:
            path.parent.mkdir(exist_ok=True)
            path.write_bytes(content)
            print(f"{path.name}: {len(content)} bytes")
    for name in differs:
        print(f"{name} differs from what make_samples.py makes", file=sys.stderr)
    return 1 if differs else 0


if __name__ == "__main__":
    raise SystemExit(main())
