"""The band: effective masses along the axes and the degeneracies of its states."""

from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from service.physics.values import Values

FREE_AXES: Final = ("x", "x", "xy", "xyz")
"""The free axes by free dimensions: a wire runs along x, a film is thin along z; in a box none is free, x stands in."""


@dataclass(frozen=True, slots=True)
class Band:
    """A parabolic band of one group of equivalent valleys.

    Attributes
    ----------
    mass_x, mass_y, mass_z : float or ndarray, shape (N,)
        Effective masses along the axes [kg]. A film is thin along z, a wire runs along x.
    degeneracy : float or ndarray, shape (N,)
        Spin degeneracy times the number of valleys [1].
    """

    mass_x: Values
    mass_y: Values
    mass_z: Values
    degeneracy: Values

    def parts(self) -> tuple[Values, Values, Values, Values]:
        """Return the masses [kg] and the degeneracy [1], in the order of the attributes."""
        return self.mass_x, self.mass_y, self.mass_z, self.degeneracy

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> "Band":
        """Return the band of some of N samples."""
        return Band(*(part[rows] if isinstance(part, np.ndarray) else part for part in self.parts()))

    def mass(self, axes: str) -> Values:
        r"""Return the density-of-states mass over some axes, the geometric mean of their masses.

        .. math:: m_d = \Bigl(\prod_{i} m_i\Bigr)^{1/D}

        Parameters
        ----------
        axes : str
            ``"x"``, ``"xy"`` or ``"xyz"`` [1].

        Returns
        -------
        float or ndarray, shape (N,)
            The mass; a single mass comes back as it is, to the last digit [kg].

        References
        ----------
        N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), eq. (28.6) ff.

        Examples
        --------
        >>> Band(1.0, 1.0, 8.0, 2.0).mass("xyz")
        2.0
        """
        if axes == "x":
            return self.mass_x
        if axes == "xy":
            return self.mass_x * _ratio_root(self.mass_y / self.mass_x, 1.0 / 2.0)
        return self.mass_x * _ratio_root(self.mass_y / self.mass_x * (self.mass_z / self.mass_x), 1.0 / 3.0)


def _ratio_root(ratio: Values, exponent: float) -> Values:
    """Return a root of a mass ratio: of exactly 1 for one mass on all axes, so that no digit of it is lost."""
    root: Values = ratio**exponent
    return root
