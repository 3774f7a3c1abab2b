"""Sums over the levels of one sample's ladder at many energies, and the far tail of a Lorentzian."""

import math
from collections.abc import Callable
from typing import Final

import numpy as np
from scipy.special import erfc

from service.physics.broadening import Broadening, spread_level
from service.physics.levels.source import Ladder, LevelSource
from service.physics.values import FloatArray, Values

LevelFunction = Callable[[FloatArray], FloatArray]
"""What one level gives at energies above its edge, element by element."""

REACH: Final = 40.0
"""Widths above an energy from which a level's Gaussian or thermal tail is beneath the last digit."""

_ELEMENTS: Final = 1 << 20
"""Energies times levels at a time, so that a curve over many levels stays within a few ten megabytes."""

_CUT_PHASE: Final = 40.0
"""Half waves, as a phase, across the shortest length at which the levels' ripple averages out of a smooth cut."""

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(48)


def over_levels(ladder: Ladder, energy: Values, level: LevelFunction) -> Values:
    """Return the sum of a function of the energy above each edge, at each energy, a chunk of energies at a time."""
    energies = np.atleast_1d(np.asarray(energy, dtype=np.float64))
    flat = energies.ravel()
    rows = max(1, _ELEMENTS // ladder.edge.size)
    total = np.concatenate(
        [level(flat[at : at + rows, None] - ladder.edge) @ ladder.degeneracy for at in range(0, flat.size, rows)]
    )
    return total.reshape(energies.shape) if isinstance(energy, np.ndarray) else float(total[0])


def spread(
    source: LevelSource,
    levels: Callable[[float], Ladder],
    dimensions: int,
    energy: Values,
    broadening: Broadening,
) -> tuple[Values, Values]:
    r"""Return the ladder's density of states smeared by a line shape, and its integral, in units of the width.

    .. math:: \sum_i d_i\, s_D\Bigl(\frac{E - E_i}{w}\Bigr)

    Parameters
    ----------
    source : LevelSource
        Where the ladder comes from.
    levels : callable
        Lists its levels up to an energy above the lowest [J].
    dimensions : int
        D, the free dimensions of each level [1].
    energy : float or ndarray
        From the lowest level [J].
    broadening : Broadening
        The line shape and its width [J].

    Returns
    -------
    tuple of float or ndarray
        The sum and its integral, of a Lorentzian from the lowest level [1].

    Raises
    ------
    ValueError
        For a Lorentzian over a ladder without end that follows no Weyl law: its tail has no finite sum.

    Notes
    -----
    A Lorentzian's tail takes in every level to infinity. The levels are weighed with a smooth cut far above the
    energies; what the cut takes away is given back as an integral over Weyl's smooth count, from which the levels
    differ by a ripple that the cut averages out.

    References
    ----------
    H. P. Baltes, E. R. Hilf, Spectra of Finite Systems (1976), on smooth counts.
    """
    width = float(np.max(broadening.width))
    lorentzian = broadening.kind == "lorentzian" and not source.closes
    highest = max(float(np.max(energy)), 0.0)
    cut = 0.0
    if lorentzian:
        cut = _cut(source, highest, width)
        ladder = _weighed(levels(4.0 * cut - source.lowest), source.lowest, cut)
    else:
        ladder = levels(highest + REACH * width)

    density = over_levels(ladder, energy, _plain(dimensions, broadening.kind, width, 0))
    integrated = over_levels(ladder, energy, _plain(dimensions, broadening.kind, width, 1))
    if broadening.kind != "lorentzian":
        return density, integrated
    origin = over_levels(ladder, 0.0, _plain(dimensions, "lorentzian", width, 1))
    if lorentzian:
        tail, tail_integrated = _tail(source, dimensions, energy, width, cut)
        density, integrated = density + tail, integrated + tail_integrated
    return density, integrated - origin


def _plain(dimensions: int, kind: str, width: float, which: int) -> LevelFunction:
    """Return a level's smeared density (0) or its integral (1)."""

    def level(above: FloatArray) -> FloatArray:
        return np.asarray(spread_level(dimensions, kind, above / width)[which])

    return level


def _cut(source: LevelSource, highest: float, width: float) -> float:
    """Return the energy above the band edge from which levels are cut off smoothly."""
    if source.weyl is None:
        raise ValueError("a Lorentzian's tail over a ladder without end has no finite sum")
    return max(2.0 * (source.lowest + highest) + 20.0 * width, source.lowest * (_CUT_PHASE / math.pi) ** 2)


def _weight(wavenumber: FloatArray, first: float) -> FloatArray:
    """Return the smooth cut: one up to a wave number, 1e-10 and less of a step at either end, zero at twice it."""
    return np.asarray(0.5 * erfc(9.0 * (wavenumber / first - 1.5)))


def _weighed(ladder: Ladder, lowest: float, cut: float) -> Ladder:
    weight = _weight(np.sqrt(lowest + ladder.edge), math.sqrt(cut))
    return Ladder(ladder.quantum_numbers, ladder.edge, ladder.degeneracy * weight)


def _tail(source: LevelSource, dimensions: int, energy: Values, width: float, cut: float) -> tuple[Values, Values]:
    """Return what the levels beyond the cut give, by Weyl's count: in v = sqrt(cut / E), from 0 to 1."""
    assert source.weyl is not None
    place = np.concatenate([0.25 * (1.0 + _NODES), 0.5 + 0.25 * (1.0 + _NODES)])
    step = np.concatenate([0.25 * _WEIGHTS, 0.25 * _WEIGHTS])
    wavenumber = math.sqrt(cut) / place
    _, first, second, third = source.weyl
    count = (3.0 * third * wavenumber**2 + 2.0 * second * wavenumber + first) * wavenumber / place * step
    count = count * (1.0 - _weight(wavenumber, math.sqrt(cut)))
    beyond = Ladder(np.zeros((count.size, 0), dtype=np.int64), wavenumber**2 - source.lowest, count)
    density = over_levels(beyond, energy, _plain(dimensions, "lorentzian", width, 0))
    energies = np.atleast_1d(np.asarray(energy, dtype=np.float64))
    # Far below an edge the integral's two ends nearly cancel: the shape is smooth there, and is integrated instead.
    fractions = 0.5 * (1.0 + _NODES)
    inner = np.stack(
        [
            np.atleast_1d(over_levels(beyond, energies.ravel() * fraction, _plain(dimensions, "lorentzian", width, 0)))
            for fraction in fractions
        ]
    )
    rise = (0.5 * _WEIGHTS @ inner).reshape(energies.shape) * energies / width
    return density, rise if isinstance(energy, np.ndarray) else float(rise[0])
