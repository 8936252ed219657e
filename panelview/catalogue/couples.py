"""Free pools and the near-equilibrium couples that report them."""

from __future__ import annotations

from dataclasses import dataclass

#: Free pools the program can infer: id → (oxidised or phosphorylated form, reduced form, compartment).
#: A ratio pool is oxidised over reduced.
RATIO_POOLS: dict[str, tuple[str, str, str]] = {
    "nad_cytosol": ("nad", "nadh", "cytosol"),
    "nad_mitochondrial_matrix": ("nad", "nadh", "mitochondrial_matrix"),
    "nadp_cytosol": ("nadp", "nadph", "cytosol"),
    "nadp_mitochondrial_matrix": ("nadp", "nadph", "mitochondrial_matrix"),
}


@dataclass(frozen=True, slots=True)
class IndicatorCouple:
    """A step whose measured pair reports a free pool, assuming the step is at equilibrium.

    pool: of `RATIO_POOLS`, or "adp_cytosol", "amp_cytosol"; step_id: the step; priority: 1 first;
    matrices: where it may be used; organ: what a proxy matrix stands in for; assumption, limits: text
    printed under each value; source: of the couple.
    """

    pool: str
    step_id: str
    priority: int
    matrices: tuple[str, ...]
    assumption: str
    limits: str
    source: str

#: Never read from an extract as free: most of each is bound to protein or in another compartment.
COFACTORS = frozenset(form for oxidised, reduced, _ in RATIO_POOLS.values() for form in (oxidised, reduced))


def pool_name(pool: str) -> tuple[str, str]:
    """A pool id in words: its name and its compartment.

    >>> pool_name("nadp_cytosol"), pool_name("adp_cytosol")
    (('Free NADP⁺/NADPH', 'cytosol'), ('Free ADP', 'cytosol'))
    """
    if pool in RATIO_POOLS:
        oxidised, _, place = RATIO_POOLS[pool]
        return ("Free NADP⁺/NADPH" if oxidised == "nadp" else "Free NAD⁺/NADH"), place.replace("_", " ")
    return f"Free {pool.removesuffix('_cytosol').upper()}", "cytosol"
