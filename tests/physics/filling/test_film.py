"""The hard-wall film: against level sums of 30 digits, its two exact forms against one another, and its limits."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from external_values import parameters, value
from near import near
from service.physics.bands import Band
from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, ELECTRON_MASS, ELEMENTARY_CHARGE, REDUCED_PLANCK
from service.physics.filling.film import HardWallFilm

EV = ELEMENTARY_CHARGE


def film(thickness=12e-9, mass=0.2, degeneracy=2.0):
    masses = (mass,) * 3 if isinstance(mass, float) else mass
    return HardWallFilm(Band(*(ELECTRON_MASS * one for one in masses), degeneracy), thickness)


def levels_by_hand(states, highest):
    """Return the levels up to an energy from the lowest, in 30 digits."""
    scale = mpmath.mpf(states.lowest_level)
    count = int(mpmath.sqrt(1 + mpmath.mpf(highest) / scale)) + 1
    return [scale * (i * i - 1) for i in range(1, count + 1)]


def exact_chemical_potential(states, density, temperature, guess):
    """Return mu from a plain sum over levels, by Newton steps in 40 digits."""
    with mpmath.workdps(40):
        thermal_energy = mpmath.mpf(BOLTZMANN) * mpmath.mpf(temperature)
        per_energy = mpmath.mpf(states.density_of_states(0.0))
        edges = levels_by_hand(states, max(guess, 0) + 90 * BOLTZMANN * temperature)
        potential = mpmath.mpf(guess)
        for _ in range(4):
            reduced = [(potential - edge) / thermal_energy for edge in edges]
            filled = per_energy * thermal_energy * mpmath.fsum(mpmath.log1p(mpmath.exp(x)) for x in reduced)
            slope = per_energy * mpmath.fsum(1 / (1 + mpmath.exp(-x)) for x in reduced)
            potential -= (filled - mpmath.mpf(density)) / slope
        return potential


CASES = [
    # thickness, density per area, temperature: one subband cold, many cold, dense and hot, dilute.
    (5e-9, 1e15, 0.01),
    (5e-9, 1e15, 300.0),
    (12e-9, 2.4e17, 4.2),
    (12e-9, 2.4e17, 300.0),
    (12e-9, 2.4e17, 1e5),
    (100e-9, 1e15, 300.0),
    (100e-9, 1e18, 77.0),
    (100e-9, 1e9, 300.0),
    (300e-9, 1e-200, 300.0),
    (300e-9, 5e19, 300.0),
    (1e-6, 1e16, 30.0),
]


@pytest.mark.parametrize(("thickness", "density", "temperature"), CASES)
def test_the_chemical_potential_is_that_of_a_plain_sum_over_levels(thickness, density, temperature):
    states = film(thickness)
    got = states.chemical_potential(density, temperature)
    expected = exact_chemical_potential(states, density, temperature, got)
    scale = max(abs(got + states.lowest_level), BOLTZMANN * temperature)
    assert abs(got - float(expected)) <= states.relative_error_bound * scale
    many = film(np.array([thickness] * 2)).chemical_potential(np.array([density] * 2), np.array([temperature] * 2))
    assert many == near([got] * 2, rel=1e-14, abs=1e-14 * BOLTZMANN * temperature)


def test_a_cold_film_with_one_subband_keeps_its_digits_above_it():
    # mu is 3e-6 of the lowest level here: measured from the band edge, eleven digits would be left.
    states = film(1e-9, 1.0)
    got = states.chemical_potential(5e9, 0.001)
    expected = exact_chemical_potential(states, 5e9, 0.001, got)
    assert got == near(float(expected), rel=1e-14)
    assert abs(got) < 1e-6 * states.lowest_level


@given(st.floats(-9, -3), st.floats(10, 32), st.floats(-2, 5))
@settings(max_examples=150, deadline=None)
def test_the_density_comes_back_over_six_decades_of_thickness(thickness, density, temperature):
    states = film(10.0**thickness)
    per_area = 10.0 ** (density + thickness)
    potential = states.chemical_potential(per_area, 10.0**temperature)
    eta = abs(potential) / (BOLTZMANN * 10.0**temperature)
    # d ln n / d eta is at most 1 in the dilute limit and D/2 over eta in the filled: eta roundings and a few more.
    assert states.carrier_density(potential, 10.0**temperature) == near(per_area, rel=2e-14 + 1e-15 * eta)


@pytest.mark.parametrize(
    "row",
    [parameter for name in ("fermi_energy", "chemical_potential") for parameter in parameters("confinement", name)],
)
def test_a_film_is_what_the_source_says(row):
    if "thickness" not in row["inputs"]:
        pytest.skip("a wire")
    thickness, mass = value(row, "thickness"), value(row, "effective_mass_ratio")
    states = film(thickness, mass)
    density = value(row, "carrier_density") * thickness
    got = states.lowest_level + states.chemical_potential(density, value(row, "temperature"))
    assert got / EV == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


@given(st.floats(1e-3, 1e21))
@settings(deadline=None)
def test_at_zero_temperature_the_filled_subbands_hold_all_carriers(ratio):
    states = film(20e-9)
    density = ratio * states.density_of_states(0.0) * states.lowest_level
    filled = states.fermi_energy(density)
    assert states.states_below(filled) == near(density, rel=4e-15)
    assert states.levels_below(filled) <= states.levels_below(filled * (1 + 1e-12) + 1e-40)
    many = film(np.full(2, 20e-9)).fermi_energy(np.full(2, density))
    assert many.tolist() == [filled] * 2


@pytest.mark.parametrize("count", [1, 2, 3, 10, 1000, 10_000_000])
def test_a_subband_opens_exactly_where_the_ones_below_are_filled_to_its_edge(count):
    # sum over i <= m of a((m+1)^2 - i^2), by whole numbers.
    states = film(20e-9)
    capacity = count * (count + 1) * (4 * count + 5) // 6
    density = float(capacity) * states.density_of_states(0.0) * states.lowest_level
    # One part in 1e14 and a half to either side of the edge: the rounding of the density itself is 2e-16.
    assert states.levels_below(states.fermi_energy(density * (1 - 1e-14))) == count
    assert states.levels_below(states.fermi_energy(density * (1 + 1e-7))) == count + 1


@pytest.mark.parametrize("temperature", [0.0, 4.2, 300.0, 3000.0])
@pytest.mark.parametrize(("thickness", "density"), [(5e-9, 1e16), (50e-9, 1e18), (2e-6, 1e17), (2e-6, 1e20)])
def test_the_energy_is_the_sum_over_levels(thickness, density, temperature):
    states = film(thickness)
    potential = states.chemical_potential(density, temperature)
    got = states.total_energy_density(density, potential, temperature)
    with mpmath.workdps(30):
        per_energy = mpmath.mpf(states.density_of_states(0.0))
        thermal_energy = mpmath.mpf(BOLTZMANN) * temperature
        total = mpmath.mpf(0)
        for edge in levels_by_hand(states, max(potential, 0) + 60 * BOLTZMANN * temperature):
            if temperature == 0:
                total += max(mpmath.mpf(potential) ** 2 - edge**2, 0) / 2 if edge < potential else 0
                continue
            reduced = (potential - edge) / thermal_energy
            first = -mpmath.polylog(2, -mpmath.exp(reduced)).real if reduced < 40 else reduced**2 / 2 + mpmath.pi**2 / 6
            total += edge * thermal_energy * mpmath.log1p(mpmath.exp(reduced)) + thermal_energy**2 * first
        expected = float(per_energy * total)
    # The energy follows mu, whose own bound is 1e-13, by d ln U / d ln mu of 5/2 at most.
    assert got == near(expected, rel=5e-13)


@pytest.mark.parametrize("temperature", [4.2, 300.0])
@pytest.mark.parametrize(("thickness", "density"), [(5e-9, 1e16), (50e-9, 1e18), (2e-6, 1e17), (100e-6, 1e20)])
@pytest.mark.parametrize("offset", [-3.0, 0.0, 5.0])
def test_carriers_above_an_energy_are_the_tails_of_the_levels(thickness, density, temperature, offset):
    states = film(thickness)
    thermal_energy = BOLTZMANN * temperature
    potential = states.chemical_potential(density, temperature)
    start = max(0.0, potential + offset * thermal_energy)
    got = states.carriers_above(start, potential, temperature)
    count = int(math.sqrt(1 + (start + 60 * thermal_energy) / states.lowest_level)) + 1
    edge = states.lowest_level * (np.arange(1.0, count + 1) ** 2 - 1)
    reduced = (potential - np.maximum(edge, start)) / thermal_energy
    terms = np.maximum(reduced, 0) + np.log1p(np.exp(-np.abs(reduced)))
    # A plain sum of positive terms; each rounds as (mu - E)/kT does, a few hundred times 1e-16.
    expected = states.density_of_states(0.0) * thermal_energy * math.fsum(terms)
    assert got == near(expected, rel=1e-12)


@pytest.mark.parametrize("width", [1e-4, 1e-3, 0.03])
@pytest.mark.parametrize("kind", ["gaussian", "thermal"])
@pytest.mark.parametrize("thickness", [5e-9, 60e-9])
def test_broadened_states_are_a_sum_over_levels(kind, width, thickness):
    check_spread(thickness, kind, width, [-0.05, 0.0, 0.01, 0.3, 1.0])


@pytest.mark.parametrize(("width", "energies"), [(1e-3, [0.3]), (0.03, [-0.05])])
def test_a_lorentzian_takes_in_every_level_to_infinity(width, energies):
    check_spread(5e-9, "lorentzian", width, energies)


def check_spread(thickness, kind, width, energies):
    states = film(thickness)
    energies = np.array(energies) * EV
    density, integrated = states.spread_states(energies, Broadening(kind, width * EV))
    scale = states.density_of_states(0.0) * width * EV
    with mpmath.workdps(40):
        for place, energy in enumerate(energies):
            expected = reference_spread(states, float(energy), kind, width * EV)
            # The closed forms lose the ratio of the energy to the width at most; below the edge a Gaussian's argument
            # (50 meV / 0.1 meV) enters squared: 1e5 roundings, where anything is left at all.
            assert density[place] == near(expected[0], rel=1e-10, abs=1e-250), energy
            assert integrated[place] == near(expected[1], rel=1e-10, abs=1e-12 * scale), energy


def reference_spread(states, energy, kind, width):
    per_energy = states.density_of_states(0.0)
    if kind == "lorentzian":
        scale, energy = mpmath.mpf(states.lowest_level), mpmath.mpf(energy)

        def step(i):
            return mpmath.mpf(1) / 2 + mpmath.atan((energy - scale * (i * i - 1)) / width) / mpmath.pi

        def primitive(x):
            x = mpmath.mpf(x) / width
            return x * (mpmath.mpf(1) / 2 + mpmath.atan(x) / mpmath.pi) - mpmath.log(1 + x * x) / (2 * mpmath.pi)

        def rise(i):
            return primitive(energy - scale * (i * i - 1)) - primitive(-scale * (i * i - 1))

        # Past the energy and its width the levels' shares fall smoothly: there the Euler-Maclaurin sum takes over.
        near = int(4 * mpmath.sqrt((abs(energy) + 100 * width) / scale)) + 50
        sums = [
            mpmath.fsum(map(part, range(1, near))) + mpmath.nsum(part, [near, mpmath.inf], method="euler-maclaurin")
            for part in (step, rise)
        ]
        return float(per_energy * sums[0]), float(per_energy * width * sums[1])
    count = total = mpmath.mpf(0)
    for edge in levels_by_hand(states, max(energy, 0) + 60 * width):
        x = (mpmath.mpf(energy) - edge) / width
        if kind == "gaussian":
            count += mpmath.ncdf(x)
            total += x * mpmath.ncdf(x) + mpmath.npdf(x)
        else:
            count += 1 / (1 + mpmath.exp(-x))
            total += mpmath.log1p(mpmath.exp(x))
    return float(per_energy * count), float(per_energy * width * total)


def test_mixed_sizes_in_one_batch_are_each_their_own():
    thickness = np.geomspace(1e-9, 1e-3, 61)
    temperature = np.geomspace(0.01, 2000, 61)
    many = film(thickness).chemical_potential(1e25 * thickness, temperature)
    for row in range(61):
        one = film(float(thickness[row])).chemical_potential(1e25 * float(thickness[row]), float(temperature[row]))
        assert many[row] == near(one, rel=1e-13)


def test_a_curve_of_a_batch_is_that_of_each_sample():
    energies = np.linspace(-0.01, 0.5, 9) * EV
    thickness = np.array([5e-9, 50e-9])
    together = film(thickness)
    for row, one in enumerate(thickness):
        alone = film(float(one))
        rows = np.stack([energies, energies])
        assert together.states_below(rows)[row] == near(alone.states_below(energies), rel=1e-14)
        assert together.density_of_states(rows)[row].tolist() == alone.density_of_states(energies).tolist()
        spread = together.spread_states(rows, Broadening("gaussian", 0.01 * EV))
        assert spread[0][row] == near(alone.spread_states(energies, Broadening("gaussian", 0.01 * EV))[0], rel=1e-13)


def test_the_ladder_lists_the_first_levels_and_counts_them_all():
    states = film(20e-9)
    ladder, total = states.ladder(1.0 * EV, 5)
    assert ladder.quantum_numbers.tolist() == [[1], [2], [3], [4], [5]]
    assert ladder.edge == near(states.lowest_level * np.array([0, 3, 8, 15, 24]), rel=1e-15)
    assert total == math.floor(math.sqrt(1 + EV / states.lowest_level))
    assert states.ladder(0.0, 5)[1] == 1


def test_the_lowest_level_is_that_of_a_box():
    expected = (math.pi * REDUCED_PLANCK / 12e-9) ** 2 / (2 * 0.916 * ELECTRON_MASS)
    assert film(12e-9, (0.19, 0.19, 0.916)).lowest_level == near(expected, rel=1e-15)
