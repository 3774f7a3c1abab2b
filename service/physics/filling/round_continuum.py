r"""Cylinder and sphere as a continuum: the smooth part of their states, with surface and curvature terms.

All in units of hbar^2 / 2 m R^2 and from the band edge. Both shapes have one form: what the levels hold below an energy
at T = 0, in carriers for a sphere and in lines' units for a cylinder, is

.. math:: N(E) = \sum_{k=0}^4 c_k \frac{E^{(3-k)/2}}{\Gamma((5-k)/2)}

and so the smooth states are those of free gases of three, two and one dimensions on the band edge.
"""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np

from service.physics.broadening import spread_level
from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail
from service.physics.levels.bessel_zeros import Family
from service.physics.roots import increasing_root
from service.physics.values import FloatArray, Values

_ROOT_PI: Final = math.sqrt(math.pi)
_TERMS: Final[dict[Family, tuple[float, ...]]] = {
    "cylinder": (1.0 / 4.0, -_ROOT_PI / 4.0, 1.0 / 6.0, _ROOT_PI / 128.0, 2.0 / 315.0),
    "sphere": (1.0 / (6.0 * _ROOT_PI), -1.0 / 4.0, 1.0 / (3.0 * _ROOT_PI), -1.0 / 48.0, -2.0 / (315.0 * _ROOT_PI)),
}
"""Coefficients of t^((k - D)/2) in the trace of exp(-t H) over the disc (D = 2) and the ball (D = 3) of radius 1."""

_SWING: Final[dict[Family, tuple[float, float]]] = {"cylinder": (4.0, -2.0), "sphere": (14.0, -1.5)}
"""Factor and power of k R in the bound on what the shells, left out, move the chemical potential at T = 0."""

_ROUNDING: Final = 1e-13


def smooth_density(family: Family, wavenumber: FloatArray) -> tuple[FloatArray, float, float]:
    """Return the smooth orbital levels per k R, the constant term of their count, and a in its last term a / k R."""
    dimensions = 2 if family == "cylinder" else 3
    first, second, third, fourth, fifth = _TERMS[family]
    if dimensions == 2:
        return 2.0 * first * wavenumber + second / math.gamma(1.5), third, fourth / math.gamma(0.5)
    slope = 3.0 * first / math.gamma(2.5) * wavenumber**2 + 2.0 * second * wavenumber + third / math.gamma(1.5)
    return slope, fourth, fifth / math.gamma(0.5)


