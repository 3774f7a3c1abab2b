"""What a request would cost, told before anything is computed: valid but enormous requests are refused up front."""

from collections.abc import Callable
from functools import wraps
from typing import Final, ParamSpec, TypeVar

import numpy as np

from service.calculators.sample import ElectronGas
from service.errors import Fault, TooLarge
from service.physics.levels.source import TooManyLevels

P = ParamSpec("P")
R = TypeVar("R")

MOST_LEVELS: Final = 20_000_000
"""Levels that one request may add up, over all samples and energies: a few seconds of one core."""

_SOLVE = 10.0
"""Sums over the levels in one solve, about: the steps to the root, and the results that need a sum of their own."""


def within_levels(calculate: Callable[P, R]) -> Callable[P, R]:
    """Refuse, instead of failing, where a calculator finds that a curve needs more levels than can be listed."""

    @wraps(calculate)
    def calculated(*stated: P.args, **options: P.kwargs) -> R:
        try:
            return calculate(*stated, **options)
        except TooManyLevels as error:
            detail = f"this request needs {error}: lower energies or a narrower broadening would fit"
            raise TooLarge(Fault(("energies",), detail)) from None

    return calculated


def refuse_enormous(gas: ElectronGas, points: int = 0) -> None:
    """Refuse a request that would add up more levels than the limit.

    Parameters
    ----------
    gas : ElectronGas
        The gas of the samples.
    points : int
        Energies of the curve that is asked for as well, 0 where none is [1].

    Raises
    ------
    TooLarge
        With the limit, the estimate, and what would fit.
    """
    each = gas.states.work(gas.density, gas.sample.temperature) * (_SOLVE + points) / _SOLVE
    total = each if isinstance(each, float) and gas.sample.count is None else float(np.sum(gas.per_sample(each)))
    if total <= MOST_LEVELS:
        return
    count = gas.sample.count or 1
    largest = float(np.max(each))
    if count > 1 and largest <= MOST_LEVELS:
        fitting = max(1, int(count * MOST_LEVELS / total))
        remedy = f"about {fitting} of these {count} samples would fit in one request"
    elif points and largest * _SOLVE / (_SOLVE + points) <= MOST_LEVELS:
        fitting = max(1, int(_SOLVE * (MOST_LEVELS / largest * (_SOLVE + points) / _SOLVE - 1.0)))
        remedy = f"about {fitting} energies would fit"
    else:
        remedy = "a smaller size, fewer carriers or a lower temperature would fit"
    raise TooLarge(
        Fault(
            ("geometry",),
            f"this request would add up about {total:.1e} levels, more than the limit of {MOST_LEVELS}: {remedy}",
        )
    )
