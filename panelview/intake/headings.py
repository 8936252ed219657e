"""Which heading means what: metadata, conditions, and analytes with their unit."""

from __future__ import annotations

import re

from panelview.intake.units import UnknownUnit, read_unit

#: Field → usual headings, compared without case, blanks and punctuation (common practice, no source).
_FIELDS: dict[str, str] = {
    "specimen": "specimen specimenid specimencode sample sampleid samplename samplecode probe probenid probennummer "
    "tube tubeid code id echantillon échantillon muestra campione",
    "participant": "participant participantid participantcode subject subjectid subjectcode patientid patientcode "
    "proband pseudonym",
    "group": "group gruppe cohort groupe grupo gruppo arm class",
    "matrix": "matrix specimentype sampletype material tissue probenmaterial",
    "collected": "collected collectiontime collectiondate time date datetime drawn collecteddatetime entnahme datum",
    "ph": "ph",
    "temperature": "temperaturec temperature temp tempc",
    "ionic_strength": "ionicstrengthmolperl ionicstrengthmoll ionicstrength ionicstrengthm",
    "pmg": "pmg",
    "analyte": "analyte metabolite compound name analytename parameter test analyt metabolit",
    "value": "value result concentration conc wert ergebnis valeur",
    "unit": "unit units einheit unite unité uom",
    "comparator": "comparator operator qualifier sign",
    "flag": "flag flags remark",
    "status": "status",
    "cv_percent": "cvpercent cv cvpct cv%",
    "lloq": "lloq loq lod limit",
    "replicate": "replicate rep replikat",
    "compartment": "compartment",
}
_BY_HEADING = {heading: field for field, headings in _FIELDS.items() for heading in headings.split()}

#: The contract's own heading of a field, where it is not the field's name.
_OWN_HEADING = {"temperature": "temperature_c", "ionic_strength": "ionic_strength_mol_per_l"}

#: Columns that carry nothing the program reads, and are passed over without a word.
_IDLE = frozenset("hmdb hmdbid method chebi kegg lab laboratory instrument batch comment comments".split())

#: Columns that say who somebody is: not analytes, and not kept, so that no output can carry them.
_PERSONAL = frozenset(
    "age alter sex gender geschlecht birthdate birthday dateofbirth dob geburtsdatum patient patientname surname "
    "lastname firstname forename vorname nachname mrn hospitalnumber height weight bmi".split()
)

_PUNCTUATION = re.compile(r"[\s_\-.()\[\]°/]")
_SUFFIX = re.compile(r"(?P<name>.*[^\s_,])[ _,]\s*(?P<unit>[munpµμ]?(?:M|[mM]ol(?:/|_per_|_)\S+|g(?:/|_per_|_)\S+))\Z")


#: What may stand between a name and its unit.
_BETWEEN = " ,_:/-–"


def _plain(heading: str) -> str:
    return _PUNCTUATION.sub("", heading.strip().casefold())


def field_of(heading: str) -> str:
    """The field a heading names, "" where it names none."""
    return _BY_HEADING.get(_plain(heading), "")


def is_own_heading(heading: str, field: str) -> bool:
    """Whether this is the very heading that the program's own description gives the field."""
    return heading.strip().casefold() == _OWN_HEADING.get(field, field)


def own_heading(field: str) -> str:
    """The heading to be recommended for a field."""
    return _OWN_HEADING.get(field, field)


def is_idle(heading: str) -> bool:
    """Whether a column of this heading is known to carry nothing the program reads."""
    return _plain(heading) in _IDLE


def is_personal(heading: str) -> bool:
    """Whether a column of this heading describes a person; it is told as not read, and nothing of it is kept."""
    return _plain(heading) in _PERSONAL


def split_unit(heading: str) -> tuple[str, str]:
    """Name and unit of `Lactate (mmol/L)`, `lactate [umol/L]`, `Lac_uM`; unit "" where none is written.

    A bracket that holds no unit stays part of the name.
    """
    text = heading.strip()
    bracket = _last_bracket(text)
    if bracket > 0 and _looks_like_unit(text[bracket + 1 : -1]):
        return text[:bracket].strip(_BETWEEN), text[bracket + 1 : -1].strip().removeprefix("in ")
    suffix = _SUFFIX.match(text) if len(text) <= 200 else None
    if suffix:
        unit = suffix["unit"].replace("_per_", "/").replace("_", "/", 1)
        if _looks_like_unit(unit):
            return suffix["name"].strip(_BETWEEN), unit
    return text, ""


def _last_bracket(text: str) -> int:
    """Where the bracket opens that closes at the end of the text; −1 where none does."""
    if not text.endswith((")", "]")):
        return -1
    depth = 0
    for k in range(len(text) - 1, -1, -1):
        depth += (text[k] in ")]") - (text[k] in "([")
        if depth == 0:
            return k
    return -1


def _looks_like_unit(text: str) -> bool:
    """Known, or refused for what it means (percent, ratio: the reason is worth telling), or of a unit's shape."""
    try:
        read_unit(text.strip().removeprefix("in "))
    except UnknownUnit as error:
        return error.is_known or bool(re.fullmatch(r"\s*[munpµμ]?(?:mol|g|l|L|U)\s*/.{1,40}", text))
    return True
