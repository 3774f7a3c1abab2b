"""How many carriers each level of a ladder holds."""

import math

import numpy as np

from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.levels.source import Ladder
from service.physics.values import FloatArray


def level_population(
    ladder: Ladder,
    free_dimensions: int,
    free_mass: float,
    degeneracy: float,
    density: float,
    chemical_potential: float,
    temperature: float,
) -> FloatArray:
    r"""Return the carriers that each level of one sample's ladder holds.

    .. math::

        n_i = d_i\, g \Bigl(\frac{m k T}{2 \pi \hbar^2}\Bigr)^{D/2} F_{D/2-1}(\eta_i), \qquad
        \eta_i = (\mu - E_i)/kT

    Parameters
    ----------
    ladder : Ladder
        The levels, from the lowest one up, edges from the lowest level [J].
    free_dimensions : int
        D, the free directions of each level: 2, 1 or 0 [1].
    free_mass : float
        Density-of-states mass of the free directions; not used for D = 0 [kg].
    degeneracy : float
        g, spin degeneracy times valleys [1].
    density : float
        All carriers per natural measure; at T = 0 a part-filled level of a box holds what the full ones leave [m^-D].
    chemical_potential : float
        From the lowest level [J].
    temperature : float
        Zero included [K].

    Returns
    -------
    ndarray, shape (L,)
        The populations [m^-D].

    References
    ----------
    J. H. Davies, The Physics of Low-dimensional Semiconductors (1998), section 4.5 ff.; DLMF 25.12.16.
    """
    capacity = degeneracy * ladder.degeneracy
    if temperature == 0.0:
        if free_dimensions == 0:
            return np.clip(density - (np.cumsum(capacity) - capacity), 0.0, capacity)
        wavevector_squared = 2.0 * free_mass * np.maximum(chemical_potential - ladder.edge, 0.0) / REDUCED_PLANCK**2
        per_state = (wavevector_squared / (4.0 * math.pi)) ** (free_dimensions / 2.0)
        return capacity * per_state / math.gamma(free_dimensions / 2.0 + 1.0)
    thermal_energy = BOLTZMANN * temperature
    inverse_area = free_mass * thermal_energy / (2.0 * math.pi * REDUCED_PLANCK**2)
    integral = fermi_dirac_integral(free_dimensions / 2.0 - 1.0, (chemical_potential - ladder.edge) / thermal_energy)
    populations: FloatArray = capacity * inverse_area ** (free_dimensions / 2.0) * integral
    return populations
