"""What is known to hold or drive an enzyme: effectors and regulation."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Effector:
    """A metabolite or signal that inhibits or activates the enzyme of a step.

    metabolite_id: None where the effector is not a catalogued metabolite (calcium, hormones);
    effect: "inhibits" or "activates"; kind: feedback, feed-forward, product inhibition …
    """

    step_id: str
    effector: str
    metabolite_id: str | None
    effect: str
    kind: str
    tissue: str
    usual_range: str
    source: str
    basis: str


@dataclass(frozen=True, slots=True)
class Regulation:
    """How an enzyme is controlled, in words, and what a panel would show."""

    enzyme: str
    gene: str
    ec: str
    step_ids: tuple[str, ...]
    pathway: str
    inhibitors: str
    activators: str
    product_inhibition: str
    level_control: str
    panel_shows: str
    source: str
    basis: str
