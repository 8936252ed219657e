"""Measures what the program takes on this machine: start-up, one review, and the engine against its floor.

    python3 packaging/measure.py [--runs 7] [--specimens 20000]

Each figure stands beside its yardstick from the same run, because machines differ and ratios less so.
Runs without a display; the first time it makes the environment as start.py does.
"""

from __future__ import annotations

import argparse
import subprocess
import sys
import time
from collections.abc import Callable
from statistics import median
from typing import TYPE_CHECKING

import qt_libraries
from environment import ROOT, as_command, child_environment, prepare

if TYPE_CHECKING:
    from panelview.assess.review import Review
    from panelview.catalogue.load import Catalogue
    from panelview.intake.panel import Panel

SAMPLE = ROOT / "sample_data" / "red_cells.csv"

_BARE_WINDOW = """
import sys
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication, QMainWindow

class Window(QMainWindow):
    def paintEvent(self, event):
        super().paintEvent(event)
        QTimer.singleShot(0, QApplication.quit)

application = QApplication(sys.argv)
window = Window()
window.resize(1280, 720)
window.show()
sys.exit(application.exec())
"""


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--runs", type=int, default=7, help="repetitions; the median is printed")
    parser.add_argument("--specimens", type=int, default=20000, help="rows of the engine's large panel")
    # What the environment's own interpreter is started with, once it is there.
    parser.add_argument("--inside", action="store_true", help=argparse.SUPPRESS)
    wanted = parser.parse_args()
    if not wanted.inside:
        python = prepare()
        qt_libraries.ensure_importable(python)
        arguments = [__file__, "--inside", "--runs", str(wanted.runs), "--specimens", str(wanted.specimens)]
        environment = child_environment(QT_QPA_PLATFORM="offscreen")
        return subprocess.run([str(python), *arguments], check=False, env=environment).returncode
    sys.path.insert(0, str(ROOT))
    _measure_start(wanted.runs)
    _measure_review(wanted.runs)
    _measure_engine(wanted.runs, wanted.specimens)
    return 0


def _measure_start(runs: int) -> None:
    """New processes, turn by turn, so that both meet the same state of the machine; files are in its cache."""
    commands = {
        "bare window": [sys.executable, "-c", _BARE_WINDOW],
        "painted review": [sys.executable, "-m", "panelview", str(SAMPLE), "--exit-after-paint"],
    }
    seconds: dict[str, list[float]] = {name: [] for name in commands}
    for turn in range(runs + 1):
        for name, command in commands.items():
            taken = _seconds(lambda c=command: subprocess.run(c, check=True, cwd=ROOT))  # type: ignore[misc]
            if turn > 0:
                seconds[name].append(taken)
    bare, painted = (median(seconds[name]) for name in commands)
    print(f"Start to a painted review of {SAMPLE.name}: {painted:.2f} s ({_spread(seconds['painted review'])})")
    print(f"  bare PySide6 window:  {bare:.2f} s ({_spread(seconds['bare window'])})")
    print(f"  ratio: {painted / bare:.1f} (target: at most 4)")


def _measure_review(runs: int) -> None:
    from panelview.assess.assess import assess
    from panelview.catalogue.load import load_catalogue
    from panelview.intake.read import read_panels
    from panelview.resource_files import resources

    catalogue = load_catalogue()
    panel = read_panels([SAMPLE], catalogue)
    loading = _median(runs, lambda: load_catalogue(resources()))
    reading = _median(runs, lambda: read_panels([SAMPLE], catalogue))
    engine = _median(runs, lambda: assess(panel, catalogue))
    print(f"One review of {SAMPLE.name} ({len(panel.specimens)} specimens), everything imported:")
    print(f"  catalogue {1e3 * loading:.0f} ms (once a start), file {1e3 * reading:.1f} ms, ", end="")
    print(f"engine {1e3 * engine:.1f} ms; file and engine {1e3 * (reading + engine):.0f} ms")


