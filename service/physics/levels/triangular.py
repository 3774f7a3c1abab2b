"""Levels of a film in a uniform field against a hard wall."""

import math

import numpy as np
from scipy.special import ai_zeros, airy

from service.physics.constants import ELEMENTARY_CHARGE, REDUCED_PLANCK
from service.physics.levels.source import MOST_LEVELS, Ladder, TooManyLevels, simple_ladder
from service.physics.values import FloatArray

_TABULATED = 24
"""Zeros taken from SciPy; beyond, the series is exact to the last digit of a double."""


class TriangularWell:
    r"""The levels of a carrier held against a hard wall by a uniform field.

    .. math:: E_n = \Bigl(\frac{\hbar^2}{2 m}\Bigr)^{1/3} (e F)^{2/3}\, |a_n|

    with the zeros a_n of the Airy function Ai.

    Parameters
    ----------
    mass : float
        Effective mass along the field [kg].
    field : float
        Electric field [V/m].

    References
    ----------
    T. Ando, A. B. Fowler, F. Stern, Rev. Mod. Phys. 54, 437 (1982), section III; NIST DLMF 9.9.
    """

    closes = False
    weyl = None

    def __init__(self, mass: float, field: float) -> None:
        force = ELEMENTARY_CHARGE * field
        self._scale = (REDUCED_PLANCK**2 / (2.0 * mass)) ** (1.0 / 3.0) * force ** (2.0 / 3.0)
        self.lowest = self._scale * float(airy_zeros(1)[0])

    def count_estimate(self, energy: float) -> float:
        """Return how many levels there are up to `energy` above the lowest, to within one [1]."""
        return 2.0 / (3.0 * math.pi) * math.pow((self.lowest + energy) / self._scale, 1.5) + 1.25

    def levels_up_to(self, energy: float) -> Ladder:
        """Return the levels up to `energy` above the lowest."""
        if self.count_estimate(energy) > MOST_LEVELS:
            raise TooManyLevels(self.count_estimate(energy))
        zeros = airy_zeros(int(self.count_estimate(energy)) + 1)
        return simple_ladder(self._scale * (zeros - zeros[0])).up_to(energy)


def airy_zeros(count: int) -> FloatArray:
    r"""Return the first zeros of the Airy function Ai, as positive numbers.

    .. math::

        |a_n| \sim t^{2/3} \Bigl(1 + \tfrac{5}{48} t^{-2} - \tfrac{5}{36} t^{-4} + \tfrac{77125}{82944} t^{-6}
        - \tfrac{108056875}{6967296} t^{-8} + \dots\Bigr), \quad t = \tfrac{3 \pi}{8} (4 n - 1)

    Parameters
    ----------
    count : int
        How many [1].

    Returns
    -------
    ndarray, shape (count,)
        The absolute values of the zeros, ascending [1].

    Notes
    -----
    The first 24 by SciPy and one Newton step; the others by the series, whose first term left out is below 1e-17.

    References
    ----------
    NIST DLMF 9.9.6 and 9.9.18.

    Examples
    --------
    >>> airy_zeros(2).round(6).tolist()
    [2.338107, 4.087949]
    """
    first = -ai_zeros(min(count, _TABULATED))[0]
    value, slope, _, _ = airy(-first)
    first = first + value / slope
    if count <= _TABULATED:
        return np.asarray(first)
    square = (3.0 * math.pi / 8.0 * (4.0 * np.arange(_TABULATED + 1, count + 1) - 1.0)) ** 2
    inverse_square = 1.0 / square
    series = inverse_square * (
        5.0 / 48.0
        - inverse_square
        * (5.0 / 36.0 - inverse_square * (77125.0 / 82944.0 - inverse_square * 108056875.0 / 6967296.0))
    )
    return np.concatenate([first, np.cbrt(square) * (1.0 + series)])
