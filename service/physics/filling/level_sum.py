"""Any ladder of one sample, filled level by level: films and wires whose levels follow no simpler law."""

import math
from collections.abc import Callable
from typing import Self

import numpy as np
from numpy.typing import NDArray

from service.physics.broadening import Broadening, spread_level
from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail, inverse_fermi_dirac_integral
from service.physics.filling.states import Ladder, States
from service.physics.levels.source import LevelSource
from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values

REACH = 40.0
"""A level this many kT above the chemical potential holds exp(-40) = 4e-18 of its room."""

_CHUNK = 1 << 20
"""Energies times levels at a time, so that a curve over many levels stays within a few ten megabytes."""


LevelFunction = Callable[[FloatArray], FloatArray]
"""What one level gives at energies above its edge, element by element."""


class LevelSum(States):
    r"""The states of one sample's ladder, each level a free gas of one or two dimensions on its edge.

    .. math::

        n = \sum_i g \Bigl(\frac{m k T}{2 \pi \hbar^2}\Bigr)^{D/2} F_{D/2-1}\Bigl(\frac{\mu - E_i}{kT}\Bigr)

    Parameters
    ----------
    source : LevelSource
        The ladder.
    free_dimensions : int
        D: 2 for a film, 1 for a wire [1].
    free_mass : float
        Density-of-states mass of the free directions [kg].
    degeneracy : float
        g, spin degeneracy times valleys [1].
    """

    method = "level-sum"
    relative_error_bound = 1e-13

    def __init__(self, source: LevelSource, free_dimensions: int, free_mass: float, degeneracy: float) -> None:
        self.free_dimensions = free_dimensions
        self._source = source
        self._half = free_dimensions / 2.0
        self._per_energy = degeneracy * math.pow(free_mass / (2.0 * math.pi * REDUCED_PLANCK**2), self._half)

    @property
    def lowest_level(self) -> float:
        return self._source.lowest

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        raise TypeError("one sample has no rows to take")

    def work(self, density: Values, temperature: Values) -> float:
        """Return about how many levels a solve adds up [1]."""
        reach = self._alone(float(density)) + REACH * BOLTZMANN * float(temperature)
        return self._source.count_estimate(reach)

    def fermi_energy(self, density: Values) -> float:
        density = float(density)
        high = self._alone(density)
        edges = self._source.edges_up_to(high)

        def excess(energy: Values) -> tuple[Values, Values]:
            above = energy - edges[edges < energy]
            filled = self._per_energy * float(np.sum(above**self._half)) / math.gamma(self._half + 1.0)
            slope = self._per_energy * float(np.sum(above ** (self._half - 1.0))) / math.gamma(self._half)
            return filled / density - 1.0, slope / density

        return float(increasing_root(excess, 0.0, high, 1e-16 * high))

    def _alone(self, density: float) -> float:
        """Return the Fermi energy if the lowest level had to hold all carriers: above the true one."""
        return math.pow(density * math.gamma(self._half + 1.0) / self._per_energy, 1.0 / self._half)

    def ground_energy_density(self, density: Values) -> float:
        filled = self.fermi_energy(density)
        edges = self._source.edges_up_to(filled)
        above = np.maximum(filled - edges, 0.0)
        population = self._per_energy * above**self._half / math.gamma(self._half + 1.0)
        return float(np.sum(population * (edges + self._half / (self._half + 1.0) * above)))

    def states_below(self, energy: Values) -> Values:
        return self._over_levels(
            energy, lambda above: np.maximum(above, 0.0) ** self._half / math.gamma(self._half + 1.0)
        )

    def density_of_states(self, energy: Values) -> Values:
        def level(above: FloatArray) -> FloatArray:
            power = self._half - 1.0
            if power == 0.0:
                return (above >= 0.0).astype(np.float64)
            return np.power(above, power, out=np.zeros_like(above), where=above > 0.0) / math.gamma(self._half)

        return self._over_levels(energy, level)

    def levels_below(self, energy: Values) -> Values:
        edges = self._source.edges_up_to(float(np.max(energy)))
        below = np.searchsorted(edges, energy, side="left").astype(np.float64)
        return below if isinstance(energy, np.ndarray) else float(below)

    def warm_chemical_potential(self, density: Values, temperature: Values) -> float:
        density, thermal_energy = float(density), BOLTZMANN * float(temperature)
        room = self._per_energy * math.pow(thermal_energy, self._half)
        high = thermal_energy * float(inverse_fermi_dirac_integral(self._half - 1.0, density / room))
        edges = self._source.edges_up_to(max(high, 0.0) + REACH * thermal_energy) / thermal_energy

        def excess(eta: Values) -> tuple[Values, Values]:
            filled = room * float(np.sum(fermi_dirac_integral(self._half - 1.0, eta - edges)))
            slope = room * float(np.sum(fermi_dirac_integral(self._half - 2.0, eta - edges)))
            return math.log(filled / density), slope / filled

        eta, step = high / thermal_energy, 1.0
        low = eta - step
        while excess(low)[0] > 0.0:
            step *= 2.0
            low -= step
        return thermal_energy * float(increasing_root(excess, low, eta, 1e-15 * max(1.0, abs(low))))

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal_sum(chemical_potential, temperature, self._half - 1.0)

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal_sum(chemical_potential, temperature, self._half - 2.0) / (BOLTZMANN * temperature)

    def _thermal_sum(self, chemical_potential: Values, temperature: Values, order: float) -> Values:
        thermal_energy = BOLTZMANN * float(temperature)
        room = self._per_energy * math.pow(thermal_energy, self._half)
        total = self._over_levels(
            chemical_potential,
            lambda above: np.asarray(fermi_dirac_integral(order, above / thermal_energy)),
            REACH * thermal_energy,
        )
        return total * room

    def energy_density(self, chemical_potential: Values, temperature: Values) -> float:
        potential, thermal_energy = float(chemical_potential), BOLTZMANN * float(temperature)
        edges = self._source.edges_up_to(max(potential, 0.0) + REACH * thermal_energy)
        eta = (potential - edges) / thermal_energy
        population = np.asarray(fermi_dirac_integral(self._half - 1.0, eta))
        kinetic = self._half * thermal_energy * np.asarray(fermi_dirac_integral(self._half, eta))
        return self._per_energy * math.pow(thermal_energy, self._half) * float(np.sum(edges * population + kinetic))

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> float:
        energy, potential, thermal_energy = float(energy), float(chemical_potential), BOLTZMANN * float(temperature)
        edges = self._source.edges_up_to(max(potential, energy, 0.0) + REACH * thermal_energy)
        start = np.maximum(energy - edges, 0.0) / thermal_energy
        tails = fermi_dirac_tail(self._half - 1.0, (potential - edges) / thermal_energy, start)
        return self._per_energy * math.pow(thermal_energy, self._half) * float(np.sum(tails))

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        width = float(broadening.width)
        if broadening.kind == "lorentzian" and not self._source.closes:
            raise ValueError("a Lorentzian's tail over a ladder without end has no finite sum")

        def shape(above: FloatArray, part: int) -> FloatArray:
            return np.asarray(spread_level(self.free_dimensions, broadening.kind, above / width)[part])

        density = self._over_levels(energy, lambda above: shape(above, 0), REACH * width)
        integrated = self._over_levels(energy, lambda above: shape(above, 1), REACH * width)
        return density * width ** (self._half - 1.0), integrated * width**self._half

    def _over_levels(self, energy: Values, level: LevelFunction, reach: float = 0.0) -> Values:
        """Return the sum over levels of a function of the energy above each edge, a chunk of energies at a time."""
        energies = np.atleast_1d(np.asarray(energy, dtype=np.float64))
        edges = self._source.edges_up_to(max(float(energies.max()), 0.0) + reach)
        rows = max(1, _CHUNK // edges.size)
        flat = energies.ravel()
        total = np.concatenate(
            [level(flat[at : at + rows, None] - edges).sum(axis=1) for at in range(0, flat.size, rows)]
        )
        result = self._per_energy * total.reshape(energies.shape)
        return result if isinstance(energy, np.ndarray) else float(result[0])

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        edges = self._source.edges_up_to(highest)
        listed = edges[:most]
        numbers = np.arange(1, listed.size + 1)[:, None]
        return Ladder(numbers, listed, np.ones(listed.size)), edges.size
