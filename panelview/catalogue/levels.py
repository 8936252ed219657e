"""What is known of a reactant's level in the species table before any measurement is used."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class LevelPrior:
    """One row of levels.csv, kJ/mol.

    shift, sd: published correction of ΔfG° and its uncertainty; prior_sd: width it was given beforehand, None where
    the level was not in doubt; only_auxiliary: it rests on measurements outside the catalogue's steps alone.
    """

    reactant: str
    shift: float
    sd: float
    prior_sd: float | None
    only_auxiliary: bool
