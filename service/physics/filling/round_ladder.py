"""The levels of round hard walls in units of hbar^2 / 2 m R^2: one ladder for all cylinders, one for all spheres."""

import math
from copy import copy
from functools import cache
from typing import Final

import numpy as np
from scipy.special import erfc

from service.physics.filling.clusters import Kernel, LevelClusters
from service.physics.filling.round_continuum import smooth_density
from service.physics.levels.bessel_zeros import (
    MOST_ORDERS,
    Family,
    bessel_zeros,
    orbital_degeneracy,
    zeros_between,
    zeros_up_to,
)
from service.physics.levels.source import TooManyLevels
from service.physics.values import FloatArray

LADDER_END: Final = 1250.0
"""The ladder's end as k R: past the table's end at 1000, so that a Fermi level up to there keeps its warm tail."""

MOST_ZEROS: Final = 1_000_000
"""Zeros that one sum beyond the ladder may list: a third of a second."""

ROUNDING: Final = 2.0 * float(np.finfo(np.float64).eps)
"""An energy that went into other units and back may have moved by so much, relative."""

DAMPED: Final = 40.0
"""2 pi kT / k R in units of hbar^2 / 2 m R^2, from where on the shells are damped by exp(-40) and more."""

_WIDTH: Final = 2.5
_HALF_SPAN: Final = 6.2 * _WIDTH
"""Width of the taper between levels and their smooth count, in k R, and where it has ended to the last digit.

The levels' ripple about the smooth count has periods of at most pi / 2 in k R, of the orbit along a diameter: over the
taper it averages out to exp(-4 width^2) = 1e-11 of itself.
"""

_TAIL_CENTRE: Final = LADDER_END - _HALF_SPAN
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_FINE_NODES, _FINE_WEIGHTS = np.polynomial.legendre.leggauss(64)


