"""Levels between hard walls at right angles: a wire's cross-section, a box."""

import math

import numpy as np
from numpy.typing import NDArray

from service.physics.constants import REDUCED_PLANCK
from service.physics.levels.source import MOST_LEVELS, Ladder, TooManyLevels, merged_ladder
from service.physics.values import FloatArray


class RectangularLevels:
    r"""The levels of a carrier between two or three pairs of hard walls.

    .. math:: E = \sum_d a_d\, i_d^2, \qquad a_d = \frac{(\hbar \pi / L_d)^2}{2 m_d}, \quad i_d = 1, 2, \dots

    Parameters
    ----------
    lengths : tuple of float
        L_d, two or three [m].
    masses : tuple of float
        m_d, along the same directions [kg].

    Notes
    -----
    Directions of one scale are summed in whole numbers first, so that the degeneracies of squares and cubes, the
    accidental ones too, are exact. Weyl's count of a rectangle or box has no further terms but exponentially small
    ones.

    References
    ----------
    R. K. Pathria, P. D. Beale, Statistical Mechanics, 3rd ed. (2011), appendix A (the corrections of surface and edge).
    """

    closes = False

    def __init__(self, lengths: tuple[float, ...], masses: tuple[float, ...]) -> None:
        self._scales = tuple(
            (math.pi * REDUCED_PLANCK / length) ** 2 / (2.0 * mass)
            for length, mass in zip(lengths, masses, strict=True)
        )
        self.lowest = sum(self._scales)
        self.weyl = _weyl([1.0 / math.sqrt(scale) for scale in self._scales])

    def count_estimate(self, energy: float) -> float:
        """Return at least how many levels there are up to `energy` above the lowest [1]."""
        # Levels are the corners of unit cells that lie inside the positive part of an ellipsoid.
        reach = [math.sqrt(max(energy, 0.0) / scale + 1.0) for scale in self._scales]
        return math.prod(reach) * (math.pi / 4.0 if len(reach) == 2 else math.pi / 6.0) + 1.0

    def levels_up_to(self, energy: float) -> Ladder:
        """Return the levels up to `energy` above the lowest."""
        if self.count_estimate(energy) > MOST_LEVELS:
            raise TooManyLevels(self.count_estimate(energy))
        room = max(energy, 0.0) * (1.0 + 1e-14)
        numbers = np.ones((1, 0), dtype=np.int64)
        used = np.zeros(1)
        for scale in self._scales:
            most = np.floor(np.sqrt((room - used) / scale + 1.0)).astype(np.int64)
            rows = np.repeat(np.arange(most.size), most)
            number = np.arange(rows.size) - np.repeat(np.cumsum(most) - most, most) + 1
            numbers = np.column_stack([numbers[rows], number])
            used = np.minimum(used[rows] + scale * (number - 1.0) * (number + 1.0), room)
        edges = self._edges(numbers)
        return merged_ladder(numbers, edges, np.ones(edges.size)).up_to(max(energy, 0.0))

    def _edges(self, numbers: NDArray[np.int64]) -> FloatArray:
        """Return the energies above the lowest level, directions of one scale added as whole numbers first."""
        total = np.zeros(numbers.shape[0])
        for scale in dict.fromkeys(self._scales):
            same = [axis for axis, other in enumerate(self._scales) if other == scale]
            total += scale * (numbers[:, same] ** 2 - 1).sum(axis=1)
        return total


def _weyl(lengths: list[float]) -> tuple[float, ...]:
    """Return the count's coefficients in kappa = sqrt(E), the number of half waves along d being kappa lengths[d]."""
    if len(lengths) == 2:
        first, second = lengths
        return (0.25, -0.5 * (first + second), 0.25 * math.pi * first * second, 0.0)
    first, second, third = lengths
    faces = first * second + second * third + third * first
    return (-0.125, 0.25 * (first + second + third), -math.pi / 8.0 * faces, math.pi / 6.0 * first * second * third)
