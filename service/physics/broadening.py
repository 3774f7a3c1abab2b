"""Broadening of a level: line shapes, and what they make of a free gas of one, two or three dimensions."""

from dataclasses import dataclass

from service.physics.values import Values


@dataclass(frozen=True, slots=True)
class Broadening:
    """How sharp states are spread over energy.

    Attributes
    ----------
    kind : str
        ``none``, ``gaussian`` (width: the standard deviation), ``lorentzian`` (width: the half width at half maximum)
        or ``thermal`` (the shape -df/dE; width: kT).
    width : float or ndarray, shape (N,)
        The width [J]; not used for ``none``.
    """

    kind: str
    width: Values
