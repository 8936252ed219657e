"""How the cells of one series become concentrations: name, unit, matrix, assay uncertainty, limit."""

from __future__ import annotations

import math
from dataclasses import dataclass

from panelview.catalogue.couples import COFACTORS
from panelview.catalogue.load import Catalogue
from panelview.intake.decimal_marks import Mark, Marks
from panelview.intake.names import Names
from panelview.intake.panel import Match, State
from panelview.intake.records import Series
from panelview.intake.units import MASS_UNSTATED, Unit, UnknownUnit, read_unit
from panelview.intake.values import read_value

#: Note on NAD(P)(H) of an extract.
_TOTAL = "total of the specimen: kept, never read as a free pool"

#: Analytical coefficient of variation where the file states none, printed as a default (common practice for
#: chromatographic panels, no source).
DEFAULT_CV = 0.08

#: Percent: no assay repeats better, so a smaller figure is a fraction that was meant as percent; none is worse.
_LEAST_CV, _MOST_CV = 0.1, 200.0

#: Shared relative uncertainty of a plain amount per litre where the matrix is not stated.
_UNSTATED_FACTOR_SD = 0.10

_LIMIT_SIGNS = frozenset({"", "=", "<", "<=", "≤", ">", ">=", "≥"})

#: Words of a compartment column that mean what the matrix's own values mean; others name a part of the cell.
_WHOLE = frozenset(
    [
        "",
        "na",
        "n/a",
        "whole",
        "total",
        "extract",
        "cell",
        "whole cell",
        "tissue",
        "whole tissue",
        "cytosol",
        "cytoplasm",
        "extracellular",
        "plasma",
        "fluid",
    ]
)

_PER = {
    "litre_cells": "litre of packed cells",
    "kg_wet": "kg wet weight",
    "kg_dry": "kg dry weight",
    "kg_protein": "kg protein",
    "kg_haemoglobin": "kg haemoglobin",
    "billion_cells": "10⁹ cells",
    "litre": "litre",
}


@dataclass(frozen=True, slots=True)
class Assumed:
    """Something taken for granted, to be told once a file: `what` and the `remedy`."""

    what: str
    remedy: str


@dataclass(frozen=True, slots=True)
class Treatment:
    """What becomes of the cells of one series in one matrix.

    fate: MEASURED where they are converted, else SUM, UNMATCHED or REFUSED, `note` saying why and `remedy` what to do;
    mol/L of the pool's water = value × multiplier / divisor (two numbers, so that powers of ten stay exact); shared_sd:
    relative uncertainty of the factor; sd_ln: of ln c from the assay; limit: LLOQ in the series' own unit, NaN without.
    """

    match: Match
    fate: State
    note: str = ""
    remedy: str = ""
    multiplier: float = 1.0
    divisor: float = 1.0
    shared_sd: float = math.nan
    basis: str = ""
    sd_ln: float = math.nan
    sd_is_default: bool = False
    limit: float = math.nan
    assumed: tuple[Assumed, ...] = ()


@dataclass(frozen=True, slots=True)
class _Scale:
    multiplier: float
    divisor: float
    shared_sd: float
    basis: str
    notes: tuple[str, ...]
    assumed: tuple[Assumed, ...]


class _Refusal(Exception):
    def __init__(self, what: str, remedy: str) -> None:
        super().__init__(what, remedy)
        self.what = what
        self.remedy = remedy


