"""A film between hard walls: exact at any thickness, from one subband to ten million."""

import math
from typing import Self

import numpy as np
from numpy.typing import NDArray

from service.physics.bands import Band
from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.filling import film_curve, film_sum, film_sum_one, film_thermal
from service.physics.filling.film_ladder import (
    filled_levels,
    ground_energy,
    levels_up_to,
    sum_of_levels,
    sum_of_squared_levels,
)
from service.physics.filling.states import States
from service.physics.levels.source import Ladder
from service.physics.values import FloatArray, Values, choose, largest


class HardWallFilm(States):
    r"""The subbands of a film between hard walls, each a sheet of carriers.

    .. math::

        n_s = N_2 \sum_{i \ge 1} F_0\Bigl(\frac{\mu - E_i}{kT}\Bigr), \quad
        E_i = \frac{(\hbar \pi i / L)^2}{2 m_z}, \quad N_2 = \frac{g \sqrt{m_x m_y}\, kT}{2 \pi \hbar^2}

    Parameters
    ----------
    band : Band
        Masses along the film (x, y) and across it (z), and the degeneracy.
    thickness : float or ndarray, shape (N,)
        L, between the walls [m].

    Notes
    -----
    At T = 0 in closed form, the filled subbands counted exactly. Above, the sum over subbands by the shortest of three
    exact ways (`film_sum`); the chemical potential is good to 1e-14 of max(abs(mu), kT) against level sums of 30
    digits, and a cold film with one filled subband keeps its digits above that subband.

    References
    ----------
    J. H. Davies, The Physics of Low-dimensional Semiconductors (1998), section 4.5; NIST DLMF 25.12.16.
    """

    free_dimensions = 2
    method = "closed-form"
    relative_error_bound = 1e-13

    def __init__(self, band: Band, thickness: Values) -> None:
        self._band = band
        self._thickness = thickness
        self._scale: Values = (math.pi * REDUCED_PLANCK / thickness) ** 2 / (2.0 * band.mass_z)
        self._per_energy: Values = band.degeneracy * band.mass("xy") / (2.0 * math.pi * REDUCED_PLANCK**2)

    @property
    def lowest_level(self) -> Values:
        return self._scale

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        thickness = self._thickness[rows] if isinstance(self._thickness, np.ndarray) else self._thickness
        return type(self)(self._band.take(rows), thickness)

    def fermi_energy(self, density: Values) -> Values:
        load = density / (self._per_energy * self._scale)
        return ground_energy(load, filled_levels(load)) * self._scale

    def ground_energy_density(self, density: Values) -> Values:
        load = density / (self._per_energy * self._scale)
        count = filled_levels(load)
        filled = ground_energy(load, count)
        squares = count * filled**2 - sum_of_squared_levels(count)
        return 0.5 * self._per_energy * self._scale**2 * squares

    def states_below(self, energy: Values) -> Values:
        scale, per_energy = _like(self._scale, energy), _like(self._per_energy, energy)
        reduced = energy / scale
        count = levels_up_to(reduced)
        return per_energy * scale * (count * reduced - sum_of_levels(count))

    def density_of_states(self, energy: Values) -> Values:
        return _like(self._per_energy, energy) * levels_up_to(energy / _like(self._scale, energy))

    def levels_below(self, energy: Values) -> Values:
        reduced = energy / _like(self._scale, energy)
        count = levels_up_to(reduced)
        on_edge = (count > 0.0) & (count * count - 1.0 == reduced)
        return choose(on_edge, count - 1.0, count)

    def warm_chemical_potential(self, density: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        load = density / (self._per_energy * thermal_energy)
        spacing = self._scale / thermal_energy
        if isinstance(load, np.ndarray) or isinstance(spacing, np.ndarray):
            loads, spacings = np.broadcast_arrays(load, spacing)
            return thermal_energy * film_sum.reduced_chemical_potential(loads, spacings)
        return thermal_energy * film_sum_one.reduced_chemical_potential(load, spacing)

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        return self._per_energy * thermal_energy * self._sums(chemical_potential, thermal_energy)[0]

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._per_energy * self._sums(chemical_potential, BOLTZMANN * temperature)[1]

    def _sums(self, chemical_potential: Values, thermal_energy: Values) -> tuple[Values, Values]:
        eta, spacing = chemical_potential / thermal_energy, self._scale / thermal_energy
        if isinstance(eta, np.ndarray) or isinstance(spacing, np.ndarray):
            return film_sum.occupation_sum(*_flat(eta, spacing))
        return film_sum_one.occupation_sum(eta, spacing)[:2]

    def energy_density(self, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        eta, spacing = _flat(chemical_potential / thermal_energy, self._scale / thermal_energy)
        total = film_thermal.energy_sum(eta, spacing)
        return self._per_energy * thermal_energy**2 * _as(total, chemical_potential, temperature, self._scale)

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> Values:
        thermal_energy = BOLTZMANN * temperature
        eta, spacing = _flat(chemical_potential / thermal_energy, self._scale / thermal_energy)
        start = np.broadcast_to(np.asarray(largest(energy, 0.0) / thermal_energy), eta.shape)
        total = film_thermal.tail_sum(eta, spacing, start)
        return self._per_energy * thermal_energy * _as(total, energy, temperature, self._scale)

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        width = _like(broadening.width, energy)
        reduced, spacing = np.broadcast_arrays(energy / width, _like(self._scale, energy) / width)
        sums = _SHAPES[broadening.kind](np.ravel(reduced), np.ravel(spacing))
        per_energy = _like(self._per_energy, energy)
        density, integrated = (part.reshape(reduced.shape) for part in sums)
        if not isinstance(energy, np.ndarray):
            return per_energy * float(density), per_energy * width * float(integrated)
        return per_energy * density, per_energy * width * integrated

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        scale = float(self._scale)
        total = max(1, int(float(levels_up_to(highest / scale))))
        number = np.arange(1, min(total, most) + 1)
        edge = scale * (number - 1.0) * (number + 1.0)
        return Ladder(number[:, None], edge, np.ones(number.size)), total


def _thermal(energy: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    total, slope = film_sum.occupation_sum(energy, spacing)
    return slope, total


_SHAPES = {"thermal": _thermal, "gaussian": film_curve.gaussian, "lorentzian": film_curve.lorentzian}


def _flat(eta: Values, spacing: Values) -> tuple[FloatArray, FloatArray]:
    etas, spacings = np.broadcast_arrays(np.atleast_1d(eta), np.atleast_1d(spacing))
    return etas, spacings


def _as(total: FloatArray, *inputs: Values) -> Values:
    """Return an array's one element as a float where no input was an array."""
    return total if any(isinstance(value, np.ndarray) for value in inputs) else float(total[0])


def _like(values: Values, energy: Values) -> Values:
    """Return per-sample values as a column where the energies are rows of a curve."""
    if isinstance(values, np.ndarray) and isinstance(energy, np.ndarray) and energy.ndim == 2:
        return values[:, None]
    return values
