"""The density of a non-parabolic band: against quadrature, published values, its limits, and its laws."""

import hashlib
import math
from importlib.resources import files

import mpmath
import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from external_values import parameters, value
from near import near
from reference_table import rows
from service.physics.constants import BOLTZMANN, ELECTRON_MASS, ELEMENTARY_CHARGE, REDUCED_PLANCK
from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.kane import inverse_kane_density, kane_density, kane_density_derivative
from service.physics.kane.layout import HIGHEST_BETA
from service.physics.kane.limits import degenerate_density, dilute_density
from service.physics.kane.quadrature import quadrature
from service.physics.tables import KANE_CHECKSUM

# The bounds that the module states, from the tables and beyond them.
STATED, STATED_BEYOND = 2e-15, 1e-14
STATED_DERIVATIVE = 1e-14

COMPLETE = [row for row in rows("kane/densities.csv") if float(row["start"]) == 0.0]


def place(row):
    return f"eta {row['eta']}, beta {row['beta']}"


@pytest.mark.parametrize("row", COMPLETE, ids=place)
def test_the_density_is_the_quadrature_of_its_definition(row):
    # Source: tests/reference/kane/make_densities.py, mpmath's quadrature to 30 digits.
    eta, beta, expected = float(row["eta"]), float(row["beta"]), mpmath.mpf(row["density"])
    bound = STATED if beta <= HIGHEST_BETA else STATED_BEYOND
    for got in (kane_density(eta, beta), kane_density(np.array([eta]), beta)[0]):
        assert abs(mpmath.mpf(float(got)) - expected) <= bound * expected


@pytest.mark.parametrize("row", COMPLETE, ids=place)
def test_the_derivative_is_the_quadrature_of_its_definition(row):
    eta, beta, expected = float(row["eta"]), float(row["beta"]), mpmath.mpf(row["derivative"])
    for got in (kane_density_derivative(eta, beta), kane_density_derivative(eta, np.array([beta]))[0]):
        assert abs(mpmath.mpf(float(got)) - expected) <= STATED_DERIVATIVE * expected


@given(st.floats(-700, 1e8))
@example(-20.0)
@example(math.nextafter(-20.0, -30.0))
@example(40.0)
@example(math.nextafter(40.0, 0.0))
def test_a_parabolic_band_has_the_fermi_dirac_integrals(eta):
    assert kane_density(eta, 0.0) == near(fermi_dirac_integral(0.5, eta), rel=STATED)
    assert kane_density_derivative(eta, 0.0) == near(fermi_dirac_integral(-0.5, eta), rel=STATED_DERIVATIVE)


@given(st.floats(-30, 100), st.floats(1e-8, 1e-2))
def test_a_slight_bend_adds_the_integral_of_the_next_order(eta, beta):
    # (1 + beta t)^(3/2) = 1 + 3/2 beta t + 3/8 beta^2 t^2 - ...: the series encloses the density, term by term.
    first = fermi_dirac_integral(0.5, eta) + 15 / 4 * beta * fermi_dirac_integral(1.5, eta)
    second = 105 / 32 * beta**2 * fermi_dirac_integral(2.5, eta)
    rounding = 2 * STATED * first
    assert first - rounding <= kane_density(eta, beta) <= first + second + rounding


@pytest.mark.parametrize(
    "row",
    [
        row
        for row in parameters("semiconductors", "fermi_energy")
        if "nonparabolicity" in row.values[0]["inputs"] and value(row.values[0], "temperature") == 0.0
    ],
)
def test_a_cold_gas_has_the_fermi_energy_of_narrow_gap_semiconductors(row):
    mass = value(row, "effective_mass_ratio") * ELECTRON_MASS
    # Cold enough that (pi^2 / 8) (kT / E_F)^2 is beneath the tolerance, which is the row's own: the CODATA editions.
    thermal_energy = BOLTZMANN * 0.01
    room = 2.0 * (mass * thermal_energy / (2.0 * math.pi * REDUCED_PLANCK**2)) ** 1.5
    beta = value(row, "nonparabolicity") / ELEMENTARY_CHARGE * thermal_energy
    eta = inverse_kane_density(value(row, "carrier_density") / room, beta)
    assert eta * thermal_energy / ELEMENTARY_CHARGE == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


