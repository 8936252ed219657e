"""Analyte names: what a laboratory wrote and the metabolite it means, or the candidates it may mean."""

from __future__ import annotations

import difflib
import re
import unicodedata
from collections import defaultdict

from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Match

_GREEK = {"α": "alpha", "β": "beta", "γ": "gamma", "δ": "delta", "ω": "omega", "κ": "kappa"}
_DROPPED = re.compile(r"[\s\-_,'’′″`()\[\]{}·*/+.:;]")

#: Near misses offered at most, and how alike they must be (0–1).
_OFFERED = 3
_ALIKE = 0.8


class Names:
    """All spellings of a catalogue, exact and tolerant."""

    def __init__(self, catalogue: Catalogue) -> None:
        self._exact: dict[str, tuple[str, ...]] = {}
        self._sums: set[str] = set()
        self._how: dict[str, str] = {}
        self._tolerant: defaultdict[str, set[str]] = defaultdict(set)
        self._known = {k.id: k.name for k in catalogue.known_analytes}
        for known in catalogue.known_analytes:
            self._add(known.id, (known.id,), "id")
            self._add(known.name, (known.id,), "name")
        for name in catalogue.names:
            self._add(name.text, name.candidates, "synonym")
            if name.is_sum:
                self._sums.add(name.text)
        for metabolite in catalogue.metabolites.values():
            for text, how in (
                (metabolite.symbol, "abbreviation"),
                (metabolite.name, "name"),
                (metabolite.id, "id"),
            ):
                if how == "id" or text not in self._exact:
                    self._add(text, (metabolite.id,), how)
        self._masses = {_tolerant(n.text): n.molar_mass for n in catalogue.names if n.molar_mass is not None}
        self._cache: dict[str, Match] = {}

    def _add(self, text: str, candidates: tuple[str, ...], how: str) -> None:
        self._exact[text] = candidates
        self._how[text] = how
        self._tolerant[_tolerant(text)].add(text)

    def match(self, written: str) -> Match:
        """Understand one name; equal names give one object."""
        found = self._cache.get(written)
        if found is None:
            found = self._cache[written] = self._match(written.strip())
        return found

    def mass_of(self, written: str) -> float | None:
        """g/mol of what a mass under this name is the mass of (urea nitrogen), None where it is the analyte."""
        return self._masses.get(_tolerant(written))

    def is_known_outside(self, analyte: str) -> bool:
        """Whether this id is an analyte that takes part in no catalogued step."""
        return analyte in self._known

    def _match(self, written: str) -> Match:
        if written in self._exact:
            return self._of(written, written, self._how[written])
        spellings = self._tolerant.get(_tolerant(written), set())
        meanings = {self._exact[s] for s in spellings}
        if len(meanings) == 1:
            return self._of(written, min(spellings), "spelling")
        if meanings:
            return Match(written, "", "ambiguous", tuple(sorted({c for m in meanings for c in m})))
        near = difflib.get_close_matches(_tolerant(written), self._tolerant, n=_OFFERED, cutoff=_ALIKE)
        offered = {c for key in near for s in self._tolerant[key] for c in self._exact[s]}
        return Match(written, "", "unknown", tuple(sorted(offered))[:_OFFERED])

    def _of(self, written: str, spelling: str, how: str) -> Match:
        candidates = self._exact[spelling]
        if spelling in self._sums:
            return Match(written, "", "sum", candidates)
        if len(candidates) > 1:
            return Match(written, "", "ambiguous", candidates)
        return Match(written, candidates[0], how, ())


def _tolerant(text: str) -> str:
    """The letters and digits that carry the meaning: case, blanks and punctuation off, Greek spelled out."""
    made = unicodedata.normalize("NFKC", text).casefold()
    for letter, word in _GREEK.items():
        made = made.replace(letter, word)
    # A sign of charge tells NAD⁺ from nothing else in the catalogue, so it goes too.
    return _DROPPED.sub("", made)
