"""Analyte names: what a laboratory wrote and the metabolite it means, or the candidates it may mean."""

from __future__ import annotations

import difflib
import re
import unicodedata
from collections import defaultdict

from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Match

_GREEK = {"α": "alpha", "β": "beta", "γ": "gamma", "δ": "delta", "ω": "omega", "κ": "kappa"}

#: Two degrees of tolerance. The first leaves brackets and slashes, which tell NADH from NAD(H) (a sum).
_SLIGHT = re.compile(r"[\s\-‐‑–−_,'’′″`·.:;]")
_WIDE = re.compile(r"[\s\-‐‑–−_,'’′″`·.:;()\[\]{}*/+]")

#: Near names offered at most, how alike they must be (0–1), and for how many unknown names and of what length they
#: are looked for: a column of text taken for analytes must not hold the reader up.
_OFFERED = 3
_ALIKE = 0.8
_LOOKED_UP = 200
_LONGEST = 80


class Names:
    """All spellings of a catalogue, exact and tolerant."""

    def __init__(self, catalogue: Catalogue) -> None:
        self._exact: dict[str, tuple[str, ...]] = {}
        self._sums: set[str] = set()
        self._how: dict[str, str] = {}
        self._slight: defaultdict[str, set[str]] = defaultdict(set)
        self._wide: defaultdict[str, set[str]] = defaultdict(set)
        self._known = {k.id: k for k in catalogue.known_analytes}
        for known in catalogue.known_analytes:
            self._add(known.id, (known.id,), "id")
            self._add(known.name, (known.id,), "name")
        for name in catalogue.names:
            self._add(name.text, name.candidates, "synonym")
            if name.is_sum:
                self._sums.add(name.text)
        for metabolite in catalogue.metabolites.values():
            for text, how in ((metabolite.symbol, "abbreviation"), (metabolite.name, "name"), (metabolite.id, "id")):
                # The table of names goes first: it knows which abbreviations mean two things.
                if how == "id" or self._exact.get(text, (metabolite.id,)) == (metabolite.id,):
                    self._add(text, (metabolite.id,), how)
        self._masses = {_spelled(n.text, _WIDE): n.molar_mass for n in catalogue.names if n.molar_mass is not None}
        self._cache: dict[str, Match] = {}
        self._looked_up = 0

    def _add(self, text: str, candidates: tuple[str, ...], how: str) -> None:
        self._exact[text] = candidates
        self._how[text] = how
        self._slight[_spelled(text, _SLIGHT)].add(text)
        self._wide[_spelled(text, _WIDE)].add(text)

    def match(self, written: str) -> Match:
        """Understand one name."""
        found = self._cache.get(written)
        if found is None:
            if len(self._cache) > 10_000:
                self._cache.clear()
                self._looked_up = 0
            found = self._cache[written] = self._match(written)
        return found

    def knows(self, written: str) -> bool:
        """Whether the name is in the table, be it ambiguous or a sum."""
        text = written.strip()
        return bool(text) and (text in self._exact or _spelled(text, _WIDE) in self._wide)

    def mass_of(self, written: str) -> float | None:
        """g/mol of what a mass under this name is the mass of (urea nitrogen), None where it is the analyte."""
        return self._masses.get(_spelled(written, _WIDE))

    def is_known_outside(self, analyte: str) -> bool:
        """Whether this id is an analyte that takes part in no catalogued step."""
        return analyte in self._known

    def _match(self, written: str) -> Match:
        text = written.strip()
        if text in self._exact:
            return self._of(written, text, self._how[text])
        spellings = self._slight.get(_spelled(text, _SLIGHT)) or self._wide.get(_spelled(text, _WIDE)) or set()
        meanings = {(frozenset(self._exact[s]), s in self._sums) for s in spellings}
        if len(meanings) == 1:
            return self._of(written, min(spellings), "spelling")
        if meanings:
            return Match(written, "", "ambiguous", tuple(sorted({c for ids, _ in meanings for c in ids})))
        return Match(written, "", "unknown", self._near(text))

    def _near(self, text: str) -> tuple[str, ...]:
        """Ids whose spellings come close, the closest first: offered, never taken."""
        if not text or len(text) > _LONGEST or self._looked_up >= _LOOKED_UP:
            return ()
        self._looked_up += 1
        near = difflib.get_close_matches(_spelled(text, _WIDE), self._wide, n=_OFFERED, cutoff=_ALIKE)
        # A name among other words, as in “plasma lactate”.
        words = (self._wide.get(_spelled(word, _WIDE), ()) for word in re.findall(r"[^\s,;:()\[\]]{3,}", text))
        spellings = [s for found in (*words, *(self._wide[key] for key in near)) for s in sorted(found)]
        offered = {c: None for s in spellings for c in self._exact[s]}
        return tuple(offered)[:_OFFERED]

    def _of(self, written: str, spelling: str, how: str) -> Match:
        candidates = self._exact[spelling]
        if spelling in self._sums:
            return Match(written, "", "sum", candidates)
        if len(candidates) > 1:
            return Match(written, "", "ambiguous", candidates)
        return Match(written, candidates[0], how, ())


def _spelled(text: str, dropped: re.Pattern[str]) -> str:
    """The letters and digits that carry the meaning: one case, Greek spelled out, `dropped` characters off.

    A sign of charge tells NAD⁺ from nothing else in the catalogue, so the wide degree drops it too.
    """
    made = unicodedata.normalize("NFKC", text).casefold()
    for letter, word in _GREEK.items():
        made = made.replace(letter, word)
    return dropped.sub("", made)
