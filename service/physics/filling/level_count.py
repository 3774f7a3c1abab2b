"""Any ladder of one sample whose levels are lines: a box or a sphere, filled with a count of carriers."""

import math

import numpy as np

from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN
from service.physics.filling.level_curve import LevelFunction, over_levels, spread
from service.physics.filling.listed import ListedStates
from service.physics.filling.shell_balance import FULL_SHELL, ShellBalance
from service.physics.levels.source import Ladder, LevelSource
from service.physics.values import FloatArray, Values

REACH = 45.0
"""Levels this many kT away from the chemical potential are full or empty to within exp(-45) = 3e-20."""


class LevelCount(ListedStates):
    r"""The states of one sample's ladder of lines.

    .. math:: N = \sum_i g\, d_i\, f(E_i)

    Parameters
    ----------
    source : LevelSource
        The ladder.
    degeneracy : float
        g, spin degeneracy times valleys [1].

    Notes
    -----
    Between a full shell and an empty one N(mu) - N is exactly zero in doubles over most of the gap. So the electrons
    above are set against the holes below, ln(electrons) = ln(holes), which keeps its slope at any temperature.

    References
    ----------
    R. Kubo, J. Phys. Soc. Jpn. 17, 975 (1962), for the occupation of discrete levels.
    """

    free_dimensions = 0
    relative_error_bound = 1e-12

    def __init__(self, source: LevelSource, degeneracy: float) -> None:
        super().__init__(source, REACH)
        self._degeneracy = degeneracy

    def _most(self, count: float) -> float:
        """Return an energy above the Fermi energy, found on Weyl's count before any level is listed."""
        assert self._source.weyl is not None
        energy = self._source.lowest
        while self._smooth_count(energy + self._source.lowest) < 1.5 * count + 10.0:
            energy *= 1.1
        return energy

    def _smooth_count(self, energy: float) -> float:
        assert self._source.weyl is not None
        root = math.sqrt(energy)
        return self._degeneracy * sum(term * root**power for power, term in enumerate(self._source.weyl))

    def _shells(self, count: float) -> tuple[Ladder, int, float]:
        """Return levels past the Fermi energy, the place of the highest that holds carriers, and what it holds."""
        energy = self._most(count)
        while True:
            ladder = self._levels(energy)
            room = self._degeneracy * np.cumsum(ladder.degeneracy)
            place = int(np.searchsorted(room, count * (1.0 - FULL_SHELL), side="left"))
            if place < room.size - 1:
                break
            energy *= 1.5
        held = count - (float(room[place - 1]) if place else 0.0)
        capacity = self._degeneracy * float(ladder.degeneracy[place])
        full = abs(float(room[place]) - count) <= FULL_SHELL * count
        return ladder, place, capacity if full else held

    def fermi_energy(self, density: Values) -> float:
        ladder, place, _ = self._shells(float(density))
        return float(ladder.edge[place])

    def ground_chemical_potential(self, density: Values) -> float:
        ladder, place, held = self._shells(float(density))
        if held < self._degeneracy * ladder.degeneracy[place]:
            return float(ladder.edge[place])
        return 0.5 * float(ladder.edge[place] + ladder.edge[place + 1])

    def ground_energy_density(self, density: Values) -> float:
        ladder, place, held = self._shells(float(density))
        below = self._degeneracy * float(np.dot(ladder.degeneracy[:place], ladder.edge[:place]))
        return below + held * float(ladder.edge[place])

    def states_below(self, energy: Values) -> Values:
        ladder = self._levels(max(0.0, float(np.max(energy))))
        room = np.concatenate([[0.0], self._degeneracy * np.cumsum(ladder.degeneracy)])
        below = room[np.searchsorted(ladder.edge, energy, side="right")]
        return below if isinstance(energy, np.ndarray) else float(below)

    def density_of_states(self, energy: Values) -> Values:
        raise ValueError("the states are lines: they have no density that is not broadened")

    def levels_below(self, energy: Values) -> Values:
        return self.states_below(energy) / self._degeneracy

    def warm_chemical_potential(self, density: Values, temperature: Values) -> float:
        thermal_energy = BOLTZMANN * float(temperature)
        ladder, place, held = self._shells(float(density))
        highest, following = float(ladder.edge[place]), float(ladder.edge[place + 1])
        ladder = self._levels(following + REACH * thermal_energy)
        first = int(np.searchsorted(ladder.edge, highest - REACH * thermal_energy))
        balance = ShellBalance(
            (ladder.edge[first:] - highest) / thermal_energy,
            self._degeneracy * ladder.degeneracy[first:],
            place - first,
            held,
        )
        return highest + thermal_energy * balance.root()

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal(chemical_potential, temperature, _occupied)

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal(chemical_potential, temperature, _fall) / (BOLTZMANN * temperature)

    def _thermal(self, chemical_potential: Values, temperature: Values, part: LevelFunction) -> Values:
        thermal_energy = BOLTZMANN * float(temperature)
        ladder = self._levels(max(0.0, float(np.max(chemical_potential))) + REACH * thermal_energy)
        return self._degeneracy * over_levels(ladder, chemical_potential, lambda above: part(above / thermal_energy))

    def energy_density(self, chemical_potential: Values, temperature: Values) -> float:
        potential, thermal_energy = float(chemical_potential), BOLTZMANN * float(temperature)
        ladder = self._levels(max(0.0, potential) + REACH * thermal_energy)
        filled = _occupied((potential - ladder.edge) / thermal_energy)
        return self._degeneracy * float(np.dot(ladder.degeneracy * ladder.edge, filled))

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> float:
        energy, potential, thermal_energy = float(energy), float(chemical_potential), BOLTZMANN * float(temperature)
        ladder = self._levels(max(0.0, potential, energy) + REACH * thermal_energy)
        first = int(np.searchsorted(ladder.edge, energy, side="right"))
        filled = _occupied((potential - ladder.edge[first:]) / thermal_energy)
        return self._degeneracy * float(np.dot(ladder.degeneracy[first:], filled))

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        density, integrated = spread(self._source, self._levels, 0, energy, broadening)
        return self._degeneracy * density / float(broadening.width), self._degeneracy * integrated


def _occupied(reduced: FloatArray) -> FloatArray:
    """Return f for (mu - E)/kT."""
    decay = np.exp(-np.abs(reduced))
    return np.asarray(np.where(reduced >= 0.0, 1.0, decay) / (1.0 + decay))


def _fall(reduced: FloatArray) -> FloatArray:
    """Return -df/dE times kT for (mu - E)/kT."""
    decay = np.exp(-np.abs(reduced))
    return np.asarray(decay / (1.0 + decay) ** 2)