class Converter:
    """Works out treatments; keeps nothing of a file."""

    def __init__(self, catalogue: Catalogue, names: Names, marks: Marks) -> None:
        self._catalogue = catalogue
        self._names = names
        self._marks = marks

    def treat(self, series: Series, matrix: str) -> Treatment:
        """matrix: id, "" where no file states it."""
        if not series.name:
            match = Match("", "", "unknown", ())
            return Treatment(match, State.UNMATCHED, "no analyte is named", "fill in the name of the analyte")
        match = self._names.match(series.name)
        unused = self._unused(series, match)
        if unused is not None:
            return unused
        try:
            self._check(series)
            scale = self._scale(series, match.analyte, matrix)
        except _Refusal as error:
            return Treatment(match, State.REFUSED, error.what, error.remedy)
        sd_ln, is_default, cv_assumed = _assay_sd(series.cv)
        limit, limit_assumed = self._limit(series.lloq)
        return Treatment(
            match,
            State.MEASURED,
            "; ".join((*scale.notes, _TOTAL) if match.analyte in COFACTORS else scale.notes),
            multiplier=scale.multiplier,
            divisor=scale.divisor,
            shared_sd=scale.shared_sd,
            basis=scale.basis,
            sd_ln=sd_ln,
            sd_is_default=is_default,
            limit=limit,
            assumed=(*scale.assumed, *cv_assumed, *limit_assumed),
        )

    def _unused(self, series: Series, match: Match) -> Treatment | None:
        """The treatment of a name that no step can use; None for an analyte of the catalogue's steps."""
        among = ", ".join(match.candidates)
        shown = series.name if len(series.name) <= 60 else series.name[:57] + "…"
        if match.how == "sum":
            note = f"“{shown}” is the sum of {among}, kept as a sum that no step uses"
            return Treatment(match, State.SUM, note, "measure its parts apart if they matter")
        if match.how == "ambiguous":
            note = f"“{shown}” may mean {' or '.join(match.candidates)}"
            return Treatment(match, State.UNMATCHED, note, "write the full name")
        if not match.analyte:
            offered = f"perhaps {among}" if among else "the help lists the names that are known"
            return Treatment(match, State.UNMATCHED, f"the analyte “{shown}” is not known", f"rename it ({offered})")
        if self._names.is_known_outside(match.analyte):
            note = f"“{shown}” is known ({match.analyte}), but takes part in no step"
            return Treatment(match, State.UNMATCHED, note, "nothing need be done; it is kept and not used")
        return None

    def _check(self, series: Series) -> None:
        if series.comparator not in _LIMIT_SIGNS:
            raise _Refusal(f"the comparator “{series.comparator}” is not known", "write <, <=, >, >= or leave it blank")
        if series.compartment.casefold() not in _WHOLE:
            raise _Refusal(
                f"a value of the {series.compartment} alone cannot be placed among those of the whole specimen",
                "leave it out, or report the whole specimen",
            )

    def _scale(self, series: Series, analyte: str, matrix: str) -> _Scale:
        unit = _unit(series)
        notes: list[str] = []
        assumed: list[Assumed] = []
        self._agree(unit, series.unit, matrix)
        multiplier, divisor = _power(unit.exponent)
        if unit.is_mass:
            own = self._names.mass_of(series.name)
            mass = own or self._catalogue.metabolites[analyte].molar_mass
            if mass is None:
                raise _Refusal(f"{analyte} has no molar mass to convert “{series.unit}” with", "report it in mol")
            divisor *= mass
            notes.append(f"molar mass {mass:g} g/mol")
            if own:
                what = f"“{series.name}” in {series.unit} is taken as the mass of what its name says ({mass:g} g/mol)"
                assumed.append(Assumed(what, "report it in mol if another mass is meant"))
        basis = self._basis(unit, series.unit, matrix, notes, assumed)
        if not matrix:
            if basis != "litre":
                what = f"“{series.unit}” cannot be converted while the matrix is not stated"
                raise _Refusal(what, "add a matrix column, or choose the matrix when opening the file (--matrix)")
            notes.append("matrix not stated: taken per litre of the pool's water")
            return _Scale(multiplier, divisor, _UNSTATED_FACTOR_SD, basis, tuple(notes), tuple(assumed))
        conversion = self._catalogue.conversions.get((matrix, basis))
        if conversion is None:
            what = f"no conversion of “{series.unit}” to mol/L is known for the matrix {matrix}"
            raise _Refusal(what, "report the value per litre")
        if conversion.litres != 1.0:
            notes.append(f"{conversion.litres:g} L of the pool's water per {_PER[basis]}")
        return _Scale(
            multiplier, divisor * conversion.litres, conversion.relative_sd, basis, tuple(notes), tuple(assumed)
        )

    def _agree(self, unit: Unit, text: str, matrix: str) -> None:
        """Refuse a unit whose own words name another matrix."""
        if unit.matrix and matrix and unit.matrix != matrix:
            what = f"“{text}” is an amount per litre of {unit.matrix.replace('_', ' ')}, and the matrix is {matrix}"
            raise _Refusal(what, "correct the unit or the matrix")

    def _basis(self, unit: Unit, text: str, matrix: str, notes: list[str], assumed: list[Assumed]) -> str:
        usual = self._catalogue.matrices[matrix].usual_basis if matrix else ""
        if unit.basis == MASS_UNSTATED:
            if not usual.startswith("kg_"):
                raise _Refusal(f"“{text}” does not say of what the weight is", "write µmol/g ww or mmol/kg dw")
            what = usual.removeprefix("kg_")
            notes.append(f"weight taken as {what}, as usual for {matrix}")
            told = f"“{text}” does not say wet or dry; {what} weight was taken, as usual for {matrix}"
            assumed.append(Assumed(told, f"write {text} ww or {text} dw"))
            return usual
        is_plain = unit.basis == "litre" and not unit.matrix and "water" not in text.lower()
        if is_plain and usual not in ("litre", ""):
            told = f"“{text}” was taken per litre of the cells' water, though {_PER[usual]} is usual for {matrix}"
            assumed.append(Assumed(told, "write the unit in full if it is not so (mmol/L RBC, µmol/g ww, mmol/kg dw)"))
        return unit.basis

    def _limit(self, text: str) -> tuple[float, tuple[Assumed, ...]]:
        """LLOQ in the series' unit; NaN where none is stated."""
        found = read_value(text.strip().lstrip("<≤= "), self._marks)
        if found.state is State.MEASURED:
            return found.number, ()
        if found.state is State.MISSING:
            return math.nan, ()
        return math.nan, (Assumed(f"the limit “{text[:40]}” is no number and was not used", "correct it"),)


