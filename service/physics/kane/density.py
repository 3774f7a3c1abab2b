"""The density of carriers in a non-parabolic band, and its derivative by the chemical potential."""

import math

import numpy as np

from service.physics.kane import layout
from service.physics.kane.limits import degenerate_density, dilute_density
from service.physics.kane.quadrature import quadrature
from service.physics.tabulated import table
from service.physics.values import FloatArray, Values


def kane_density(eta: Values, beta: Values) -> Values:
    r"""Return the density of a bulk gas whose band obeys E(1 + alpha E), in units of the effective density of states.

    .. math::

        n(\eta, \beta) = \frac{2}{\sqrt{\pi}} \int_0^\infty \frac{\sqrt{\gamma}\, \gamma'\, dt}{1 + e^{t - \eta}},
        \qquad \gamma(t) = t (1 + \beta t)

    Parameters
    ----------
    eta : float or ndarray
        Reduced chemical potential mu / kT [1].
    beta : float or ndarray
        alpha kT, of at least 0, of a shape that broadcasts with eta [1].

    Returns
    -------
    float or ndarray
        n; at beta = 0 the Fermi-Dirac integral F_1/2(eta); of the common shape [1].

    Notes
    -----
    From eta = -20 to 40, for beta to 3, by a polynomial in both for each cell of a table; the classical gas with its
    first correction below, Sommerfeld's series above, and quadrature for a higher beta. The relative error is at most
    2e-15 against mpmath's quadrature of 40 digits, 1e-14 beyond beta = 3 (tests/physics/kane/test_density.py).

    References
    ----------
    E. O. Kane, J. Phys. Chem. Solids 1, 249 (1957); A. Sommerfeld, Z. Phys. 47, 1 (1928).

    Examples
    --------
    >>> round(kane_density(0.0, 0.0), 12)
    0.765147024625
    """
    if isinstance(eta, np.ndarray) or isinstance(beta, np.ndarray):
        return _of_many(eta, beta, slopes=False)
    return _of_one(float(eta), float(beta))[0]


def kane_density_derivative(eta: Values, beta: Values) -> Values:
    r"""Return the derivative of the density in a non-parabolic band by the reduced chemical potential.

    .. math:: \frac{\partial n}{\partial \eta} = \frac{2}{\sqrt{\pi}} \int_0^\infty
        \sqrt{\gamma}\, \gamma' \Bigl(-\frac{\partial f}{\partial t}\Bigr) dt

    Parameters
    ----------
    eta : float or ndarray
        Reduced chemical potential mu / kT [1].
    beta : float or ndarray
        alpha kT, of at least 0, of a shape that broadcasts with eta [1].

    Returns
    -------
    float or ndarray
        The derivative; at beta = 0 the Fermi-Dirac integral F_-1/2(eta); of the common shape [1].

    Notes
    -----
    From the same tables and series as the density. The relative error is at most 1e-14 against mpmath's quadrature.

    References
    ----------
    E. O. Kane, J. Phys. Chem. Solids 1, 249 (1957); A. Sommerfeld, Z. Phys. 47, 1 (1928).

    Examples
    --------
    >>> round(kane_density_derivative(0.0, 0.0), 12)
    0.604898643422
    """
    if isinstance(eta, np.ndarray) or isinstance(beta, np.ndarray):
        return _of_many(eta, beta, slopes=True)
    return _of_one(float(eta), float(beta))[1]


def _of_one(eta: float, beta: float) -> tuple[float, float]:
    """Return density and derivative of one sample."""
    if eta < layout.DENSITY_LOW:
        return dilute_density(math.exp(eta), beta)
    if eta >= layout.DENSITY_HIGH:
        return degenerate_density(eta, beta)
    if beta > layout.HIGHEST_BETA:
        found = quadrature(np.array([eta]), np.array([beta]), np.zeros(1))
        return float(found[0][0]), float(found[1][0])
    cell, x = layout.place_of_one(eta, layout.DENSITY_LOW, layout.DENSITY_CELLS)
    scale = layout.scales()[cell]
    stretch = 1.0 + beta * scale
    cell, z = layout.strength_of_one(cell, beta, scale, stretch)
    value, slope = layout.polynomial_of_one(table(layout.FILE, "density"), layout.DENSITY_TERMS, cell, x, z)
    stretch *= math.sqrt(stretch)
    return stretch * value, stretch * slope * (2.0 * layout.CELLS_PER_UNIT)


def _of_many(eta: Values, beta: Values, slopes: bool) -> FloatArray:
    """Return the densities of many samples, or their derivatives."""
    etas, betas = np.broadcast_arrays(np.asarray(eta, dtype=np.float64), np.asarray(beta, dtype=np.float64))
    flat_eta, flat_beta = etas.ravel(), betas.ravel()
    result = np.empty(flat_eta.shape)
    for at in range(0, flat_eta.size, layout.CHUNK):
        part = slice(at, at + layout.CHUNK)
        result[part] = _chunk(flat_eta[part], flat_beta[part], slopes)
    return result.reshape(etas.shape)


def _chunk(eta: FloatArray, beta: FloatArray, slopes: bool) -> FloatArray:
    """Return one chunk: the table for all, then the ends and the high betas where there are any."""
    below, above = eta < layout.DENSITY_LOW, eta >= layout.DENSITY_HIGH
    outside = below | above | (beta > layout.HIGHEST_BETA)
    if not outside.any():
        return _tabulated(eta, beta, slopes)
    result = np.empty_like(eta)
    # Rows by number: a mask of random samples costs ten times as much.
    if (rows := np.flatnonzero(~outside)).size:
        result[rows] = _tabulated(eta.take(rows), beta.take(rows), slopes)
    if (rows := np.flatnonzero(below)).size:
        result[rows] = dilute_density(np.exp(eta.take(rows)), beta.take(rows))[slopes]
    if (rows := np.flatnonzero(above)).size:
        result[rows] = degenerate_density(eta.take(rows), beta.take(rows))[slopes]
    if (rows := np.flatnonzero(outside & ~(below | above))).size:
        result[rows] = quadrature(eta.take(rows), beta.take(rows), np.zeros(rows.size))[slopes]
    return result


def _tabulated(eta: FloatArray, beta: FloatArray, slopes: bool) -> FloatArray:
    cell, x = layout.place_of_many(eta, layout.DENSITY_LOW, layout.DENSITY_CELLS)
    scale = table(layout.FILE, "density_scale").take(cell)
    stretch = 1.0 + beta * scale
    cell, z = layout.strength_of_many(cell, beta, scale, stretch)
    slope = np.empty_like(x) if slopes else None
    value = layout.polynomial_of_many(table(layout.FILE, "density"), layout.DENSITY_TERMS, cell, x, z, slope)
    stretch *= np.sqrt(stretch)
    if slope is None:
        return value * stretch
    stretch *= 2.0 * layout.CELLS_PER_UNIT
    return slope * stretch