class RoundLadder:
    """The levels of one shape, ascending, energies from the lowest in units of hbar^2 / 2 m R^2.

    Attributes
    ----------
    numbers : ndarray of int, shape (L, 2)
        m and n, or l and n [1].
    lowest : float
        The lowest level above the band edge, the square of the first zero [1].
    edge, degeneracy : ndarray, shape (L,)
        The levels, and how many orbital levels each is [1].
    room, energy : ndarray, shape (L + 1,)
        Orbital levels in the first so many entries, and the sum of their energies [1].
    end : float
        The energy from which on levels are missing [1].
    """

    def __init__(self, family: Family) -> None:
        self.family = family
        zeros = bessel_zeros(family, LADDER_END)
        self.numbers = np.column_stack([zeros.order, zeros.number])
        self.lowest = float(zeros.zero[0]) ** 2
        self.edge = self._energy(zeros.zero)
        self.degeneracy = orbital_degeneracy(family, zeros.order)
        self.room = np.concatenate([[0.0], np.cumsum(self.degeneracy)])
        self.energy = np.concatenate([[0.0], np.cumsum(self.degeneracy * self.edge)])
        self.end = LADDER_END**2 - self.lowest
        self._clusters = LevelClusters(self.edge, self.degeneracy)
        self._window: tuple[float, float, FloatArray, FloatArray] | None = None

    def _energy(self, zero: FloatArray) -> FloatArray:
        first = math.sqrt(self.lowest)
        return (zero - first) * (zero + first)

    def _wavenumber(self, energy: float) -> float:
        return math.sqrt(max(energy, 0.0) + self.lowest)

    @property
    def endless(self) -> float:
        """The energy up to which `endless_points` and `beyond` serve."""
        return 0.8 * (LADDER_END - 2.0 * _HALF_SPAN) ** 2 - self.lowest

    def entries_within(self, low: float, high: float) -> float:
        """Return about how many entries lie between two energies, and not more than eight fewer."""
        return (max(high, 0.0) - max(low, 0.0)) / 8.0

    def points_estimate(self, potential: float, kernel: Kernel) -> float:
        """Return about how many points a sum takes."""
        top = _top(potential, kernel)
        if top <= self.end:
            return min(self.entries_within(0.0, top), 1000.0)
        return self.entries_within(self._window_start(potential), top)

    def entries_up_to(self, energy: float) -> float:
        """Return how many entries lie at or below an energy."""
        if energy <= self.end:
            return float(np.searchsorted(self.edge, energy, side="right"))
        wavenumber = self._wavenumber(energy)
        return zeros_up_to(self.family, wavenumber)[0] if wavenumber <= MOST_ORDERS else wavenumber**2 / 8.0

    def orbitals_below(self, energy: FloatArray, inclusive: bool = False) -> FloatArray:
        """Return how many orbital levels lie below each energy, or up to and including it, to within two roundings."""
        energy = energy * (1.0 + (ROUNDING if inclusive else -ROUNDING))
        counts = self.room[np.searchsorted(self.edge, energy, side="right" if inclusive else "left")]
        for place in np.flatnonzero(energy > self.end):
            counts.ravel()[place] = self._orbitals_beyond(self._wavenumber(float(energy.ravel()[place])))
        return counts

    def _orbitals_beyond(self, wavenumber: float) -> float:
        """Return the orbital levels up to a wave number: counted as far as that is fast, else Weyl's smooth count."""
        if wavenumber <= MOST_ORDERS:
            return zeros_up_to(self.family, wavenumber)[1]
        if self.family == "cylinder":
            return wavenumber**2 / 4.0 - wavenumber / 2.0
        return 2.0 / (9.0 * math.pi) * wavenumber**3 - wavenumber**2 / 4.0

    def between(self, low: float, high: float) -> tuple[FloatArray, FloatArray, float]:
        """Return the levels above one energy and up to another, their degeneracies, and the orbital levels below."""
        first = int(np.searchsorted(self.edge, low, side="right"))
        if high <= self.end:
            last = int(np.searchsorted(self.edge, high, side="right"))
            return self.edge[first:last], self.degeneracy[first:last], float(self.room[first])
        entries = self.entries_within(max(low, self.end), high)
        if entries > 2 * MOST_ZEROS:
            raise TooManyLevels(entries)
        start = max(self._wavenumber(low), LADDER_END)
        zeros, below = zeros_between(self.family, start, self._wavenumber(high))
        edge, degeneracy = self._energy(zeros.zero), orbital_degeneracy(self.family, zeros.order)
        if low >= self.end:
            return edge, degeneracy, below
        return (
            np.concatenate([self.edge[first:], edge]),
            np.concatenate([self.degeneracy[first:], degeneracy]),
            float(self.room[first]),
        )

    def reaches(self, low: float, high: float, kernel: Kernel) -> bool:
        """Tell whether to sum over the levels: within the ladder, or over a window that is not too large.

        Beyond the ladder there is no need to where warmth has damped the shells out of the sum.
        """
        top = _top(high, kernel)
        if top <= self.end:
            return True
        if self._wavenumber(top) > MOST_ORDERS:
            return False
        damping = 2.0 * kernel.blur / self._wavenumber(high)
        return damping < DAMPED and self.entries_within(self._window_start(low), top) <= MOST_ZEROS

    def points(self, low: float, high: float, kernel: Kernel) -> tuple[FloatArray, FloatArray]:
        """Return energies and weights that stand for the levels in a sum: see `LevelClusters`.

        Beyond the ladder: the levels one by one; for energies that lie themselves beyond it, those of a window with a
        taper at its lower end, below which the smooth count serves. The last window is remembered, for
        it serves every function of energies inside it.
        """
        top = _top(high, kernel)
        if top <= self.end:
            return self._clusters.points(low, high, kernel)
        if low < self.end:
            edges, weights = self._clusters.points(low, min(high, self.end), kernel)
            beyond, room, _ = self.between(self.end, top)
            return np.concatenate([edges, beyond]), np.concatenate([weights, room])
        if self._window is None or low < self._window[0] or top > self._window[1]:
            self._window = low, top, *self._tapered_window(low, top)
        return self._window[2:]

    def _tapered_window(self, low: float, top: float) -> tuple[FloatArray, FloatArray]:
        edge, degeneracy, _ = self.between(self._window_start(low), top)
        center = self._wavenumber(low) - _HALF_SPAN
        edges, counts = _below(self.family, center, self._wavenumber(low))
        tapered = degeneracy * _taper(center - np.sqrt(edge + self.lowest))
        return np.concatenate([edges - self.lowest, edge]), np.concatenate([counts, tapered])

    def _window_start(self, low: float) -> float:
        return max(self._wavenumber(low) - 2.0 * _HALF_SPAN, 1.0) ** 2 - self.lowest

    def endless_points(self, low: float, high: float, kernel: Kernel) -> tuple[FloatArray, FloatArray]:
        """Return the same for a function with a tail over all levels, but only the levels before the ladder's end."""
        return _tapered(self.family).points(low, high, kernel)

    @property
    def beyond(self) -> tuple[FloatArray, FloatArray]:
        """Energies and counts that stand for all levels that `endless_points` leaves out."""
        edges, counts = _beyond(self.family)
        return edges - self.lowest, counts


