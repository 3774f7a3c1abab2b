"""Comparison of numbers that may be small: relative alone, since pytest's own adds an absolute 1e-12 unasked."""

from typing import Any

import pytest


def near(expected: Any, *, rel: float | None = None, abs: float | None = None) -> Any:
    """Return what compares equal to a number within the tolerance stated, relative or absolute or either of both."""
    if rel is None and abs is None:
        raise TypeError("a comparison states its tolerance")
    return pytest.approx(expected, abs=abs) if rel is None else pytest.approx(expected, rel=rel, abs=abs or 0.0)
