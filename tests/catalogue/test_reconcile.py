"""The network of measured constants: it closes, repeats itself and is not led astray by one wrong paper."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from panelview.catalogue import chemistry_tables, prediction, reconcile
from panelview.catalogue.levels import LevelPrior
from panelview.catalogue.load import Catalogue
from panelview.catalogue.network import Network
from panelview.resource_files import resources
from panelview.thermo.conditions import Conditions

AT = Conditions.of([7.0, 7.4, 6.5], [310.15, 298.15, 305.0], [0.25, 0.1, 0.2], [3.0, 4.0, 2.5])


@pytest.fixture(scope="module")
def levels() -> tuple[LevelPrior, ...]:
    return chemistry_tables.read_level_priors(resources())


@pytest.fixture(scope="module")
def system(catalogue: Catalogue, levels: tuple[LevelPrior, ...]) -> reconcile.Equations:
    return prediction.system_of(catalogue, levels)


@pytest.fixture(scope="module")
def full(system: reconcile.Equations) -> reconcile.Fit:
    return reconcile.fit(system)


@pytest.fixture(scope="module")
def network(catalogue: Catalogue, full: reconcile.Fit) -> Network:
    return prediction.network_of(catalogue.constants.species, full)


def test_the_same_measurements_give_the_same_network(system: reconcile.Equations, full: reconcile.Fit) -> None:
    again = reconcile.fit(system)
    assert np.array_equal(again.estimate, full.estimate)
    assert np.array_equal(again.covariance, full.covariance)


def test_every_cycle_of_the_catalogue_closes(catalogue: Catalogue, network: Network) -> None:
    stoichiometry = catalogue.constants.stoichiometry
    _, size, right = np.linalg.svd(stoichiometry.T)
    cycles = right[np.sum(size > 1e-9) :]
    assert len(cycles) >= 5
    energies = network.formation(AT).value @ stoichiometry.T
    assert np.abs(energies @ cycles.T).max() < 1e-9


def test_covariance_is_symmetric_and_no_combination_has_negative_variance(
    catalogue: Catalogue, network: Network
) -> None:
    covariance = network.reaction_covariance(catalogue.constants.stoichiometry, 310.15)
    assert np.allclose(covariance, covariance.T)
    assert np.linalg.eigvalsh(covariance).min() > -1e-8


def test_a_combined_pair_is_known_better_than_its_parts_taken_apart(catalogue: Catalogue, network: Network) -> None:
    constants = catalogue.constants
    rows = [constants.step_ids.index(s) for s in ("gapdh", "phosphoglycerate_kinase", "gapdh_pgk_combined")]
    covariance = network.reaction_covariance(constants.stoichiometry[rows], 310.15)
    assert covariance[2, 2] < covariance[0, 0] + covariance[1, 1]


def test_a_constant_that_is_off_a_hundredfold_is_found_and_barely_moves_the_rest(
    catalogue: Catalogue, levels: tuple[LevelPrior, ...], network: Network
) -> None:
    measurements = prediction.used_measurements(catalogue)
    wrong = next(
        k for k, m in enumerate(measurements) if (m.step_id, m.evaluation) == ("lactate_dehydrogenase", "A")
    )
    measurements[wrong] = dataclasses.replace(
        measurements[wrong], k_prime=100 * measurements[wrong].k_prime, reference_id="planted"
    )
    system = prediction.system_of(catalogue, levels, measurements)
    spoiled = reconcile.fit(system)
    off = (spoiled.scatter + spoiled.source_effect[system.source]) / np.sqrt(system.variance)
    assert system.paper[int(np.argmax(np.abs(off)))] == "planted"
    k = catalogue.constants.step_ids.index("lactate_dehydrogenase")
    moved = prediction.network_of(catalogue.constants.species, spoiled)
    row = catalogue.constants.stoichiometry[k]
    before, after = (float((n.formation(AT).value @ row)[0]) for n in (network, moved))
    assert abs(after - before) < 0.3
