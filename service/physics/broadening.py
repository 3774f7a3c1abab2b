r"""Broadening of a level: line shapes, and what they make of a free gas of no, one, two or three dimensions.

A level's own density of states is the power law t^(D/2-1) / Gamma(D/2) of the energy t above its edge; in no
dimension it is a line. Convolved with a line shape of unit width it is known in closed form, or by a table.
"""

import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import Final

import numpy as np

from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.tabulated import horner, table
from service.physics.values import FloatArray, Values

_GAUSSIAN_REACH: Final = 10.0
_GAUSSIAN_CELLS_PER_UNIT: Final = 32
_GAUSSIAN_TERMS: Final = 20
_BELL_REACH: Final = 39.0
"""exp(-39^2 / 2) is beneath the smallest double."""

_BELL_GRID: Final = 64.0
_LAST_DIGIT: Final = 1e-17
_FILE: Final = "gaussian.npz"


@dataclass(frozen=True, slots=True)
class Broadening:
    """How sharp states are spread over energy.

    Attributes
    ----------
    kind : str
        ``none``, ``gaussian`` (width: the standard deviation), ``lorentzian`` (width: the half width at half maximum)
        or ``thermal`` (the shape -df/dE; width: kT).
    width : float or ndarray, shape (N,)
        The width [J]; not used for ``none``.
    """

    kind: str
    width: Values


def spread_level(dimensions: int, kind: str, energy: Values, start: Values = 0.0) -> tuple[Values, Values]:
    r"""Return a level's density of states convolved with a line shape of unit width, and its integral.

    .. math::

        s(x) = \frac{1}{\Gamma(D/2)} \int_0^\infty t^{D/2-1} K(x - t)\, dt, \qquad S(x) = \int^x s(y)\, dy

    Parameters
    ----------
    dimensions : int
        D: 0 for a line, 1, 2 or 3 for a free gas [1].
    kind : str
        ``gaussian``, ``lorentzian`` or ``thermal`` [1].
    energy : float or ndarray
        x, the energy above the level's edge over the width [1].
    start : float or ndarray
        Where the integral of a Lorentzian begins, of a shape that broadcasts: for D > 0 its tail has no finite
        integral from below. The others, and a Lorentzian for D = 0, are integrated from below all states [1].

    Returns
    -------
    tuple of float or ndarray
        s and S, each of the shape of `energy` [1].

    Notes
    -----
    thermal: Fermi-Dirac integrals. lorentzian: real parts of powers of x + i, in real arithmetic, the integral without
    a difference of its ends, so that it keeps its digits near the start too. gaussian: parabolic cylinder functions, by
    tables of polynomials from -10 to 10 and the asymptotic series beyond. Each keeps its relative precision in the tail
    below the edge. For abs(x) up to 1e100; against mpmath up to 1e8 the relative error is below 1e-14 wherever the
    value is above 1e-300 (tests/reference/line_shapes).

    References
    ----------
    NIST DLMF 25.12.16, 12.5.1, 12.7 and 12.9.

    Examples
    --------
    >>> spread_level(2, "lorentzian", 0.0)
    (0.5, 0.0)
    """
    many = isinstance(energy, np.ndarray) or isinstance(start, np.ndarray)
    x = np.atleast_1d(np.asarray(energy, dtype=np.float64))
    density, integral = _SHAPES[kind](dimensions, x, np.asarray(start, dtype=np.float64))
    if many:
        return density, integral
    return float(density[0]), float(integral[0])


def _thermal(dimensions: int, x: FloatArray, start: FloatArray) -> tuple[FloatArray, FloatArray]:
    half = dimensions / 2.0
    return np.asarray(fermi_dirac_integral(half - 2.0, x)), np.asarray(fermi_dirac_integral(half - 1.0, x))


def _lorentzian(dimensions: int, x: FloatArray, start: FloatArray) -> tuple[FloatArray, FloatArray]:
    if dimensions == 0:
        return 1.0 / (math.pi * (1.0 + x * x)), _arc(x)
    if dimensions == 2:
        return _arc(x), _lorentzian_sheet(x, start)
    real, imaginary = _root(x)
    start_real, start_imaginary = _root(start)
    # With the roots a of x + i and b of start + i: a - b = (x - start)/(a + b), and a^3 - b^3 by the same token. The
    # real parts, by 2 Re(a) Im(a) = 1, are sums of positive terms.
    sum_real, sum_imaginary = real + start_real, imaginary + start_imaginary
    rise = (x - start) * sum_real / (sum_real * sum_real + sum_imaginary * sum_imaginary)
    if dimensions == 1:
        return real / np.hypot(x, 1.0) / math.gamma(0.5), rise / math.gamma(1.5)
    mixed = real * real + real * start_real + start_real * start_real + 3.0 * imaginary * start_imaginary
    return real / math.gamma(1.5), rise * mixed / math.gamma(2.5)


