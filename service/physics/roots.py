"""Roots of increasing functions, for one sample or many at once."""

from collections.abc import Callable

import numpy as np

from service.physics.values import FloatArray, Values

MOST_STEPS = 200
"""Enough for a bisection to run through every double of a bracket, and so a bound that no call reaches in vain."""

Increasing = Callable[[Values], tuple[Values, Values]]
"""A function that returns its value and its slope."""


def increasing_root(
    function: Increasing, low: Values, high: Values, tolerance: Values, start: Values | None = None
) -> Values:
    r"""Return where an increasing function crosses zero, by Newton steps kept inside a shrinking bracket.

    .. math:: x_{k+1} = x_k - f(x_k) / f'(x_k)

    A step that leaves the bracket is replaced by its middle, so a step function is bisected.

    Parameters
    ----------
    function : callable
        Takes a float or an array of shape (N,) and returns value and slope, each of the same shape [1].
    low, high : float or ndarray, shape (N,)
        A bracket: the function is not positive at `low` and not negative at `high` [1].
    tolerance : float or ndarray, shape (N,)
        The length of a step, or of a bracket, that ends the search [1].
    start : float or ndarray, shape (N,), or None
        Where the steps begin, inside the bracket; None for `low` [1].

    Returns
    -------
    float or ndarray, shape (N,)
        The root [1].

    Notes
    -----
    Ends on the step, not on the residual: near a root the residual is rounding, and a bisection set off by it would
    move a converged root. Newton steps start from `low` unless told otherwise, from where they are monotone on a
    concave function such as the logarithm of a density.

    References
    ----------
    W. H. Press et al., Numerical Recipes, 3rd ed. (2007), section 9.4.

    Examples
    --------
    >>> round(increasing_root(lambda x: (x * x - 2.0, 2.0 * x), 1.0, 2.0, 1e-15), 12)
    1.414213562373
    """
    if isinstance(low, np.ndarray) or isinstance(high, np.ndarray) or isinstance(tolerance, np.ndarray):
        lows, highs, tolerances = np.broadcast_arrays(low, high, tolerance)
        first = lows if start is None else np.broadcast_to(start, lows.shape)
        return _roots(function, lows.astype(np.float64), highs.astype(np.float64), tolerances, first.astype(np.float64))
    return _root(function, low, high, tolerance, low if start is None else float(start))


def _root(function: Increasing, low: float, high: float, tolerance: float, point: float) -> float:
    for _ in range(MOST_STEPS):
        value, slope = (float(part) for part in function(point))
        if value == 0.0:
            return point
        if value < 0.0:
            low = point
        else:
            high = point
        step = -value / slope if slope > 0.0 else 0.0
        following = point + step
        if abs(step) <= tolerance and slope > 0.0:
            return min(max(following, low), high)
        if not low < following < high:
            following = low + 0.5 * (high - low)
        if high - low <= tolerance or following in (low, high):
            return following
        point = following
    return point


def _roots(
    function: Increasing, low: FloatArray, high: FloatArray, tolerance: FloatArray, point: FloatArray
) -> FloatArray:
    done = np.zeros(low.shape, dtype=bool)
    for _ in range(MOST_STEPS):
        value, slope = (np.asarray(part, dtype=np.float64) for part in function(point))
        low = np.where(value < 0.0, point, low)
        high = np.where(value > 0.0, point, high)
        rising = slope > 0.0
        step = np.divide(-value, slope, out=np.zeros_like(value), where=rising)
        following = point + step
        small = rising & (np.abs(step) <= tolerance)
        outside = ~((low < following) & (following < high))
        middle = low + 0.5 * (high - low)
        following = np.where(small, np.clip(following, low, high), np.where(outside, middle, following))
        ended = small | (value == 0.0) | (high - low <= tolerance) | (following == low) | (following == high)
        following = np.where(value == 0.0, point, following)
        point = np.where(done, point, following)
        done = done | ended
        if done.all():
            break
    return point
