"""One sample is a Python float, many samples are an array: the type that every physics function takes and returns.

A call with floats alone takes a plain-float path (``math``), since a NumPy call on one element costs as much as fifty
float operations. A call with an array anywhere takes the vectorised path; the formulas are the same.
"""

import math
from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
"""Doubles of any shape."""

Values = float | FloatArray
"""A number for one sample, or an array with one element a sample."""


def choose(condition: bool | NDArray[np.bool_], yes: Values, no: Values) -> Values:
    """Return `yes` where the condition holds, else `no`, for one sample or many."""
    if isinstance(condition, np.ndarray):
        return np.where(condition, yes, no)
    return yes if condition else no


def largest(first: Values, second: Values) -> Values:
    """Return the larger of two, for one sample or many."""
    if isinstance(first, np.ndarray) or isinstance(second, np.ndarray):
        return np.maximum(first, second)
    return max(first, second)


def smallest(first: Values, second: Values) -> Values:
    """Return the smaller of two, for one sample or many."""
    if isinstance(first, np.ndarray) or isinstance(second, np.ndarray):
        return np.minimum(first, second)
    return min(first, second)


def logarithm(values: Values) -> Values:
    """Return the natural logarithm, for one sample or many."""
    return np.log(values) if isinstance(values, np.ndarray) else math.log(values)


def elementwise(function: Callable[[float], float], values: Values) -> Values:
    """Apply a function of one float to one sample or to each of many."""
    if isinstance(values, np.ndarray):
        return np.array([function(float(value)) for value in values.ravel()]).reshape(values.shape)
    return function(values)
