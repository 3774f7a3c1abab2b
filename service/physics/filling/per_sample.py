"""Many samples of a geometry that is solved one by one: the same interface, a loop inside."""

from collections.abc import Callable, Sequence
from typing import Any, Self

import numpy as np
from numpy.typing import NDArray

from service.physics.broadening import Broadening
from service.physics.filling.states import States
from service.physics.levels.source import Ladder
from service.physics.values import FloatArray, Values


class PerSample(States):
    """The states of N samples, each with states of its own.

    Parameters
    ----------
    samples : sequence of States
        One sample's states each, of one geometry.
    """

    def __init__(self, samples: Sequence[States]) -> None:
        self._samples = tuple(samples)
        self.free_dimensions = samples[0].free_dimensions

    @property
    def method(self) -> list[str]:  # type: ignore[override]
        """Each sample's own way of its last solve."""
        return [str(sample.method) for sample in self._samples]

    @property
    def relative_error_bound(self) -> Values:  # type: ignore[override]
        """Each sample's own bound, after its last solve [1]."""
        return np.array([sample.relative_error_bound for sample in self._samples], dtype=np.float64)

    @property
    def lowest_level(self) -> Values:
        return np.array([sample.lowest_level for sample in self._samples], dtype=np.float64)

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        return type(self)([self._samples[row] for row in np.arange(len(self._samples))[rows]])

    def _each(self, function: Callable[..., Any], *arguments: Values) -> FloatArray:
        """Return a function of each sample's states and its own share of the arguments, stacked."""
        shares = [
            argument if isinstance(argument, np.ndarray) else np.full(len(self._samples), argument)
            for argument in arguments
        ]
        columns = [[share[row] if share.ndim > 1 else float(share[row]) for share in shares] for row in self._places()]
        return np.array([function(sample, *own) for sample, own in zip(self._samples, columns, strict=True)])

    def _places(self) -> range:
        return range(len(self._samples))

    def work(self, density: Values, temperature: Values) -> Values:
        return self._each(lambda states, *own: states.work(*own), density, temperature)

    def fermi_energy(self, density: Values) -> Values:
        return self._each(lambda states, own: states.fermi_energy(own), density)

    def ground_chemical_potential(self, density: Values) -> Values:
        return self._each(lambda states, own: states.ground_chemical_potential(own), density)

    def ground_energy_density(self, density: Values) -> Values:
        return self._each(lambda states, own: states.ground_energy_density(own), density)

    def states_below(self, energy: Values) -> Values:
        return self._each(lambda states, own: states.states_below(own), energy)

    def density_of_states(self, energy: Values) -> Values:
        return self._each(lambda states, own: states.density_of_states(own), energy)

    def levels_below(self, energy: Values) -> Values:
        return self._each(lambda states, own: states.levels_below(own), energy)

    def levels_estimate(self, highest: Values) -> Values:
        return self._each(lambda states, own: states.levels_estimate(own), highest)

    def shows_edges(self, highest: float) -> bool:
        return any(sample.shows_edges(highest) for sample in self._samples)

    def warm_chemical_potential(self, density: Values, temperature: Values) -> Values:
        return self._each(lambda states, *own: states.warm_chemical_potential(*own), density, temperature)

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._each(lambda states, *own: states.carrier_density(*own), chemical_potential, temperature)

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._each(lambda states, *own: states.compressibility(*own), chemical_potential, temperature)

    def energy_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._each(lambda states, *own: states.energy_density(*own), chemical_potential, temperature)

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> Values:
        return self._each(lambda states, *own: states.carriers_above(*own), energy, chemical_potential, temperature)

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        both = self._each(
            lambda states, own, width: states.spread_states(own, Broadening(broadening.kind, width)),
            energy,
            broadening.width,
        )
        return both[:, 0], both[:, 1]

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        raise TypeError("the ladder is that of one sample")


def one_or_many(build: Callable[..., States], *arguments: Values) -> States:
    """Return one sample's states from floats, or N samples' from arguments of which some are arrays."""
    if not any(isinstance(argument, np.ndarray) for argument in arguments):
        return build(*arguments)
    columns = [column.tolist() for column in np.broadcast_arrays(*arguments)]
    return PerSample([build(*own) for own in zip(*columns, strict=True)])
