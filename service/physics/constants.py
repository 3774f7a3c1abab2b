"""Physical constants in SI units: CODATA 2022, each with its standard uncertainty where it is not exact.

References
----------
P. J. Mohr, D. B. Newell, B. N. Taylor, E. Tiesinga, "CODATA recommended values of the fundamental physical
constants: 2022", Rev. Mod. Phys. 97, 025002 (2025).
"""

import math
from typing import Final

EDITION: Final = "CODATA 2022"

ELEMENTARY_CHARGE: Final = 1.602176634e-19
"""Elementary charge e [C], exact."""

PLANCK: Final = 6.62607015e-34
"""Planck constant h [J s], exact."""

REDUCED_PLANCK: Final = PLANCK / (2.0 * math.pi)
"""Reduced Planck constant h / 2 pi [J s], exact."""

BOLTZMANN: Final = 1.380649e-23
"""Boltzmann constant k [J/K], exact."""

AVOGADRO: Final = 6.02214076e23
"""Avogadro constant [1/mol], exact."""

SPEED_OF_LIGHT: Final = 299792458.0
"""Speed of light in vacuum c [m/s], exact."""

ELECTRON_MASS: Final = 9.1093837139e-31
"""Electron mass m_e [kg], standard uncertainty 2.8e-40 kg."""

VACUUM_PERMITTIVITY: Final = 8.8541878188e-12
"""Vacuum electric permittivity eps_0 [F/m], standard uncertainty 1.4e-21 F/m."""

BOHR_RADIUS: Final = 5.29177210544e-11
"""Bohr radius a_0 [m], standard uncertainty 8.2e-21 m."""
