"""How much one request may ask for: published limits, set when the service starts."""

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Limits:
    """The most that one request may hold.

    Attributes
    ----------
    samples : int
        Samples.
    energies : int
        Points of a curve.
    curve_points : int
        Samples times points of a curve.
    default_energies : int
        Points of a curve where the request states none.
    """

    samples: int = 200_000
    energies: int = 100_000
    curve_points: int = 5_000_000
    default_energies: int = 401


DEFAULT_LIMITS = Limits()
