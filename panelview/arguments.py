"""What may be written after `panelview`, and what it means for a review."""

from __future__ import annotations

import argparse
import math
from collections.abc import Sequence
from pathlib import Path

import panelview
from panelview.assess.review import ORIGIN_COMMAND
from panelview.assess.settings import ConditionChoice, FreeRatio
from panelview.catalogue.couples import RATIO_POOLS
from panelview.output.text import CAUTION
from panelview.thermo.conditions import FIELDS, LIMITS, Conditions, OutOfModelRange
from panelview.thermo.physical import ZERO_CELSIUS

#: Subcommands; anything else is a file for the window.
COMMANDS = ("review", "constants", "inspect")

_OPTIONS = {"ph": "ph", "temperature": "temperature", "ionic_strength": "ionic-strength", "pmg": "pmg"}
_UNITS = {"ph": "", "temperature": " (°C)", "ionic_strength": " (mol/L)", "pmg": ""}

#: Short forms of pool names that reviewers write.
_POOL_ALIASES = {
    "nad_matrix": "nad_mitochondrial_matrix",
    "nadp_matrix": "nadp_mitochondrial_matrix",
    "nad_mitochondria": "nad_mitochondrial_matrix",
    "nadp_mitochondria": "nadp_mitochondrial_matrix",
}


class WrongUsage(Exception):
    """The command line cannot be understood; the text says what and what to do."""


class _Parser(argparse.ArgumentParser):
    def error(self, message: str) -> None:  # type: ignore[override]
        raise WrongUsage(f"{message}; see {self.prog} --help")


def parser_for(command: str) -> argparse.ArgumentParser:
    """The parser of one of COMMANDS, or of the window for ""."""
    prog = f"panelview {command}".strip()
    made = _Parser(prog=prog, description=_description(command), epilog=CAUTION, allow_abbrev=False)
    made.add_argument("--version", action="version", version=f"panelview {panelview.__version__}")
    _add_conditions(made)
    made.add_argument("--matrix", metavar="ID", help="matrix of specimens whose file states none")
    made.add_argument(
        "--constants",
        type=Path,
        metavar="FILE",
        help="constants of your own (CSV), used in place of the program's",
    )
    if command == "constants":
        made.add_argument("--reaction", metavar="TEXT", help='any reaction, as "2 adp = atp + amp"')
        made.add_argument(
            "--at", type=Path, metavar="FILE", help="CSV of steps and conditions, one result a row"
        )
    else:
        made.add_argument(
            "--reference", metavar="WHICH", help="controls: published, none, group:NAME or a panel file"
        )
        made.add_argument(
            "--free-ratio",
            action="append",
            default=[],
            metavar="POOL=VALUE",
            help=f"a free cofactor ratio, oxidised over reduced ({', '.join(RATIO_POOLS)})",
        )
        made.add_argument(
            "--shift-floor", type=float, metavar="KJ", help="smallest shift that is highlighted, kJ/mol"
        )
    made.add_argument("--format", choices=("table", "csv", "json"), default="table", help="how to print")
    made.add_argument(
        "--jobs", type=int, default=1, metavar="N", help="processes that draw pages side by side"
    )
    made.add_argument("--quiet", action="store_true", help="print errors only")
    if command == "review":
        made.add_argument("files", nargs="+", type=Path, metavar="FILE", help="panel files")
        made.add_argument("--out", type=Path, required=True, metavar="DIR", help="folder to write")
        made.add_argument("--no-pdf", action="store_true", help="leave the pages out")
    elif command == "inspect":
        made.add_argument("files", nargs="+", type=Path, metavar="FILE", help="panel files")
    elif command == "":
        made.add_argument("file", nargs="?", type=Path, metavar="FILE", help="a panel to open")
        made.add_argument(
            "--exit-after-paint", action="store_true", help="leave once the review is painted (benchmarks)"
        )
    return made


def _description(command: str) -> str:
    return {
        "": "Open the window (panelview [FILE]), or run one of: " + ", ".join(COMMANDS) + ".",
        "review": "Read panels, assess every specimen, write tables and pages.",
        "constants": "Print K′eq, ΔrG′° and standard uncertainty of every step at the conditions given.",
        "inspect": "Print what was read and what was refused; write nothing.",
    }[command]


def _add_conditions(parser: argparse.ArgumentParser) -> None:
    group = parser.add_argument_group("conditions (else those of the file, else the matrix's default)")
    for field, option in _OPTIONS.items():
        group.add_argument(f"--{option}", dest=field, type=float, metavar="X", help=_help(field))
        group.add_argument(
            f"--{option}-sd", dest=f"{field}_sd", type=float, metavar="U", help="its standard uncertainty"
        )


def _help(field: str) -> str:
    lower, upper = LIMITS[field]
    if field == "temperature":
        lower, upper = lower - ZERO_CELSIUS, upper - ZERO_CELSIUS
    return f"{lower:g} to {upper:g}{_UNITS[field]}"


def condition_choices(arguments: argparse.Namespace) -> dict[str, ConditionChoice]:
    """The conditions written on the command line. Raises WrongUsage."""
    choices = {}
    for field in FIELDS:
        value, sd = getattr(arguments, field), getattr(arguments, f"{field}_sd")
        if sd is not None and not (math.isfinite(sd) and sd >= 0):
            raise WrongUsage(f"--{_OPTIONS[field]}-sd: an uncertainty is a number from 0 up, not {sd:g}")
        if value is not None:
            value = value + ZERO_CELSIUS if field == "temperature" else value
            lower, upper = LIMITS[field]
            if not lower <= value <= upper:
                problem = OutOfModelRange(field, value, lower, upper)
                raise WrongUsage(f"--{_OPTIONS[field]}: {problem}; give a value inside it")
        if value is not None or sd is not None:
            choices[field] = ConditionChoice(value, sd, ORIGIN_COMMAND)
    return choices


def plain_conditions(choices: dict[str, ConditionChoice], start: dict[str, float]) -> Conditions:
    """One set of conditions: what was chosen, else `start` (field → value), without other uncertainty."""
    values = dict(start)
    for field, choice in choices.items():
        if choice.value is not None:
            values[field] = choice.value
        if choice.sd is not None:
            values[f"{field}_sd"] = choice.sd
    return Conditions.of(**values)


def free_ratios(texts: Sequence[str]) -> dict[str, FreeRatio]:
    """`POOL=VALUE` texts. Raises WrongUsage."""
    ratios: dict[str, FreeRatio] = {}
    for text in texts:
        pool, equals, number = text.partition("=")
        pool = _POOL_ALIASES.get(pool.strip(), pool.strip())
        if not equals or pool not in RATIO_POOLS:
            raise WrongUsage(
                f"--free-ratio {text}: write POOL=VALUE with one of {', '.join(RATIO_POOLS)} as POOL"
            )
        try:
            value = float(number)
        except ValueError:
            value = math.nan
        if not (math.isfinite(value) and value > 0):
            raise WrongUsage(f"--free-ratio {text}: the ratio must be a number above zero")
        ratios[pool] = FreeRatio(value, source=ORIGIN_COMMAND)
    return ratios
