"""The chemical potential of a non-parabolic band: against quadrature, by round trip, and at the ends of the table."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from near import near
from reference_table import rows
from service.physics.fermi_dirac import inverse_fermi_dirac_integral
from service.physics.kane import inverse_kane_density, kane_density, kane_density_derivative
from service.physics.kane.inverse import iterated
from service.physics.kane.layout import HIGHEST_BETA, INVERSE_HIGH, INVERSE_LOW
from service.physics.kane.limits import degenerate_eta, parabolic_equivalent

# The bounds that the module states, over max(1, |eta|), from the table and beyond it.
STATED, STATED_BEYOND = 2e-15, 1e-14


@pytest.mark.parametrize(
    "row",
    [row for row in rows("kane/densities.csv") if float(row["start"]) == 0.0],
    ids=lambda row: f"eta {row['eta']}, beta {row['beta']}",
)
def test_eta_is_good_to_the_stated_bound(row):
    # Source: tests/reference/kane/make_densities.py, mpmath's quadrature to 30 digits.
    eta, beta = float(row["eta"]), float(row["beta"])
    density, slope = mpmath.mpf(row["density"]), mpmath.mpf(row["derivative"])
    value = float(density)
    expected = eta + (mpmath.mpf(value) - density) / slope  # the eta of the rounded density
    bound = (STATED if beta <= HIGHEST_BETA else STATED_BEYOND) * max(1.0, abs(eta))
    for got in (inverse_kane_density(value, beta), inverse_kane_density(np.array([value]), beta)[0]):
        assert abs(mpmath.mpf(float(got)) - expected) <= bound


@given(st.floats(-690, 1e7), st.floats(0, 50))
@example(0.0, HIGHEST_BETA)
@example(0.0, math.nextafter(HIGHEST_BETA, 4.0))
def test_the_eta_of_a_density_comes_back(eta, beta):
    density = kane_density(eta, beta)
    back = inverse_kane_density(density, beta)
    # Both bounds: that of the density moves eta by n / n', at most 1 where dilute and |eta| where degenerate.
    bound = 3 * STATED_BEYOND if beta > HIGHEST_BETA else 3 * STATED
    conditioning = density / kane_density_derivative(eta, beta)
    assert abs(back - eta) <= bound * max(1.0, abs(eta), conditioning)


@given(st.floats(1e-300, 1e15))
def test_a_parabolic_band_has_the_inverse_fermi_dirac_integral(value):
    assert inverse_kane_density(value, 0.0) == near(inverse_fermi_dirac_integral(0.5, value), rel=STATED, abs=STATED)


@given(st.floats(INVERSE_LOW, INVERSE_HIGH), st.floats(0, HIGHEST_BETA))
def test_the_table_and_newton_steps_on_the_quadrature_agree(place, beta):
    value = np.array([math.exp(place)])
    found = inverse_kane_density(value, beta)
    stepped = iterated(value, np.array([beta]), parabolic_equivalent(value, beta)[0])
    assert found == near(stepped, rel=STATED + STATED_BEYOND, abs=STATED + STATED_BEYOND)


@pytest.mark.parametrize("beta", [0.0, 1e-3, 0.1, 1.0, 3.0, 20.0])
@pytest.mark.parametrize("end", [INVERSE_LOW, INVERSE_HIGH])
def test_nothing_jumps_where_the_table_ends(end, beta):
    # The equivalent density rises with the value: find the two neighbours between which it passes the end.
    low, high = math.exp(end) / 2, math.exp(end) * 1e6
    while math.nextafter(low, high) < high:
        middle = 0.5 * (low + high)
        if math.log(parabolic_equivalent(middle, beta)[0]) < end:
            low = middle
        else:
            high = middle
    bound = STATED if beta <= HIGHEST_BETA else STATED_BEYOND
    below, above = inverse_kane_density(low, beta), inverse_kane_density(high, beta)
    assert above == near(below, rel=2 * bound)
    if end == INVERSE_HIGH:
        # The degenerate series begin at an eta for which they hold.
        assert degenerate_eta(low, beta) == near(below, rel=2 * bound)


def test_one_sample_and_many_agree_whatever_lies_in_a_batch():
    random = np.random.default_rng(20261201)
    value, beta = 10.0 ** random.uniform(-30, 12, 400), 10.0 ** random.uniform(-9, 1, 400)
    many = inverse_kane_density(value, beta)
    one = np.array([inverse_kane_density(float(v), float(b)) for v, b in zip(value, beta, strict=True)])
    assert many == near(one, rel=STATED, abs=STATED)


def test_eta_rises_with_the_density_and_falls_with_the_bend():
    values, betas = np.geomspace(1e-12, 1e12, 4001), np.linspace(0, 4, 401)
    for beta in (0.0, 0.03, 0.3, 3.0):
        assert (np.diff(inverse_kane_density(values, beta)) > 0).all()
    for value in (1e-6, 0.3, 5.0, 1e4):
        assert (np.diff(inverse_kane_density(value, betas)) < 0).all()


def test_any_shapes_are_broadcast():
    assert inverse_kane_density(np.ones((2, 1)), np.zeros(3)).shape == (2, 3)
    assert inverse_kane_density(np.ones(0), 0.1).shape == (0,)
    assert isinstance(inverse_kane_density(1, 0), float)
