"""Clusters of levels: as good as the levels themselves in every sum of a smooth function."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from near import near
from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.filling.clusters import LEAF, Kernel, LevelClusters

RANDOM = np.random.default_rng(3)
LEVELS = np.sort(RANDOM.uniform(0.0, 1e5, 20_000))
ROOM = RANDOM.integers(1, 9, LEVELS.size).astype(float)
CLUSTERS = LevelClusters(LEVELS, ROOM)


def occupations(warmth):
    return Kernel(math.pi * warmth, 4.0 * warmth, 45.0 * warmth)


@given(st.floats(-2e4, 9e4), st.floats(-2, 3.5), st.sampled_from([-2.0, -1.5, -1.0, -0.5, 0.5]))
@settings(max_examples=60, deadline=None)
def test_clusters_stand_for_levels_in_sums_of_occupations(potential, decades, order):
    warmth = 10.0**decades
    edges, weights = CLUSTERS.points(potential, potential, occupations(warmth))
    got = float(np.sum(weights * fermi_dirac_integral(order, (potential - edges) / warmth)))
    expected = float(np.sum(ROOM * fermi_dirac_integral(order, (potential - LEVELS) / warmth)))
    # 22 points leave 1e-17 of each cluster; the weights of both signs sum to three times their total: rounding. Far
    # below all levels the occupation is an exponential, which multiplies the roundings of eta by eta itself; below
    # 1e-290 the terms are denormal. Among the levels, those 45 warmths away are left out, exp(-45) of their room each.
    rounding = 2e-15 * float(np.max(np.abs((potential - LEVELS[:1]) / warmth)))
    assert got == near(expected, rel=1e-14 + rounding, abs=1e-290 if potential < LEVELS[0] else 32 * math.exp(-45))
    assert edges.size < 1500


@given(st.floats(0.0, 1e5))
@settings(max_examples=40, deadline=None)
def test_clusters_stand_for_levels_in_sums_with_a_root_or_a_pole_at_the_energy(energy):
    edges, weights = CLUSTERS.points(energy, energy, Kernel(0.0, math.inf, 0.0))
    below = edges < energy
    for power in (0.5, -0.5, 1.5):
        got = float(np.sum(weights[below] * (energy - edges[below]) ** power))
        assert got == near(
            float(np.sum(ROOM[energy > LEVELS] * (energy - LEVELS[energy > LEVELS]) ** power)), rel=1e-12
        )
    assert np.sum(weights[below]) == near(ROOM[energy > LEVELS].sum(), rel=1e-14)


def test_one_list_of_points_serves_a_range_of_energies():
    edges, weights = CLUSTERS.points(3e4, 3.2e4, Kernel(0.0, math.inf, math.inf))
    for energy in (3e4, 3.13e4, 3.2e4):
        got = float(np.sum(weights / np.hypot(energy - edges, 0.3)))
        assert got == near(float(np.sum(ROOM / np.hypot(energy - LEVELS, 0.3))), rel=1e-13)


def test_few_levels_are_themselves():
    few = LevelClusters(LEVELS[: LEAF // 2], ROOM[: LEAF // 2])
    edges, weights = few.points(0.0, 0.0, occupations(1e9))
    assert edges.tolist() == LEVELS[: LEAF // 2].tolist()
    assert weights.tolist() == ROOM[: LEAF // 2].tolist()


def test_below_all_levels_the_lowest_still_count():
    edges, _ = CLUSTERS.points(-1e9, -1e9, occupations(1.0))
    assert edges[0] == LEVELS[0]
    assert edges[-1] <= LEVELS[0] + 45.0


@pytest.mark.parametrize("size", [65, 128, 129, 191, 1000])
def test_any_number_of_levels_can_be_clustered(size):
    some = LevelClusters(LEVELS[:size], ROOM[:size])
    edges, weights = some.points(9e4, 9e4, Kernel(0.0, math.inf, math.inf))
    got = float(np.sum(weights * np.sqrt(9e4 - edges)))
    assert got == near(float(np.sum(ROOM[:size] * np.sqrt(9e4 - LEVELS[:size]))), rel=1e-14)