def _measure_engine(runs: int, specimens: int) -> None:
    """The engine on a large panel against the arithmetic it cannot do without, on arrays of the same shapes."""
    from panelview.assess.assess import assess
    from panelview.catalogue.load import load_catalogue
    from panelview.intake.read import read_panels

    catalogue = load_catalogue()
    sample = read_panels([SAMPLE], catalogue)
    analytes = {
        "the sample's analytes": sorted(set(sample.readings.analyte) - {""}),
        "every catalogued analyte": list(catalogue.metabolites),
    }
    for what, measured in analytes.items():
        panel = _large_panel(measured, specimens, sample)
        review = assess(panel, catalogue)
        engine = _median(runs, lambda p=panel: assess(p, catalogue))  # type: ignore[misc]
        floor = _median(runs, _floor(panel, review, catalogue))
        read = int((review.findings.assessability <= 1).any(axis=0).sum())
        print(f"Engine, {specimens} specimens of {what} ({len(measured)}; {read} steps read):")
        print(f"  engine {specimens / engine:,.0f} specimens/s, floor {specimens / floor:,.0f} specimens/s")
        print(f"  ratio: {engine / floor:.1f} (target: at most 3)")


def _floor(panel: Panel, review: Review, catalogue: Catalogue) -> Callable[[], object]:
    """One log, two matrix products (ln Γ and its variance) and one normal CDF, for all columns of a review."""
    import numpy as np
    from scipy.special import ndtr

    analytes = {name: index for index, name in enumerate(catalogue.metabolites)}
    shape = (len(panel.specimens), len(analytes))
    concentration = np.ones(shape)
    index = np.array([analytes[name] for name in panel.readings.analyte])
    concentration[panel.readings.specimen, index] = panel.readings.mol_per_l
    sd = np.full(shape, 0.08)
    nu = review.plans[0].nu

    def floor() -> object:
        ln_gamma = np.log(concentration) @ nu.T
        variance = sd**2 @ (nu**2).T
        return ndtr(ln_gamma / np.sqrt(variance + 1.0))

    return floor


def _large_panel(measured: list[str], specimens: int, like: Panel) -> Panel:
    """A panel of `specimens` rows, every analyte of `measured` in each; values drawn from a fixed stream."""
    import numpy as np

    from panelview.intake.panel import Panel, Readings, SpecimenFacts, State

    rng = np.random.default_rng(2)
    n = specimens * len(measured)
    specimen = np.repeat(np.arange(specimens), len(measured))

    def text(value: str) -> np.ndarray[tuple[int], np.dtype[np.object_]]:
        return np.full(n, value, dtype=object)

    readings = Readings(
        specimen=specimen,
        analyte=np.tile(np.array(measured, dtype=object), specimens),
        name=text(""),
        value=text(""),
        unit=text("mol/L"),
        flag=text(""),
        state=np.full(n, State.MEASURED, dtype=np.int8),
        mol_per_l=np.exp(rng.normal(np.log(1e-4), 1.5, n)),
        sd_ln=np.full(n, 0.08),
        sd_is_default=np.ones(n, dtype=bool),
        shared_sd_ln=np.zeros(n),
        basis=text(""),
        row=specimen + 2,
        column=text(""),
        note=text(""),
    )
    matrix = like.specimens[0].matrix
    facts = tuple(
        SpecimenFacts(f"S{k}", "", "", matrix, "", None, None, None, None, "made", k + 2) for k in range(specimens)
    )
    return Panel(like.sources, like.layout, facts, readings, (), (), ())


def _seconds(task: Callable[[], object]) -> float:
    start = time.perf_counter()
    task()
    return time.perf_counter() - start


def _median(runs: int, task: Callable[[], object]) -> float:
    task()
    return median(_seconds(task) for _ in range(runs))


def _spread(seconds: list[float]) -> str:
    return f"{min(seconds):.2f} to {max(seconds):.2f}, {len(seconds)} runs"


if __name__ == "__main__":
    sys.exit(as_command(main))
