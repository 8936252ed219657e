"""Reactions as people write them: `2 adp = atp + amp`, read, balanced and matched with a catalogued step."""

from __future__ import annotations

import difflib
import re
from collections import defaultdict
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.catalogue.constants import StepConstants
from panelview.catalogue.formula import element_counts
from panelview.catalogue.load import Catalogue
from panelview.thermo.conditions import Conditions

Array = NDArray[np.float64]

_TERM = re.compile(r"(?:(\d+(?:\.\d+)?)\s*\*?\s+)?([A-Za-z0-9_]+)\Z")


class UnreadableReaction(ValueError):
    """A reaction text that cannot be used; `what` is wrong and the `remedy`."""

    def __init__(self, text: str, what: str, remedy: str) -> None:
        super().__init__(text, what, remedy)
        self.text = text
        self.what = what
        self.remedy = remedy

    def __str__(self) -> str:
        return f"{self.what}; {self.remedy}"


@dataclass(frozen=True)
class Reaction:
    """A balanced reaction of catalogue reactants.

    text: as written; stoichiometry: metabolite id → ν; step: index of the catalogued step it is a
    multiple of, −1 where none; times: that multiple; water_added: ν of water put in to balance it.
    """

    text: str
    stoichiometry: dict[str, float]
    step: int
    times: float
    water_added: float


def read_reaction(text: str, catalogue: Catalogue) -> Reaction:
    """Read `substrates = products`. Raises UnreadableReaction."""
    sides = text.split("=")
    if len(sides) != 2:
        raise UnreadableReaction(
            text, "a reaction needs exactly one “=”", "write it as lactate + nad = pyruvate + nadh"
        )
    nu: defaultdict[str, float] = defaultdict(float)
    for sign, side in zip((-1, 1), sides, strict=True):
        for term in side.split(" + ") if " + " in side else side.split("+"):
            coefficient, metabolite = _term(text, term.strip(), catalogue)
            nu[metabolite] += sign * coefficient
    stoichiometry = {k: v for k, v in nu.items() if v}
    if not stoichiometry:
        raise UnreadableReaction(text, "nothing is left on either side", "name what is turned over")
    water = _balance(text, stoichiometry, catalogue)
    if water:
        stoichiometry["water"] = stoichiometry.get("water", 0.0) + water
        if not stoichiometry["water"]:
            del stoichiometry["water"]
    step, times = _match(stoichiometry, catalogue)
    return Reaction(text, stoichiometry, step, times, water)


def reaction_constants(reaction: Reaction, catalogue: Catalogue, conditions: Conditions) -> StepConstants:
    """ΔrG′° of one reaction, [condition, 1]. Raises UnreadableReaction where a reactant has no data."""
    constants = catalogue.constants
    if reaction.step >= 0:
        all_steps = constants.at(conditions)
        k, times = reaction.step, reaction.times
        return StepConstants(
            delta_g0_prime=times * all_steps.delta_g0_prime[:, [k]],
            sd=abs(times) * all_steps.sd[:, [k]],
            by=times * all_steps.by[:, [k]],
        )
    reactants = constants.species.reactants
    row = np.zeros(len(reactants))
    for metabolite, nu in reaction.stoichiometry.items():
        if metabolite not in reactants:
            raise UnreadableReaction(
                reaction.text,
                f"no formation data are known for {metabolite}",
                "leave it out or use a catalogued step",
            )
        row[reactants.index(metabolite)] = nu
    return constants.reaction(row, conditions)


def _term(text: str, term: str, catalogue: Catalogue) -> tuple[float, str]:
    match = _TERM.match(term)
    if match is None:
        raise UnreadableReaction(
            text,
            f"“{term}” is not a reactant",
            "write a catalogue id, with its coefficient before it (2 adp)",
        )
    metabolite = match[2]
    if metabolite not in catalogue.metabolites:
        near = difflib.get_close_matches(metabolite, catalogue.metabolites, n=3)
        hint = f"perhaps {', '.join(near)}" if near else "see the ids printed by panelview constants"
        raise UnreadableReaction(text, f"“{metabolite}” is not a catalogue reactant", hint)
    if metabolite in ("hydrogen_ion", "magnesium_ion"):
        raise UnreadableReaction(
            text, f"{metabolite} is held by pH or pMg and is no reactant here", "leave it out"
        )
    return float(match[1] or 1), metabolite


def _balance(text: str, stoichiometry: dict[str, float], catalogue: Catalogue) -> float:
    """Water needed to balance the reaction; hydrogen ions are held by pH. Raises if no water can."""
    total: defaultdict[str, float] = defaultdict(float)
    for metabolite, nu in stoichiometry.items():
        formula = catalogue.metabolites[metabolite].formula
        if formula is None:
            return 0.0  # reduced-count proteins carry no formula
        for element, count in element_counts(formula).items():
            total[element] += nu * count
    off = {element: n for element, n in total.items() if abs(n) > 1e-9}
    water = -off.get("O", 0.0)
    off["O"] = 0.0
    off["H"] = off.get("H", 0.0) + 2 * water
    left = [element for element, n in off.items() if abs(n) > 1e-9]
    if left:
        raise UnreadableReaction(
            text,
            f"the reaction is not balanced in {', '.join(sorted(left))}",
            "check coefficients and reactants",
        )
    return water


def _match(stoichiometry: dict[str, float], catalogue: Catalogue) -> tuple[int, float]:
    for k, step in enumerate(catalogue.steps):
        own = dict(step.stoichiometry)
        if own.keys() != stoichiometry.keys():
            continue
        ratios = {stoichiometry[m] / nu for m, nu in own.items()}
        if max(ratios) - min(ratios) < 1e-9:
            return k, ratios.pop()
    return -1, 0.0