# The methods, forced where they overlap


@given(st.floats(-20, 39.99), st.floats(1e-9, HIGHEST_BETA))
@example(0.0, HIGHEST_BETA)
@example(39.99, HIGHEST_BETA)
def test_the_tables_and_the_quadrature_agree(eta, beta):
    density, slope = quadrature(np.array([eta]), np.array([beta]), np.zeros(1))
    assert kane_density(eta, beta) == near(density[0], rel=STATED + STATED_BEYOND)
    assert kane_density_derivative(eta, beta) == near(slope[0], rel=2 * STATED_DERIVATIVE)


@given(st.floats(40, 300), st.floats(0, 100))
def test_the_degenerate_series_and_the_quadrature_agree(eta, beta):
    density, slope = quadrature(np.array([eta]), np.array([beta]), np.zeros(1))
    for got, wanted in zip(degenerate_density(eta, beta), (density, slope), strict=True):
        assert got == near(wanted[0], rel=STATED + STATED_BEYOND)


@given(st.floats(-60, -20), st.floats(0, 100))
def test_the_dilute_series_and_the_quadrature_agree(eta, beta):
    density, slope = quadrature(np.array([eta]), np.array([beta]), np.zeros(1))
    for got, wanted in zip(dilute_density(math.exp(eta), beta), (density, slope), strict=True):
        assert got == near(wanted[0], rel=STATED + STATED_BEYOND)


# Laws


@given(st.floats(-600, 1e6), st.floats(0, 50), st.floats(1e-3, 10), st.floats(1e-3, 1))
def test_the_density_rises_with_the_chemical_potential_and_with_the_bend(eta, beta, step, bend):
    density = kane_density(eta, beta)
    assert kane_density(eta + step, beta) > density
    assert kane_density(eta, beta + bend) > density
    assert kane_density_derivative(eta, beta) > 0


@given(st.floats(-30, 60), st.floats(0, 6))
def test_the_derivative_is_the_slope_of_the_density(eta, beta):
    step = 1e-3
    rise = kane_density(eta + step, beta) - kane_density(eta - step, beta)
    slope = kane_density_derivative(eta, beta)
    # A central difference is off by step^2 / 6 of the third derivative, which is below the first, plus rounding.
    assert abs(rise / (2 * step) - slope) <= 2e-7 * slope + STATED_BEYOND * kane_density(eta, beta) / step


def test_one_sample_and_many_agree_whatever_lies_in_a_batch():
    random = np.random.default_rng(20261201)
    eta, beta = random.uniform(-60, 80, 400), 10.0 ** random.uniform(-9, 1, 400)
    for function in (kane_density, kane_density_derivative):
        many = function(eta, beta)
        # The same formulas, in an order of operations that may differ by a few roundings.
        assert many == near(
            np.array([function(float(e), float(b)) for e, b in zip(eta, beta, strict=True)]), rel=STATED
        )


def test_any_shapes_are_broadcast():
    for function in (kane_density, kane_density_derivative):
        assert function(np.zeros((2, 1)), np.zeros(3)).shape == (2, 3)
        assert function(0.0, np.zeros(0)).shape == (0,)
        assert isinstance(function(0, 1), float)


def test_many_more_than_a_chunk_are_those_of_one_chunk():
    eta = np.linspace(-25, 45, 20_001)
    assert (kane_density(eta, 0.1)[::50] == kane_density(eta[::50], 0.1)).all()


def test_the_tables_are_those_that_their_script_made():
    with files("service.physics.tables").joinpath("kane.npz").open("rb") as opened, np.load(opened) as arrays:
        digest = hashlib.sha256()
        for name in sorted(arrays):
            digest.update(name.encode() + np.ascontiguousarray(arrays[name]).tobytes())
    assert digest.hexdigest() == KANE_CHECKSUM
