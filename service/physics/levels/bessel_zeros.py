r"""Zeros of the Bessel functions J_m and of the spherical Bessel functions j_l: the wave numbers of round hard walls.

Up to 1000 they come from a table, about 125,000 each; beyond, from the phase of the function, whose series is exact to
the last digit there, so that no zero is searched for and a window of them costs what it holds.
"""

import math
from dataclasses import dataclass
from functools import cache
from typing import Final, Literal

import numpy as np
from numpy.typing import NDArray

from service.physics.levels.source import TooManyLevels
from service.physics.tabulated import table
from service.physics.values import FloatArray

Family = Literal["cylinder", "sphere"]
"""``cylinder`` for J_m, m = 0, 1, ...; ``sphere`` for j_l, which is J of the order l + 1/2 but for a factor."""

TABLE_END: Final = 1000.0
"""Every zero up to here is tabulated."""

_FILE: Final = "bessel_zeros.npz"
_PHASE_ORDERS: Final = (11, 9, 7, 5, 3, 1)
_FIRST_ZEROS: Final = 7
"""The zeros of one order that lie too near its turning point for the phase's series."""

_LEADING_STEPS: Final = 6
_FULL_STEPS: Final = 3
"""Newton steps on the phase's leading term, from anywhere in a window, and then on all of it, to the last digit."""


@dataclass(frozen=True, slots=True)
class BesselZeros:
    """Zeros of one family, ascending.

    Attributes
    ----------
    zero : ndarray, shape (L,)
        x_{m,n} or x_{l,n} [1].
    order : ndarray of int, shape (L,)
        m or l, from 0 [1].
    number : ndarray of int, shape (L,)
        n, from 1 within an order [1].
    """

    zero: FloatArray
    order: NDArray[np.int32]
    number: NDArray[np.int32]

    def up_to(self, bound: float) -> "BesselZeros":
        """Return the zeros up to a bound, as views."""
        end = int(np.searchsorted(self.zero, bound, side="right"))
        return BesselZeros(self.zero[:end], self.order[:end], self.number[:end])


def orbital_degeneracy(family: Family, order: NDArray[np.int32]) -> FloatArray:
    r"""Return how many orbital levels share a zero of an order.

    .. math:: d_m = 2 - \delta_{m,0}, \qquad d_l = 2 l + 1

    Parameters
    ----------
    family : str
        ``cylinder`` or ``sphere`` [1].
    order : ndarray of int
        m or l [1].

    Returns
    -------
    ndarray
        The degeneracies, of the same shape [1].

    References
    ----------
    L. D. Landau, E. M. Lifshitz, Quantum Mechanics, 3rd ed. (1977), sections 27 and 33.

    Examples
    --------
    >>> orbital_degeneracy("sphere", np.arange(3, dtype=np.int32)).tolist()
    [1.0, 3.0, 5.0]
    """
    orders = order.astype(np.float64)
    return 2.0 * orders + 1.0 if family == "sphere" else np.where(orders > 0.0, 2.0, 1.0)


def bessel_zeros(family: Family, bound: float, most: float = 2e6) -> BesselZeros:
    r"""Return all zeros of a family up to a bound, ascending.

    .. math:: J_m(x_{m,n}) = 0, \qquad j_l(x_{l,n}) = 0

    Parameters
    ----------
    family : str
        ``cylinder`` or ``sphere`` [1].
    bound : float
        The largest zero wanted [1].
    most : float
        How many zeros may be listed at most [1].

    Returns
    -------
    BesselZeros
        The zeros; up to 1000 as views of the table that all callers share [1].

    Raises
    ------
    ValueError
        If there are more than `most`.

    Notes
    -----
    Within 4e-16, relative, of the true zeros: the table is right to the last digit (python-flint, ball arithmetic), and
    beyond it the phase's series agrees with it to 1e-16 where both are on hand.

    References
    ----------
    NIST DLMF 10.19.8, 10.21.40; F. W. J. Olver, Phil. Trans. R. Soc. A 247, 328 (1954).

    Examples
    --------
    >>> bessel_zeros("cylinder", 6.0).zero.round(4).tolist()
    [2.4048, 3.8317, 5.1356, 5.5201]
    """
    tabulated = _tabulated(family)
    if bound <= TABLE_END:
        return tabulated.up_to(bound)
    count = bound * bound / 8.0
    if count > most:
        raise ValueError(f"about {count:.1e} zeros up to {bound}, more than the {most:.1e} allowed")
    beyond, _ = zeros_between(family, TABLE_END, bound)
    return BesselZeros(
        np.concatenate([tabulated.zero, beyond.zero]),
        np.concatenate([tabulated.order, beyond.order]),
        np.concatenate([tabulated.number, beyond.number]),
    )


