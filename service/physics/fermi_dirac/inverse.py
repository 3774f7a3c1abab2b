r"""The chemical potential from a density: the inverse of the Fermi-Dirac integrals of order 1/2, 0 and -1/2."""

import math
from functools import cache
from typing import Any, Final

import numpy as np

from service.physics.fermi_dirac.complete import FILE
from service.physics.tabulated import cells, horner, table
from service.physics.values import FloatArray, Values

ORDERS: Final = (-0.5, 0.0, 0.5)
_NAMES: Final = {-0.5: "inverse_-1", 0.5: "inverse_1"}
_CELLS_PER_OCTAVE: Final = 64
_CELL_BITS: Final = 6
_SIGNIFICAND_BITS: Final = 52
_FIRST_OCTAVE: Final = -30
_LAST_OCTAVE: Final = {-0.5: 3, 0.5: 8}
_ONE: Final = 1023
"""The exponent field of 1.0 in an IEEE double."""

_CHUNK: Final = 1 << 14


def inverse_fermi_dirac_integral(order: float, value: Values) -> Values:
    r"""Return eta such that F_j(eta) is a value.

    .. math:: \eta = F_j^{-1}(u), \qquad F_0^{-1}(u) = u + \ln(1 - e^{-u})

    Parameters
    ----------
    order : float
        j: 1/2, 0 or -1/2, for the density in three, two and one dimensions [1].
    value : float or ndarray
        u > 0, the density over the effective density of states, of any shape [1].

    Returns
    -------
    float or ndarray
        eta, of the same shape [1].

    Raises
    ------
    ValueError
        If the order is not on offer.

    Notes
    -----
    No first guess and no iteration: from 2^-30 to where the degenerate series takes over, a polynomial of degree 6 in
    each of 64 cells an octave, found by the bits of the double. Below, the logarithm and one term; above, the reverted
    Sommerfeld series. The error is at most 4e-16 max(1, abs(eta)) against ball arithmetic. For eta << 0 the density
    itself is conditioned as abs(eta) times the rounding of eta.

    References
    ----------
    NIST DLMF 25.12.16; A. Sommerfeld, Z. Phys. 47, 1 (1928), reverted.

    Examples
    --------
    >>> round(inverse_fermi_dirac_integral(0.5, 0.7651470246254079), 12) + 0.0
    0.0
    """
    if isinstance(value, np.ndarray):
        return _inverse_of_many(order, value)
    return _inverse_of_one(order, float(value))


def _inverse_of_one(order: float, value: float) -> float:
    if order == 0.0:
        return value + math.log(-math.expm1(-value))
    if order not in _LAST_OCTAVE:
        raise ValueError(f"no inverse of order {order}; on offer: {ORDERS}")
    significand, exponent = math.frexp(value)
    octave = exponent - 1 - _FIRST_OCTAVE
    if octave < 0:
        return math.log(value) + value * math.pow(2.0, -(order + 1.0))
    if exponent - 1 >= _LAST_OCTAVE[order]:
        return _degenerate_of_one(order, value)
    significand *= 2.0
    part = int((significand - 1.0) * _CELLS_PER_OCTAVE)
    offset = significand - (1.0 + (part + 0.5) / _CELLS_PER_OCTAVE)
    a, b, c, d, e, f, g = cells(FILE, _NAMES[order])[octave * _CELLS_PER_OCTAVE + part]
    return (((((a * offset + b) * offset + c) * offset + d) * offset + e) * offset + f) * offset + g


@cache
def _series(order: float) -> tuple[float, tuple[float, ...]]:
    """Return Gamma(j + 2) and the terms of the reverted series, the highest first."""
    return math.gamma(order + 2.0), tuple(
        table(FILE, _NAMES[order].replace("inverse", "inverse_series")).tolist()[::-1]
    )


def _degenerate_of_one(order: float, value: float) -> float:
    gamma, terms = _series(order)
    root = gamma * value
    leading = root * root if order < 0.0 else _polished(math.cbrt(root * root), root * root)
    inverse_square = 1.0 / (leading * leading)
    total = 0.0
    for term in terms:
        total = (total + term) * inverse_square
    return leading + leading * total


def _polished(root: Any, cube: Any) -> Any:
    """Return a cube root after one Newton step: the library's own is off by up to a unit of the last digit."""
    return root - (root - cube / (root * root)) / 3.0


def _inverse_of_many(order: float, value: FloatArray) -> FloatArray:
    if order == 0.0:
        return np.asarray(value + np.log(-np.expm1(-value)))
    if order not in _LAST_OCTAVE:
        raise ValueError(f"no inverse of order {order}; on offer: {ORDERS}")
    flat = np.ascontiguousarray(value, dtype=np.float64).ravel()
    result = np.empty_like(flat)
    for start in range(0, flat.size, _CHUNK):
        _tabulated(order, flat[start : start + _CHUNK], result[start : start + _CHUNK])
    return result.reshape(value.shape)


def _tabulated(order: float, value: FloatArray, result: FloatArray) -> None:
    """Fill `result` with one chunk's inverses: the table for all, then the two ends where there are any."""
    polynomials = table(FILE, _NAMES[order])
    bits = value.view(np.int64)
    cell = (bits >> (_SIGNIFICAND_BITS - _CELL_BITS)) - ((_ONE + _FIRST_OCTAVE) << _CELL_BITS)
    significand = ((bits & ((1 << _SIGNIFICAND_BITS) - 1)) | (_ONE << _SIGNIFICAND_BITS)).view(np.float64)
    part = cell & (_CELLS_PER_OCTAVE - 1)
    offset = significand - (1.0 + (part + 0.5) / _CELLS_PER_OCTAVE)
    horner(polynomials, cell, offset, result)
    if cell.min() < 0:
        below = cell < 0
        small = value[below]
        result[below] = np.log(small) + small * math.pow(2.0, -(order + 1.0))
    if cell.max() >= polynomials.shape[1]:
        above = cell >= polynomials.shape[1]
        result[above] = _degenerate_of_many(order, value[above])


def _degenerate_of_many(order: float, value: FloatArray) -> FloatArray:
    gamma, terms = _series(order)
    root = gamma * value
    leading = root * root if order < 0.0 else _polished(np.cbrt(root * root), root * root)
    inverse_square = 1.0 / (leading * leading)
    total = np.zeros_like(leading)
    for term in terms:
        total += term
        total *= inverse_square
    total *= leading
    total += leading
    return total
