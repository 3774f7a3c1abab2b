"""Cylinders and spheres: whole solves to k_F R = 1000 and beyond, against the plain sum over the levels.

Run with `pytest tests/benchmarks/test_round_benchmark.py --benchmark-disable -s`. The goal of the project is 20 ms a
solve to k_F R = 1000 at 1e-12; what counts are the ratios within one run.
"""

import math
import time

import numpy as np
import pytest

from near import near
from round_levels import RoundLevels
from service.physics.constants import ELECTRON_MASS, REDUCED_PLANCK
from service.physics.filling.cylinder import Cylinder
from service.physics.filling.level_count import LevelCount
from service.physics.filling.level_sum import LevelSum
from service.physics.filling.sphere import Sphere

WAVENUMBER = 1.2e10
"""About that of a dense metal [1/m]."""

DENSITY = WAVENUMBER**3 / (3.0 * math.pi**2)
GOAL = 20e-3


def seconds(call, least=5):
    times = []
    for _ in range(least):
        start = time.perf_counter()
        call()
        times.append(time.perf_counter() - start)
    return float(np.median(times))


def _solve(states, density, temperature):
    return states.chemical_potential(density, temperature)


def sample(shape, reach):
    """Return states and density of a metal's sample with k_F R given."""
    diameter = 2.0 * reach / WAVENUMBER
    if shape == "cylinder":
        return Cylinder(ELECTRON_MASS, 2.0, diameter), DENSITY * math.pi / 4.0 * diameter**2
    return Sphere(ELECTRON_MASS, 2.0, diameter), DENSITY * math.pi / 6.0 * diameter**3


@pytest.mark.parametrize("shape", ["cylinder", "sphere"])
@pytest.mark.parametrize("temperature", [0.0, 1e-6, 1.0, 300.0, 3000.0])
def test_a_whole_solve_takes_less_than_the_goal_to_a_thousand(shape, temperature):
    states, density = sample(shape, 10.0)
    states.chemical_potential(density, temperature)
    for reach in (3.0, 10.0, 100.0, 300.0, 1000.0, 3000.0, 10000.0):
        # Fresh states each time: beyond the ladder they remember their last window.
        samples = [sample(shape, reach) for _ in range(5)]
        took = seconds(lambda samples=samples: _solve(*samples.pop(), temperature))
        print(f"{shape}, k_F R = {reach:7.0f}, {temperature:6g} K: {1e3 * took:7.3f} ms")
        if reach <= 1000.0:
            assert took < GOAL


@pytest.mark.parametrize("shape", ["cylinder", "sphere"])
def test_the_plain_sum_takes_many_times_as_long_for_the_same_digits(shape):
    states, density = sample(shape, 500.0)
    levels = RoundLevels(shape, 1000.0 / WAVENUMBER, ELECTRON_MASS)
    plain = LevelSum(levels, 1, ELECTRON_MASS, 2.0) if shape == "cylinder" else LevelCount(levels, 2.0)
    got, expected = states.chemical_potential(density, 300.0), plain.chemical_potential(density, 300.0)
    assert got == near(expected, rel=1e-12)
    ratio = seconds(lambda: plain.chemical_potential(density, 300.0), 3) / seconds(
        lambda: states.chemical_potential(density, 300.0)
    )
    print(f"{shape}: the plain sum takes {ratio:.0f} times as long")
    assert ratio > (20.0 if shape == "cylinder" else 1.0)


@pytest.mark.parametrize("shape", ["cylinder", "sphere"])
def test_a_curve_of_many_energies_has_no_slow_path(shape):
    states, _ = sample(shape, 500.0)
    top = (REDUCED_PLANCK * WAVENUMBER) ** 2 / (2.0 * ELECTRON_MASS)
    for count in (1_000, 10_000, 100_000):
        energies = np.linspace(0.0, 1.2 * top, count)
        took = seconds(lambda energies=energies: states.carrier_density(energies, 300.0), 1)
        sharp = seconds(lambda energies=energies: states.states_below(energies), 1)
        print(f"{shape}, {count} energies: warm {took:.2f} s, sharp {sharp:.2f} s")
    assert took < 10.0


@pytest.mark.parametrize("shape", ["cylinder", "sphere"])
def test_time_grows_in_step_with_samples(shape):
    random = np.random.default_rng(1)
    reaches = 10.0 ** random.uniform(0.5, 2.5, 400)
    start = time.perf_counter()
    for reach in reaches:
        states, density = sample(shape, float(reach))
        states.chemical_potential(density, 300.0)
    print(f"{shape}: {1e3 * (time.perf_counter() - start) / reaches.size:.3f} ms a sample")