@cache
def _shared(family: Family) -> RoundLadder:
    return RoundLadder(family)


def round_ladder(family: Family) -> RoundLadder:
    """Return the ladder of a shape for one sample: built once, all arrays shared, with a window of its own."""
    return copy(_shared(family))


def _top(high: float, kernel: Kernel) -> float:
    """Return up to where the levels count, for energies below all levels too."""
    return max(high, 0.0) + kernel.reach


def _taper(past: FloatArray) -> FloatArray:
    """Return the taper from 1 to 0 for wave numbers past its centre."""
    return np.asarray(0.5 * erfc(past / _WIDTH))


@cache
def _tapered(family: Family) -> LevelClusters:
    """Return the ladder's clusters with a taper at the end."""
    ladder = round_ladder(family)
    weight = _taper(np.sqrt(ladder.edge + ladder.lowest) - _TAIL_CENTRE)
    return LevelClusters(ladder.edge, ladder.degeneracy * weight)


@cache
def _beyond(family: Family) -> tuple[FloatArray, FloatArray]:
    """Return energies from the band edge and counts for the levels past the taper at the ladder's end.

    In k R over the taper, and in its inverse from there to infinity: both parts are smooth.
    """
    last = LADDER_END
    inner = _TAIL_CENTRE + _HALF_SPAN * _FINE_NODES
    inverse = 0.5 / last * (1.0 + _FINE_NODES)
    wavenumber = np.concatenate([inner, 1.0 / inverse])
    measure = np.concatenate([_HALF_SPAN * _FINE_WEIGHTS, 0.5 / last * _FINE_WEIGHTS / inverse**2])
    slope, _, _ = smooth_density(family, wavenumber)
    return wavenumber**2, slope * measure * (1.0 - _taper(wavenumber - _TAIL_CENTRE))


def _below(family: Family, center: float, singular: float) -> tuple[FloatArray, FloatArray]:
    """Return energies from the band edge and counts for the levels before a taper about a wave number.

    Panels that halve towards the singularity, then the taper; and a point at the band edge for the constant term, which
    also makes the finite part of the last term's integral.
    """
    start = center - _HALF_SPAN
    ends = [start]
    distance = singular - start
    while ends[-1] > 0.0:
        ends.append(singular - 2.0 * distance if 2.0 * distance < 0.75 * singular else 0.0)
        distance *= 2.0
    panels = np.array(ends[::-1])
    middle, half = 0.5 * (panels[1:] + panels[:-1]), 0.5 * np.diff(panels)
    wavenumber = np.concatenate([(middle[:, None] + half[:, None] * _NODES).ravel(), center + _HALF_SPAN * _FINE_NODES])
    measure = np.concatenate([(half[:, None] * _WEIGHTS).ravel(), _HALF_SPAN * _FINE_WEIGHTS])
    slope, constant, falling = smooth_density(family, wavenumber)
    count = slope * measure * (1.0 - _taper(center - wavenumber))
    finite = falling * measure / wavenumber**2
    at_edge = constant + float(np.sum(finite)) + falling / (center + _HALF_SPAN)
    count -= finite * (1.0 - _taper(center - wavenumber))
    return np.concatenate([[0.0], wavenumber**2]), np.concatenate([[at_edge], count])
