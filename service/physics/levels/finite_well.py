"""Levels of a film between barriers of finite height."""

import math

import numpy as np

from service.physics.constants import REDUCED_PLANCK
from service.physics.levels.source import Ladder, simple_ladder
from service.physics.roots import increasing_root
from service.physics.values import FloatArray


class FiniteWell:
    r"""The bound levels of a square well with barriers of finite height, current conserved at the walls.

    .. math::

        k L + 2 \arctan\frac{k\, m_b}{\kappa\, m_w} = n \pi, \qquad
        E = \frac{\hbar^2 k^2}{2 m_w}, \quad \kappa = \frac{\sqrt{2 m_b (V - E)}}{\hbar}

    Parameters
    ----------
    thickness : float
        L, between the walls [m].
    mass : float
        m_w, in the well, across it [kg].
    barrier : float
        V, height of the barriers above the band edge of the well [J].
    barrier_mass : float
        m_b, in the barriers, across them [kg].

    Notes
    -----
    The boundary condition keeps psi and (1/m) dpsi/dz continuous. The phase on the left rises with k, so each n up to
    k_V L / pi + 1 has one root, k_V being the wave number at the top of the barrier: there is always a bound level.

    References
    ----------
    D. J. BenDaniel, C. B. Duke, Phys. Rev. 152, 683 (1966); G. Bastard, Wave Mechanics Applied to Semiconductor
    Heterostructures (1988), chapter 1.
    """

    closes = True
    weyl = None

    def __init__(self, thickness: float, mass: float, barrier: float, barrier_mass: float) -> None:
        self._scale = REDUCED_PLANCK**2 / (2.0 * mass * thickness**2)
        self._edges = self._scale * _phases(math.sqrt(barrier / self._scale), barrier_mass / mass) ** 2
        self.lowest = float(self._edges[0])

    def count_estimate(self, energy: float) -> float:
        """Return how many bound levels there are up to `energy` above the lowest [1]."""
        return float(np.searchsorted(self._edges, self.lowest + energy, side="right"))

    def levels_up_to(self, energy: float) -> Ladder:
        """Return the levels up to `energy` above the lowest."""
        return simple_ladder(self._edges - self.lowest).up_to(energy)


def _phases(top: float, mass_ratio: float) -> FloatArray:
    """Return k L of every bound level of a well whose top is at k L = `top`."""
    number = np.arange(1, int(top / math.pi) + 2)
    low = (number - 1) * math.pi
    high = np.minimum(number * math.pi, top)

    def excess(phase: FloatArray) -> tuple[FloatArray, FloatArray]:
        remaining = np.sqrt(np.maximum((top - phase) * (top + phase), 0.0) * mass_ratio)
        value = phase - number * math.pi + 2.0 * np.arctan2(phase * mass_ratio, remaining)
        bend = mass_ratio * (remaining**2 + mass_ratio * phase**2)
        with np.errstate(divide="ignore", invalid="ignore"):
            slope = 1.0 + 2.0 * bend / (remaining * (remaining**2 + (mass_ratio * phase) ** 2))
        return value, np.where(np.isfinite(slope), slope, 0.0)

    return np.asarray(increasing_root(excess, low, high, 1e-16 * high))  # type: ignore[arg-type]
