"""What every ladder of one sample that is filled level by level has in common: its list, made once, and its cost."""

from abc import abstractmethod
from typing import Self

import numpy as np
from numpy.typing import NDArray

from service.physics.constants import BOLTZMANN
from service.physics.filling.states import States
from service.physics.levels.source import Ladder, LevelSource
from service.physics.values import Values


class ListedStates(States):
    """The states of one sample's ladder, listed up to the highest energy that was asked.

    Parameters
    ----------
    source : LevelSource
        The ladder.
    reach : float
        How many kT above the chemical potential a level still counts [1].
    """

    method = "level-sum"

    def __init__(self, source: LevelSource, reach: float) -> None:
        self._source = source
        self._reach = reach
        self._known: tuple[float, Ladder] | None = None

    @property
    def lowest_level(self) -> float:
        return self._source.lowest

    def take(self, rows: NDArray[np.intp] | NDArray[np.bool_]) -> Self:
        raise TypeError("one sample has no rows to take")

    def work(self, density: Values, temperature: Values) -> float:
        return self._source.count_estimate(self._most(float(density)) + self._reach * BOLTZMANN * float(temperature))

    @abstractmethod
    def _most(self, density: float) -> float:
        """Return an energy not far above the Fermi energy, found before any level is listed."""

    def levels_estimate(self, highest: Values) -> float:
        return self._source.count_estimate(max(0.0, float(highest)))

    def _levels(self, energy: float) -> Ladder:
        """Return the levels up to an energy, listed once for the highest that was asked."""
        if self._known is None or energy > self._known[0]:
            self._known = energy, self._source.levels_up_to(energy)
        return self._known[1].up_to(energy)

    def ladder(self, highest: float, most: int) -> tuple[Ladder, int]:
        ladder = self._levels(max(highest, 0.0))
        return ladder.first(most), ladder.edge.size
