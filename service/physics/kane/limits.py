r"""A non-parabolic band in its two limits: the classical gas, and the degenerate one by Sommerfeld's series."""

import math
from typing import Final, TypeVar

import numpy as np
from scipy.special import kve, zeta

from service.physics.values import FloatArray

Number = TypeVar("Number", float, FloatArray)
"""A float or an array: what a formula that is the same for both takes, in all its arguments, and returns."""

GAMMA: Final = math.gamma(2.5)

BOTTOM_SCALE: Final = 2.5
"""The classical gas holds (1 + 5/2 beta)^(3/2) times the parabolic one's carriers, to the first order in beta."""

_SMALL_BETA: Final = 1e-8
"""Where two terms in beta are exact to the last digit."""

_SOMMERFELD: Final = tuple(2.0 * (1.0 - 2.0 ** (1 - 2 * k)) * float(zeta(2 * k)) for k in range(1, 14))
"""The weights of the even derivatives; at eta = 40 what follows the last is below 1e-17 of the whole."""


def classical_density(beta: Number) -> Number:
    r"""Return the density over exp(eta) of a gas so dilute that no state is likely to be filled, 1 at beta = 0 [1].

    .. math:: K(\beta) = \sqrt{\frac{2 z}{\pi}}\, e^z K_2(z), \qquad z = \frac{1}{2 \beta}

    F. Juettner, Ann. Phys. 339, 856 (1911); the Bessel function by DLMF 10.32.8.
    """
    if isinstance(beta, np.ndarray):
        argument = 0.5 / np.maximum(beta, _SMALL_BETA)
        density = np.sqrt(argument * (2.0 / math.pi)) * kve(2.0, argument)
        return np.where(beta < _SMALL_BETA, 1.0 + 3.75 * beta, density)
    if beta < _SMALL_BETA:
        return 1.0 + 3.75 * beta
    return math.sqrt(1.0 / (math.pi * beta)) * float(kve(2.0, 0.5 / beta))


def _classical_series(beta: Number) -> tuple[Number, Number]:
    """Return a and b of the density a exp(eta) (1 - b exp(eta) + ...)."""
    first = classical_density(beta)
    return first, classical_density(0.5 * beta) * 0.5**1.5 / first


def dilute_density(fugacity: Number, beta: Number) -> tuple[Number, Number]:
    """Return the density of a dilute gas and its derivative by eta, for exp(eta) below 1e-8 [1]."""
    first, second = _classical_series(beta)
    leading = first * fugacity
    return leading * (1.0 - second * fugacity), leading * (1.0 - 2.0 * second * fugacity)


def dilute_eta(value: Number, beta: Number) -> Number:
    """Return eta from the density of a dilute gas [1]."""
    first, second = _classical_series(beta)
    ratio = value / first
    if isinstance(ratio, np.ndarray):
        return np.log(ratio) + second * ratio
    return math.log(ratio) + second * ratio


def degenerate_density(eta: Number, beta: Number) -> tuple[Number, Number]:
    r"""Return the density of a degenerate gas and its derivative by eta, for eta of at least 40 [1].

    Sommerfeld's series of the even derivatives of :math:`\gamma^{3/2}`, which follow from
    :math:`\gamma G' = \tfrac{3}{2} \gamma' G`; each is held in units of :math:`G / \eta^m`.
    """
    bend = beta * eta / (1.0 + beta * eta)
    before, odd = 1.0 + 0.0 * bend, 1.5 * (1.0 + bend)
    series, slope, power = before, odd, 1.0 / (eta * eta)
    for k, weight in enumerate(_SOMMERFELD):
        m = 2 * k + 1
        even = (1.5 - m) * (1.0 + bend) * odd + m * (4 - m) * bend * before
        before, odd = even, (0.5 - m) * (1.0 + bend) * even + (m + 1) * (3 - m) * bend * odd
        series = series + weight * power * even
        slope = slope + weight * power * odd
        power = power / (eta * eta)
    gamma = eta * (1.0 + beta * eta)
    leading = gamma * _root(gamma) / GAMMA
    return leading * series, leading * slope / eta


def filled_energy(value: Number, beta: Number) -> Number:
    r"""Return the eta up to which states hold a density at T = 0: :math:`\gamma(\eta) = (\Gamma(5/2) n)^{2/3}` [1]."""
    root = np.cbrt(GAMMA * value) if isinstance(value, np.ndarray) else math.cbrt(GAMMA * value)
    square = root * root
    energy: Number = 2.0 * square / (1.0 + _root(1.0 + 4.0 * beta * square))
    return energy


def parabolic_equivalent(value: Number, beta: Number) -> tuple[Number, Number, Number]:
    """Return the parabolic density of about the same eta, the scale of beta, and the stretch that led to it [1].

    These are coordinates of the table of the inverse: any smooth ones would do, if its maker has the same.
    """
    filled = filled_energy(value, beta)
    scale = filled + BOTTOM_SCALE**2 / (filled + BOTTOM_SCALE)
    stretch = 1.0 + beta * scale
    return value / (stretch * _root(stretch)), scale, stretch


def degenerate_eta(value: Number, beta: Number) -> Number:
    """Return eta from the density of a degenerate gas: the first term of the reverted series, then two Newton steps.

    The first is good to 1e-4 at eta = 40, each step squares that.
    """
    filled = filled_energy(value, beta)
    bend = beta * filled / (1.0 + beta * filled)
    first = 1.5 * (1.0 + bend)
    eta = filled - math.pi**2 / 6.0 * (0.5 * (1.0 + bend) + 3.0 * bend / first) / filled
    for _ in range(2):
        density, slope = degenerate_density(eta, beta)
        eta = eta - (density - value) / slope
    return eta


def _root(values: Number) -> Number:
    return np.sqrt(values) if isinstance(values, np.ndarray) else math.sqrt(values)
