"""One catalogued enzyme-catalysed step."""

from __future__ import annotations

from dataclasses import dataclass

#: Compartment words used in tables, in the order in which a step with several is read.
COMPARTMENTS = (
    "cytosol",
    "mitochondrial_matrix",
    "mitochondrial_inner_membrane",
    "endoplasmic_reticulum",
    "extracellular",
)


@dataclass(frozen=True, slots=True)
class Step:
    """A step, its stoichiometry written in the catalogue's direction.

    stoichiometry: (metabolite id, ν) pairs, substrates negative, products positive, water included;
    short: label for figures; pathways: names in reading order; compartments: of `COMPARTMENTS`, the
    main one first; usual_direction: "forward" or "either"; disposition: "near-equilibrium" or
    "committed"; reason: why; tier: "core" or "extra".
    """

    id: str
    enzyme: str
    short: str
    ec: str
    pathways: tuple[str, ...]
    compartments: tuple[str, ...]
    stoichiometry: tuple[tuple[str, float], ...]
    usual_direction: str
    disposition: str
    reason: str
    tier: str
    source: str
    note: str

    @property
    def reaction(self) -> str:
        """The equation in ids, as in the catalogue: `glucose + atp = glucose_6_phosphate + adp`."""

        def side(sign: int) -> str:
            terms = [(i, abs(nu)) for i, nu in self.stoichiometry if nu * sign > 0]
            return " + ".join(i if n == 1 else f"{n:g} {i}" for i, n in terms)

        return f"{side(-1)} = {side(1)}"

    @property
    def metabolite_ids(self) -> tuple[str, ...]:
        return tuple(i for i, _ in self.stoichiometry)
