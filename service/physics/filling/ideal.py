"""The ideal gas of one, two or three dimensions: bulk, sheet and line, all in closed form."""

import math
from typing import Self

import numpy as np
from numpy.typing import NDArray

from service.physics.broadening import Broadening, spread_level
from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail, inverse_fermi_dirac_integral
from service.physics.filling.states import States
from service.physics.levels.source import Ladder
from service.physics.values import Values, choose, largest


class IdealGas(States):
    r"""Free carriers in D dimensions, on one level at the band edge.

    .. math::

        n = g \Bigl(\frac{m k T}{2 \pi \hbar^2}\Bigr)^{D/2} F_{D/2-1}(\mu/kT), \qquad
        n(T = 0) = \frac{g}{\Gamma(D/2+1)} \Bigl(\frac{m E_F}{2 \pi \hbar^2}\Bigr)^{D/2}

    Parameters
    ----------
    free_dimensions : int
        D: 3, 2 or 1 [1].
    mass : float or ndarray, shape (N,)
        Density-of-states mass over the free axes [kg].
    degeneracy : float or ndarray, shape (N,)
        g, spin degeneracy times valleys [1].

    Notes
    -----
    The chemical potential carries the error of the inverse integral, 4e-16 max(1, abs(eta)), and that of a dozen
    roundings: 1e-14 covers both; 8e-16 is what was found from eta = -700 to 1e7 against mpmath.

    Exactly at the edge a line's density of states has no value: it is 0 here, as below the edge, never infinite.
    Whoever draws a curve puts the mean over the grid's cell there, from differences of `states_below`.

    References
    ----------
    N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), chapter 2; NIST DLMF 25.12.16.
    """

    method = "closed-form"
    relative_error_bound = 1e-14

    def __init__(self, free_dimensions: int, mass: Values, degeneracy: Values) -> None:
        self.free_dimensions = free_dimensions
        self._half = free_dimensions / 2.0
        self._mass = mass
        self._degeneracy = degeneracy

    @property
    def lowest_level(self) -> Values:
        return 0.0

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        return type(self)(self.free_dimensions, _rows(self._mass, rows), _rows(self._degeneracy, rows))

    def _room(self, energy: Values) -> Values:
        """Return g (m E / 2 pi hbar^2)^(D/2), the states in reach of an energy but for a number [m^-D]."""
        mass, degeneracy = _like(self._mass, energy), _like(self._degeneracy, energy)
        # The constants first: a mass times the energy of a dilute line is beneath the smallest double.
        per_area = mass / (2.0 * math.pi * REDUCED_PLANCK**2) * energy
        room: Values = degeneracy * _half_power(per_area, self.free_dimensions)
        return room

    def fermi_energy(self, density: Values) -> Values:
        filled = density / self._degeneracy * math.gamma(self._half + 1.0)
        if self.free_dimensions == 3:
            filled = np.cbrt(filled) ** 2 if isinstance(filled, np.ndarray) else math.cbrt(filled) ** 2
        elif self.free_dimensions == 1:
            # Squared last: the square of a dilute density alone is beneath the smallest double.
            speed = filled * (REDUCED_PLANCK / self._mass**0.5)
            return 2.0 * math.pi * speed * speed
        energy: Values = filled * (2.0 * math.pi * REDUCED_PLANCK**2) / self._mass
        return energy

    def ground_energy_density(self, density: Values) -> Values:
        return density * self.fermi_energy(density) * (self._half / (self._half + 1.0))

    def states_below(self, energy: Values) -> Values:
        return self._room(largest(energy, 0.0)) / math.gamma(self._half + 1.0)

    def density_of_states(self, energy: Values) -> Values:
        positive = choose(energy > 0.0, energy, 1.0)
        inside = energy >= 0.0 if self.free_dimensions == 2 else energy > 0.0
        return choose(inside, self._room(positive) / positive / math.gamma(self._half), 0.0 * energy)

    def levels_below(self, energy: Values) -> Values:
        return choose(energy > 0.0, 0.0 * energy + 1.0, 0.0 * energy)

    def warm_chemical_potential(self, density: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        return thermal_energy * inverse_fermi_dirac_integral(self._half - 1.0, density / self._room(thermal_energy))

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        integral = fermi_dirac_integral(self._half - 1.0, chemical_potential / thermal_energy)
        return self._room(thermal_energy) * integral

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        integral = fermi_dirac_integral(self._half - 2.0, chemical_potential / thermal_energy)
        return self._room(thermal_energy) / thermal_energy * integral

    def energy_density(self, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        integral = fermi_dirac_integral(self._half, chemical_potential / thermal_energy)
        return self._room(thermal_energy) * self._half * thermal_energy * integral

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        start = largest(energy, 0.0) / thermal_energy
        return self._room(thermal_energy) * fermi_dirac_tail(
            self._half - 1.0, chemical_potential / thermal_energy, start
        )

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        width = _like(broadening.width, energy)
        density, integrated = spread_level(self.free_dimensions, broadening.kind, energy / width)
        room = self._room(width + 0.0 * energy)
        return room / width * density, room * integrated

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        return Ladder(np.ones((1, 1), dtype=np.int64), np.zeros(1), np.ones(1)), 1


def _rows(values: Values, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Values:
    return values[rows] if isinstance(values, np.ndarray) else values


def _like(values: Values, energy: Values) -> Values:
    """Return per-sample values as a column where the energies are rows of a curve."""
    if isinstance(values, np.ndarray) and isinstance(energy, np.ndarray) and energy.ndim == 2:
        return values[:, None]
    return values


def _half_power(values: Values, dimensions: int) -> Values:
    """Return the power D/2 by a product and a square root, which round less than a general power."""
    if dimensions == 2:
        return values
    root = np.sqrt(values) if isinstance(values, np.ndarray) else math.sqrt(values)
    return root if dimensions == 1 else values * root
