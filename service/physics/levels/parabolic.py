"""Levels of a carrier in a parabolic well, in one direction or two."""

import math

import numpy as np

from service.physics.levels.source import MOST_LEVELS, Ladder, TooManyLevels, simple_ladder


class ParabolicWell:
    r"""The levels of a film in a parabolic well.

    .. math:: E_n = \hbar \omega (n + \tfrac12), \quad n = 0, 1, 2, \dots

    Parameters
    ----------
    level_spacing : float
        hbar omega [J].

    References
    ----------
    J. H. Davies, The Physics of Low-dimensional Semiconductors (1998), section 4.3.
    """

    closes = False
    weyl = None

    def __init__(self, level_spacing: float) -> None:
        self._spacing = level_spacing
        self.lowest = 0.5 * level_spacing

    def count_estimate(self, energy: float) -> float:
        """Return how many levels there are up to `energy` above the lowest [1]."""
        return energy / self._spacing + 1.0

    def levels_up_to(self, energy: float) -> Ladder:
        """Return the levels up to `energy` above the lowest."""
        if self.count_estimate(energy) > MOST_LEVELS:
            raise TooManyLevels(self.count_estimate(energy))
        return simple_ladder(self._spacing * np.arange(max(0, math.floor(energy / self._spacing)) + 1.0))
