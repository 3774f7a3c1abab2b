"""The occupation: a step at T = 0, both tails to the last digit, and the widths that the textbooks quote."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from external_values import rows
from near import near
from service.physics.constants import BOLTZMANN
from service.physics.occupancy import occupation, thermal_broadening, transition_width

KT = BOLTZMANN * 300.0


@given(st.floats(-700, 700))
def test_both_tails_keep_their_digits(reduced):
    with mpmath.workdps(40):
        expected = 1 / (1 + mpmath.exp(mpmath.mpf(reduced * KT) / mpmath.mpf(KT)))
    # exp() multiplies the rounding of (E - mu)/kT by itself: 700 x 2.2e-16.
    assert float(occupation(reduced * KT, 0.0, 300.0)) == near(float(expected), rel=4e-13)


@given(st.floats(-1e-15, 1e-15), st.one_of(st.just(0.0), st.floats(1e-12, 1e9)))
def test_at_the_chemical_potential_half_the_states_are_filled(chemical_potential, temperature):
    assert float(occupation(chemical_potential, chemical_potential, temperature)) == 0.5


@pytest.mark.parametrize("function", [occupation, thermal_broadening])
@pytest.mark.parametrize(
    "shapes", [((), (), (4,)), ((3,), (), (2, 1)), ((), (2, 1), (1, 3)), ((2, 3), (2, 1), (2, 1)), ((1, 3), (), (2, 1))]
)
def test_energies_potentials_and_temperatures_of_any_shapes_that_broadcast_are_taken(function, shapes):
    draw = np.random.default_rng(1)
    energy, potential = (KT * draw.uniform(-1, 1, shape) for shape in shapes[:2])
    temperature = np.where(draw.uniform(size=shapes[2]) < 0.5, 0.0, 300.0)
    got = function(energy, potential, temperature)
    each = np.broadcast(energy, potential, temperature)
    assert got.shape == each.shape
    assert got.ravel().tolist() == [float(function(*(float(part) for part in one))) for one in each]


@given(st.floats(-700, 700))
def test_a_hole_mirrors_an_electron(reduced):
    together = occupation(reduced * KT, 0.0, 300.0) + occupation(-reduced * KT, 0.0, 300.0)
    assert float(together) == near(1.0, rel=3e-16)


def test_at_zero_temperature_the_occupation_is_a_step():
    energies = np.array([-1e-40, 0.0, 1e-40])
    assert occupation(energies, 0.0, 0.0).tolist() == [1.0, 0.5, 0.0]
    assert thermal_broadening(energies, 0.0, 0.0).tolist() == [0.0, 0.0, 0.0]


def test_rows_at_zero_and_above_stand_side_by_side():
    energies = np.array([[-KT, 0.0, KT]] * 2)
    temperatures = np.array([[0.0], [300.0]])
    together = occupation(energies, np.zeros((2, 1)), temperatures)
    assert together[0].tolist() == [1.0, 0.5, 0.0]
    assert together[1] == near([1 / (1 + math.exp(-1)), 0.5, 1 / (1 + math.e)], rel=1e-15)
    assert thermal_broadening(energies, np.zeros((2, 1)), temperatures)[1, 1] == near(0.25 / KT, rel=1e-15)


def test_a_microkelvin_against_a_kilo_electronvolt_neither_overflows_nor_warns():
    assert occupation(np.array([-1.6e-16, 1.6e-16]), 0.0, 1e-6).tolist() == [1.0, 0.0]
    assert thermal_broadening(np.array([-1.6e-16, 1.6e-16]), 0.0, 1e-6).tolist() == [0.0, 0.0]


def test_the_fall_is_the_slope_of_the_occupation():
    energies = np.linspace(-20, 20, 81) * KT
    step = 1e-4 * KT
    slope = (occupation(energies - step, 0.0, 300.0) - occupation(energies + step, 0.0, 300.0)) / (2 * step)
    # A central difference: step^2/6 of the third derivative, at most the first, and the rounding of f over the step.
    assert thermal_broadening(energies, 0.0, 300.0) == near(slope, rel=1e-8, abs=2e-12 / KT)


def test_the_transition_is_as_wide_as_its_definition():
    width = transition_width(300.0)
    assert float(occupation(-width / 2, 0.0, 300.0)) == near(0.9, rel=1e-15)
    assert float(occupation(width / 2, 0.0, 300.0)) == near(0.1, rel=1e-15)
    (row,) = rows("thermal", "occupancy_10_90_width_over_kT")
    assert width / KT == near(row["expected"], rel=max(row["tolerance_rel"], 4e-16)), row["source"]


@pytest.mark.parametrize("row", rows("thermal", "minus_df_dE_fwhm_over_kT"), ids=lambda row: row["id"])
def test_the_fall_is_3_525_kT_wide_at_half_its_height(row):
    half = row["expected"] / 2 * KT
    # d ln(-df/dE)/dE = -tanh(E/2kT)/kT is 0.71/kT there: the source's rounding times half the width times that.
    assert float(thermal_broadening(half, 0.0, 300.0)) == near(
        0.125 / KT, rel=max(1.25 * row["tolerance_rel"], 1e-15)
    ), row["source"]
