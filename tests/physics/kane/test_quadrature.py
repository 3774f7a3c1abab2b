"""Carriers above an energy in a non-parabolic band: against mpmath's quadrature, closed forms and the whole density."""

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from reference_table import rows
from service.physics.fermi_dirac import fermi_dirac_tail
from service.physics.kane import kane_density, kane_tail

# The bound that the module states.
STATED = 1e-13


@pytest.mark.parametrize(
    "row",
    [row for row in rows("kane/densities.csv") if float(row["start"]) > 0.0],
    ids=lambda row: f"eta {row['eta']}, beta {row['beta']}, start {row['start']}",
)
def test_a_tail_is_the_quadrature_of_its_definition(row):
    # Source: tests/reference/kane/make_densities.py, mpmath's quadrature to 30 digits.
    arguments = [float(row[name]) for name in ("eta", "beta", "start")]
    assert kane_tail(*arguments) == near(float(mpmath.mpf(row["density"])), rel=STATED)


@given(st.floats(-600, 1e6), st.floats(0, 100))
def test_a_tail_from_zero_is_the_whole_density(eta, beta):
    assert kane_tail(eta, beta, 0.0) == near(kane_density(eta, beta), rel=STATED)


@given(st.floats(-100, 1e4), st.floats(0, 1e4))
def test_a_parabolic_band_has_the_incomplete_integral(eta, start):
    # Far above the step both carry the rounding of eta - start in the exponent.
    exponent = np.finfo(float).eps * abs(eta - start)
    wanted = fermi_dirac_tail(0.5, eta, start)
    # Beneath 1e-300 a product may pass through the doubles that have lost their digits.
    assert kane_tail(eta, 0.0, start) == near(wanted, rel=2 * STATED + exponent, abs=1e-300)


@given(st.floats(-40, 1e5), st.floats(0, 10), st.floats(1e-3, 50), st.floats(1e-3, 50))
def test_a_tail_falls_with_its_start(eta, beta, start, step):
    # Deep below the step the few states between the two starts are beneath the last digit.
    assert kane_tail(eta, beta, start + step) <= kane_tail(eta, beta, start)


def test_many_tails_are_those_of_one_in_any_shape():
    starts = np.linspace(0, 90, 41)
    many = kane_tail(30.0, np.array([[0.0], [0.2], [5.0]]), starts)
    assert many.shape == (3, 41)
    assert many[1] == near(np.array([kane_tail(30.0, 0.2, float(start)) for start in starts]), rel=STATED)
