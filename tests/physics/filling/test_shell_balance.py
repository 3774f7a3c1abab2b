"""Electrons against holes: the chemical potential of few carriers on sharp levels."""

import math

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from service.physics.filling.shell_balance import ShellBalance


def by_count(height, capacity, count):
    """Return the reduced chemical potential of a count by bisection, from its definition.

    In the middle of a gap of 1000 kT the count is off a whole number by exp(-500): hence the digits.
    """
    with mpmath.workdps(300):
        levels = [(mpmath.mpf(float(h)), mpmath.mpf(float(g))) for h, g in zip(height, capacity, strict=True)]

        def held(eta):
            return sum(g / (1 + mpmath.exp(h - eta)) for h, g in levels) - mpmath.mpf(float(count))

        low, high = mpmath.mpf(-3000), mpmath.mpf(3000)
        for _ in range(180):
            middle = (low + high) / 2
            low, high = (middle, high) if held(middle) < 0 else (low, middle)
        return float(middle)


@pytest.mark.parametrize("gap", [0.3, 3.0, 30.0, 300.0, 1000.0])
@pytest.mark.parametrize(("place", "held"), [(1, 6.0), (1, 0.25), (1, 3.0), (1, 5.5), (0, 2.0), (0, 1.0)])
def test_the_balance_is_the_counts_own_root(gap, place, held):
    height, capacity = np.array([-1.0, 0.0, 1.0, 1.1]) * gap, np.array([2.0, 6.0, 10.0, 2.0])
    height = height - height[place]
    count = float(np.sum(capacity[:place])) + held
    # The issue asks 1e-11 kT; the logarithms' rounding over their slope leaves 1e-15 of the gap.
    expected = by_count(height, capacity, count)
    assert ShellBalance(height, capacity, place, held).root() == near(expected, rel=4e-15, abs=1e-14)


@given(st.floats(50.0, 1e9), st.floats(1.0, 1e4), st.floats(1.0, 1e4))
def test_as_it_cools_mu_goes_to_the_middle_of_the_gap(gap, lower, upper):
    root = ShellBalance(np.array([0.0, gap]), np.array([lower, upper]), 0, lower).root()
    # exp(-gap / 2) is what is left out of the limit: R. Kubo, J. Phys. Soc. Jpn. 17, 975 (1962).
    expected = 0.5 * gap + 0.5 * math.log(lower / upper)
    assert root == near(expected, rel=4e-16, abs=max(lower, upper) / min(lower, upper) * math.exp(-0.4 * gap) + 1e-13)


@given(st.floats(0.001, 0.999), st.floats(60.0, 1e9))
def test_in_a_part_filled_level_mu_follows_from_its_share(share, gap):
    root = ShellBalance(np.array([-gap, 0.0, gap]), np.array([2.0, 6.0, 4.0]), 1, 6.0 * share).root()
    # Conditioned by the share's own rounding near an empty or a full level, a thousand times at most.
    assert root == near(math.log(share / (1.0 - share)), abs=1e-12)
