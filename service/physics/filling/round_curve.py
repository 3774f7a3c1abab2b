"""Sums over the levels of a cylinder or sphere at many energies, in units of hbar^2 / 2 m R^2 from the lowest level."""

import math
from collections.abc import Callable
from typing import Final

import numpy as np

from service.physics.broadening import spread_level
from service.physics.filling.clusters import Kernel
from service.physics.filling.round_continuum import RoundContinuum
from service.physics.filling.round_ladder import RoundLadder
from service.physics.values import FloatArray

REACH: Final = 45.0
"""Levels this many kT above the chemical potential hold exp(-45) = 3e-20 of their room."""

GAUSSIAN_REACH: Final = 12.0
"""The same in standard deviations of a Gaussian: exp(-72)."""

SHARP: Final = Kernel(0.0, math.inf, 0.0)

_BIN: Final = 1000.0
_TOGETHER: Final = 256
"""Energies this close, and at most so many, share one list of points: a hundred levels lie among them."""

_DEGREE: Final = 63
"""Of the polynomial over energy for the tails of all levels beyond the ladder: the levels lie a fifth further off than
the highest energy, so that it is right to the last digit."""

Function = Callable[[FloatArray], FloatArray]
"""What one level gives at energies above its edge, or all smooth states at energies above the band edge."""

Functions = Callable[[FloatArray], tuple[FloatArray, ...]]
"""The same for several things at once."""

Points = Callable[[float, float, Kernel], tuple[FloatArray, FloatArray]]


def occupations(warmth: float) -> Kernel:
    """Return what occupations at kT = `warmth`, their slopes and their integrals are like over energy."""
    return Kernel(math.pi * warmth, 4.0 * warmth, REACH * warmth)


def over_levels(
    ladder: RoundLadder, energy: FloatArray, kernel: Kernel, level: Function, smooth: Function
) -> FloatArray:
    """Return the sum over the levels at each energy.

    One energy alone is summed at any size; on a curve beyond the ladder, where a sum lists the levels anew for each
    energy, the smooth states stand in.

    Parameters
    ----------
    ladder : RoundLadder
        The levels.
    energy : ndarray
        From the lowest level, over hbar^2 / 2 m R^2 [1].
    kernel : Kernel
        What the function is like.
    level : callable
        What a level gives at energies above its edge.
    smooth : callable
        What the smooth states give at energies above the band edge.

    Returns
    -------
    ndarray
        The sums, of the same shape [1].
    """
    return _sums(ladder, energy, kernel, lambda above: (level(above),), lambda energy: (smooth(energy),))[0]


def _sums(
    ladder: RoundLadder, energy: FloatArray, kernel: Kernel, level: Functions, smooth: Functions
) -> tuple[FloatArray, ...]:
    def inside(low: float, high: float) -> bool:
        return max(high, 0.0) + kernel.reach <= ladder.end or (energy.size == 1 and ladder.reaches(low, high, kernel))

    return _in_bins(energy, kernel, ladder.points, inside, level, lambda above: smooth(above + ladder.lowest))


def _in_bins(
    energy: FloatArray,
    kernel: Kernel,
    points_of: Points,
    inside: Callable[[float, float], bool],
    level: Functions,
    otherwise: Functions,
) -> tuple[FloatArray, ...]:
    """Return the sums, the energies taken together that lie close together."""
    flat = energy.ravel()
    order = np.argsort(flat)
    ascending = flat[order]
    parts: list[tuple[FloatArray, ...]] = []
    at = 0
    while at < flat.size:
        low = float(ascending[at])
        till = min(int(np.searchsorted(ascending, low + max(_BIN, kernel.blur), side="right")), at + _TOGETHER)
        part = ascending[at:till]
        high = float(part[-1])
        if inside(low, high):
            edges, weights = points_of(low, high, kernel)
            parts.append(tuple(values @ weights for values in level(part[:, None] - edges)))
        else:
            parts.append(otherwise(part))
        at = till
    sums = []
    for column in zip(*parts, strict=True):
        ordered = np.empty_like(flat)
        ordered[order] = np.concatenate(column)
        sums.append(ordered.reshape(energy.shape))
    return tuple(sums)


def spread(
    ladder: RoundLadder, continuum: RoundContinuum, dimensions: int, energy: FloatArray, kind: str, width: float
) -> tuple[FloatArray, FloatArray]:
    """Return the levels' density of states convolved with a line shape, and its integral, a Lorentzian's from 0.

    Parameters
    ----------
    ladder : RoundLadder
        The levels.
    continuum : RoundContinuum
        Their smooth part.
    dimensions : int
        D, the free dimensions of each level: 1 or 0 [1].
    energy : ndarray
        From the lowest level, over hbar^2 / 2 m R^2 [1].
    kind : str
        ``gaussian``, ``lorentzian`` or ``thermal`` [1].
    width : float
        The width, in the same unit [1].

    Returns
    -------
    tuple of ndarray
        The density and its integral, each of the shape of `energy` [1].
    """
    scale = width ** (dimensions / 2.0 - 1.0)

    def level(above: FloatArray) -> tuple[FloatArray, ...]:
        shape, area = spread_level(dimensions, kind, above / width)
        return scale * np.asarray(shape), scale * width * np.asarray(area)

    def smooth(energy: FloatArray) -> tuple[FloatArray, ...]:
        return continuum.spread(energy, kind, width, ladder.lowest)

    if kind == "lorentzian":
        return _lorentzian(ladder, energy, width, level, smooth)
    kernel = occupations(width) if kind == "thermal" else Kernel(width, width, GAUSSIAN_REACH * width)
    density, integral = _sums(ladder, energy, kernel, level, smooth)
    return density, integral


def _lorentzian(
    ladder: RoundLadder, energy: FloatArray, width: float, level: Functions, smooth: Functions
) -> tuple[FloatArray, FloatArray]:
    """Return the sums whose tails take in every level: those to the ladder's end, then the smooth count."""

    def sums(energy: FloatArray) -> tuple[FloatArray, ...]:
        return _in_bins(
            energy,
            Kernel(width, math.inf, math.inf),
            ladder.endless_points,
            lambda low, high: high <= ladder.endless,
            level,
            lambda above: smooth(above + ladder.lowest),
        )

    density, integral = sums(energy)
    inside = energy <= ladder.endless
    if inside.any():
        edges, counts = ladder.beyond
        within = energy[inside]
        domain = [min(0.0, float(within.min())), max(1.0, float(within.max()))]
        beyond = np.polynomial.Chebyshev.interpolate(
            lambda energies: level(energies[:, None] - edges)[0] @ counts, _DEGREE, domain
        )
        # Far below an edge the two ends of the integral nearly cancel: integrated as a polynomial they do not.
        density[inside] += beyond(within)
        integral[inside] += beyond.integ(lbnd=0.0)(within) - sums(np.zeros(1))[1]
    return density, integral
