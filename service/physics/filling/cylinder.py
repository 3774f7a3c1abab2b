"""Hard-walled cylinders: lines on the zeros of the Bessel functions J_m."""

import math

import numpy as np

from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail, inverse_fermi_dirac_integral
from service.physics.filling.clusters import Kernel
from service.physics.filling.round import RoundWalls
from service.physics.filling.round_curve import SHARP, occupations
from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values

_ROOM = math.gamma(1.5)
_MARGIN = 128.0
"""Half the width of the range in which a root is looked for at first: some thirty levels."""


class Cylinder(RoundWalls):
    r"""The states of one hard-walled cylinder, free along its axis.

    .. math::

        n = \sum_{m,n} d_m\, g \sqrt{\frac{m kT}{2 \pi \hbar^2}}\, F_{-1/2}\Bigl(\frac{\mu - E_{m,n}}{kT}\Bigr)

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
    Sums run over clusters of levels, exact to the last digit of a double; beyond k R = 1250 over a window of levels,
    with the smooth count below it, which a taper joins without loss. Past a million levels in the window the continuum
    serves, with a bound that says what it leaves out.

    References
    ----------
    L. D. Landau, E. M. Lifshitz, Quantum Mechanics, 3rd ed. (1977); NIST DLMF 10.21 and 25.12.16.
    """

    free_dimensions = 1

    def __init__(self, mass: float, degeneracy: float, diameter: float) -> None:
        # g sqrt(m a / 2 pi hbar^2) with the unit of energy a = hbar^2 / 2 m R^2.
        super().__init__("cylinder", mass, diameter, degeneracy / (0.5 * diameter * math.sqrt(4.0 * math.pi)))

    def fermi_energy(self, density: Values) -> float:
        filled = float(density) / self._room
        guess = max(self._smooth_potential(filled, 0.0), 0.0)
        if not self._levels.reaches(guess, guess, SHARP):
            return self._by_continuum(guess, 0.0)
        return self._unit * self._ground(filled, guess)

    def _ground(self, filled: float, guess: float) -> float:
        """Return the Fermi energy, near a guess: first the level below it, then the distance from that level."""
        margin = _MARGIN
        low, high = max(guess - margin, 0.0), guess + margin
        while True:
            inside, _, _ = self._levels.between(low, high)
            levels = np.concatenate([[low], inside])
            edges, weights = self._levels.points(low, high, SHARP)
            held = np.sqrt(np.maximum(levels[:, None] - edges, 0.0)) @ weights / _ROOM
            top = float(np.sqrt(np.maximum(high - edges, 0.0)) @ weights) / _ROOM
            if low > 0.0 and held[0] > filled:
                low, high, margin = max(low - 2.0 * margin, 0.0), low, 2.0 * margin
            elif top < filled:
                low, high, margin = high, high + 2.0 * margin, 2.0 * margin
            else:
                break
        place = int(np.searchsorted(held, filled, side="right")) - 1
        floor = float(levels[place])
        ceiling = float(levels[place + 1]) if place + 1 < levels.size else high
        # A level found anew may differ from its first finding in the last digit.
        below = edges <= floor * (1.0 + 1e-12)
        depth, weights = np.maximum(floor - edges[below], 0.0), weights[below] / (_ROOM * filled)

        def excess(root: Values) -> tuple[float, float]:
            # In the root of the distance a level just opened gives a straight line, and all others curve upwards.
            away = np.sqrt(depth + root * root)
            slope = np.divide(root, away, out=np.ones_like(away), where=away > 0.0)
            return float(np.sum(weights * away)) - 1.0, float(np.sum(weights * slope))

        widest = math.sqrt(ceiling - floor)
        root = float(increasing_root(excess, 0.0, widest, 1e-16 * widest, widest))
        return floor + root * root

    def ground_energy_density(self, density: Values) -> float:
        filled = self.fermi_energy(density) / self._unit
        levels, smooth = self._levels, self._continuum
        if not levels.reaches(filled, filled, SHARP):
            from_edge = filled + levels.lowest
            total = smooth.ground_energy(from_edge) - levels.lowest * float(smooth.filled(from_edge))
            return self._unit * self._room * total
        edges, weights = levels.points(filled, filled, SHARP)
        above = np.maximum(filled - edges, 0.0)
        total = float(np.sum(weights * np.sqrt(above) * (edges + above / 3.0)))
        return self._unit * self._room * total / _ROOM

    def states_below(self, energy: Values) -> Values:
        return self._over(
            energy,
            SHARP,
            lambda above: np.sqrt(np.maximum(above, 0.0)) / _ROOM,
            lambda energy: np.asarray(self._continuum.filled(energy)),
        )

    def density_of_states(self, energy: Values) -> Values:
        def level(above: FloatArray) -> FloatArray:
            inverse = np.divide(1.0, above, out=np.zeros_like(above), where=above > 0.0)
            return np.sqrt(inverse) / math.gamma(0.5)

        return self._over(energy, SHARP, level, lambda energy: np.asarray(self._continuum.slope(energy))) / self._unit

    def levels_below(self, energy: Values) -> Values:
        energies = np.atleast_1d(np.asarray(energy, dtype=np.float64)) / self._unit
        counts = self._levels.orbitals_below(energies)
        return counts if isinstance(energy, np.ndarray) else float(counts[0])

    def warm_chemical_potential(self, density: Values, temperature: Values) -> float:
        filled, warmth = float(density) / self._room, self._warmth(temperature)
        kernel = occupations(warmth)
        guess = self._smooth_potential(filled, warmth)
        if not self._levels.reaches(guess, guess, kernel):
            return self._by_continuum(guess, warmth)
        if warmth < 0.1 * _MARGIN:
            guess = self._ground(filled, max(self._smooth_potential(filled, 0.0), 0.0))
        return self._unit * self._warm(filled, warmth, guess, kernel)

    def _warm(self, filled: float, warmth: float, guess: float, kernel: Kernel) -> float:
        """Return the chemical potential, near a guess."""
        alone = warmth * float(inverse_fermi_dirac_integral(-0.5, filled / math.sqrt(warmth)))
        # The trace of exp(-H/kT) over the disc lies below its first term, kT / 4.
        trace = math.log(4.0 * filled) - 1.5 * math.log(warmth)
        least = warmth * trace - self._levels.lowest - 1e-12 * abs(alone)
        margin = max(_MARGIN, warmth)
        low = high = math.nan
        edges = weights = np.empty(0)

        def excess(potential: Values) -> tuple[float, float]:
            nonlocal low, high, edges, weights
            if not low <= potential <= high:
                low, high = float(potential) - margin, float(potential) + margin
                edges, weights = self._levels.points(low, high, kernel)
            eta = (potential - edges) / warmth
            held = math.sqrt(warmth) * float(np.sum(weights * np.asarray(fermi_dirac_integral(-0.5, eta))))
            if held <= 0.0:
                return -math.inf, 0.0
            slope = float(np.sum(weights * np.asarray(fermi_dirac_integral(-1.5, eta)))) / math.sqrt(warmth)
            return math.log(held / filled), slope / held

        start = min(max(guess, least), alone)
        # A Newton step's error is about its square over kT.
        tolerance = 3e-8 * math.sqrt(warmth * max(abs(start), warmth))
        return float(increasing_root(excess, min(least, alone), alone, tolerance, start))

    def _held_above(self, start: FloatArray, potential: FloatArray, warmth: float) -> FloatArray:
        tails = fermi_dirac_tail(-0.5, potential / warmth, np.maximum(start, 0.0) / warmth)
        return math.sqrt(warmth) * np.asarray(tails)
