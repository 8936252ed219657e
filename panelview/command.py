"""The command line: `panelview [FILE]`, `review`, `constants`, `inspect`."""

from __future__ import annotations

import argparse
import contextlib
import csv
import dataclasses
import io
import json
import math
import os
import sys
from collections.abc import Callable, Sequence
from datetime import datetime
from pathlib import Path

from panelview import arguments
from panelview.arguments import WrongUsage
from panelview.assess.calls import SHIFT_FLOOR
from panelview.assess.settings import ReferenceChoice, Settings, UnknownReference
from panelview.catalogue.load import Catalogue, load_catalogue
from panelview.catalogue.reactions import UnreadableReaction
from panelview.catalogue.rows import CatalogueError
from panelview.intake.constants_file import read_at, read_own_constants
from panelview.intake.problems import InputRefused, Problem, Severity
from panelview.intake.tabular import no_such_file
from panelview.output.text import CAUTION

DONE = 0
FAILED = 1
WRONG_USAGE = 2
REFUSED = 3
PARTLY_REFUSED = 4
INTERRUPTED = 130

#: Conditions of `constants` where none are given: those to which biochemical constants are usually referred.
_PLAIN = {"ph": 7.0, "temperature": 310.15, "ionic_strength": 0.25, "pmg": 3.0}


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command; returns the exit status of the contract (0, 2, 3 or 4; 1 for a fault of ours)."""
    words = list(sys.argv[1:] if argv is None else argv)
    _speak_utf8()
    try:
        return _dispatch(words)
    except WrongUsage as error:
        return _say(f"panelview: {error}", WRONG_USAGE)
    except InputRefused as error:
        return _say(str(error), REFUSED)
    except CatalogueError as error:
        return _say(f"panelview: a data file of the program is damaged: {error}; install the program again", FAILED)
    except BrokenPipeError:
        # The reader of our output has left; there is nobody to tell.
        sys.stdout = open(os.devnull, "w")  # noqa: SIM115, PTH123
        return DONE
    except KeyboardInterrupt:
        return _say("panelview: interrupted, nothing more was written", INTERRUPTED)
    except Exception as error:
        if os.environ.get("PANELVIEW_DEBUG"):
            raise
        kind = type(error).__name__
        return _say(
            f"panelview: an internal fault stopped the command ({kind}: {error}); "
            "please report it with the steps that led here",
            FAILED,
        )


def _dispatch(words: list[str]) -> int:
    command = words[0] if words and words[0] in arguments.COMMANDS else ""
    parsed = arguments.parser_for(command).parse_args(words[1:] if command else words)
    if command == "constants":
        return _constants(parsed)
    if command == "inspect":
        return _inspect(parsed)
    if command == "review":
        return _review(parsed)
    return _window(parsed)


def _speak_utf8() -> None:
    """Greek and primes must come out whatever the console's code page is."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            with contextlib.suppress(ValueError, OSError):
                stream.reconfigure(encoding="utf-8", errors="replace")


def _say(text: str, status: int) -> int:
    print(text, file=sys.stderr)
    return status


def _catalogue(parsed: argparse.Namespace) -> Catalogue:
    catalogue = load_catalogue()
    if parsed.matrix is not None and parsed.matrix not in catalogue.matrices:
        known = ", ".join(sorted(catalogue.matrices))
        raise WrongUsage(f"--matrix {parsed.matrix}: no such matrix; known are {known}")
    return catalogue


def _settings(parsed: argparse.Namespace, catalogue: Catalogue) -> Settings:
    own = read_own_constants(parsed.constants, catalogue) if parsed.constants else {}
    floor = SHIFT_FLOOR if parsed.shift_floor is None else parsed.shift_floor
    if not (math.isfinite(floor) and floor >= 0):
        raise WrongUsage("--shift-floor: give a number of kJ/mol from 0 up")
    return Settings(
        conditions=arguments.condition_choices(parsed),
        reference=_reference(parsed, catalogue),
        free_ratios=arguments.free_ratios(parsed.free_ratio),
        own_constants=own,
        shift_floor=floor,
    )


def _reference(parsed: argparse.Namespace, catalogue: Catalogue) -> ReferenceChoice:
    text = parsed.reference
    if text is None:
        return ReferenceChoice()
    if text in ("published", "none"):
        return ReferenceChoice(text)
    if text.startswith("group:"):
        if not text.removeprefix("group:").strip():
            raise WrongUsage("--reference group: names no group; write group:NAME")
        return ReferenceChoice("group", text.removeprefix("group:"))
    from panelview.intake.read import read_panels

    panel = read_panels([Path(text)], catalogue, matrix=parsed.matrix)
    return ReferenceChoice("file", Path(text).name, panel)


def _constants(parsed: argparse.Namespace) -> int:
    from panelview.output import constants_table as table

    catalogue = _catalogue(parsed)
    if parsed.constants:
        own = read_own_constants(parsed.constants, catalogue)
        catalogue = dataclasses.replace(catalogue, constants=catalogue.constants.with_own(own))
    start = dict(_PLAIN)
    if parsed.matrix:
        matrix = catalogue.matrices[parsed.matrix]
        start = {name: getattr(matrix, name) for name in _PLAIN}
    conditions = arguments.plain_conditions(arguments.condition_choices(parsed), start)
    if parsed.at:
        name = parsed.at.name
        try:
            rows = table.at_rows(read_at(parsed.at), catalogue, conditions)
        except table.UnknownStep as error:
            raise InputRefused(
                (_at_problem(name, error.row, "step", f"“{error.step}” is no catalogued step"),)
            ) from error
        except UnreadableReaction as error:
            raise InputRefused((_at_problem(name, 0, "reaction", error.what, error.remedy),)) from error
    elif parsed.reaction is not None:
        try:
            rows = [table.one_reaction(parsed.reaction, catalogue, conditions)]
        except UnreadableReaction as error:
            raise WrongUsage(f"--reaction: {error}") from error
    else:
        rows = table.all_steps(catalogue, conditions)
    _print_rows(table.COLUMNS, [dataclasses.astuple(r) for r in rows], parsed.format)
    return DONE