def _arc(x: FloatArray) -> FloatArray:
    """Return 1/2 + atan(x)/pi without the cancellation far below the edge."""
    return np.asarray(np.arctan2(1.0, -x) / math.pi)


def _lorentzian_sheet(x: FloatArray, start: FloatArray) -> FloatArray:
    """Return the integral of `_arc` from the start: near it by the step, farther off by the two ends."""
    arc, reach = _arc(x), np.hypot(start, 1.0)
    step = x - start
    near = np.abs(step) <= 0.5 * reach
    turn = np.arctan2(step, 1.0 + x * start) / math.pi
    growth = np.where(near, step / reach * ((x + start) / reach), 0.0)
    close = step * arc + start * turn - 0.5 * np.log1p(growth) / math.pi
    apart = x * arc - start * _arc(start) - np.log(np.hypot(x, 1.0) / reach) / math.pi
    return np.where(near, close, apart)


def _root(x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return real and imaginary part of the square root of x + i, the smaller one from the larger."""
    larger = np.sqrt(0.5 * (np.hypot(x, 1.0) + np.abs(x)))
    smaller = 0.5 / larger
    above = x >= 0.0
    return np.where(above, larger, smaller), np.where(above, smaller, larger)


def _gaussian(dimensions: int, x: FloatArray, start: FloatArray) -> tuple[FloatArray, FloatArray]:
    if dimensions == 0:
        return _bell(x), _smeared_power(2, x)
    return _smeared_power(dimensions, x), _smeared_power(dimensions + 2, x)


def _bell(x: FloatArray) -> FloatArray:
    """Return the Gaussian of unit standard deviation.

    The square is split into an exact part and a small one: its rounding alone would cost 5e-14 in the tail.
    """
    depth = np.minimum(np.abs(x), _BELL_REACH)
    coarse = np.rint(depth * _BELL_GRID) / _BELL_GRID
    fine = (depth - coarse) * (depth + coarse)
    return np.asarray(np.exp(-0.5 * coarse * coarse) * np.exp(-0.5 * fine) / math.sqrt(2.0 * math.pi))


def _smeared_power(double_power: int, x: FloatArray) -> FloatArray:
    """Return t^(nu-1) / Gamma(nu), 2 nu = `double_power`, convolved with the Gaussian of unit standard deviation."""
    depth, below = np.abs(x), x < 0.0
    within = np.minimum(depth, _GAUSSIAN_REACH)
    cells = int(_GAUSSIAN_REACH) * _GAUSSIAN_CELLS_PER_UNIT
    cell = np.minimum((within * _GAUSSIAN_CELLS_PER_UNIT).astype(np.intp), cells - 1)
    offset = within - (cell + 0.5) / _GAUSSIAN_CELLS_PER_UNIT
    result = np.empty_like(depth)
    horner(_both_sides(double_power), cell + cells * below, offset, result)
    power = double_power / 2.0
    far = x > _GAUSSIAN_REACH
    if far.any():
        beyond = depth[far]
        result[far] = _series(1.0 - power, beyond, 1.0) * beyond ** (power - 1.0) / math.gamma(power)
    far = (x < -_GAUSSIAN_REACH) & (x > -_BELL_REACH)
    if far.any():
        beyond = depth[far]
        result[far] = _series(power, beyond, -1.0) * beyond**-power
    result[below] *= _bell(x[below])
    return result


@cache
def _both_sides(double_power: int) -> FloatArray:
    """Return the polynomials above the edge and then, over the bell's own height, those below it."""
    return np.concatenate([table(_FILE, f"{side}_{double_power}") for side in ("above", "below")], axis=1)


def _series(first: float, depth: FloatArray, sign: float) -> FloatArray:
    """Return the sum of (first)_2k (sign / 2 x^2)^k / k!, the asymptotic factor of a smeared power (DLMF 12.9)."""
    inverse = 1.0 / depth
    ratio = sign * 0.5 * inverse * inverse
    term = np.ones_like(depth)
    total = np.ones_like(depth)
    for k in range(_GAUSSIAN_TERMS):
        term = term * ratio * ((first + 2.0 * k) * (first + 2.0 * k + 1.0) / (k + 1.0))
        total = total + term
        if np.abs(term).max() < _LAST_DIGIT:
            break
    return total


_Shape = Callable[[int, FloatArray, FloatArray], tuple[FloatArray, FloatArray]]
_SHAPES: Final[dict[str, _Shape]] = {"thermal": _thermal, "lorentzian": _lorentzian, "gaussian": _gaussian}