@cache
def _tabulated(family: Family) -> BesselZeros:
    """Return the table, sorted once and kept read-only, so that forked workers share it."""
    counts = table(_FILE, f"{family}_counts").astype(np.int32)
    order = np.repeat(np.arange(counts.size, dtype=np.int32), counts)
    number = np.concatenate([np.arange(1, count + 1, dtype=np.int32) for count in counts])
    zero = table(_FILE, f"{family}_zeros")
    ascending = np.argsort(zero, kind="stable")
    result = BesselZeros(zero[ascending], order[ascending], number[ascending])
    for column in (result.zero, result.order, result.number):
        column.flags.writeable = False
    return result


MOST_ORDERS: Final = 1_000_000
"""Orders that one count may run over, half a second of work: the largest bound of a zero."""


def zeros_between(family: Family, low: float, high: float) -> tuple[BesselZeros, float]:
    r"""Return the zeros in a window beyond the table, and how many orbital levels lie below the window.

    .. math::

        \theta_\nu(x) = \sqrt{x^2 - \nu^2} - \nu \arccos\frac{\nu}{x} - \frac{\pi}{4} - \frac{1}{8 \sqrt{x^2 - \nu^2}}
        - \dots = \bigl(n - \tfrac12\bigr) \pi

    Parameters
    ----------
    family : str
        ``cylinder`` or ``sphere`` [1].
    low, high : float
        The window; its lower end is at least 1000, and belongs to what lies below [1].

    Returns
    -------
    BesselZeros
        The zeros above `low` and up to `high`, ascending [1].
    float
        The orbital levels at or below `low`, degeneracies counted [1].

    Raises
    ------
    ValueError
        If the window begins below 1000, where the table serves.
    TooManyLevels
        If it ends beyond a million.

    Notes
    -----
    An order's zeros from the eighth on by the phase (terms to 1/nu^11), the first seven by their expansion for large
    orders: both within 1e-16, relative, of the table where it ends. Only the zeros in the window are computed, so the
    cost is that of one phase an order and of the zeros listed.

    References
    ----------
    NIST DLMF 10.18.18, 10.19.8, 10.21.40.

    Examples
    --------
    >>> zeros, below = zeros_between("sphere", 1000.0, 1000.1)
    >>> float(zeros.zero[0].round(9)), below
    (1000.001644262, 70488773.0)
    """
    if low < TABLE_END:
        raise ValueError(f"the window begins at {low}, where the table serves: up to {TABLE_END}")
    orders, index = _orders_up_to(family, high)
    early = _first_zeros(index)
    first, last = _zeros_up_to(index, early, low), _zeros_up_to(index, early, high)
    below = float(np.sum(orbital_degeneracy(family, orders) * first))
    counts = (last - first).astype(np.intp)
    order, indices = np.repeat(orders, counts), np.repeat(index, counts)
    number = np.arange(counts.sum()) - np.repeat(np.cumsum(counts) - counts, counts) + np.repeat(first, counts) + 1.0
    zero = _zeros_by_phase(indices, number, low, high)
    near = number <= _FIRST_ZEROS
    zero[near] = early[number[near].astype(np.intp) - 1, order[near]]
    ascending = np.argsort(zero)
    return BesselZeros(zero[ascending], order[ascending], number[ascending].astype(np.int32)), below


