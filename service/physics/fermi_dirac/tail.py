r"""Incomplete Fermi-Dirac integrals: the carriers above an energy, without taking a difference."""

import math
from typing import Final

import numpy as np

from service.physics.fermi_dirac.complete import fermi_dirac_integral
from service.physics.values import FloatArray, Values

ORDERS: Final = (-1.0, -0.5, 0.0, 0.5, 1.0, 1.5)

_BREAKS: Final = np.array([-40.0, -20.0, -10.0, -4.0, 0.0, 4.0, 10.0, 20.0, 40.0])
"""Ends of the panels about the step: each short against its distance to the poles at eta + i pi (2n + 1)."""

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)
_CHUNK: Final = 1 << 12


def fermi_dirac_tail(order: float, eta: Values, start: Values) -> Values:
    r"""Return the incomplete Fermi-Dirac integral from a start to infinity, divided by Gamma(j + 1).

    .. math:: F_j(\eta, b) = \frac{1}{\Gamma(j+1)} \int_b^\infty \frac{t^j\, dt}{1 + e^{t - \eta}}

    Parameters
    ----------
    order : float
        j, one of -1, -1/2, 0, 1/2, 1, 3/2; of order -1 the occupation at the start stands for the whole [1].
    eta : float or ndarray
        Reduced chemical potential [1].
    start : float or ndarray
        b >= 0, of a shape that broadcasts with eta [1].

    Returns
    -------
    float or ndarray
        The integral, of the common shape [1].

    Raises
    ------
    ValueError
        If the order is not on offer.

    Notes
    -----
    In closed form for the orders 0 and -1. Else Gauss-Legendre in the square root of t on panels that follow the
    step, and the plain power where all is filled; nothing is subtracted, so a tail of exp(-300) keeps its digits. The
    relative error is below 1e-13 against mpmath's quadrature.

    References
    ----------
    NIST DLMF 25.12.14, with the lower limit raised.

    Examples
    --------
    >>> round(fermi_dirac_tail(0.5, 0.0, 0.0), 12)
    0.765147024625
    """
    if order not in ORDERS:
        raise ValueError(f"no incomplete Fermi-Dirac integral of order {order}; on offer: {ORDERS}")
    many = isinstance(eta, np.ndarray) or isinstance(start, np.ndarray)
    if order in (-1.0, 0.0):
        return fermi_dirac_integral(order, eta - start)
    etas, starts = np.broadcast_arrays(np.asarray(eta, dtype=np.float64), np.asarray(start, dtype=np.float64))
    flat_eta, flat_start = etas.ravel(), starts.ravel()
    tails = np.concatenate(
        [
            _quadrature(order, flat_eta[at : at + _CHUNK], flat_start[at : at + _CHUNK])
            for at in range(0, flat_eta.size, _CHUNK)
        ]
    )
    return tails.reshape(etas.shape) if many else float(tails[0])


def _quadrature(order: float, eta: FloatArray, start: FloatArray) -> FloatArray:
    """Return one chunk's tails by the panels about the larger of step and start."""
    step = np.maximum(eta, start)
    # All measured from the step, so that a step far from zero keeps its digits through the square root.
    ends = np.maximum(_BREAKS, (start - step)[:, None])
    roots = np.sqrt(step[:, None] + ends)
    half = np.divide(
        0.5 * np.diff(ends), roots[:, 1:] + roots[:, :-1], where=roots[:, 1:] > 0.0, out=np.zeros_like(ends[:, 1:])
    )
    within = half[..., None] * (1.0 + _NODES)
    first = roots[:, :-1, None]
    root = first + within
    beyond = (step - eta)[:, None, None] + ends[:, :-1, None] + within * (first + root)
    decay = np.exp(-np.abs(beyond))
    filled = np.where(beyond > 0.0, decay, 1.0) / (1.0 + decay)
    panels = np.einsum("spn,n,sp->s", 2.0 * root ** (2.0 * order + 1.0) * filled, _WEIGHTS, half)
    full = np.maximum(step + _BREAKS[0] - start, 0.0)
    return np.asarray((panels + _power_integral(order, start, full)) / math.gamma(order + 1.0))


def _power_integral(order: float, start: FloatArray, length: FloatArray) -> FloatArray:
    """Return the integral of t^j over a stretch on which every state is filled to within exp(-40)."""
    power = order + 1.0
    end = start + length
    ratio = np.divide(length, end, out=np.zeros_like(end), where=end > 0.0)
    short = -np.expm1(power * np.log1p(-np.minimum(ratio, 0.5))) * end**power
    return np.asarray(np.where(ratio < 0.5, short, end**power - start**power) / power)
