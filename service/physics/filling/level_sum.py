"""Any ladder of one sample, filled level by level, each level a free gas of one or two dimensions on its edge."""

import math

import numpy as np

from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail, inverse_fermi_dirac_integral
from service.physics.filling.level_curve import LevelFunction, over_levels, spread
from service.physics.filling.listed import ListedStates
from service.physics.levels.source import LevelSource
from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values

REACH = 40.0
"""A level this many kT above the chemical potential holds exp(-40) = 4e-18 of its room."""


class LevelSum(ListedStates):
    r"""The states of one sample's ladder of subbands.

    .. math::

        n = \sum_i d_i\, g \Bigl(\frac{m k T}{2 \pi \hbar^2}\Bigr)^{D/2} F_{D/2-1}\Bigl(\frac{\mu - E_i}{kT}\Bigr)

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

    Notes
    -----
    A sum of positive terms: its rounding is that of its terms. The root is found to 1e-15 of its own size.

    References
    ----------
    J. H. Davies, The Physics of Low-dimensional Semiconductors (1998), sections 4.5 and 4.8; NIST DLMF 25.12.16.
    """

    relative_error_bound = 1e-13

    def __init__(self, source: LevelSource, free_dimensions: int, free_mass: float, degeneracy: float) -> None:
        self.free_dimensions = free_dimensions
        super().__init__(source, REACH)
        self._half = free_dimensions / 2.0
        self._per_energy = degeneracy * math.pow(free_mass / (2.0 * math.pi * REDUCED_PLANCK**2), self._half)

    def _alone(self, density: float) -> float:
        """Return the Fermi energy if the lowest level had to hold all carriers: not below the true one."""
        return math.pow(density * math.gamma(self._half + 1.0) / self._per_energy, 1.0 / self._half)

    def _most(self, density: float) -> float:
        """Return an energy not far above the Fermi energy, found on Weyl's count before any level is listed."""
        alone, weyl = self._alone(density), self._source.weyl
        if weyl is None:
            return alone
        # Twice the smooth density at an energy covers the levels' own ripple, and then some.
        energy = self._source.lowest
        while energy < alone and self._smooth_density(energy + self._source.lowest, weyl) < 2.0 * density:
            energy *= 1.1
        return min(alone, energy)

    def _smooth_density(self, energy: float, weyl: tuple[float, ...]) -> float:
        """Return the density below an energy, each term of Weyl's count smeared over the free dimensions."""
        total = 0.0
        for power, term in enumerate(weyl):
            exponent = power / 2.0 + self._half
            total += term * math.gamma(power / 2.0 + 1.0) / math.gamma(exponent + 1.0) * energy**exponent
        return self._per_energy * total

    def fermi_energy(self, density: Values) -> float:
        density = float(density)
        high = self._most(density)
        if high == 0.0:
            return 0.0
        ladder = self._levels(high)

        def excess(energy: Values) -> tuple[float, float]:
            open_levels = ladder.edge < energy
            above, weight = energy - ladder.edge[open_levels], ladder.degeneracy[open_levels]
            filled = self._per_energy * float(np.dot(weight, above**self._half)) / math.gamma(self._half + 1.0)
            slope = self._per_energy * float(np.dot(weight, above ** (self._half - 1.0))) / math.gamma(self._half)
            return filled / density - 1.0, slope / density

        while excess(high)[0] < 0.0:
            high *= 1.5
            ladder = self._levels(high)
        return float(increasing_root(excess, 0.0, high, 1e-16 * high))

    def ground_energy_density(self, density: Values) -> float:
        filled = self.fermi_energy(density)
        ladder = self._levels(filled)
        above = np.maximum(filled - ladder.edge, 0.0)
        population = self._per_energy * ladder.degeneracy * above**self._half / math.gamma(self._half + 1.0)
        return float(np.dot(population, ladder.edge + self._half / (self._half + 1.0) * above))

    def states_below(self, energy: Values) -> Values:
        gamma = math.gamma(self._half + 1.0)
        return self._per_energy * self._over(energy, 0.0, lambda above: np.maximum(above, 0.0) ** self._half / gamma)

    def density_of_states(self, energy: Values) -> Values:
        power, gamma = self._half - 1.0, math.gamma(self._half)

        def level(above: FloatArray) -> FloatArray:
            if power == 0.0:
                return (above >= 0.0).astype(np.float64)
            return np.power(above, power, out=np.zeros_like(above), where=above > 0.0) / gamma

        return self._per_energy * self._over(energy, 0.0, level)

    def levels_below(self, energy: Values) -> Values:
        ladder = self._levels(max(0.0, float(np.max(energy))))
        counts = np.concatenate([[0.0], np.cumsum(ladder.degeneracy)])
        below = counts[np.searchsorted(ladder.edge, energy, side="left")]
        return below if isinstance(energy, np.ndarray) else float(below)

    def warm_chemical_potential(self, density: Values, temperature: Values) -> float:
        density, thermal_energy = float(density), BOLTZMANN * float(temperature)
        room = self._per_energy * math.pow(thermal_energy, self._half)
        ceiling = thermal_energy * float(inverse_fermi_dirac_integral(self._half - 1.0, density / room))
        high = min(ceiling, self._most(density) + thermal_energy)
        ladder = self._levels(max(high, 0.0) + REACH * thermal_energy)
        edges = ladder.edge / thermal_energy

        def excess(eta: Values) -> tuple[float, float]:
            part = fermi_dirac_integral(self._half - 1.0, eta - edges)
            filled = room * float(np.dot(ladder.degeneracy, part))
            part = fermi_dirac_integral(self._half - 2.0, eta - edges)
            return math.log(filled / density), room * float(np.dot(ladder.degeneracy, part)) / filled

        while high < ceiling and excess(high / thermal_energy)[0] < 0.0:
            high = min(ceiling, max(1.5 * high, high + thermal_energy))
            ladder = self._levels(max(high, 0.0) + REACH * thermal_energy)
            edges = ladder.edge / thermal_energy
        step = 1.0
        low = high / thermal_energy - step
        while excess(low)[0] > 0.0:
            step *= 2.0
            low -= step
        return thermal_energy * float(increasing_root(excess, low, high / thermal_energy, 1e-15 * max(1.0, abs(low))))

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal_sum(chemical_potential, temperature, self._half - 1.0)

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal_sum(chemical_potential, temperature, self._half - 2.0) / (BOLTZMANN * temperature)

    def _thermal_sum(self, chemical_potential: Values, temperature: Values, order: float) -> Values:
        thermal_energy = BOLTZMANN * float(temperature)

        def level(above: FloatArray) -> FloatArray:
            return np.asarray(fermi_dirac_integral(order, above / thermal_energy))

        room = self._per_energy * math.pow(thermal_energy, self._half)
        return room * self._over(chemical_potential, REACH * thermal_energy, level)

    def energy_density(self, chemical_potential: Values, temperature: Values) -> float:
        potential, thermal_energy = float(chemical_potential), BOLTZMANN * float(temperature)
        ladder = self._levels(max(potential, 0.0) + REACH * thermal_energy)
        eta = (potential - ladder.edge) / thermal_energy
        population = np.asarray(fermi_dirac_integral(self._half - 1.0, eta))
        kinetic = self._half * thermal_energy * np.asarray(fermi_dirac_integral(self._half, eta))
        room = self._per_energy * math.pow(thermal_energy, self._half)
        return room * float(np.dot(ladder.degeneracy, ladder.edge * population + kinetic))

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> float:
        energy, potential, thermal_energy = float(energy), float(chemical_potential), BOLTZMANN * float(temperature)
        ladder = self._levels(max(potential, energy, 0.0) + REACH * thermal_energy)
        start = np.maximum(energy - ladder.edge, 0.0) / thermal_energy
        tails = np.asarray(fermi_dirac_tail(self._half - 1.0, (potential - ladder.edge) / thermal_energy, start))
        return self._per_energy * math.pow(thermal_energy, self._half) * float(np.dot(ladder.degeneracy, tails))

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        width = float(broadening.width)
        density, integrated = spread(self._source, self._levels, self.free_dimensions, energy, broadening)
        room = self._per_energy * math.pow(width, self._half)
        return room / width * density, room * integrated

    def _over(self, energy: Values, reach: float, level: LevelFunction) -> Values:
        """Return the sum over the levels within reach of each energy."""
        ladder = self._levels(max(float(np.max(energy)), 0.0) + reach)
        return over_levels(ladder, energy, level)
