"""Line shapes: each dimension and shape against mpmath, their integrals against their densities, and their limits."""

import csv
import hashlib
import math
from importlib.resources import files
from pathlib import Path

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from service.physics.broadening import spread_level
from service.physics.tables import GAUSSIAN_CHECKSUM

# The bound that the module states.
STATED = 1e-14
REFERENCE = Path(__file__).parents[1] / "reference" / "line_shapes" / "line_shapes.csv"
POINTS = [-37.0, -12.5, -10.01, -9.99, -3.3, -1.0, -1e-3, 0.0, 0.7, 3.0, 9.99, 10.01, 30.0]


@pytest.mark.parametrize("kind", ["gaussian", "lorentzian", "thermal"])
@pytest.mark.parametrize("dimensions", [0, 1, 2, 3])
def test_a_shape_is_the_quadrature_of_its_definition(kind, dimensions):
    # Source: tests/reference/line_shapes/make_line_shapes.py, mpmath, each row confirmed by a second calculation.
    with REFERENCE.open(encoding="utf-8", newline="") as file:
        next(file)
        rows = [row for row in csv.DictReader(file) if (row["dimensions"], row["kind"]) == (str(dimensions), kind)]
    assert len(rows) >= 6
    x, start, *expected = np.array(
        [[float(row[name]) for name in ("x", "start", "density", "integral")] for row in rows]
    ).T
    for got, wanted in zip(spread_level(dimensions, kind, x, start), expected, strict=True):
        # Beneath 1e-300 a product of two exponentials may pass through the doubles that have lost their digits.
        assert got == near(wanted, rel=STATED, abs=1e-300)


@pytest.mark.parametrize("dimensions", [1, 2, 3])
@pytest.mark.parametrize("start", [0.0, -5.0, 1e3, -1e8])
@given(st.floats(-12, 0), st.sampled_from([-1, 1]))
def test_a_lorentzians_integral_keeps_its_digits_close_to_its_start(dimensions, start, decades, sign):
    x = start + sign * 10.0**decades * (1 + abs(start))
    # Near the start it is the step times the density, with an error of the step's square: the mean of the density at
    # both ends leaves step^2/12 of its second derivative, which on this scale is at most the density (start 0: 3/4).
    ends = sum(spread_level(dimensions, "lorentzian", end)[0] for end in (x, start)) / 2
    integral = spread_level(dimensions, "lorentzian", x, start)[1]
    if 10.0**decades < 1e-3:
        assert integral == near((x - start) * ends, rel=STATED + 10.0 ** (2 * decades))
    # And backwards it is its own negative, to the last digit or two.
    assert spread_level(dimensions, "lorentzian", start, x)[1] == near(-integral, rel=STATED)


@pytest.mark.parametrize("kind", ["gaussian", "lorentzian", "thermal"])
@pytest.mark.parametrize("dimensions", [0, 1, 2, 3])
def test_an_energy_of_many_widths_neither_overflows_nor_warns(kind, dimensions):
    for x in (-1e100, 1e100):
        assert np.isfinite(spread_level(dimensions, kind, x)).all()


def smeared_power(power, x):
    """Return t^(nu-1)/Gamma(nu) convolved with a Gaussian: exp(-x^2/4) D_-nu(-x) / sqrt(2 pi), NIST DLMF 12.5.1."""
    x = mpmath.mpf(x)
    return mpmath.exp(-x * x / 4) * mpmath.pcfd(-mpmath.mpf(power), -x) / mpmath.sqrt(2 * mpmath.pi)


@pytest.mark.parametrize("dimensions", [1, 2, 3])
@pytest.mark.parametrize("x", POINTS)
def test_a_gaussian_is_a_parabolic_cylinder_function(dimensions, x):
    with mpmath.workdps(30):
        expected = [float(smeared_power(dimensions / 2, x)), float(smeared_power(dimensions / 2 + 1, x))]
    assert spread_level(dimensions, "gaussian", x) == near(expected, rel=STATED)


