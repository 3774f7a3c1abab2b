r"""The ladder a (i^2 - 1) of a hard-wall film: whole-number sums over its lowest levels, for one sample or many.

Energies here are in units of a, from the lowest level, so that level i lies at i^2 - 1.
"""

import math

import numpy as np

from service.physics.values import FloatArray, Values


def sum_of_levels(count: Values) -> Values:
    """Return the sum of i^2 - 1 over the first `count` levels; exactly zero for one."""
    return count * (count - 1.0) * (2.0 * count + 5.0) / 6.0


def sum_of_squared_levels(count: Values) -> Values:
    """Return the sum of (i^2 - 1)^2 over the first `count` levels; exactly zero for one."""
    return count * (count - 1.0) * (((6.0 * count + 21.0) * count + 11.0) * count - 19.0) / 30.0


def capacity(count: Values) -> Values:
    """Return what the first `count` subbands hold when the next one is about to fill, in levels times a."""
    return count * (count + 1.0) * (4.0 * count + 5.0) / 6.0


def filled_levels(density: Values) -> Values:
    """Return how many subbands hold carriers at T = 0, for a density in units of a level's states per a."""
    if not isinstance(density, np.ndarray):
        count = max(1.0, math.ceil(math.cbrt(1.5 * density) - 0.75))
        while count > 1.0 and capacity(count - 1.0) >= density:
            count -= 1.0
        while capacity(count) < density:
            count += 1.0
        return count
    counts = np.maximum(1.0, np.ceil(np.cbrt(1.5 * density) - 0.75))
    counts = np.where((counts > 1.0) & (capacity(counts - 1.0) >= density), counts - 1.0, counts)
    return np.where(capacity(counts) < density, counts + 1.0, counts)


def ground_energy(density: Values, count: Values) -> Values:
    """Return the Fermi energy of `count` filled subbands, in units of a from the lowest level."""
    return (density + sum_of_levels(count)) / count


def levels_up_to(energy: Values) -> Values:
    """Return how many levels lie at or below an energy in units of a, none below the lowest."""
    if not isinstance(energy, np.ndarray):
        if energy < 0.0:
            return 0.0
        count = math.floor(math.sqrt(energy + 1.0))
        return float(count + 1 if (count + 1.0) ** 2 - 1.0 <= energy else count)
    counts: FloatArray = np.floor(np.sqrt(np.maximum(energy, 0.0) + 1.0))
    counts = np.where((counts + 1.0) ** 2 - 1.0 <= energy, counts + 1.0, counts)
    return np.where(energy < 0.0, 0.0, counts)
