"""The chemical potential of a count of carriers on sharp levels, from the electrons above against the holes below."""

import math

import numpy as np

from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values

FULL_SHELL = 16.0 * float(np.finfo(np.float64).eps)
"""A count of carriers this close to a full shell, relative, fills it: the rounding of a density times a volume."""


class ShellBalance:
    r"""Electrons above the highest occupied level against holes below it.

    .. math:: \ln \sum_{E_i > E} g_i f(E_i) = \ln \sum_{E_i \le E} g_i (1 - f(E_i))

    Parameters
    ----------
    height : ndarray, shape (L,)
        The levels within reach, (E_i - E) / kT with E the highest occupied level, ascending [1].
    capacity : ndarray, shape (L,)
        What each holds when full, spin and valleys counted [1].
    place : int
        The place of the highest occupied level [1].
    held : float
        What that level holds at T = 0, its capacity where it is full [1].

    Notes
    -----
    Between a full shell and an empty one N(mu) - N is exactly zero in doubles over most of the gap; the two logarithms
    keep their slopes at any temperature. A part-filled level counts among the electrons, against what it holds at
    T = 0, or among the holes, against what it lacks, whichever is less.

    References
    ----------
    R. Kubo, J. Phys. Soc. Jpn. 17, 975 (1962), for the occupation of discrete levels.
    """

    def __init__(self, height: FloatArray, capacity: FloatArray, place: int, held: float) -> None:
        missing = float(capacity[place]) - held
        self._start = 0.5 * float(height[place + 1]) if missing <= 0.0 else math.log(held / missing)
        split = place if held < missing else place + 1
        self._above, self._room_above = height[split:], capacity[split:]
        self._below, self._room_below = height[:split], capacity[:split]
        self._constant_above = missing if held >= missing else 0.0
        self._constant_below = held if held < missing else 0.0

    def root(self) -> float:
        """Return (mu - E) / kT."""
        low, step = self._start, 1.0
        while self._difference(low)[0] > 0.0:
            low -= step
            step *= 2.0
        high, step = max(self._start, low), 1.0
        while self._difference(high)[0] < 0.0:
            high += step
            step *= 2.0
        return float(increasing_root(self._difference, low, high, 1e-15 * max(1.0, abs(low), abs(high))))

    def _difference(self, potential: Values) -> tuple[float, float]:
        up, up_slope = _logarithm(self._above - potential, self._room_above, self._constant_above)
        down, down_slope = _logarithm(potential - self._below, self._room_below, self._constant_below)
        return up - down, up_slope + down_slope


def _logarithm(distance: FloatArray, room: FloatArray, constant: float) -> tuple[float, float]:
    """Return ln of a constant and of all on the wrong side of the potential, at distances, and minus its slope."""
    nearest = max(float(distance.min()), 0.0) if distance.size and constant == 0.0 else 0.0
    decay = np.exp(-np.abs(distance))
    share = np.where(distance > 0.0, np.exp(nearest - np.maximum(distance, nearest)), 1.0) / (1.0 + decay)
    parts = room * share
    total = constant + float(parts.sum())
    # 1 - f beside f: decay belongs to the side on which the level is mostly empty.
    slope = float(np.sum(parts * np.where(distance > 0.0, 1.0, decay) / (1.0 + decay)))
    return math.log(total) - nearest, slope / total
