"""The inverse integrals: against mpmath's own root, by round trip, and at the ends of each table."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from service.physics.fermi_dirac import fermi_dirac_integral, inverse_fermi_dirac_integral
from service.physics.fermi_dirac.inverse import ORDERS

# The bound that the module states, over max(1, |eta|).
STATED = 4e-16
VALUES = [1e-300, 1e-40, 2**-30 * (1 - 1e-16), 2**-30, 1e-5, 0.3, 0.6048986434216304, 0.7651470246254079, 1.0, 3.0]
VALUES += [7.9999, 8.0, 30.0, 255.99, 256.0, 1e4, 1e9, 1e15]


def exact(order, wanted):
    with mpmath.workdps(40):
        u = mpmath.mpf(wanted)
        if order == 0.0:
            return u + mpmath.log(-mpmath.expm1(-u))
        eta = mpmath.mpf(inverse_fermi_dirac_integral(order, wanted))
        for _ in range(3):
            if eta < -60:
                value = slope = mpmath.exp(eta)
            elif eta < 60:
                value = -mpmath.polylog(mpmath.mpf(order) + 1, -mpmath.exp(eta)).real
                slope = -mpmath.polylog(mpmath.mpf(order), -mpmath.exp(eta)).real
            else:
                value, slope = sommerfeld(order, eta), sommerfeld(order - 1, eta)
            eta += (u - value) / slope
        return eta


def sommerfeld(order, eta):
    """Return the degenerate series, summed by mpmath until its terms are beneath 35 digits."""
    j = mpmath.mpf(order)
    total = mpmath.mpf(1)
    for k in range(1, 60):
        falling = mpmath.mpf(1)
        for m in range(2 * k):
            falling *= j + 1 - m
        term = 2 * (1 - mpmath.mpf(2) ** (1 - 2 * k)) * mpmath.zeta(2 * k) * falling * eta ** (-2 * k)
        total += term
        if abs(term) < mpmath.mpf(10) ** -35:
            break
    return eta ** (j + 1) * mpmath.rgamma(j + 2) * total


@pytest.mark.parametrize("order", ORDERS)
@pytest.mark.parametrize("wanted", VALUES)
def test_eta_is_good_to_the_stated_bound(order, wanted):
    expected = exact(order, wanted)
    for got in (
        inverse_fermi_dirac_integral(order, wanted),
        inverse_fermi_dirac_integral(order, np.array([wanted]))[0],
    ):
        assert abs(mpmath.mpf(float(got)) - expected) <= STATED * max(1, abs(expected))


@pytest.mark.parametrize("order", ORDERS)
@given(st.floats(-690, 1e6))
def test_the_integral_of_the_inverse_comes_back(order, eta):
    back = inverse_fermi_dirac_integral(order, fermi_dirac_integral(order, eta))
    # The integral's own rounding, 1e-15 of it, moves eta by 1e-15 F / F': at most |eta| / (j + 1), or 1.
    assert back == near(eta, rel=5e-15, abs=5e-15)


@pytest.mark.parametrize("order", ORDERS)
def test_one_value_and_many_agree(order):
    values = np.geomspace(1e-12, 1e12, 4001)
    many = inverse_fermi_dirac_integral(order, values)
    one = np.array([inverse_fermi_dirac_integral(order, float(value)) for value in values])
    assert many == near(one, rel=2 * STATED, abs=2 * STATED)
    assert (np.diff(many) > 0).all()


def test_an_order_that_is_not_on_offer_is_refused_by_name():
    for wanted in (1.0, np.ones(1)):
        with pytest.raises(ValueError, match=r"1\.5"):
            inverse_fermi_dirac_integral(1.5, wanted)


def test_any_shape_comes_back_in_its_own():
    assert inverse_fermi_dirac_integral(0.5, np.ones((2, 3))).shape == (2, 3)
    assert inverse_fermi_dirac_integral(0.5, np.ones((0,))).shape == (0,)


def test_where_the_chemical_potential_of_bulk_passes_zero():
    # T/T_F = 0.9887, common textbook value; in closed form (4 / (3 sqrt(pi) eta(3/2)))^(2/3).
    ratio = (1.0 / (math.gamma(2.5) * fermi_dirac_integral(0.5, 0.0))) ** (2 / 3)
    assert ratio == near(0.9887, abs=5e-5)
    assert inverse_fermi_dirac_integral(0.5, ratio**-1.5 / math.gamma(2.5)) == near(0, abs=1e-15)
