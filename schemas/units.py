"""The closed vocabulary of units: looked up by exact spelling, never evaluated.

`tables/units.json` holds it; `tables/make_units.py` makes that file from `tables/units.toml`.
"""

import json
from collections.abc import Mapping
from dataclasses import dataclass, field
from importlib.resources import files
from types import MappingProxyType
from typing import Final, TypeVar

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
Number = TypeVar("Number", float, FloatArray, float | FloatArray)

QUDT: Final = "http://qudt.org/vocab/unit/"


@dataclass(frozen=True, slots=True, eq=False)
class Unit:
    """One unit.

    Attributes
    ----------
    symbol : str
        As this service writes it.
    dimension : str
        The name of its dimension.
    factor : float
        The unit's size in SI units, the double nearest to it.
    divisor : float or None
        What a value is divided by to be in SI where that is more exact: 1e9 is a double, 1e-9 is not.
    ucum, qudt : str or None
        Its UCUM code and QUDT IRI, where those vocabularies have it.
    source : str
        Where its size is from.
    spellings : tuple of str
        All that is read as this unit, the symbol first.
    """

    symbol: str
    dimension: str
    factor: float
    divisor: float | None
    ucum: str | None
    qudt: str | None
    source: str
    spellings: tuple[str, ...] = field(repr=False)

    def to_si(self, value: Number) -> Number:
        """Return a value of this unit in SI.

        Examples
        --------
        >>> look_up("nm").to_si(12.0)
        1.2e-08
        """
        return value * self.factor if self.divisor is None else value / self.divisor

    def from_si(self, value: Number) -> Number:
        """Return an SI value in this unit.

        Examples
        --------
        >>> look_up("cm⁻³").from_si(8.49e28)
        8.49e+22
        """
        return value / self.factor if self.divisor is None else value * self.divisor


@dataclass(frozen=True, slots=True, eq=False)
class Dimension:
    """One dimension.

    Attributes
    ----------
    name : str
        Its name.
    phrase : str
        The words for it in a sentence.
    si : Unit
        Its coherent SI unit.
    units : tuple of Unit
        All its units, the usual ones first.
    """

    name: str
    phrase: str
    si: Unit
    units: tuple[Unit, ...]

    @property
    def proposal(self) -> str:
        """Three units that would do, as words."""
        first, second, third = (unit.symbol for unit in self.units[:3])
        return f"{first}, {second} or {third}"


def read_table() -> Mapping[str, Dimension]:
    """Return the dimensions of the table by name."""
    table = json.loads(files("schemas.tables").joinpath("units.json").read_text(encoding="utf-8"))
    dimensions = {}
    for row in table["dimensions"]:
        units = {
            unit["symbol"]: Unit(
                symbol=unit["symbol"],
                dimension=row["name"],
                factor=unit["factor"],
                divisor=unit["divisor"],
                ucum=unit["ucum"],
                qudt=QUDT + unit["qudt"] if unit["qudt"] else None,
                source=unit["source"],
                spellings=(unit["symbol"], *unit["also"]),
            )
            for unit in row["units"]
        }
        dimensions[row["name"]] = Dimension(row["name"], row["phrase"], units[row["si"]], tuple(units.values()))
    return MappingProxyType(dimensions)


DIMENSIONS: Final = read_table()

SPELLINGS: Final[Mapping[str, Unit]] = {
    spelling: unit for dimension in DIMENSIONS.values() for unit in dimension.units for spelling in unit.spellings
}
"""Every spelling that is read, and its unit."""

LONGEST: Final = max(map(len, SPELLINGS))


def look_up(spelling: str) -> Unit:
    """Return the unit that a string spells.

    Raises
    ------
    KeyError
        Where no unit is spelled so; the string is compared, never evaluated.
    """
    if len(spelling) > LONGEST:
        raise KeyError("a unit")
    return SPELLINGS[spelling]
