"""Hard-walled spheres: a count of carriers on the zeros of the spherical Bessel functions j_l."""

import math
from typing import Final

import numpy as np

from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.filling.clusters import Kernel
from service.physics.filling.round import RoundWalls
from service.physics.filling.round_curve import REACH, SHARP, occupations
from service.physics.filling.shell_balance import FULL_SHELL, ShellBalance
from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values

_MARGIN: Final = 128.0
"""Half the width of the range in which the highest occupied level is looked for at first: some thirty levels."""

_BALANCED: Final = 3000.0
"""Up to so many levels within reach, electrons are balanced against holes level by level; more are summed by clusters,
for then the chemical potential lies in a crowd of part-filled levels."""

JUST_BELOW: Final = 1.0 - 1e-12
"""A level found anew lies within the last digits of its first finding, and far from any other level."""

_HOLES_REACH: Final = 70.0
"""How far below the highest occupied level, in kT, holes are counted: the shells that bound a gap differ in size."""


class Sphere(RoundWalls):
    r"""The states of one hard-walled sphere, a line of 2 l + 1 orbital levels at each zero.

    .. math:: N = \sum_{l,n} g\,(2 l + 1)\, f(E_{l,n})

    Parameters
    ----------
    mass : float
        Effective mass, the same in every direction [kg].
    degeneracy : float
        g, spin degeneracy times valleys [1].
    diameter : float
        2 R [m].

    Notes
    -----
    At T = 0 the levels are counted, at any size: beyond k R = 1250 by the phases of the Bessel functions. Few levels
    within reach are balanced, electrons above against holes below, which stays exact down to T -> 0; many are summed
    by clusters. Beyond a million levels within reach the continuum serves, with a bound on what it leaves out.

    References
    ----------
    L. D. Landau, E. M. Lifshitz, Quantum Mechanics, 3rd ed. (1977), section 33; R. Kubo, J. Phys. Soc. Jpn. 17, 975
    (1962).
    """

    free_dimensions = 0

    def __init__(self, mass: float, degeneracy: float, diameter: float) -> None:
        super().__init__("sphere", mass, diameter, degeneracy)

    def fermi_energy(self, density: Values) -> float:
        return self._unit * self._shell(float(density) / self._room)[0]

    def ground_chemical_potential(self, density: Values) -> float:
        highest, following, held, capacity = self._shell(float(density) / self._room)
        return self._unit * (0.5 * (highest + following) if held >= capacity else highest)

    def _shell(self, filled: float) -> tuple[float, float, float, float]:
        """Return the highest occupied level, the next one, what the first holds and its capacity."""
        levels, margin = self._levels, _MARGIN
        if filled < 0.9 * levels.room[-1]:
            edges, degeneracy, room = levels.edge, levels.degeneracy, levels.room[1:]
        else:
            guess = self._smooth_potential(filled, 0.0)
            if not levels.reaches(guess, guess, SHARP):
                self._by_continuum(guess, 0.0)
                return guess, guess, 0.0, 1.0
            while True:
                edges, degeneracy, below = levels.between(guess - margin, guess + margin)
                room = below + np.cumsum(degeneracy)
                if below < filled * (1.0 - FULL_SHELL) and filled * (1.0 + FULL_SHELL) < room[-2]:
                    break
                margin *= 2.0
        place = int(np.searchsorted(room, filled * (1.0 - FULL_SHELL), side="left"))
        capacity = float(degeneracy[place])
        held = min(filled - (float(room[place]) - capacity), capacity)
        if room[place] <= filled * (1.0 + FULL_SHELL):
            held = capacity
        return float(edges[place]), float(edges[place + 1]), held, capacity

    def ground_energy_density(self, density: Values) -> float:
        filled = float(density) / self._room
        highest, _, held, _ = self._shell(filled)
        levels = self._levels
        if not levels.reaches(highest, highest, SHARP):
            from_edge = highest + levels.lowest
            total = self._continuum.ground_energy(from_edge) - levels.lowest * filled
            return self._unit * self._room * total
        if highest < levels.end:
            below = float(levels.energy[np.searchsorted(levels.edge, highest)])
        else:
            edges, weights = levels.points(highest, highest, SHARP)
            inside = edges < highest * JUST_BELOW
            below = float(np.sum(weights[inside] * edges[inside]))
        return self._unit * self._room * (below + held * highest)

    def states_below(self, energy: Values) -> Values:
        return self._room * self.levels_below(energy)

    def density_of_states(self, energy: Values) -> Values:
        raise ValueError("the states are lines: they have no density that is not broadened")

    def levels_below(self, energy: Values) -> Values:
        energies = np.atleast_1d(np.asarray(energy, dtype=np.float64)) / self._unit
        counts = self._levels.orbitals_below(energies, inclusive=True)
        return counts if isinstance(energy, np.ndarray) else float(counts[0])

    def warm_chemical_potential(self, density: Values, temperature: Values) -> float:
        filled, warmth = float(density) / self._room, self._warmth(temperature)
        levels, kernel = self._levels, occupations(warmth)
        guess = self._smooth_potential(filled, warmth)
        if not levels.reaches(guess, guess, kernel):
            return self._by_continuum(guess, warmth)
        highest, following, held, _ = self._shell(filled)
        # However cold, both levels themselves are within, found anew.
        low, high = highest * JUST_BELOW - _HOLES_REACH * warmth, following / JUST_BELOW + _HOLES_REACH * warmth
        if levels.entries_within(low, high) <= _BALANCED:
            return self._unit * self._balanced(highest, held, low, high, warmth)
        return self._unit * self._summed(filled, warmth, guess, kernel)

    def _balanced(self, highest: float, held: float, low: float, high: float, warmth: float) -> float:
        """Return the chemical potential from the levels within reach, one by one."""
        edges, degeneracy, _ = self._levels.between(low, high)
        place = int(np.searchsorted(edges, highest * JUST_BELOW))
        return highest + warmth * ShellBalance((edges - highest) / warmth, degeneracy, place, held).root()

    def _summed(self, filled: float, warmth: float, guess: float, kernel: Kernel) -> float:
        """Return the chemical potential, near a guess, where many levels are part-filled."""
        margin = max(_MARGIN, warmth)
        low = high = math.nan
        edges = weights = np.empty(0)

        def excess(potential: Values) -> tuple[float, float]:
            nonlocal low, high, edges, weights
            if not low <= potential <= high:
                low, high = float(potential) - margin, float(potential) + margin
                edges, weights = self._levels.points(low, high, kernel)
            eta = (potential - edges) / warmth
            held = float(np.sum(weights * np.asarray(fermi_dirac_integral(-1.0, eta))))
            if held <= 0.0:
                return -math.inf, 0.0
            slope = float(np.sum(weights * np.asarray(fermi_dirac_integral(-2.0, eta)))) / warmth
            return math.log(held / filled), slope / held

        reach = REACH * warmth + abs(guess)
        tolerance = 3e-8 * math.sqrt(warmth * max(abs(guess), warmth))
        return float(increasing_root(excess, guess - reach, guess + reach, tolerance, guess))

    def _held_above(self, start: FloatArray, potential: FloatArray, warmth: float) -> FloatArray:
        filled = np.asarray(fermi_dirac_integral(-1.0, potential / warmth))
        return np.where(start < 0.0, filled, 0.0)
