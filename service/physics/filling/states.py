"""What every geometry can do once its states are known: the one interface between the ladders and the calculators.

An electron gas here is three things: free dimensions D, a ladder of levels from the confinement, and a band. A class
of states joins the three for N samples of one geometry, and answers in *natural* densities, per length to the power D:
per volume in bulk (D = 3), per area in a film (2), per length in a wire (1), a plain count in a box (0).
"""

from abc import ABC, abstractmethod
from collections.abc import Callable
from typing import Self

import numpy as np
from numpy.typing import NDArray

from service.physics.broadening import Broadening
from service.physics.levels.source import Ladder
from service.physics.values import Values


class States(ABC):
    """The single-particle states of one sample (float parameters) or of N samples (arrays of shape (N,)).

    Every energy in and out, the chemical potential too, is measured from the *lowest level*, so that a cold sample with
    one filled subband keeps its digits; only `lowest_level` itself is measured from the band edge. A function of energy
    takes, for one sample, a float or an array of shape (M,), and for N samples an array of shape (N,), paired, or
    (N, M), one row a sample; it returns the same shape. Densities are natural: per length to the power
    `free_dimensions`.
    """

    free_dimensions: int
    method: str | list[str]
    """The way in which the last solve was done; one word for each of N samples where they may differ."""

    relative_error_bound: Values
    """Bound on the error of the chemical potential over max(|mu|, kT), mu from the band edge."""

    @property
    @abstractmethod
    def lowest_level(self) -> Values:
        """Energy of the lowest level, or of the bottom of the lowest subband, above the band edge [J]."""

    @abstractmethod
    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        """Return the states of some of N samples."""

    def work(self, density: Values, temperature: Values) -> Values:
        """Return about how many levels a solve adds up, before any is listed; 0 where it is in closed form [1]."""
        return 0.0

    @abstractmethod
    def fermi_energy(self, density: Values) -> Values:
        """Return the highest filled energy at T = 0 [J], in closed form or exactly from the levels."""

    def ground_chemical_potential(self, density: Values) -> Values:
        """Return the limit of the chemical potential for T -> 0 [J]; differs from the Fermi energy in a box."""
        return self.fermi_energy(density)

    @abstractmethod
    def ground_energy_density(self, density: Values) -> Values:
        """Return the total energy at T = 0 per natural measure [J m^-D]."""

    @abstractmethod
    def states_below(self, energy: Values) -> Values:
        """Return the states with energy up to and including `energy`, spin and valleys counted [m^-D]."""

    @abstractmethod
    def density_of_states(self, energy: Values) -> Values:
        """Return the sharp density of states [J^-1 m^-D]; a level whose edge is at `energy` counts as open."""

    @abstractmethod
    def levels_below(self, energy: Values) -> Values:
        """Return how many orbital levels have their edge strictly below `energy` (in a box: up to and including)."""

    def levels_estimate(self, highest: Values) -> Values:
        """Return about how many levels each point of a curve up to an energy [J] adds up; 0 in closed form [1]."""
        return 0.0

    def shows_edges(self, highest: float) -> bool:
        """Tell whether a curve up to an energy [J] shows edges where the sharp density of states diverges."""
        return self.free_dimensions == 1

    @abstractmethod
    def warm_chemical_potential(self, density: Values, temperature: Values) -> Values:
        """Return the chemical potential at T > 0 [J]."""

    @abstractmethod
    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        """Return the density at T > 0 [m^-D]."""

    @abstractmethod
    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        """Return dn/dmu at T > 0 [J^-1 m^-D]."""

    @abstractmethod
    def energy_density(self, chemical_potential: Values, temperature: Values) -> Values:
        """Return the total energy at T > 0 per natural measure [J m^-D]."""

    @abstractmethod
    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> Values:
        """Return the density of carriers with energy above `energy`, at T > 0, without cancellation [m^-D]."""

    @abstractmethod
    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        """Return the broadened density of states [J^-1 m^-D] and its integral [m^-D].

        The integral runs from below all states; for a Lorentzian, whose tail has no finite integral in two and three
        dimensions, from the lowest level.
        """

    @abstractmethod
    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        """Return, for one sample, the first levels and how many distinct ones lie up to `highest`.

        The ladder holds at most `most` levels, and at least the lowest.
        """

    def chemical_potential(self, density: Values, temperature: Values) -> Values:
        """Return the chemical potential at T >= 0, T = 0 being a case of its own [J]."""
        return self._by_temperature(
            temperature,
            (density,),
            lambda states, density: states.ground_chemical_potential(density),
            lambda states, temperature, density: states.warm_chemical_potential(density, temperature),
        )

    def total_energy_density(self, density: Values, chemical_potential: Values, temperature: Values) -> Values:
        """Return the total energy at T >= 0 per natural measure, from the lowest level [J m^-D]."""
        return self._by_temperature(
            temperature,
            (density, chemical_potential),
            lambda states, density, _: states.ground_energy_density(density),
            lambda states, temperature, _, potential: states.energy_density(potential, temperature),
        )

    def excited_density(self, fermi_energy: Values, chemical_potential: Values, temperature: Values) -> Values:
        """Return the carriers above the Fermi energy at T >= 0, none at T = 0 [m^-D]."""
        return self._by_temperature(
            temperature,
            (fermi_energy, chemical_potential),
            lambda states, filled, _: 0.0 * filled,
            lambda states, temperature, filled, potential: states.carriers_above(filled, potential, temperature),
        )

    def _by_temperature(
        self,
        temperature: Values,
        arguments: tuple[Values, ...],
        ground: Callable[..., Values],
        warm: Callable[..., Values],
    ) -> Values:
        """Send the samples at T = 0 one way and the others another, and put the results together."""
        if not isinstance(temperature, np.ndarray):
            return ground(self, *arguments) if temperature == 0.0 else warm(self, temperature, *arguments)
        cold = temperature == 0.0
        if not cold.any():
            return warm(self, temperature, *arguments)
        if cold.all():
            return ground(self, *arguments)
        arrays = [np.broadcast_to(argument, temperature.shape) for argument in arguments]
        result = np.empty(temperature.shape)
        result[cold] = ground(self.take(cold), *(array[cold] for array in arrays))
        result[~cold] = warm(self.take(~cold), temperature[~cold], *(array[~cold] for array in arrays))
        return result
