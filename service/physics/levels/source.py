"""Where a ladder comes from: what a confinement must tell for its levels to be filled one by one."""

from dataclasses import dataclass
from typing import Final, Protocol

import numpy as np
from numpy.typing import NDArray

from service.physics.values import FloatArray

MOST_LEVELS: Final = 5_000_000
"""Levels that one ladder may list: some hundred megabytes at the peak."""

SAME: Final = 8.0 * float(np.finfo(np.float64).eps)
"""Levels whose energies agree to this, relative, are one level."""


class TooManyLevels(ValueError):
    """A ladder would be longer than the limit."""

    def __init__(self, count: float) -> None:
        super().__init__(f"about {count:.1e} levels, more than the limit of {MOST_LEVELS}")
        self.count = count


@dataclass(frozen=True, slots=True)
class Ladder:
    """The first levels of one sample, lowest first; levels of one energy are one entry.

    Attributes
    ----------
    quantum_numbers : ndarray of int, shape (L, Q)
        One set of quantum numbers for each level, the lowest in lexical order where several share the energy [1].
    edge : ndarray, shape (L,)
        Energy of the level, or of the bottom of its subband, above the lowest level [J].
    degeneracy : ndarray, shape (L,)
        Orbital levels at that energy, spin and valleys not counted [1].
    """

    quantum_numbers: NDArray[np.int64]
    edge: FloatArray
    degeneracy: FloatArray

    def up_to(self, energy: float) -> "Ladder":
        """Return the levels up to an energy, and at least the lowest."""
        count = max(1, int(np.searchsorted(self.edge, energy, side="right")))
        return self.first(count)

    def first(self, count: int) -> "Ladder":
        """Return the first levels."""
        return Ladder(self.quantum_numbers[:count], self.edge[:count], self.degeneracy[:count])


class LevelSource(Protocol):
    """The levels of one sample's confinement, from the lowest one up."""

    @property
    def lowest(self) -> float:
        """Energy of the lowest level above the band edge [J]."""
        ...

    @property
    def weyl(self) -> tuple[float, ...] | None:
        """Weyl's count of orbital levels up to an energy above the band edge, or None where there is no such law.

        The coefficients of the energy's square root to the power p = 0, 1, 2, 3 [J^(-p/2)].
        """
        ...

    @property
    def closes(self) -> bool:
        """Whether the ladder ends, as that of a finite well does."""
        ...

    def count_estimate(self, energy: float) -> float:
        """Return about how many levels have their edge up to `energy` above the lowest, without listing them [1]."""
        ...

    def levels_up_to(self, energy: float) -> Ladder:
        """Return the levels with their edge up to `energy` above the lowest, and at least the lowest.

        Raises
        ------
        TooManyLevels
            Before anything is listed, if the ladder would be longer than the limit.
        """
        ...


def simple_ladder(edges: FloatArray) -> Ladder:
    """Return a ladder of single levels, numbered from one."""
    return Ladder(np.arange(1, edges.size + 1)[:, None], edges, np.ones(edges.size))


def merged_ladder(numbers: NDArray[np.int64], edges: FloatArray, degeneracies: FloatArray) -> Ladder:
    """Return levels sorted by energy, those of one energy as one entry."""
    order = np.lexsort((*numbers.T[::-1], edges))
    numbers, edges, degeneracies = numbers[order], edges[order], degeneracies[order]
    begins = np.concatenate([[True], np.diff(edges) > SAME * edges[1:]])
    starts = np.flatnonzero(begins)
    return Ladder(numbers[starts], edges[starts], np.add.reduceat(degeneracies, starts))
