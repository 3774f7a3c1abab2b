r"""Broadened densities of states of a hard-wall film, over all of its subbands in closed form or a short window.

Energies are in units of the width, from the lowest level; b is the scale of the ladder in the same unit.
"""

import math
from typing import Final

import numpy as np
from numpy.typing import NDArray
from scipy.special import zeta

from service.physics.broadening import spread_level
from service.physics.filling.film_ladder import sum_of_levels
from service.physics.values import FloatArray

ComplexArray = NDArray[np.complex128]

GAUSSIAN_REACH: Final = 9.0
"""A Gaussian of unit width holds 1e-19 of itself beyond nine widths."""

_SMOOTH: Final = 0.35
"""Below this many widths between levels a Gaussian leaves exp(-pi^2/2 0.35^2) = 3e-18 of the levels' ripple."""

_ELEMENTS: Final = 1 << 19
_TERMS: Final = 60


def gaussian(energy: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    r"""Return the sums over levels of a step smeared by a Gaussian, and of its integral.

    .. math:: \sum_i \Phi\bigl(x - b(i^2-1)\bigr)

    Parameters
    ----------
    energy : ndarray, shape (N,)
        x [1].
    spacing : ndarray, shape (N,)
        b [1].

    Returns
    -------
    tuple of ndarray, shape (N,)
        The sum and its integral from below [1].

    References
    ----------
    NIST DLMF 12.5.1; Poisson's sum formula, DLMF 1.8.14.
    """
    density, integrated = np.empty_like(energy), np.empty_like(energy)
    above_edge = energy + spacing
    smooth = np.sqrt(spacing * (np.maximum(above_edge, 0.0) + GAUSSIAN_REACH)) < _SMOOTH
    if smooth.any():
        volume = [np.asarray(part) for part in spread_level(3, "gaussian", above_edge[smooth])]
        surface = [np.asarray(part) for part in spread_level(2, "gaussian", above_edge[smooth])]
        scale = 0.5 * np.sqrt(math.pi / spacing[smooth])
        density[smooth] = scale * volume[0] - 0.5 * surface[0]
        integrated[smooth] = scale * volume[1] - 0.5 * surface[1]
    if not smooth.all():
        rows = np.flatnonzero(~smooth)
        density[rows], integrated[rows] = _gaussian_window(energy[rows], spacing[rows])
    return density, integrated


def _gaussian_window(energy: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    full = np.floor(np.sqrt(1.0 + np.maximum(energy - GAUSSIAN_REACH, 0.0) / spacing))
    full = np.where(energy > GAUSSIAN_REACH, full, 0.0)
    last = np.floor(np.sqrt(1.0 + (np.maximum(energy, 0.0) + GAUSSIAN_REACH) / spacing))
    width = int((last - full).max(initial=0.0)) + 1
    density, integrated = full.copy(), full * energy - spacing * sum_of_levels(full)
    step = max(1, _ELEMENTS // width)
    for start in range(0, energy.size, step):
        part = slice(start, start + step)
        number = full[part, None] + np.arange(1.0, width + 1.0)
        above = energy[part, None] - spacing[part, None] * ((number - 1.0) * (number + 1.0))
        smeared, below = spread_level(2, "gaussian", above)
        density[part] += np.sum(smeared, axis=1)
        integrated[part] += np.sum(below, axis=1)
    return density, integrated


def lorentzian(energy: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    r"""Return the sum over all levels of a step smeared by a Lorentzian, and its integral from the lowest level.

    .. math::

        \sum_{i \ge 1} \Bigl[\tfrac12 + \tfrac1\pi \arctan(x - b(i^2-1))\Bigr]
        = -\frac1\pi \operatorname{Im} \ln \frac{\sin \pi z}{\pi z}, \qquad b z^2 = x + b + i

    Parameters
    ----------
    energy : ndarray, shape (N,)
        x [1].
    spacing : ndarray, shape (N,)
        b [1].

    Returns
    -------
    tuple of ndarray, shape (N,)
        The sum and its integral [1].

    Notes
    -----
    The product of the sine takes in every level to infinity: a Lorentzian's tail is never cut.

    References
    ----------
    NIST DLMF 4.22.1 (the product) and 25.12.10 (the polylogarithms of its integral).
    """
    root = _root(energy, spacing)
    residue = np.exp(2j * math.pi * root)
    angle = np.arctan2(-residue.imag, 1.0 - residue.real)
    density = root.real - 0.5 + (np.angle(root) - angle) / math.pi
    start = _antiderivative(_root(np.zeros_like(energy), spacing))
    return density, spacing * (_antiderivative(root) - start)


def _root(energy: FloatArray, spacing: FloatArray) -> ComplexArray:
    root: ComplexArray = np.sqrt((energy + spacing + 1j) / spacing)
    return root


def _antiderivative(root: ComplexArray) -> FloatArray:
    """Return -(2/pi) Im of the integral of z ln(sin(pi z)/(pi z)) dz."""
    square = root * root
    residue = 2j * math.pi * root
    smooth = square * (0.25j * math.pi - 0.5 * math.log(2.0) + 0.25 - 0.5 * np.log(math.pi * root))
    smooth = smooth - 1j * math.pi * square * root / 3.0
    ripple = root * polylogarithm(2, residue) / (2j * math.pi) + polylogarithm(3, residue) / (4.0 * math.pi**2)
    return np.asarray(-2.0 / math.pi * (smooth - ripple).imag)


def polylogarithm(order: int, logarithm: ComplexArray) -> ComplexArray:
    r"""Return the polylogarithm of order 2 or 3 of exp(w), for Re w <= 0.

    .. math::

        \mathrm{Li}_s(e^w) = \frac{w^{s-1}}{(s-1)!} (H_{s-1} - \ln(-w))
        + \sum_{k \ne s-1} \frac{\zeta(s-k)}{k!} w^k

    Parameters
    ----------
    order : int
        s, 2 or 3 [1].
    logarithm : ndarray of complex
        w, with a real part that is not positive [1].

    Returns
    -------
    ndarray of complex
        The polylogarithm [1].

    Notes
    -----
    By its own series for Re w < -1, else by the series about w = 0, which converges for abs(w) < 2 pi, after the
    imaginary part is brought into [-pi, pi].

    References
    ----------
    NIST DLMF 25.12.10 and 25.12.12.
    """
    turned = logarithm - 2j * math.pi * np.round(logarithm.imag / (2.0 * math.pi))
    near = turned.real >= -1.0
    result: ComplexArray = np.empty_like(turned)
    if near.any():
        result[near] = _near_one(order, turned[near])
    if not near.all():
        argument = np.exp(turned[~near])
        power, total = argument.copy(), argument.copy()
        for k in range(2, 44):
            power = power * argument
            total = total + power / k**order
        result[~near] = total
    return result


def _near_one(order: int, w: ComplexArray) -> ComplexArray:
    harmonic = 1.0 if order == 2 else 1.5
    zero = w == 0.0
    logarithm = np.log(np.where(zero, -1.0, -w))
    total = w ** (order - 1) / math.factorial(order - 1) * np.where(zero, 0.0, harmonic - logarithm)
    power = np.ones_like(w)
    for k in range(_TERMS):
        if k > 0:
            power = power * w / k
        if k != order - 1:
            total = total + _ZETA[order - k] * power
    return np.asarray(total)


def _zeta_at(argument: int) -> float:
    """Return the zeta function at 3, 2, 0 and the negative whole numbers, by Bernoulli numbers (DLMF 25.6)."""
    if argument > 1:
        return float(zeta(argument))
    if argument == 0:
        return -0.5
    if argument % 2 == 0:
        return 0.0
    # By the reflection formula, DLMF 25.4.2.
    m = (1 - argument) // 2
    whole = float(zeta(2.0 * m))
    size = 2.0 * math.pow(2.0 * math.pi, -2 * m) * math.factorial(2 * m - 1) * whole
    return -size if m % 2 else size


_ZETA: Final = {argument: _zeta_at(argument) for argument in range(3 - _TERMS, 4) if argument != 1}
