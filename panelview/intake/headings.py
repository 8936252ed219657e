"""Which heading means what: metadata, conditions, and analytes with their unit."""

from __future__ import annotations

import re

from panelview.intake.units import UnknownUnit, read_unit

#: Field → usual headings, compared without case, blanks and underscores (common practice, no source).
_FIELDS: dict[str, tuple[str, ...]] = {
    "specimen": (
        "specimen",
        "specimenid",
        "sample",
        "sampleid",
        "samplename",
        "samplecode",
        "probe",
        "probenid",
        "tube",
        "tubeid",
        "code",
        "id",
        "echantillon",
        "échantillon",
        "muestra",
        "campione",
    ),
    "participant": (
        "participant",
        "participantid",
        "subject",
        "subjectid",
        "patientcode",
        "proband",
        "pseudonym",
    ),
    "group": ("group", "gruppe", "cohort", "groupe", "grupo", "gruppo", "arm", "class"),
    "matrix": ("matrix", "matrices", "specimentype", "sampletype", "material", "tissue", "probenmaterial"),
    "collected": (
        "collected",
        "collectiontime",
        "collectiondate",
        "time",
        "date",
        "datetime",
        "drawn",
        "collecteddatetime",
        "entnahme",
        "datum",
    ),
    "ph": ("ph",),
    "temperature": ("temperaturec", "temperature", "temp", "tempc"),
    "ionic_strength": ("ionicstrengthmolperl", "ionicstrength", "ionicstrengthm"),
    "pmg": ("pmg",),
    "analyte": ("analyte", "metabolite", "compound", "name", "analytename", "parameter", "test", "analyt"),
    "value": ("value", "result", "concentration", "conc", "wert", "ergebnis", "valeur"),
    "unit": ("unit", "units", "einheit", "unite", "unité", "uom"),
    "comparator": ("comparator", "operator", "qualifier", "sign"),
    "flag": ("flag", "flags", "status", "remark"),
    "cv_percent": ("cvpercent", "cv", "cvpct", "cv%"),
    "lloq": ("lloq", "loq", "lod", "limit"),
    "replicate": ("replicate", "rep", "replikat"),
    "compartment": ("compartment",),
}
_BY_HEADING = {heading: field for field, headings in _FIELDS.items() for heading in headings}

#: Columns of long files that carry nothing the program reads.
_IDLE = frozenset({"hmdb", "method", "chebi", "kegg", "lab", "laboratory", "instrument", "batch", "comment"})

_BRACKETED = re.compile(r"(?P<name>.+?)\s*[\[(](?P<unit>[^\[\]]*?)[\])]\s*\Z")
_SUFFIX = re.compile(r"(?P<name>.+?)[ _,]\s*(?P<unit>[kmunpµμ]?(?:M|mol[/_]\S+|g/\S+))\Z")


def field_of(heading: str) -> str:
    """The field a heading names, "" where it names none."""
    return _BY_HEADING.get(re.sub(r"[\s_\-.]", "", heading.strip().casefold()), "")


def is_idle(heading: str) -> bool:
    return heading.strip().casefold() in _IDLE


def split_unit(heading: str) -> tuple[str, str]:
    """Name and unit of `Lactate (mmol/L)`, `lactate [umol/L]`, `Lac_uM`; unit "" where none is written.

    A bracket that holds no unit stays part of the name.
    """
    bracketed = _BRACKETED.match(heading.strip())
    if bracketed and _looks_like_unit(bracketed["unit"]):
        return bracketed["name"].strip(), bracketed["unit"].strip()
    suffix = _SUFFIX.match(heading.strip())
    if suffix:
        unit = suffix["unit"].replace("_", "/")
        if _looks_like_unit(unit):
            return suffix["name"].strip(" ,_"), unit
    return heading.strip(), ""


def _looks_like_unit(text: str) -> bool:
    try:
        read_unit(text)
    except UnknownUnit as error:
        # Refused on purpose (percent, ratio …): still a unit, and the reason is worth telling.
        return (
            bool(text.strip())
            and ("/" in text or "is not known" not in error.what)
            and any(c.isalpha() or c == "%" for c in text)
        )
    return True