def _at_problem(
    name: str, row: int, column: str, what: str, remedy: str = "use an id that panelview constants prints"
) -> Problem:
    return Problem(Severity.FILE, name, row, column, what, remedy)


def _print_rows(columns: Sequence[str], rows: Sequence[tuple[object, ...]], how: str) -> None:
    if how == "csv":
        writer = csv.writer(sys.stdout, lineterminator="\n")
        writer.writerow(columns)
        writer.writerows([_csv(v) for v in row] for row in rows)
    elif how == "json":
        made = [dict(zip(columns, (_json(v) for v in row), strict=True)) for row in rows]
        print(json.dumps(made, ensure_ascii=False, indent=1))
    else:
        texts = [tuple(columns), *(tuple(_cell(v) for v in row) for row in rows)]
        widths = [max(len(row[c]) for row in texts) for c in range(len(columns))]
        for row in texts:
            print("  ".join(t.ljust(w) for t, w in zip(row, widths, strict=True)).rstrip())


def _csv(value: object) -> object:
    if isinstance(value, float):
        return "" if math.isnan(value) else f"{value:.10g}"
    return value


def _json(value: object) -> object:
    return None if isinstance(value, float) and not math.isfinite(value) else value


def _cell(value: object) -> str:
    if isinstance(value, float):
        return "–" if math.isnan(value) else f"{value:.5g}"
    return str(value)


def _inspect(parsed: argparse.Namespace) -> int:
    from panelview.intake.read import read_panels
    from panelview.output.inspection import print_inspection

    catalogue = _catalogue(parsed)
    _settings(parsed, catalogue)
    panel = read_panels(parsed.files, catalogue, matrix=parsed.matrix)
    print_inspection(panel, catalogue, parsed.format, sys.stdout)
    return PARTLY_REFUSED if panel.refused_specimens else DONE


def _review(parsed: argparse.Namespace) -> int:
    from panelview.assess.assess import assess
    from panelview.intake.read import read_panels
    from panelview.output.batch import OutputFailed, write_review

    if parsed.jobs < 1:
        raise WrongUsage("--jobs: give a number of processes from 1 up")
    catalogue = _catalogue(parsed)
    settings = _settings(parsed, catalogue)
    panel = read_panels(parsed.files, catalogue, matrix=parsed.matrix)
    try:
        review = assess(panel, catalogue, settings)
    except UnknownReference as error:
        raise WrongUsage(f"--reference: {error}") from error
    for problem in panel.problems:
        if problem.severity is not Severity.NOTE:
            print(problem, file=sys.stderr)
    try:
        write_review(
            review,
            parsed.out,
            pdf=not parsed.no_pdf,
            when=_report_time(),
            progress=_progress(parsed.quiet),
            jobs=parsed.jobs,
        )
    except OutputFailed as error:
        return _say(str(error), REFUSED)
    if not parsed.quiet:
        off = int(review.findings.highlighted.sum())
        print(
            f"{_counted(len(review.specimens), 'specimen')} reviewed, {_counted(off, 'step')} highlighted; "
            f"written to {parsed.out}\n"
            f"{CAUTION}"
        )
    return PARTLY_REFUSED if panel.refused_specimens else DONE


def _counted(number: int, noun: str) -> str:
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def _report_time() -> datetime:
    """Now, or the moment that SOURCE_DATE_EPOCH fixes so that pages can be reproduced."""
    epoch = os.environ.get("SOURCE_DATE_EPOCH", "")
    return datetime.fromtimestamp(int(epoch)).astimezone() if epoch.isdigit() else datetime.now().astimezone()


def _progress(quiet: bool) -> Callable[[int, int, str], None] | None:
    if quiet or not sys.stderr.isatty():
        return None

    def show(done: int, total: int, what: str) -> None:
        end = "\n" if done == total else "\r"
        print(f"{done}/{total} {what}".ljust(70), end=end, file=sys.stderr, flush=True)

    return show


def _window(parsed: argparse.Namespace) -> int:
    if parsed.file is not None and not parsed.file.exists():
        raise no_such_file(parsed.file)
    if _lacks_display():
        return _say(
            "panelview: there is no display to open the window on; "
            "write tables and pages with panelview review FILE --out DIR",
            FAILED,
        )
    catalogue = _catalogue(parsed)
    settings = _settings(parsed, catalogue)
    from panelview.desktop.app import run

    return run(
        parsed.file,
        exit_after_paint=parsed.exit_after_paint,
        matrix=parsed.matrix,
        settings=settings,
    )


def _lacks_display() -> bool:
    """Whether Qt would abort the process for want of a display (Linux and its kin only)."""
    if sys.platform in ("win32", "darwin"):
        return False
    return not any(os.environ.get(name) for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"))
