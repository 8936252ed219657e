"""Rows that laboratories keep among specimens and that are none: quality controls, blanks, calibrators, statistics."""

from __future__ import annotations

import functools
import re

#: What a code or a word of a group or matrix column says (common practice, no source), with a number behind it or not.
_KINDS = (
    ("a quality control", r"(?:pooled|low|mid|medium|high|level)?\s*(?:iqc|qc|qcs|quality control)"),
    ("a quality control", r"(?:qc|quality control)[\s_.-]*(?:low|mid|medium|high|level|pool|[lmh])"),
    ("a blank", r"(?:double|solvent|procedural|process|extraction|reagent|matrix|method)?\s*(?:blank|blk|blanks)"),
    ("a calibrator", r"(?:cal|calibrator|calibration|calibrant|std|standard|cal std|calibration standard)"),
    ("a reference material", r"(?:nist[\s_-]*)?srm"),
)
_NUMBER = r"[\s_.#-]*(?:[0-9]{1,4}[a-c]?)?\Z"
_ANY = re.compile(f"(?:{'|'.join(words for _, words in _KINDS)}){_NUMBER}", re.IGNORECASE)
_NAMED = tuple((kind, re.compile(words + _NUMBER, re.IGNORECASE)) for kind, words in _KINDS)

#: First cells of rows under a table, or headings of columns beside it.
_STATISTICS = frozenset(
    "mean|average|avg|median|sd|s.d.|stdev|std dev|std. dev.|stddev|sem|s.e.m.|rsd|rsd%|%rsd|rsd (%)|cv|cv%|%cv|cv (%)|"
    "minimum|maximum|mittelwert|standardabweichung|reference range|ref range|ref. range|normal range|"
    "reference interval|referenzbereich|p-value|p value|fold change".split("|")
)


#: Kinds that a column of groups may name; there, a standard may be a diet and a mean a class.
IN_GROUPS = ("a quality control", "a blank")


@functools.lru_cache(maxsize=256)
def not_a_specimen(code: str) -> str:
    """What a code says it is in place of a specimen ("a blank"); "" for the code of a specimen.

    >>> not_a_specimen("QC-2"), not_a_specimen("Blank"), not_a_specimen("Q-17")
    ('a quality control', 'a blank', '')
    """
    text = " ".join(code.split())
    if len(text) > 40:
        return ""
    if text.casefold() in _STATISTICS:
        return "a statistic of the others"
    if not _ANY.match(text):
        return ""
    return next(kind for kind, pattern in _NAMED if pattern.match(text))
