"""What a request would cost, told before anything is computed: valid but enormous requests are refused up front."""

from collections.abc import Callable
from functools import wraps
from typing import Final, ParamSpec, TypeVar

import numpy as np

from service.calculators.sample import ElectronGas
from service.errors import Fault, TooLarge
from service.physics.filling.level_curve import REACH
from service.physics.levels.source import TooManyLevels
from service.physics.values import FloatArray, Values

P = ParamSpec("P")
R = TypeVar("R")

MOST_LEVELS: Final = 10_000_000
"""Levels that one request may add up, over all samples and energies: a few seconds of one core."""

_POINT: Final = 0.4
"""What one point of a curve costs for each level, against a whole solve, which goes over the levels some ten times."""


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


def refuse_enormous(gas: ElectronGas) -> None:
    """Refuse samples whose solves would add up more levels than the limit.

    Parameters
    ----------
    gas : ElectronGas
        The gas of the samples.

    Raises
    ------
    TooLarge
        With the limit, the estimate, and what would fit.
    """
    each = gas.states.work(gas.density, gas.sample.temperature)
    total = each if isinstance(each, float) and gas.sample.count is None else float(np.sum(gas.per_sample(each)))
    if total <= MOST_LEVELS:
        return
    count = gas.sample.count or 1
    if count > 1 and float(np.max(each)) <= MOST_LEVELS:
        remedy = f"about {max(1, int(count * MOST_LEVELS / total))} of these {count} samples would fit in one request"
    else:
        remedy = "a smaller size, fewer carriers or a lower temperature would fit"
    raise TooLarge(Fault(("geometry",), _too_many(total) + remedy))


def refuse_long_curve(gas: ElectronGas, energies: FloatArray, width: Values = 0.0) -> None:
    """Refuse curves that would add up more levels than the limit.

    Parameters
    ----------
    gas : ElectronGas
        The gas of the samples.
    energies : ndarray, shape (M,) or (N, M)
        The curves' energies, from the lowest level [J].
    width : float or ndarray, shape (N,)
        The width of the broadening, zero where there is none [J].

    Raises
    ------
    TooLarge
        With the limit, the estimate, and how many energies would fit.
    """
    highest = np.max(energies, axis=-1) + REACH * width
    levels = gas.states.levels_estimate(highest if gas.is_batch else float(highest))
    each = np.max(gas.per_sample(levels)) * (gas.sample.count or 1) * _POINT
    points = energies.shape[-1]
    if points * each <= MOST_LEVELS:
        return
    fitting = int(MOST_LEVELS / each)
    remedy = f"about {fitting} energies would fit" if fitting else "lower energies or a narrower broadening would fit"
    raise TooLarge(Fault(("energies",), _too_many(float(points * each)) + remedy))


def _too_many(total: float) -> str:
    return f"this request would add up about {total:.1e} levels, more than the limit of {MOST_LEVELS}: "