def zeros_up_to(family: Family, bound: float) -> tuple[float, float]:
    r"""Return how many zeros lie up to a bound beyond the table, and how many orbital levels they are.

    .. math:: n_\nu(x) = \Bigl\lfloor \frac{\theta_\nu(x)}{\pi} + \frac12 \Bigr\rfloor

    Parameters
    ----------
    family : str
        ``cylinder`` or ``sphere`` [1].
    bound : float
        x, at least 1000 [1].

    Returns
    -------
    float
        The zeros of all orders up to the bound [1].
    float
        The same with their degeneracies [1].

    Notes
    -----
    By the phase of each order, see `zeros_between`: no zero is listed.

    References
    ----------
    NIST DLMF 10.18.18, 10.19.8.

    Examples
    --------
    >>> zeros_up_to("cylinder", 1000.0)
    (124906.0, 249494.0)
    """
    orders, index = _orders_up_to(family, bound)
    counts = _zeros_up_to(index, _first_zeros(index), bound)
    return float(np.sum(counts)), float(np.sum(orbital_degeneracy(family, orders) * counts))


def _orders_up_to(family: Family, bound: float) -> tuple[NDArray[np.int32], FloatArray]:
    """Return the orders whose zeros may lie up to a bound, and the index nu of each."""
    if bound > MOST_ORDERS:
        raise TooManyLevels(bound * bound / 8.0)
    orders = np.arange(math.floor(bound) + 1, dtype=np.int32)
    return orders, orders.astype(np.float64) + (0.5 if family == "sphere" else 0.0)


def _first_zeros(index: FloatArray) -> FloatArray:
    """Return the first seven zeros of each index; small indices, whose zeros lie far below, are taken as larger."""
    small = np.power(np.maximum(index, 100.0), -2.0 / 3.0)
    return np.asarray(index * np.polynomial.polynomial.polyval(small, table(_FILE, "first_zeros").T))


def _zeros_up_to(index: FloatArray, early: FloatArray, x: float) -> FloatArray:
    """Return how many zeros of each index lie at or below x."""
    count: FloatArray = np.sum(early <= x, axis=0).astype(np.float64)
    many = count == _FIRST_ZEROS
    phase, _ = _phase(index[many], np.full(int(many.sum()), float(x)))
    count[many] = np.maximum(np.floor(phase / math.pi + 0.25), _FIRST_ZEROS)
    return count


def _zeros_by_phase(index: FloatArray, number: FloatArray, low: float, high: float) -> FloatArray:
    """Return zeros by Newton steps on the phase, from the middle of the window or just beyond the turning point."""
    target = (number - 0.25) * math.pi
    nearest = index + np.cbrt(index)
    x = np.maximum(0.5 * (low + high), nearest)
    for step in range(_LEADING_STEPS + _FULL_STEPS):
        phase, slope = _leading_phase(index, x) if step < _LEADING_STEPS else _phase(index, x)
        x = np.maximum(x - (phase - target) / slope, nearest)
    return x


def _leading_phase(index: FloatArray, x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the phase of J_nu beyond its turning point, plus pi/4, by its leading term, and the slope of that."""
    root = np.sqrt((x - index) * (x + index))
    return root - index * np.arctan2(root, index), root / x


def _phase(index: FloatArray, x: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the same by the whole series, with the leading term's slope."""
    phase, slope = _leading_phase(index, x)
    inverse_square = 1.0 / ((x - index) * (x + index))
    ratio = index * index * inverse_square
    correction = np.zeros_like(x)
    for order in _PHASE_ORDERS:
        terms = table(_FILE, f"phase_{order}")
        polynomial = np.full_like(x, terms[-1])
        for term in terms[-2::-1]:
            polynomial *= ratio
            polynomial += term
        correction *= inverse_square
        correction += polynomial
    return phase - correction / (slope * x), slope
