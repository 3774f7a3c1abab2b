"""How strongly carriers interact, against the kinetic energy that the free-electron model keeps."""

import math

from service.physics.constants import BOHR_RADIUS, ELECTRON_MASS
from service.physics.values import Values


def wigner_seitz_ratio(dimensions: int, density: Values, mass: Values, relative_permittivity: Values) -> Values:
    r"""Return r_s, the radius of the sphere, disc or half-length per carrier over the effective Bohr radius.

    .. math::

        r_s = \frac{m^*}{m_e\, \varepsilon_r\, a_0} \times
        \Bigl(\frac{3}{4 \pi n}\Bigr)^{1/3},\quad (\pi n_s)^{-1/2},\quad \frac{1}{2 n_l}

    Parameters
    ----------
    dimensions : int
        3, 2 or 1: what the density is counted in [1].
    density : float or ndarray, shape (N,)
        Carriers per volume, area or length [m^-D].
    mass : float or ndarray, shape (N,)
        Effective mass [kg].
    relative_permittivity : float or ndarray, shape (N,)
        Background permittivity over that of the vacuum [1].

    Returns
    -------
    float or ndarray, shape (N,)
        The ratio [1].

    References
    ----------
    N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), eq. (1.2); G. F. Giuliani, G. Vignale, Quantum Theory
    of the Electron Liquid (2005), section 1.3, for two and one dimensions.

    Examples
    --------
    >>> round(wigner_seitz_ratio(3, 8.47e28, 9.1093837139e-31, 1.0), 2)
    2.67
    """
    if dimensions == 3:
        radius = (3.0 / (4.0 * math.pi * density)) ** (1.0 / 3.0)
    elif dimensions == 2:
        radius = (math.pi * density) ** -0.5
    else:
        radius = 0.5 / density
    ratio: Values = radius * (mass / ELECTRON_MASS) / (BOHR_RADIUS * relative_permittivity)
    return ratio
