r"""Many levels as few: weighted points that stand for clusters of levels in any sum of a smooth function over them.

A sum over 10^5 levels of a function that is singular only near one energy needs the levels one by one only there.
Further off a cluster of levels is as good as 22 points with weights, to the last digit of a double.
"""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from service.physics.values import FloatArray

LEAF: Final = 64
"""Levels of the smallest clusters: about three times the points of one."""

POINTS: Final = 22
"""Points of a cluster: 5.8^-22 = 1e-17 is left of a function without singularity within three half widths."""

SEPARATION: Final = 3.0
"""How far from a cluster's centre, in half widths, the nearest singularity must lie."""

_ANGLES: Final = (np.arange(POINTS) + 0.5) * (math.pi / POINTS)
_NODES: Final = np.cos(_ANGLES)
_TO_WEIGHTS: Final = np.cos(np.outer(_ANGLES, np.arange(POINTS))) * np.where(np.arange(POINTS) > 0, 2.0, 1.0) / POINTS


@dataclass(frozen=True, slots=True)
class Kernel:
    """What a function summed over the levels is like.

    Attributes
    ----------
    blur : float
        How far above and below the real axis its singularities lie: pi kT for occupations; 0 for sharp states [1].
    widest : float
        Half width of the widest cluster within `reach`: over more decades of an exponential 22 points are too few [1].
    reach : float
        How far above the energies the levels still count; infinite for a function without a cut-off [1].
    """

    blur: float
    widest: float
    reach: float


@dataclass(frozen=True, slots=True)
class _Row:
    """All clusters of one size, side by side."""

    first: FloatArray
    centre: FloatArray
    half: FloatArray
    weight: FloatArray


class LevelClusters:
    r"""Levels and the clusters that stand for them.

    .. math::

        \sum_{i \in C} d_i\, h(E_i) = \sum_{q=1}^{22} w_q\, h(E_q), \qquad
        w_q = \sum_{i \in C} d_i\, \ell_q(E_i)

    with Lagrange's polynomials on the cluster's Chebyshev points.

    Parameters
    ----------
    edge : ndarray, shape (L,)
        The levels, ascending, in any unit of energy [1].
    degeneracy : ndarray, shape (L,)
        Their degeneracies [1].

    References
    ----------
    L. N. Trefethen, Approximation Theory and Approximation Practice (2013), theorem 8.2; W. Fong, E. Darve, J. Comput.
    Phys. 228, 8712 (2009).
    """

    def __init__(self, edge: FloatArray, degeneracy: FloatArray) -> None:
        self.edge = edge
        self.degeneracy = degeneracy
        self._rows: list[_Row] = []
        if edge.size > LEAF:
            self._build()

    def _build(self) -> None:
        """Gather the levels into clusters of 64, and then always two clusters into one."""
        points, weights, size = self.edge, self.degeneracy, LEAF
        starts = np.arange(0, points.size, size)
        first, last = points[starts], points[np.minimum(starts + size, points.size) - 1]
        while True:
            row = _cluster(first, last, points, weights, size)
            self._rows.append(row)
            if row.centre.size == 1:
                return
            points = (row.centre[:, None] + row.half[:, None] * _NODES).ravel()
            weights, size = row.weight.ravel(), 2 * POINTS
            first, last = first[::2], last[np.minimum(np.arange(1, last.size + 1, 2), last.size - 1)]

    def points(self, low: float, high: float, kernel: Kernel) -> tuple[FloatArray, FloatArray]:
        """Return energies and weights that stand for the levels in a function of the distance to energies in a range.

        Parameters
        ----------
        low, high : float
            The energies from which the function's distances are taken [1].
        kernel : Kernel
            What the function is like.

        Returns
        -------
        ndarray, shape (K,)
            Energies, levels one by one near the range and points of clusters elsewhere [1].
        ndarray, shape (K,)
            Their weights [1].
        """
        low, high = max(low, float(self.edge[0])), max(high, float(self.edge[0]))
        top = high + kernel.reach
        count = int(np.searchsorted(self.edge, top, side="right"))
        if count <= 8 * LEAF:
            return self.edge[:count], self.degeneracy[:count]
        energies: list[FloatArray] = []
        weights: list[FloatArray] = []
        open_clusters: NDArray[np.intp] = np.zeros(1, dtype=np.intp)
        for row in reversed(self._rows):
            open_clusters = open_clusters[open_clusters < row.centre.size]
            open_clusters = open_clusters[row.first[open_clusters] <= top]
            centre, half = row.centre[open_clusters], row.half[open_clusters]
            distance = np.maximum(np.maximum(low - centre, centre - high), 0.0)
            apart = np.hypot(distance, kernel.blur) >= SEPARATION * half
            apart &= (half <= kernel.widest) | (distance - half > kernel.reach)
            energies.append((centre[apart, None] + half[apart, None] * _NODES).ravel())
            weights.append(row.weight[open_clusters[apart]].ravel())
            near = open_clusters[~apart]
            open_clusters = (2 * near[:, None] + np.array([0, 1])).ravel()
        levels = (near[:, None] * LEAF + np.arange(LEAF)).ravel()
        levels = levels[levels < count]
        energies.append(self.edge[levels])
        weights.append(self.degeneracy[levels])
        return np.concatenate(energies), np.concatenate(weights)


def _cluster(first: FloatArray, last: FloatArray, points: FloatArray, weights: FloatArray, size: int) -> _Row:
    """Return the clusters of each `size` consecutive points, by the moments over Chebyshev polynomials."""
    count = first.size
    centre, half = 0.5 * (first + last), np.maximum(0.5 * (last - first), np.finfo(np.float64).tiny)
    padding = count * size - points.size
    filled = np.concatenate([weights, np.zeros(padding)]).reshape(count, size)
    place = np.concatenate([points, np.full(padding, centre[-1])]).reshape(count, size)
    place = (place - centre[:, None]) / half[:, None]
    moments = np.empty((count, POINTS))
    previous, current = filled * place, filled
    for k in range(POINTS):
        moments[:, k] = current.sum(axis=1)
        previous, current = current, 2.0 * place * current - previous
    return _Row(first, centre, half, moments @ _TO_WEIGHTS.T)
