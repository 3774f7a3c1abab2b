"""Zeros of Bessel functions: printed tables, independent code, the table's own checksum, and the laws between zeros."""

import hashlib
from importlib.resources import files
from itertools import pairwise

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.special import jn_zeros, jv, jvp, spherical_jn

from external_values import parameters, value
from near import near
from service.physics.levels import bessel_zeros as module
from service.physics.levels.bessel_zeros import bessel_zeros, orbital_degeneracy, zeros_between, zeros_up_to
from service.physics.tables import BESSEL_ZEROS_CHECKSUM

FAMILIES = ("cylinder", "sphere")


def of_order(zeros, order):
    return zeros.zero[zeros.order == order]


@pytest.mark.parametrize("row", parameters("confinement", "bessel_zero_J"))
def test_zeros_of_the_bessel_functions_are_the_printed_ones(row):
    order, index = round(value(row, "order")), round(value(row, "index"))
    got = of_order(bessel_zeros("cylinder", 40.0), order)[index - 1]
    assert got == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


@pytest.mark.parametrize("row", parameters("confinement", "spherical_bessel_zero"))
def test_zeros_of_the_spherical_bessel_functions_are_the_printed_ones(row):
    order, index = round(value(row, "order")), round(value(row, "index"))
    got = of_order(bessel_zeros("sphere", 40.0), order)[index - 1]
    assert got == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


@pytest.mark.parametrize(("family", "half"), [("cylinder", 0), ("sphere", mpmath.mpf(1) / 2)])
@pytest.mark.parametrize(("order", "index"), [(0, 1), (0, 30), (1, 1), (7, 3), (40, 1), (40, 12), (150, 2)])
def test_zeros_are_those_of_mpmath_to_the_last_digit(family, half, order, index):
    with mpmath.workdps(30):
        expected = float(mpmath.besseljzero(order + half, index))
    # Half a unit in the last place is 1.1e-16; the table's generator promises the nearest double but for one in 1000.
    assert of_order(bessel_zeros(family, 300.0), order)[index - 1] == near(expected, rel=1.2e-16)


def test_zeros_are_those_of_another_librarys_search():
    for order in (0, 3, 100, 400):
        listed = of_order(bessel_zeros("cylinder", 1000.0), order)
        # SciPy's search stops at about 1e-13 of a spacing; a missed zero would shift all that follow by 3.
        assert listed[:60] == near(jn_zeros(order, 60), rel=1e-13)


@pytest.mark.parametrize("family", FAMILIES)
def test_the_table_is_the_one_that_its_script_made(family):
    digest = hashlib.sha256()
    with files("service.physics.tables").joinpath("bessel_zeros.npz").open("rb") as opened, np.load(opened) as arrays:
        for name in sorted(arrays):
            digest.update(name.encode() + np.ascontiguousarray(arrays[name]).tobytes())
    assert digest.hexdigest() == BESSEL_ZEROS_CHECKSUM


@pytest.mark.parametrize("family", FAMILIES)
def test_the_zeros_of_neighbouring_orders_interlace_and_none_is_missing(family):
    # x_(v,n) < x_(v+1,n) < x_(v,n+1): NIST DLMF 10.21.2. A zero missed anywhere would break it in the next order.
    zeros = bessel_zeros(family, 1000.0)
    rows = [of_order(zeros, order) for order in range(int(zeros.order.max()) + 1)]
    for row, following in pairwise(rows):
        assert np.all(row[: following.size] < following)
        assert np.all(following[: row.size - 1] < row[1 : following.size + 1])
        assert row.size - 1 <= following.size <= row.size
    if family == "sphere":
        # j_0 = sin x / x. Here pi and its multiple round once each, in the table the zero once.
        assert rows[0] == near(np.pi * np.arange(1, rows[0].size + 1), rel=3.4e-16)
    for order, row in enumerate(rows[::97]):
        assert zeros.number[zeros.order == 97 * order].tolist() == list(range(1, row.size + 1))


@pytest.mark.parametrize("family", FAMILIES)
def test_the_table_is_ascending_shared_and_read_only(family):
    zeros = bessel_zeros(family, 1000.0)
    assert np.all(np.diff(zeros.zero) > 0.0)
    assert np.shares_memory(zeros.zero, bessel_zeros(family, 10.0).zero)
    with pytest.raises(ValueError, match="read-only"):
        zeros.zero[0] = 0.0
    assert bessel_zeros(family, 1.0).zero.size == 0


@pytest.mark.parametrize("family", FAMILIES)
def test_where_the_table_ends_the_phase_gives_the_same_zeros(family, monkeypatch):
    known = bessel_zeros(family, 1000.0)
    # From 850 on, where the first zeros' polynomials were fitted; the phase's own terms are exact far below.
    monkeypatch.setattr(module, "TABLE_END", 850.0)
    found, below = zeros_between(family, 860.0, 1000.0)
    inside = known.zero > 860.0
    assert found.order.tolist() == known.order[inside].tolist()
    assert found.number.tolist() == known.number[inside].tolist()
    # The phase, about 1000, is rounded to 1e-13, and its slope is at least 0.3 where it serves: 4e-16.
    assert found.zero == near(known.zero[inside], rel=4e-16)
    assert below == orbital_degeneracy(family, known.order[~inside]).sum()
    assert zeros_up_to(family, 860.0) == (np.count_nonzero(~inside), below)


@pytest.mark.parametrize(
    ("order", "low", "high"), [(0, 3000.0, 3004.0), (1500, 3000.0, 3004.0), (2978, 3000.0, 3020.0)]
)
def test_beyond_the_table_the_functions_are_zero_at_their_zeros(order, low, high):
    cylinder = of_order(zeros_between("cylinder", low, high)[0], order)
    sphere = of_order(zeros_between("sphere", low, high)[0], order)
    assert cylinder.size >= 1
    assert sphere.size >= 1
    # The distance to SciPy's own zero is its Newton step, relative: SciPy's values are good to 1e-12 of the amplitude.
    assert np.abs(jv(order, cylinder) / jvp(order, cylinder) / cylinder).max() < 5e-16
    step = spherical_jn(order, sphere) / spherical_jn(order, sphere, derivative=True)
    assert np.abs(step / sphere).max() < 5e-16


@given(st.floats(1000.0, 4000.0), st.floats(0.1, 3.0), st.floats(0.1, 3.0), st.sampled_from(FAMILIES))
@settings(max_examples=12, deadline=None)
def test_windows_join_without_a_gap(low, first, second, family):
    middle, high = low + first, low + first + second
    lower, below = zeros_between(family, low, middle)
    upper, below_middle = zeros_between(family, middle, high)
    both, _ = zeros_between(family, low, high)
    assert np.concatenate([lower.zero, upper.zero]) == near(both.zero, rel=5e-16)
    assert below + orbital_degeneracy(family, lower.order).sum() == below_middle
    assert zeros_up_to(family, high)[0] - zeros_up_to(family, low)[0] == both.zero.size


@pytest.mark.parametrize("family", FAMILIES)
def test_a_list_past_the_table_goes_on_where_the_table_ends(family):
    zeros = bessel_zeros(family, 1010.0)
    assert np.all(np.diff(zeros.zero) > 0.0)
    assert zeros.zero.size == zeros_up_to(family, 1010.0)[0]
    with pytest.raises(ValueError, match="more than the"):
        bessel_zeros(family, 1e6)
    with pytest.raises(ValueError, match="where the table serves"):
        zeros_between(family, 900.0, 1100.0)
