"""Where a ladder comes from: what a confinement must tell for its levels to be filled one by one."""

from typing import Protocol

from service.physics.values import FloatArray


class LevelSource(Protocol):
    """The levels of one sample's confinement, from the lowest one up."""

    lowest: float
    """Energy of the lowest level above the band edge [J]."""

    closes: bool
    """Whether the ladder ends, as that of a finite well does."""

    def count_estimate(self, energy: float) -> float:
        """Return about how many levels have their edge up to `energy` above the lowest, without listing them [1]."""
        ...

    def edges_up_to(self, energy: float) -> FloatArray:
        """Return the edges up to `energy`, ascending, each from the lowest level, the first being zero [J]."""
        ...