@dataclass(frozen=True, slots=True)
class RoundContinuum:
    """The smooth part of the states of a cylinder or a sphere.

    Parameters
    ----------
    family : str
        ``cylinder`` or ``sphere`` [1].

    Notes
    -----
    What is left out are the shells: oscillations from the closed orbits, the shortest of which runs along a diameter
    and back, 4 R. Warmth damps each by X / sinh X with X = pi kT L / (2 R sqrt(E)), so that the continuum is exact to
    the last digit once X passes 40. At T = 0 the bound is twice the envelope of what the zeros up to 1250 show, carried
    on by the power of k R that it follows there, of the orbits' amplitudes.

    References
    ----------
    K. Stewartson, R. T. Waechter, Proc. Camb. Phil. Soc. 69, 353 (1971) (disc); M. Bordag, E. Elizalde, K. Kirsten,
    J. Math. Phys. 37, 895 (1996) (ball); R. Balian, C. Bloch, Ann. Phys. 69, 76 (1972) (shells).
    """

    family: Family

    def filled(self, energy: Values) -> Values:
        """Return what the levels below an energy above zero hold at T = 0 [1]."""
        total: Values = 0.0
        for k, term in enumerate(_TERMS[self.family]):
            total = total + term / math.gamma(2.5 - k / 2.0) * energy ** (1.5 - k / 2.0)
        return total

    def slope(self, energy: Values) -> Values:
        """Return the derivative of `filled` [1]."""
        total: Values = 0.0
        for k, term in enumerate(_TERMS[self.family][:3]):
            total = total + term / math.gamma(1.5 - k / 2.0) * energy ** (0.5 - k / 2.0)
        return total

    def ground_energy(self, energy: float) -> float:
        """Return the energy of all carriers below an energy at T = 0."""
        return sum(
            term * (1.5 - k / 2.0) / math.gamma(3.5 - k / 2.0) * math.pow(energy, 2.5 - k / 2.0)
            for k, term in enumerate(_TERMS[self.family])
        )

    def thermal(self, potential: Values, warmth: float, derivative: int = 0) -> Values:
        """Return what the levels hold at kT = `warmth`, or its derivative by the chemical potential [1]."""
        total: Values = 0.0
        for k, term in enumerate(_TERMS[self.family][: 5 - derivative]):
            power = 1.5 - k / 2.0 - derivative
            total = total + term * warmth**power * fermi_dirac_integral(power - 1.0, potential / warmth)
        return total

    def energy(self, potential: float, warmth: float) -> float:
        """Return the energy of all carriers at kT = `warmth`."""
        eta = potential / warmth
        return sum(
            term * (1.5 - k / 2.0) * math.pow(warmth, 2.5 - k / 2.0) * float(fermi_dirac_integral(1.5 - k / 2.0, eta))
            for k, term in enumerate(_TERMS[self.family])
        )

    def above(self, energy: float, potential: float, warmth: float) -> float:
        """Return what is held above an energy far from the band edge, where the last two terms have no states."""
        return sum(
            term
            * math.pow(warmth, 1.5 - k / 2.0)
            * float(fermi_dirac_tail(0.5 - k / 2.0, potential / warmth, energy / warmth))
            for k, term in enumerate(_TERMS[self.family][:3])
        )

    def spread(self, energy: FloatArray, kind: str, width: float, start: float) -> tuple[FloatArray, FloatArray]:
        """Return the smooth states convolved with a line shape, and their integral, a Lorentzian's from a start."""
        density, integral = np.zeros_like(energy), np.zeros_like(energy)
        for k, term in enumerate(_TERMS[self.family][:4]):
            shape, area = spread_level(3 - k, kind, energy / width, start / width)
            density += term * width ** (0.5 - k / 2.0) * shape
            integral += term * width ** (1.5 - k / 2.0) * area
        return density, integral

    def ground_potential(self, filled: float) -> float:
        """Return the energy below which the levels hold so much at T = 0."""
        high = (filled * math.gamma(2.5) / _TERMS[self.family][0]) ** (2.0 / 3.0) + 10.0
        while self.filled(high) < filled:
            high *= 1.5
        # Below about 2 the series turns, but no level lies there.
        return float(
            increasing_root(lambda energy: (self.filled(energy) - filled, self.slope(energy)), 2.0, high, 1e-12 * high)
            if self.filled(2.0) < filled
            else 2.0
        )

    def potential(self, filled: float, warmth: float) -> float:
        """Return the chemical potential at kT = `warmth`."""
        high = self.ground_potential(filled) + warmth
        # The trace of exp(-H/kT) lies below its first term.
        low = warmth * (math.log(filled / _TERMS[self.family][0]) - 1.5 * math.log(warmth)) - warmth

        def excess(potential: Values) -> tuple[Values, Values]:
            held = float(self.thermal(potential, warmth))
            if held <= 0.0:
                return -1.0, 0.0
            return math.log(held / filled), float(self.thermal(potential, warmth, 1)) / held

        return float(increasing_root(excess, low, high, 1e-13 * max(abs(high), warmth)))

    def relative_error(self, potential: float, warmth: float) -> float:
        """Return a bound on the error of the chemical potential over max(|mu|, kT)."""
        if potential <= 0.0:
            return _ROUNDING
        wavenumber = math.sqrt(potential)
        factor, power = _SWING[self.family]
        damping = 2.0 * math.pi * warmth / wavenumber
        damped = 1.0 if damping < 1e-3 else damping / math.sinh(min(damping, 300.0))
        return _ROUNDING + factor * math.pow(wavenumber, power) * damped
