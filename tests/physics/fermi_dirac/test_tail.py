"""The incomplete integrals: against mpmath's quadrature, closed forms, and the complete ones."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail

# The bound that the module states.
STATED = 1e-13
CASES = [(-50.0, 0.0), (-50.0, 3.0), (0.0, 0.0), (0.0, 1e-6), (3.0, 3.0), (30.0, 31.5), (30.0, 70.0), (30.0, 1.0)]
CASES += [(1500.0, 1500.0), (1500.0, 1450.0), (1500.0, 2.0), (1500.0, 1590.0), (-300.0, 300.0)]


def exact(order, eta, start):
    """Integrate in the square root of t, scaled to the order of one, since mpmath's tolerance is absolute."""
    with mpmath.workdps(30):
        scale = mpmath.exp(max(start - eta, 0))
        marks = [eta + offset for offset in (-60, -20, -5, 0, 5, 20)] + [start + offset for offset in (1, 5, 20)]
        points = [start, *sorted({mark for mark in marks if mark > start}), max(eta, start) + 90]

        def integrand(root):
            return scale * 2 * root ** (2 * order + 1) / (1 + mpmath.exp(root * root - eta))

        return mpmath.quad(integrand, [mpmath.sqrt(p) for p in points]) / scale / mpmath.gamma(order + 1)


@pytest.mark.parametrize("order", [-0.5, 0.5, 1.0, 1.5])
@pytest.mark.parametrize(("eta", "start"), CASES)
def test_a_tail_is_good_to_the_stated_bound(order, eta, start):
    assert fermi_dirac_tail(order, eta, start) == near(float(exact(order, eta, start)), rel=STATED)


@pytest.mark.parametrize("order", [-1.0, -0.5, 0.0, 0.5, 1.0, 1.5])
@given(st.floats(-600, 1e5))
def test_a_tail_from_zero_is_the_complete_integral(order, eta):
    assert fermi_dirac_tail(order, eta, 0.0) == near(fermi_dirac_integral(order, eta), rel=STATED)


@given(st.floats(-100, 1e4), st.floats(0, 1e4))
def test_the_two_dimensional_tail_is_a_logarithm(eta, start):
    expected = max(eta - start, 0) + math.log1p(math.exp(-abs(eta - start)))
    assert fermi_dirac_tail(0.0, eta, start) == near(expected, rel=1e-15)


@pytest.mark.parametrize("order", [-0.5, 0.5, 1.5])
def test_many_tails_are_those_of_one_and_fall_with_the_start(order):
    starts = np.linspace(0, 90, 301)
    many = fermi_dirac_tail(order, 30.0, starts)
    assert many == near([fermi_dirac_tail(order, 30.0, float(start)) for start in starts], rel=1e-15)
    assert (np.diff(many) < 0).all()
    assert fermi_dirac_tail(order, np.zeros((2, 1)), starts[:3]).shape == (2, 3)


def test_an_order_that_is_not_on_offer_is_refused_by_name():
    with pytest.raises(ValueError, match=r"2\.5"):
        fermi_dirac_tail(2.5, 0.0, 0.0)
