"""Boxes and spheres: shells filled exactly, cold and warm, from a microkelvin up."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from external_values import parameters, rows, value
from near import near
from round_levels import RoundLevels
from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, ELECTRON_MASS, ELEMENTARY_CHARGE, REDUCED_PLANCK
from service.physics.filling.level_count import LevelCount
from service.physics.levels.rectangular import RectangularLevels

EV = ELEMENTARY_CHARGE
MASS = 0.067 * ELECTRON_MASS


def box(*sides, mass=MASS):
    return LevelCount(RectangularLevels(sides, (mass,) * 3), 2.0)


def cube(side=10e-9, mass=MASS):
    return box(side, side, side, mass=mass)


@pytest.mark.parametrize("row", parameters("confinement", "highest_occupied_level"))
def test_a_cube_is_filled_level_by_level(row):
    states = cube(value(row, "side"), value(row, "effective_mass_ratio") * ELECTRON_MASS)
    filled = states.lowest_level + states.fermi_energy(value(row, "electrons"))
    assert filled / EV == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


@pytest.mark.parametrize("row", parameters("confinement", "next_electron_level"))
def test_the_next_electron_goes_where_the_source_says(row):
    states = cube(value(row, "side"), value(row, "effective_mass_ratio") * ELECTRON_MASS)
    filled = states.lowest_level + states.fermi_energy(value(row, "electrons") + 1)
    assert filled / EV == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


@pytest.mark.parametrize("row", parameters("confinement", "cubic_box_state_count_no_spin"))
def test_states_up_to_an_energy_are_counted_exactly(row):
    unit = (math.pi * REDUCED_PLANCK / 10e-9) ** 2 / (2 * MASS)
    most = value(row, "sum_of_squares_max") - 3
    assert cube().levels_below(unit * most * (1 + 1e-12)) == row["expected"], row["source"]


@pytest.mark.parametrize("row", rows("confinement", "total_energy"), ids=lambda row: row["id"])
def test_the_ground_states_energy_is_what_the_source_says(row):
    states = cube(value(row, "side"), value(row, "effective_mass_ratio") * ELECTRON_MASS)
    count = value(row, "electrons")
    total = states.ground_energy_density(count) + count * states.lowest_level
    assert total / EV == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


def test_at_zero_temperature_a_full_shell_puts_mu_midway_and_a_part_filled_one_on_itself():
    states = cube()
    unit = (math.pi * REDUCED_PLANCK / 10e-9) ** 2 / (2 * MASS)
    # 1 1 1 holds two; 1 1 2 three times two.
    assert states.chemical_potential(2.0, 0.0) == near(1.5 * unit, rel=1e-14)
    assert states.chemical_potential(8.0, 0.0) == near((3 + 6) / 2 * unit, rel=1e-14)
    assert states.chemical_potential(5.0, 0.0) == near(3 * unit, rel=1e-14)
    # A density times a volume rounds: a few units of the last digit make no half-filled shell.
    assert states.chemical_potential(8.0 * (1 + 4e-16), 0.0) == states.chemical_potential(8.0, 0.0)
    assert states.chemical_potential(8.000001, 0.0) == near(6 * unit, rel=1e-14)


@pytest.mark.parametrize("temperature", [1e-6, 1e-3, 0.1, 10.0, 300.0])
@pytest.mark.parametrize("count", [1.0, 2.0, 5.0, 8.0, 19.0, 20.0, 34.5])
def test_few_electrons_keep_their_digits_from_a_microkelvin_up(count, temperature):
    states = cube()
    got = states.chemical_potential(count, temperature)
    ladder = RectangularLevels((10e-9,) * 3, (MASS,) * 3).levels_up_to(
        max(got, 0) + 2 * EV + 60 * BOLTZMANN * temperature
    )
    with mpmath.workdps(60 + int(1.2 * EV / (BOLTZMANN * temperature) / 2.3) if temperature > 0.5 else 40):
        expected = exact_potential(ladder, count, temperature, got)
    # 1e-11 of kT is what the service is asked for; |mu| rounds on top of it.
    assert abs(got - expected) <= 1e-11 * BOLTZMANN * temperature + 4e-16 * abs(got)


def exact_potential(ladder, count, temperature, got):
    """Return mu by bisection in many digits where the gap allows, else by the limit T -> 0 of two shells."""
    thermal_energy = mpmath.mpf(BOLTZMANN) * temperature
    room = 2 * ladder.degeneracy
    filled = np.cumsum(room)
    place = int(np.searchsorted(filled, count * (1 - 1e-15)))
    if temperature <= 0.5:
        full = filled[place] == count
        if full:
            middle = (mpmath.mpf(float(ladder.edge[place])) + mpmath.mpf(float(ladder.edge[place + 1]))) / 2
            return float(middle + thermal_energy / 2 * mpmath.log(room[place] / room[place + 1]))
        held = count - (filled[place - 1] if place else 0)
        return float(mpmath.mpf(float(ladder.edge[place])) + thermal_energy * mpmath.log(held / (room[place] - held)))
    edges = [mpmath.mpf(float(edge)) for edge in ladder.edge]
    low, high = mpmath.mpf(got) - 3 * thermal_energy, mpmath.mpf(got) + 3 * thermal_energy
    for _ in range(70):
        middle = (low + high) / 2
        total = mpmath.fsum(
            r / (1 + mpmath.exp((e - middle) / thermal_energy)) for r, e in zip(room, edges, strict=True)
        )
        low, high = (middle, high) if total < mpmath.mpf(count) else (low, middle)
    return float(low)


@pytest.mark.parametrize("states", [box(9e-9, 8e-9, 7e-9), LevelCount(RoundLevels("sphere", 9e-9, MASS), 2.0)])
@given(st.floats(0.01, 200), st.floats(1, 5000))
@settings(max_examples=40, deadline=None)
def test_the_count_comes_back_from_the_chemical_potential(states, count, temperature):
    potential = states.chemical_potential(count, temperature)
    reduced = abs(potential) / (BOLTZMANN * temperature)
    # d ln N / d eta is at most 1: eta roundings of mu, and the sum's own.
    assert states.carrier_density(potential, temperature) == near(count, rel=1e-12 + 1e-15 * reduced)
    above = states.carriers_above(states.fermi_energy(count), potential, temperature)
    assert 0 <= above <= count * (1 + 1e-12)


def test_the_energy_and_its_slope_are_sums_over_levels():
    states, temperature = box(9e-9, 8e-9, 7e-9), 800.0
    potential = states.chemical_potential(30.0, temperature)
    ladder = states.ladder(potential + 60 * BOLTZMANN * temperature, 10**6)[0]
    f = 1 / (1 + np.exp((ladder.edge - potential) / (BOLTZMANN * temperature)))
    assert states.energy_density(potential, temperature) == near(
        np.sum(2 * ladder.degeneracy * ladder.edge * f), rel=1e-12
    )
    slope = np.sum(2 * ladder.degeneracy * f * (1 - f)) / (BOLTZMANN * temperature)
    assert states.compressibility(potential, temperature) == near(slope, rel=1e-12)


@pytest.mark.parametrize("kind", ["gaussian", "thermal"])
def test_broadened_lines_hold_what_they_are(kind):
    states, width = box(9e-9, 8e-9, 7e-9), 0.01 * EV
    energies = np.linspace(-0.3, 1.0, 4001) * EV
    density, integrated = states.spread_states(energies, Broadening(kind, width))
    grown = np.concatenate([[0], np.cumsum(0.5 * (density[1:] + density[:-1]) * np.diff(energies))])
    # The trapezoid at a thirtieth of a width: 1e-4 of the second derivative, which integrates away to 1e-6.
    assert integrated - integrated[0] == near(grown, abs=1e-5 * integrated[-1])
    assert integrated[-1] == near(states.states_below(1.0 * EV), rel=0.05)


def test_a_lorentzian_over_a_box_takes_in_every_level_to_infinity():
    source = RectangularLevels((9e-9, 8e-9, 7e-9), (MASS,) * 3)
    states, width, energy = LevelCount(source, 2.0), 0.02 * EV, 0.2 * EV
    got = states.spread_states(energy, Broadening("lorentzian", width))[0]
    ladder = source.levels_up_to(3000 * source.lowest)
    listed = np.sum(2 * ladder.degeneracy * width / math.pi / ((energy - ladder.edge) ** 2 + width**2))
    _, first, second, third = source.weyl
    cut = np.sqrt(3001 * source.lowest) * np.geomspace(1, 1e7, 200_001)
    far = (3 * third * cut**2 + 2 * second * cut + first) * 2 * width / math.pi / (cut**2 - source.lowest - energy) ** 2
    total = listed + np.trapezoid(far, cut)
    # The reference cuts sharply among the levels at k L of some 150: their ripple there is a few 1e-5 of the whole.
    assert got == near(total, rel=1e-4)


def test_lines_have_no_density_that_is_not_broadened():
    with pytest.raises(ValueError, match="lines"):
        cube().density_of_states(0.0)
