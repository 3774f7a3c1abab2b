"""What cylinders and spheres with hard walls share: sums over the zeros of Bessel functions, by few points each."""

import math
from abc import abstractmethod
from typing import Final, Self

import numpy as np
from numpy.typing import NDArray

from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.filling.clusters import Kernel
from service.physics.filling.round_continuum import RoundContinuum
from service.physics.filling.round_curve import REACH, Function, occupations, over_levels, spread
from service.physics.filling.round_ladder import ROUNDING, round_ladder
from service.physics.filling.states import States
from service.physics.levels.bessel_zeros import Family
from service.physics.levels.source import Ladder
from service.physics.values import FloatArray, Values

OWN_WORK: Final = 2000.0
"""What a solve costs beside its points, in levels of half a microsecond over its ten sums."""


class RoundWalls(States):
    r"""The states of one sample between round walls.

    .. math:: E = \frac{\hbar^2 x^2}{2 m R^2}, \qquad J_m(x) = 0 \text{ or } j_l(x) = 0

    Inside, energies are in units of hbar^2 / 2 m R^2, in which all samples of a shape have one ladder.

    Parameters
    ----------
    family : str
        ``cylinder`` or ``sphere`` [1].
    mass : float
        m, the same in every direction [kg].
    diameter : float
        2 R [m].
    room : float
        The natural density that goes with one unit of the sum over levels [m^-D].
    """

    method = "level-sum"

    def __init__(self, family: Family, mass: float, diameter: float, room: float) -> None:
        self.relative_error_bound = 1e-13
        self._half = self.free_dimensions / 2.0
        self._unit = (2.0 * REDUCED_PLANCK / diameter) ** 2 / (2.0 * mass)
        self._room = room
        self._levels = round_ladder(family)
        self._continuum = RoundContinuum(family)

    @property
    def lowest_level(self) -> float:
        return self._unit * self._levels.lowest

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        raise TypeError("one sample has no rows to take")

    def work(self, density: Values, temperature: Values) -> float:
        """Return about how many levels a solve adds up, its own cost counted as levels too [1]."""
        warmth = self._warmth(temperature)
        potential = self._smooth_potential(float(density) / self._room, 0.0)
        kernel = occupations(warmth)
        if not self._levels.reaches(potential, potential, kernel):
            return OWN_WORK
        return OWN_WORK + self._levels.points_estimate(potential, kernel)

    def levels_estimate(self, highest: Values) -> float:
        # Clusters stand for them, however many they are.
        return OWN_WORK

    def shows_edges(self, highest: float) -> bool:
        # Past the levels that are listed a curve shows the smooth states.
        return self.free_dimensions == 1 and highest <= self._unit * self._levels.end

    def _warmth(self, temperature: Values) -> float:
        return BOLTZMANN * float(temperature) / self._unit

    def _smooth_potential(self, filled: float, warmth: float) -> float:
        """Return the chemical potential of the smooth states, from the lowest level."""
        smooth = self._continuum
        potential = smooth.potential(filled, warmth) if warmth > 0.0 else smooth.ground_potential(filled)
        return potential - self._levels.lowest

    def _by_continuum(self, potential: float, warmth: float) -> float:
        """Return a chemical potential of the smooth states, and note what that costs in accuracy."""
        self.method = "continuum"
        bound = self._continuum.relative_error(potential + self._levels.lowest, warmth)
        self.relative_error_bound = max(self.relative_error_bound, bound)
        return self._unit * potential

    def _over(self, energy: Values, kernel: Kernel, level: Function, smooth: Function) -> Values:
        """Return a sum over the levels at energies in J."""
        energies = np.atleast_1d(np.asarray(energy, dtype=np.float64)) / self._unit
        sums = self._room * over_levels(self._levels, energies, kernel, level, smooth)
        return sums if isinstance(energy, np.ndarray) else float(sums[0])

    def _thermal(self, potential: Values, temperature: Values, derivative: int) -> Values:
        warmth = self._warmth(temperature)
        order, scale = self._half - 1.0 - derivative, math.pow(warmth, self._half - derivative)
        return self._over(
            potential,
            occupations(warmth),
            lambda above: scale * np.asarray(fermi_dirac_integral(order, above / warmth)),
            lambda energy: np.asarray(self._continuum.thermal(energy, warmth, derivative)),
        )

    def carrier_density(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal(chemical_potential, temperature, 0)

    def compressibility(self, chemical_potential: Values, temperature: Values) -> Values:
        return self._thermal(chemical_potential, temperature, 1) / self._unit

    def energy_density(self, chemical_potential: Values, temperature: Values) -> float:
        potential, warmth = float(chemical_potential) / self._unit, self._warmth(temperature)
        kernel, levels, smooth = occupations(warmth), self._levels, self._continuum
        if not levels.reaches(potential, potential, kernel):
            from_edge = potential + levels.lowest
            total = smooth.energy(from_edge, warmth) - levels.lowest * float(smooth.thermal(from_edge, warmth))
            return self._unit * self._room * total
        edges, weights = levels.points(potential, potential, kernel)
        eta = (potential - edges) / warmth
        held = edges * np.asarray(fermi_dirac_integral(self._half - 1.0, eta))
        moving = self._half * warmth * np.asarray(fermi_dirac_integral(self._half, eta))
        return self._unit * self._room * math.pow(warmth, self._half) * float(np.sum(weights * (held + moving)))

    def carriers_above(self, energy: Values, chemical_potential: Values, temperature: Values) -> float:
        warmth = self._warmth(temperature)
        start, potential = float(energy) / self._unit, float(chemical_potential) / self._unit
        low, high = min(start, potential), max(start, potential)
        # The start cuts sharply, the chemical potential smoothly: between the two the levels go one by one.
        kernel = Kernel(0.0, 4.0 * warmth, REACH * warmth)
        levels, lowest = self._levels, self._levels.lowest
        if levels.reaches(low, high, kernel):
            edges, weights = levels.points(low, high, kernel)
            return self._room * float(np.sum(weights * self._held_above(start - edges, potential - edges, warmth)))
        if start > levels.end:
            return self._room * self._continuum.above(start + lowest, potential + lowest, warmth)
        # So hot that carriers lie past all lists: few of them are below the start.
        edges, weights = levels.points(start, start, Kernel(0.0, 4.0 * warmth, 0.0))
        eta = (potential - edges) / warmth
        held = math.pow(warmth, self._half) * np.asarray(fermi_dirac_integral(self._half - 1.0, eta))
        below = float(np.sum(weights * (held - self._held_above(start - edges, potential - edges, warmth))))
        return self._room * (float(self._continuum.thermal(potential + lowest, warmth)) - below)

    @abstractmethod
    def _held_above(self, start: FloatArray, potential: FloatArray, warmth: float) -> FloatArray:
        """Return what levels hold above a start, which like the chemical potential is measured from their edges."""

    def spread_states(self, energy: Values, broadening: Broadening) -> tuple[Values, Values]:
        energies = np.atleast_1d(np.asarray(energy, dtype=np.float64)) / self._unit
        width = float(broadening.width) / self._unit
        density, integral = spread(
            self._levels, self._continuum, self.free_dimensions, energies, broadening.kind, width
        )
        density, integral = self._room / self._unit * density, self._room * integral
        if isinstance(energy, np.ndarray):
            return density, integral
        return float(density[0]), float(integral[0])

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        levels = self._levels
        total = max(1, round(levels.entries_up_to(max(highest, 0.0) / self._unit * (1.0 + ROUNDING))))
        listed = min(total, most)
        return Ladder(
            levels.numbers[:listed].astype(np.int64), self._unit * levels.edge[:listed], levels.degeneracy[:listed]
        ), total
