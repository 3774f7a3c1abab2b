"""Groups of valleys with their own masses and ladders, filled to one common level."""

from collections.abc import Callable, Iterator, Sequence
from functools import reduce
from typing import Self

import numpy as np
from numpy.typing import NDArray

from service.physics.broadening import Broadening
from service.physics.filling.shell_balance import FULL_SHELL
from service.physics.filling.states import States
from service.physics.levels.source import Ladder
from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values, choose, largest, logarithm, smallest


class ValleyGroups(States):
    r"""The states of several groups of valleys that share one chemical potential.

    .. math:: n(\mu) = \sum_g n_g(\mu - E_g), \qquad E_g = E_{1,g} - \min_h E_{1,h}

    Parameters
    ----------
    groups : sequence of States
        The states of each group, of one geometry and the same samples.
    """

    def __init__(self, groups: Sequence[States]) -> None:
        self._groups = tuple(groups)
        self.free_dimensions = groups[0].free_dimensions
        self._lowest = reduce(smallest, [group.lowest_level for group in groups])
        self._offsets = [group.lowest_level - self._lowest for group in groups]

    @property
    def method(self) -> str | list[str]:  # type: ignore[override]
        """The way of the group that approximates or adds up the most."""
        methods = [group.method for group in self._groups]
        if isinstance(methods[0], list):
            return [_roughest(own) for own in zip(*methods, strict=True)]
        return _roughest([str(method) for method in methods])

    @property
    def relative_error_bound(self) -> Values:  # type: ignore[override]
        """The largest bound of a group, and no less than the root's own tolerance [1]."""
        # The root's own tolerance stands beside the largest bound of a group.
        return reduce(largest, [1e-14, *(group.relative_error_bound for group in self._groups)])

    @property
    def lowest_level(self) -> Values:
        return self._lowest

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        return type(self)([group.take(rows) for group in self._groups])

    def work(self, density: Values, temperature: Values) -> Values:
        return self._total(lambda group, _: group.work(density, temperature))

    def shares(self, density: Values, chemical_potential: Values, temperature: Values) -> list[Values]:
        """Return what share of the carriers each group holds, for one temperature above zero or for T = 0 [1]."""
        if isinstance(temperature, np.ndarray):
            raise TypeError("shares are those of one sample")
        held = [
            group.states_below(chemical_potential - offset)
            if temperature == 0.0
            else group.carrier_density(chemical_potential - offset, temperature)
            for group, offset in self._with_offsets()
        ]
        return [part / density for part in held]

    def _with_offsets(self) -> Iterator[tuple[States, Values]]:
        return zip(self._groups, self._offsets, strict=True)

    def _total(self, part: Callable[[States, Values], Values]) -> Values:
        total: Values = 0.0
        for group, offset in self._with_offsets():
            total = total + part(group, offset)
        return total

    def fermi_energy(self, density: Values) -> Values:
        high = reduce(smallest, [offset + group.fermi_energy(density) for group, offset in self._with_offsets()])
        nearly_all = density * (1.0 - FULL_SHELL) if self.free_dimensions == 0 else density

        def excess(energy: Values) -> tuple[Values, Values]:
            filled = self.states_below(energy)
            if self.free_dimensions == 0:
                return choose(filled < nearly_all, -1.0, 1.0), 0.0 * filled
            return filled / density - 1.0, self.density_of_states(energy) / density

        return increasing_root(excess, 0.0 * high, high, 1e-16 * high)

    def ground_chemical_potential(self, density: Values) -> Values:
        filled = self.fermi_energy(density)
        if self.free_dimensions != 0:
            return filled
        room = self.states_below(filled)
        full = room <= density * (1.0 + FULL_SHELL)
        return choose(full, 0.5 * (filled + self._next_level(filled, room)), filled)

    def _next_level(self, filled: Values, room: Values) -> Values:
        """Return the lowest level above one, by doubling the search until every sample has found room."""
        reach: Values = largest(filled, 1e-3 * self._lowest)
        while np.any(self.states_below(filled + reach) <= room):
            reach = 2.0 * reach
        return increasing_root(
            lambda energy: (choose(self.states_below(energy) <= room, -1.0, 1.0), 0.0 * energy),
            filled,
            filled + reach,
            1e-16 * (filled + reach),
        )

    def ground_energy_density(self, density: Values) -> Values:
        filled = self.fermi_energy(density)
        energy: Values = 0.0
        held: Values = 0.0
        for group, offset in self._with_offsets():
            part = group.states_below(filled - offset)
            positive = choose(part > 0.0, part, 1.0)
            energy = energy + choose(part > 0.0, group.ground_energy_density(positive) + offset * part, 0.0)
            held = held + part
        # A part-filled shell of a box was counted whole: what is missing from it is missing at the Fermi energy.
        return energy - (held - density) * filled

    def states_below(self, energy: Values) -> Values:
        return self._total(lambda group, offset: group.states_below(energy - _like(offset, energy)))

    def density_of_states(self, energy: Values) -> Values:
        return self._total(lambda group, offset: group.density_of_states(energy - _like(offset, energy)))

    def levels_below(self, energy: Values) -> Values:
        return self._total(lambda group, offset: group.levels_below(energy - _like(offset, energy)))

    def levels_estimate(self, highest: Values) -> Values:
        return self._total(lambda group, _: group.levels_estimate(highest))

    def shows_edges(self, highest: float) -> bool:
        return any(group.shows_edges(highest) for group in self._groups)

    def warm_chemical_potential(self, density: Values, temperature: Values) -> Values:
        share = density / len(self._groups)
        high = reduce(
            smallest,
            [offset + group.warm_chemical_potential(density, temperature) for group, offset in self._with_offsets()],
        )
        low = reduce(
            smallest,
            [offset + group.warm_chemical_potential(share, temperature) for group, offset in self._with_offsets()],
        )

        def excess(potential: Values) -> tuple[Values, Values]:
            filled = self.carrier_density(potential, temperature)
            return logarithm(filled / density), self.compressibility(potential, temperature) / filled

        lowest, highest = np.abs(low), np.abs(high)
        return increasing_root(excess, low, high, 1e-16 * largest(lowest, highest))

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._total(lambda group, offset: group.carrier_density(chemical_potential - offset, temperature))

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._total(lambda group, offset: group.compressibility(chemical_potential - offset, temperature))

    def energy_density(self, chemical_potential: Values, temperature: Values) -> Values:
        def part(group: States, offset: Values) -> Values:
            potential = chemical_potential - offset
            return group.energy_density(potential, temperature) + offset * group.carrier_density(potential, temperature)

        return self._total(part)

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> Values:
        return self._total(
            lambda group, offset: group.carriers_above(energy - offset, chemical_potential - offset, temperature)
        )

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        density: Values = 0.0
        integrated: Values = 0.0
        for group, offset in self._with_offsets():
            shift = _like(offset, energy)
            part, below = group.spread_states(energy - shift, broadening)
            if broadening.kind == "lorentzian":
                # Its integral starts at the group's own lowest level: move the start to the common one.
                below = below - group.spread_states(0.0 * energy - shift, broadening)[1]
            density, integrated = density + part, integrated + below
        return density, integrated

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        """Return the merged ladder; the first quantum number is the group's place in the request, from zero."""
        numbers, edges, degeneracies, total = [], [], [], 0
        for place, (group, offset) in enumerate(self._with_offsets()):
            if float(offset) > max(highest, 0.0):
                continue
            ladder, count = group.ladder(highest - float(offset), most)
            numbers.append(np.insert(ladder.quantum_numbers, 0, place, axis=1))
            edges.append(ladder.edge + offset)
            degeneracies.append(ladder.degeneracy)
            total += count
        edge = np.concatenate(edges)
        order = np.argsort(edge, kind="stable")[:most]
        return Ladder(np.concatenate(numbers)[order], edge[order], np.concatenate(degeneracies)[order]), total


def _roughest(methods: Sequence[str]) -> str:
    """Return the method that says the most of what was approximated or added up."""
    return max(methods, key=("closed-form", "level-sum", "continuum").index)


def _like(offset: Values, energy: Values) -> Values:
    """Return per-sample offsets as a column where the energies are rows of a curve."""
    if isinstance(offset, np.ndarray) and isinstance(energy, np.ndarray) and energy.ndim == 2:
        column: FloatArray = offset[:, None]
        return column
    return offset