def _unit(series: Series) -> Unit:
    """The unit of a series. Raises _Refusal, also where heading and units row contradict each other."""
    try:
        unit = read_unit(series.unit)
        beside = read_unit(series.heading_unit) if series.heading_unit else unit
    except UnknownUnit as error:
        raise _Refusal(error.what, error.remedy) from error
    if beside != unit:
        what = f"the heading says “{series.heading_unit}”, the unit given for it is “{series.unit}”"
        raise _Refusal(what, "make the two agree")
    return unit


def _power(exponent: int) -> tuple[float, float]:
    """10^exponent as a multiplier and a divisor, both exact."""
    return (float(10**exponent), 1.0) if exponent >= 0 else (1.0, float(10**-exponent))


def _assay_sd(text: str) -> tuple[float, bool, tuple[Assumed, ...]]:
    """Standard uncertainty of ln c from the coefficient of variation in percent, √ln(1 + CV²); whether by default."""
    written = text.replace("%", "").replace(",", ".").strip()
    cv, is_default = DEFAULT_CV, True
    assumed: tuple[Assumed, ...] = ()
    if written:
        found = read_value(written, Marks(Mark.POINT))
        if found.state is State.MEASURED and _LEAST_CV <= found.number <= _MOST_CV:
            cv, is_default = found.number / 100, False
        elif found.state is not State.MISSING:
            what = f"the CV “{text[:40]}” is no percentage from {_LEAST_CV:g} to {_MOST_CV:g}"
            assumed = (Assumed(f"{what}; {DEFAULT_CV:.0%} was taken", "write it in percent"),)
    return math.sqrt(math.log1p(cv**2)), is_default, assumed