def test_a_gaussian_line_is_a_bell_and_its_integral_the_error_function():
    for x in POINTS:
        with mpmath.workdps(30):
            expected = [float(mpmath.npdf(x)), float(mpmath.ncdf(x))]
        assert spread_level(0, "gaussian", x) == near(expected, rel=STATED)


@pytest.mark.parametrize("dimensions", [1, 2, 3])
@pytest.mark.parametrize("x", [-1e6, -50.0, -1.0, 0.0, 1.0, 50.0, 1e6])
def test_a_lorentzian_is_its_own_convolution(dimensions, x):
    def integrand(root):
        return 2 * root ** (dimensions - 1) / ((x - root * root) ** 2 + 1)

    with mpmath.workdps(30):
        marks = {mpmath.sqrt(max(x + offset, 0)) for offset in (-5, -1, 0, 1, 5)}
        outer = mpmath.sqrt(abs(x))
        points = sorted({mpmath.mpf(0), mpmath.mpf(1), *marks, outer + 10, 10 * outer + 100, mpmath.inf})
        expected = mpmath.quad(integrand, points) / mpmath.pi / mpmath.gamma(mpmath.mpf(dimensions) / 2)
    assert spread_level(dimensions, "lorentzian", x)[0] == near(float(expected), rel=STATED)


def test_a_lorentzian_line_has_its_half_height_at_its_width():
    density, integral = spread_level(0, "lorentzian", np.array([-1.0, 0.0, 1.0]))
    assert density == near([0.5 / math.pi, 1 / math.pi, 0.5 / math.pi], rel=STATED)
    assert integral == near([0.25, 0.5, 0.75], rel=STATED)


@pytest.mark.parametrize("kind", ["gaussian", "lorentzian", "thermal"])
@pytest.mark.parametrize("dimensions", [0, 1, 2, 3])
@given(st.floats(-20, 200))
def test_the_integral_rises_by_the_density(kind, dimensions, x):
    step = 1e-4
    above = spread_level(dimensions, kind, x + step, -5.0)[1]
    below = spread_level(dimensions, kind, x - step, -5.0)[1]
    density = spread_level(dimensions, kind, x)[0]
    # A central difference is off by step^2/6 of the second derivative (at most 21 times the density at x = -20 with
    # the Gaussian: 400), and by the rounding of the integral over the step.
    rounding = 4e-16 * (abs(above) + abs(x) + 1) ** 1.5 / step
    assert abs((above - below) / (2 * step) - density) <= 1e-6 * density + rounding


@pytest.mark.parametrize("kind", ["gaussian", "lorentzian", "thermal"])
@pytest.mark.parametrize("dimensions", [1, 2, 3])
def test_far_above_its_edge_a_level_is_sharp_again(kind, dimensions):
    x = 1e8
    # The leading correction is of relative order 1/x with the Lorentzian, 1/x^2 with the others.
    assert spread_level(dimensions, kind, x)[0] == near(
        x ** (dimensions / 2 - 1) / math.gamma(dimensions / 2), rel=2e-8
    )


@pytest.mark.parametrize("kind", ["gaussian", "lorentzian", "thermal"])
@pytest.mark.parametrize("dimensions", [0, 1, 2, 3])
def test_one_energy_and_many_agree(kind, dimensions):
    grid = np.linspace(-30, 30, 61)
    many = spread_level(dimensions, kind, grid.reshape(61, 1))
    for part in (0, 1):
        ones = [spread_level(dimensions, kind, float(x))[part] for x in grid]
        assert many[part].shape == (61, 1)
        # The thermal shape's two paths round apart by a unit of the last digit.
        assert many[part].ravel() == near(ones, rel=STATED, abs=1e-300)


def test_the_tables_are_those_that_their_script_made():
    with files("service.physics.tables").joinpath("gaussian.npz").open("rb") as opened, np.load(opened) as arrays:
        digest = hashlib.sha256()
        for name in sorted(arrays):
            digest.update(name.encode() + np.ascontiguousarray(arrays[name]).tobytes())
    assert digest.hexdigest() == GAUSSIAN_CHECKSUM
