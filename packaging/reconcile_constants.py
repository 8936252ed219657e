"""Fits one network to all measured K′ and tells how well it predicts papers that it has not seen.

    python3 packaging/reconcile_constants.py [--report FILE]

The program does not use the network yet: it uses the constants of resources/constants.csv. This is the
comparison on which a change to the network would rest. Takes a few minutes.
"""

from __future__ import annotations

import argparse
import sys
from collections import defaultdict
from collections.abc import Sequence
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
sys.path.insert(0, str(ROOT))

import numpy as np  # noqa: E402

from panelview.catalogue import chemistry_tables, prediction, reconcile  # noqa: E402
from panelview.catalogue.load import Catalogue, load_catalogue  # noqa: E402
from panelview.resource_files import resources  # noqa: E402
from panelview.thermo.conditions import Conditions  # noqa: E402


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--report", type=Path, help="write the report here instead of printing it")
    wanted = parser.parse_args()
    catalogue = load_catalogue()
    system = prediction.system_of(catalogue, chemistry_tables.read_level_priors(resources()))
    full = reconcile.fit(system)
    left_out = prediction.leave_one_source_out(system, full)
    text = "\n".join(_report(catalogue, system, full, left_out)) + "\n"
    if wanted.report:
        wanted.report.write_text(text, encoding="utf-8")
    else:
        print(text)
    return 0


def _report(
    catalogue: Catalogue, system: reconcile.Equations, full: reconcile.Fit, left_out: prediction.LeftOut
) -> list[str]:
    used = prediction.used_measurements(catalogue)
    good = np.array([m.evaluation in "AB" for m in used])
    seen = system.residual - system.design @ full.estimate
    anchors = prediction.anchor_errors(catalogue)
    papers = defaultdict(set)
    for paper, step in zip(system.paper, system.step, strict=True):
        papers[step].add(paper)
    others = np.array([len(papers[s]) > 1 for s in system.step])
    z = left_out.error / left_out.sd
    lines = ["# One network of all measured K′", ""]
    lines += [f"{len(used)} measurements of {len(papers)} steps from {len(set(system.paper))} papers; kJ/mol.", ""]
    lines += _table(
        ("prediction of the measurements", "rows", "median error", "rms error", "within 95 %"),
        [
            _figures("species table alone", system.residual, None),
            _figures("constants.csv, carried", anchors, None),
            _figures("constants.csv, carried; grades A and B", anchors[good], None),
            _figures("network", seen, None),
            _figures("network; grades A and B", seen[good], None),
            _figures("network, paper left out", left_out.error, z),
            _figures("network, paper left out; step known from others", left_out.error[others], z[others]),
            _figures("network, paper left out; step known from nowhere else", left_out.error[~others], z[~others]),
        ],
    )
    return [*lines, "", *_strays(system, full), "", *_steps(catalogue, full)]


def _figures(name: str, error: np.ndarray, z: np.ndarray | None) -> tuple[str, ...]:
    covered = "" if z is None else f"{np.mean(np.abs(z) < 1.96):.1%}"
    rms = float(np.sqrt(np.mean(error**2)))
    return name, str(len(error)), f"{np.median(np.abs(error)):.2f}", f"{rms:.2f}", covered


def _strays(system: reconcile.Equations, full: reconcile.Fit) -> list[str]:
    """Papers whose measurements of a step lie furthest from all else."""
    order = np.argsort(-np.abs(full.source_effect))[:12]
    rows = [(*system.sources[k], f"{full.source_effect[k]:+.1f}") for k in order]
    return ["## Papers furthest from the network", "", *_table(("paper", "step", "effect"), rows)]


def _steps(catalogue: Catalogue, full: reconcile.Fit) -> list[str]:
    constants = catalogue.constants
    network = prediction.network_of(constants.species, full)
    at = Conditions.of(7.0, 310.15, 0.25, 3.0)
    value = (network.formation(at).value @ constants.stoichiometry.T)[0]
    sd = np.sqrt(np.diag(network.reaction_covariance(constants.stoichiometry, 310.15)))
    now = constants.at(at)
    rows = []
    for k, step in enumerate(constants.step_ids):
        if constants.stoichiometry[k].any():
            both = (f"{now.delta_g0_prime[0, k]:.2f} ± {now.sd[0, k]:.1f}", f"{value[k]:.2f} ± {sd[k]:.1f}")
            rows.append((step, *both, f"{value[k] - now.delta_g0_prime[0, k]:+.2f}"))
    title = "## ΔrG′° at pH 7, 37 °C, I 0.25 mol/L, pMg 3"
    return [title, "", *_table(("step", "constants.csv", "network", "difference"), rows)]


def _table(heading: tuple[str, ...], rows: Sequence[tuple[str, ...]]) -> list[str]:
    made = [f"| {' | '.join(heading)} |", "|" + "---|" * len(heading)]
    return made + [f"| {' | '.join(row)} |" for row in rows]


if __name__ == "__main__":
    sys.exit(main())
