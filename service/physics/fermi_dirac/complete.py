r"""Complete Fermi-Dirac integrals of the orders that one, two and three dimensions need.

.. math:: F_j(\eta) = \frac{1}{\Gamma(j+1)} \int_0^\infty \frac{t^j\, dt}{1 + e^{t - \eta}}, \qquad F_j' = F_{j-1}
"""

import math
from functools import cache
from typing import Final

import numpy as np

from service.physics.tabulated import cells, horner, table
from service.physics.values import FloatArray, Values

FILE: Final = "fermi_dirac.npz"
LOW: Final = -40.0
HIGH: Final = 40.0 - 2.0**-46
"""The last double whose distance from `LOW`, as rounded, lies within the last cell: the series begin there."""

_CELLS_PER_UNIT: Final = 32
_LAST_CELL: Final = 80 * _CELLS_PER_UNIT - 1
_CHUNK: Final = 1 << 14
"""Elements at a time, so that a chunk's buffers stay in the second-level cache."""

TABULATED: Final = (-1.5, -0.5, 0.5, 1.0, 1.5, 2.0, 2.5)
ORDERS: Final = (-2.0, -1.5, -1.0, -0.5, 0.0, 0.5, 1.0, 1.5, 2.0, 2.5)
"""The orders on offer: three dimensions need 5/2 to -3/2, two need 2 to -2, one needs 3/2 to -3/2."""


def fermi_dirac_integral(order: float, eta: Values) -> Values:
    r"""Return the complete Fermi-Dirac integral of an order, divided by Gamma(j + 1).

    .. math::

        F_j(\eta) = \frac{1}{\Gamma(j+1)} \int_0^\infty \frac{t^j\, dt}{1 + e^{t - \eta}}
        = -\mathrm{Li}_{j+1}(-e^\eta)

    Parameters
    ----------
    order : float
        j, one of -2, -3/2, ..., 5/2 [1].
    eta : float or ndarray
        Reduced chemical potential mu / kT, of any shape [1].

    Returns
    -------
    float or ndarray
        F_j(eta), of the same shape [1].

    Raises
    ------
    ValueError
        If the order is not on offer.

    Notes
    -----
    Whole orders up to zero in closed form. Others by a polynomial of degree 6 in each of 32 cells a unit of eta from
    -40 to 40, by exp(eta) below and by Sommerfeld's series above. Against ball arithmetic of 60 digits the relative
    error is at most 1e-15 from eta = -700 to 1e8 (tests/physics/fermi_dirac/test_complete.py).

    References
    ----------
    NIST DLMF 25.12.14 to 25.12.16; A. Sommerfeld, Z. Phys. 47, 1 (1928).

    Examples
    --------
    >>> round(fermi_dirac_integral(0.5, 0.0), 12)
    0.765147024625
    """
    if isinstance(eta, np.ndarray):
        return _integral_of_many(order, eta)
    return _integral_of_one(order, float(eta))


def _integral_of_one(order: float, eta: float) -> float:
    if order == 0.0:
        return max(eta, 0.0) + math.log1p(math.exp(-abs(eta)))
    if order in (-1.0, -2.0):
        decay = math.exp(-abs(eta))
        filled = (1.0 if eta >= 0.0 else decay) / (1.0 + decay)
        return filled if order == -1.0 else decay / (1.0 + decay) ** 2
    if eta < LOW:
        return math.exp(eta) if eta > -745.0 else 0.0
    if eta >= HIGH:
        return _series_of_one(order, eta)
    cell = min(int((eta - LOW) * _CELLS_PER_UNIT), _LAST_CELL)
    offset = eta - ((cell + 0.5) / _CELLS_PER_UNIT + LOW)
    a, b, c, d, e, f, g = cells(FILE, _name_of(order))[cell]
    return (((((a * offset + b) * offset + c) * offset + d) * offset + e) * offset + f) * offset + g


@cache
def _name_of(order: float) -> str:
    if order not in TABULATED:
        raise ValueError(f"no Fermi-Dirac integral of order {order}; on offer: {ORDERS}")
    return f"integral_{round(2 * order)}"


@cache
def _series(order: float) -> tuple[float, tuple[float, ...]]:
    """Return Gamma(j + 2) and the terms of Sommerfeld's series, the highest first."""
    terms = table(FILE, _name_of(order).replace("integral", "series"))
    return math.gamma(order + 2.0), tuple(terms.tolist()[::-1])


def _series_of_one(order: float, eta: float) -> float:
    gamma, terms = _series(order)
    inverse_square = 1.0 / (eta * eta)
    total = 0.0
    for term in terms:
        total = (total + term) * inverse_square
    return _power_of_one(eta, order + 1.0) * (1.0 + total) / gamma


def _power_of_one(eta: float, exponent: float) -> float:
    """Return a whole or half power by products and a square root, which round less than a general power."""
    whole = math.floor(exponent)
    result = eta**whole if whole >= 0 else 1.0 / eta**-whole
    return result if whole == exponent else result * math.sqrt(eta)


def _integral_of_many(order: float, eta: FloatArray) -> FloatArray:
    if order == 0.0:
        return np.asarray(np.maximum(eta, 0.0) + np.log1p(np.exp(-np.abs(eta))))
    if order in (-1.0, -2.0):
        decay = np.exp(-np.abs(eta))
        filled = np.where(eta >= 0.0, 1.0, decay) / (1.0 + decay)
        return filled if order == -1.0 else decay / (1.0 + decay) ** 2
    polynomials = table(FILE, _name_of(order))
    flat = np.ascontiguousarray(eta, dtype=np.float64).ravel()
    result = np.empty_like(flat)
    for start in range(0, flat.size, _CHUNK):
        part = flat[start : start + _CHUNK]
        _tabulated(order, polynomials, part, result[start : start + _CHUNK])
    return result.reshape(eta.shape)


def _tabulated(order: float, polynomials: FloatArray, eta: FloatArray, result: FloatArray) -> None:
    """Fill `result` with one chunk's integrals: the table for all, then the two ends where there are any."""
    lowest, highest = eta.min(), eta.max()
    inside = eta if LOW <= lowest and highest < HIGH else np.clip(eta, LOW, HIGH)
    cell = np.minimum(((inside - LOW) * _CELLS_PER_UNIT).astype(np.intp), _LAST_CELL)
    # The centre is formed exactly and then subtracted: the other order costs 4e-15.
    offset = inside - ((cell + 0.5) / _CELLS_PER_UNIT + LOW)
    horner(polynomials, cell, offset, result)
    if lowest < LOW:
        below = eta < LOW
        result[below] = np.exp(eta[below])
    if highest >= HIGH:
        above = eta >= HIGH
        result[above] = _series_of_many(order, eta[above])


def _series_of_many(order: float, eta: FloatArray) -> FloatArray:
    gamma, terms = _series(order)
    inverse_square = 1.0 / (eta * eta)
    total = np.zeros_like(eta)
    for term in terms:
        total += term
        total *= inverse_square
    total += 1.0
    total *= half_power(eta, order + 1.0)
    total /= gamma
    return total


def half_power(eta: FloatArray, exponent: float) -> FloatArray:
    """Return a whole or half power by products and a square root, which round less than a general power."""
    whole = math.floor(exponent)
    result = np.ones_like(eta)
    for _ in range(abs(whole)):
        result *= eta
    if whole < 0:
        result = 1.0 / result
    return result if whole == exponent else result * np.sqrt(eta)
