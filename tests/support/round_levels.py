"""Levels inside a hard-walled circle and ball, one by one from the tables of zeros: the plain way, to check by."""

import math
from functools import cache
from importlib.resources import files
from typing import Final

import numpy as np
from numpy.typing import NDArray

from service.physics.constants import REDUCED_PLANCK
from service.physics.levels.source import Ladder, TooManyLevels
from service.physics.values import FloatArray

LARGEST_ZERO: Final = 1000.0
"""The tables hold all zeros up to here: to k R = 1000."""

_WEYL: Final = {
    # Disc and ball with hard walls, in x = k R: area and perimeter terms; volume, surface and curvature terms.
    "cylinder": (1.0 / 6.0, -0.5, 0.25, 0.0),
    "sphere": (0.0, 2.0 / (3.0 * math.pi), -0.25, 2.0 / (9.0 * math.pi)),
}


class RoundLevels:
    r"""The levels of a carrier inside a hard-walled circle or ball.

    .. math:: E = \frac{\hbar^2 x^2}{2 m R^2}, \qquad J_m(x) = 0 \text{ or } j_l(x) = 0

    Parameters
    ----------
    shape : str
        ``cylinder`` (quantum numbers m and n; m > 0 twofold) or ``sphere`` (l and n; 2l + 1 fold) [1].
    diameter : float
        2R [m].
    mass : float
        m, the same in every direction [kg].

    References
    ----------
    M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions (1964), 9.5 and 10.1; H. P. Baltes, E. R. Hilf,
    Spectra of Finite Systems (1976), for Weyl's terms.
    """

    closes = False

    def __init__(self, shape: str, diameter: float, mass: float) -> None:
        self._shape = shape
        self._scale = (REDUCED_PLANCK / (0.5 * diameter)) ** 2 / (2.0 * mass)
        self._first = float(_table(shape)[1][0])
        self.lowest = self._scale * self._first**2
        unit = math.sqrt(self._scale)
        self.weyl = tuple(term / unit**power for power, term in enumerate(_WEYL[shape]))

    def count_estimate(self, energy: float) -> float:
        """Return about how many distinct levels there are up to `energy`; without bound past the table's end [1]."""
        zero = math.sqrt(max(energy, 0.0) / self._scale + self._first**2)
        # Zeros of one order are pi apart at the far end, and the orders run up to the zero itself.
        return math.inf if zero > LARGEST_ZERO else zero * zero / 8.0 + 1.0

    def levels_up_to(self, energy: float) -> Ladder:
        """Return the levels up to `energy` above the lowest."""
        if math.isinf(self.count_estimate(energy)):
            raise TooManyLevels(math.inf)
        numbers, zeros, degeneracies = _table(self._shape)
        last = math.sqrt(max(energy, 0.0) / self._scale + self._first**2)
        count = max(1, int(np.searchsorted(zeros, last * (1.0 + 1e-14), side="right")))
        edges = self._scale * (zeros[:count] - self._first) * (zeros[:count] + self._first)
        return Ladder(numbers[:count], edges, degeneracies[:count]).up_to(max(energy, 0.0))


@cache
def _table(shape: str) -> tuple[NDArray[np.int64], FloatArray, FloatArray]:
    """Return quantum numbers, zeros and degeneracies, sorted by zero and read-only."""
    with files("service.physics.tables").joinpath("bessel_zeros.npz").open("rb") as opened, np.load(opened) as arrays:
        by_order, counts = arrays[f"{shape}_zeros"], arrays[f"{shape}_counts"].astype(np.int64)
    order = np.repeat(np.arange(counts.size), counts)
    index = np.arange(order.size) - np.repeat(np.cumsum(counts) - counts, counts) + 1
    ascending = np.argsort(by_order, kind="stable")
    zeros, order = by_order[ascending], order[ascending]
    numbers = np.column_stack([order, index[ascending]])
    degeneracies = np.where(order > 0, 2.0, 1.0) if shape == "cylinder" else 2.0 * order + 1.0
    for array in (numbers, zeros, degeneracies):
        array.flags.writeable = False
    return numbers, zeros, degeneracies
