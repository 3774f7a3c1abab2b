"""Levels of soft confinements: the finite well, the uniform field and the parabola, against their own equations."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from near import near
from service.physics.constants import ELECTRON_MASS, ELEMENTARY_CHARGE, REDUCED_PLANCK
from service.physics.levels.finite_well import FiniteWell
from service.physics.levels.parabolic import ParabolicWell
from service.physics.levels.triangular import TriangularWell, airy_zeros

EV = ELEMENTARY_CHARGE
MASS = 0.067 * ELECTRON_MASS


def even_and_odd_levels(thickness, mass, barrier, barrier_mass):
    """Solve the textbook's two equations apart, by bracketing between their poles."""
    top = math.sqrt(2 * mass * barrier) / REDUCED_PLANCK * thickness / 2
    ratio = mass / barrier_mass

    def decay(x):
        # kappa L/2 m_w/m_b, with kappa^2 = 2 m_b (V - E) / hbar^2.
        return math.sqrt(max(top**2 - x**2, 0.0) / ratio) * ratio

    levels = []
    for n in range(int(top / (math.pi / 2)) + 1):
        low, high = n * math.pi / 2 + 1e-12, min((n + 1) * math.pi / 2 - 1e-12, top)

        def equation(x, n=n):
            return x * math.sin(x) - decay(x) * math.cos(x) if n % 2 == 0 else x * math.cos(x) + decay(x) * math.sin(x)

        levels.append((2 * brentq(equation, low, high, xtol=1e-15, rtol=8.9e-16) / thickness) ** 2)
    return np.array(levels) * REDUCED_PLANCK**2 / (2 * mass)


@pytest.mark.parametrize("barrier_ratio", [1.0, 1.4, 0.7])
@pytest.mark.parametrize("thickness", [2e-9, 10e-9, 80e-9])
def test_a_finite_well_has_the_levels_of_its_even_and_odd_equations(thickness, barrier_ratio):
    well = FiniteWell(thickness, MASS, 0.3 * EV, barrier_ratio * MASS)
    expected = even_and_odd_levels(thickness, MASS, 0.3 * EV, barrier_ratio * MASS)
    edges = well.lowest + well.levels_up_to(math.inf).edge
    # The bracketing's own tolerance is 1e-15 of k L / 2, squared.
    assert edges == near(expected, rel=1e-13)
    assert well.count_estimate(math.inf) == len(expected)


@given(st.floats(1e-10, 1e-6), st.floats(1e-6, 10), st.floats(0.1, 10))
@settings(max_examples=50, deadline=None)
def test_a_finite_well_always_binds_below_its_barrier(thickness, barrier, mass_ratio):
    well = FiniteWell(thickness, MASS, barrier * EV, mass_ratio * MASS)
    edges = well.lowest + well.levels_up_to(math.inf).edge
    assert 0 < edges[0] and edges[-1] <= barrier * EV * (1 + 1e-15)
    assert (np.diff(edges) > 0).all()


def test_a_deep_well_goes_over_into_hard_walls():
    well = FiniteWell(10e-9, MASS, 1e7 * EV, MASS)
    hard = (REDUCED_PLANCK * math.pi / 10e-9) ** 2 / (2 * MASS)
    # The walls stand back by the decay length on either side: 2 / (kappa L) of k, twice that of E.
    decay = REDUCED_PLANCK / math.sqrt(2 * MASS * 1e7 * EV)
    assert well.lowest == near(hard, rel=5 * decay / 10e-9)


@pytest.mark.parametrize("number", [1, 2, 3, 10, 24, 25, 26, 40, 1000])
def test_zeros_of_the_airy_function_are_those_of_mpmath(number):
    with mpmath.workdps(30):
        expected = float(-mpmath.airyaizero(number))
    # The roundings of t, its square, the cube root and the series: four of half a unit each.
    assert airy_zeros(number)[-1] == near(expected, rel=5e-16)


def test_zeros_of_the_airy_function_are_those_of_the_printed_table():
    # NIST DLMF table 9.9.1 (a_1, a_2, a_3, a_10), five decimals.
    table = {1: 2.33811, 2: 4.08795, 3: 5.52056, 10: 12.82878}
    for number, printed in table.items():
        assert airy_zeros(number)[-1] == near(printed, abs=5e-6)


def test_a_field_of_one_volt_per_ten_nanometres_has_its_textbook_levels():
    field = 1e7
    well = TriangularWell(MASS, field)
    scale = (REDUCED_PLANCK * ELEMENTARY_CHARGE * field) ** (2 / 3) / (2 * MASS) ** (1 / 3)
    zeros = airy_zeros(40)
    # E_n = scale |a_n|: T. Ando, A. B. Fowler, F. Stern, Rev. Mod. Phys. 54, 437 (1982), section III.
    assert well.lowest == near(scale * zeros[0], rel=1e-15)
    edges = well.levels_up_to(scale * (zeros[-1] - zeros[0]) * (1 + 1e-12)).edge
    assert edges == near(scale * (zeros - zeros[0]), rel=1e-14, abs=1e-15 * scale)
    assert well.count_estimate(edges[-1]) == near(40, abs=1.5)


def test_a_parabola_has_even_steps():
    well = ParabolicWell(5e-3 * EV)
    assert well.lowest == 2.5e-3 * EV
    assert well.levels_up_to(26e-3 * EV).edge == near(5e-3 * EV * np.arange(6), rel=1e-15)
    assert well.count_estimate(26e-3 * EV) == near(6.2, rel=1e-14)


@pytest.mark.parametrize(
    "well", [FiniteWell(10e-9, MASS, 0.3 * EV, MASS), TriangularWell(MASS, 1e7), ParabolicWell(EV)]
)
def test_the_lowest_level_is_always_listed(well):
    assert well.levels_up_to(0.0).edge.tolist() == [0.0]
