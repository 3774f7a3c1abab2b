"""The chemical potential from the density of carriers in a non-parabolic band."""

import math
from typing import Final

import numpy as np

from service.physics.fermi_dirac import inverse_fermi_dirac_integral
from service.physics.kane import layout
from service.physics.kane.limits import degenerate_eta, dilute_eta, parabolic_equivalent
from service.physics.kane.quadrature import quadrature
from service.physics.tabulated import table
from service.physics.values import FloatArray, Values

_STEPS: Final = 5
"""Newton steps beyond the table: the first guess is within 0.5, and each step squares what is left."""


def inverse_kane_density(value: Values, beta: Values) -> Values:
    r"""Return eta such that the density of a bulk gas whose band obeys E(1 + alpha E) is a value.

    .. math:: n(\eta, \beta) = \frac{2}{\sqrt{\pi}} \int_0^\infty
        \frac{\sqrt{\gamma}\, \gamma'\, dt}{1 + e^{t - \eta}}, \qquad \gamma(t) = t (1 + \beta t)

    Parameters
    ----------
    value : float or ndarray
        n > 0, the density over the effective density of states of the parabolic band [1].
    beta : float or ndarray
        alpha kT, of at least 0, of a shape that broadcasts with the value [1].

    Returns
    -------
    float or ndarray
        eta, of the common shape [1].

    Notes
    -----
    No first guess and no iteration for beta to 3: the density over that of a cold gas of the same filling,
    logarithmic, and the strength of the bend are the two coordinates of a table with one polynomial a cell. Below, the
    logarithm and one term of the classical series; above, Sommerfeld's series, reverted; for a higher beta Newton
    steps on the quadrature. The error is at most 2e-15 max(1, abs(eta)) against mpmath, 1e-14
    beyond beta = 3.

    References
    ----------
    E. O. Kane, J. Phys. Chem. Solids 1, 249 (1957).

    Examples
    --------
    >>> round(inverse_kane_density(0.7651470246254079, 0.0), 12) + 0.0
    0.0
    """
    if isinstance(value, np.ndarray) or isinstance(beta, np.ndarray):
        return _of_many(value, beta)
    return _of_one(float(value), float(beta))


def _of_one(value: float, beta: float) -> float:
    density, scale, stretch = parabolic_equivalent(value, beta)
    place = math.log(density)
    if place < layout.INVERSE_LOW:
        return dilute_eta(value, beta)
    if place >= layout.INVERSE_HIGH:
        return degenerate_eta(value, beta)
    if beta > layout.HIGHEST_BETA:
        return float(iterated(np.array([value]), np.array([beta]), np.array([density]))[0])
    cell, x = layout.place_of_one(place, layout.INVERSE_LOW, layout.INVERSE_CELLS)
    cell, z = layout.strength_of_one(cell, beta, scale, stretch)
    return layout.polynomial_of_one(table(layout.FILE, "inverse"), layout.INVERSE_TERMS, cell, x, z)[0]


def _of_many(value: Values, beta: Values) -> FloatArray:
    values, betas = np.broadcast_arrays(np.asarray(value, dtype=np.float64), np.asarray(beta, dtype=np.float64))
    flat_value, flat_beta = values.ravel(), betas.ravel()
    result = np.empty(flat_value.shape)
    for at in range(0, flat_value.size, layout.CHUNK):
        part = slice(at, at + layout.CHUNK)
        result[part] = _chunk(flat_value[part], flat_beta[part])
    return result.reshape(values.shape)


def _chunk(value: FloatArray, beta: FloatArray) -> FloatArray:
    """Return one chunk: the table for all, then the ends and the high betas where there are any."""
    density, scale, stretch = parabolic_equivalent(value, beta)
    place = np.log(density)
    below, above = place < layout.INVERSE_LOW, place >= layout.INVERSE_HIGH
    outside = below | above | (beta > layout.HIGHEST_BETA)
    if not outside.any():
        return _tabulated(place, beta, scale, stretch)
    result = np.empty_like(value)
    # Rows by number: a mask of random samples costs ten times as much.
    if (rows := np.flatnonzero(~outside)).size:
        result[rows] = _tabulated(*(each.take(rows) for each in (place, beta, scale, stretch)))
    if (rows := np.flatnonzero(below)).size:
        result[rows] = dilute_eta(value.take(rows), beta.take(rows))
    if (rows := np.flatnonzero(above)).size:
        result[rows] = degenerate_eta(value.take(rows), beta.take(rows))
    if (rows := np.flatnonzero(outside & ~(below | above))).size:
        result[rows] = iterated(value.take(rows), beta.take(rows), density.take(rows))
    return result


def _tabulated(place: FloatArray, beta: FloatArray, scale: FloatArray, stretch: FloatArray) -> FloatArray:
    cell, x = layout.place_of_many(place, layout.INVERSE_LOW, layout.INVERSE_CELLS)
    cell, z = layout.strength_of_many(cell, beta, scale, stretch)
    return layout.polynomial_of_many(table(layout.FILE, "inverse"), layout.INVERSE_TERMS, cell, x, z)


def iterated(value: FloatArray, beta: FloatArray, density: FloatArray) -> FloatArray:
    """Return eta by Newton steps in the logarithm of the density, which is concave in eta."""
    eta = np.asarray(inverse_fermi_dirac_integral(0.5, density))
    for _ in range(_STEPS):
        found, slope = quadrature(eta, beta, np.zeros_like(eta))
        eta = eta - np.log1p((found - value) / value) * found / slope
    return eta
