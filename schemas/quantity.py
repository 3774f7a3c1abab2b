"""The quantity field: a value with its unit outside, SI inside.

How a field reads in OpenAPI is said in `schemas.json_schema`; nothing here knows of it.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
from marshmallow import ValidationError
from numpy.typing import NDArray

from schemas.strict import LATER, LISTED, WHOLE, Member, hint, shortened
from schemas.units import DIMENSIONS, SPELLINGS, FloatArray, Unit, look_up

_NUMBERS: Final = frozenset((float, int))
_MEMBERS: Final = frozenset(("value", "unit"))
PURE: Final = "dimensionless"
_ONE: Final = SPELLINGS["1"]


@dataclass(slots=True)
class Stated:
    """A quantity as a request states it, and in SI.

    Attributes
    ----------
    unit : Unit
        The unit stated; 1 for a bare number.
    value : float or ndarray, shape (N,)
        The number or numbers in that unit.
    si : float or ndarray, shape (N,)
        The same in SI.
    bad : ndarray of int or None
        Elements of an array outside the field's range.
    reason : str
        What is wrong with them.
    """

    unit: Unit
    value: float | FloatArray
    si: float | FloatArray
    bad: NDArray[np.intp] | None = None
    reason: str = ""


class Quantity(Member):
    """A quantity of a request.

    Parameters
    ----------
    *dimensions : str
        The dimensions that its unit may have.
    least, most : float
        The range that is accepted, in SI.
    zero : bool
        Whether zero is accepted below `least`.
    whole : bool
        Whether it must be a whole number.
    arrays : bool or None
        True: one number or an array; False: one number; None: an array.
    """

    def __init__(
        self,
        *dimensions: str,
        least: float,
        most: float,
        zero: bool = False,
        whole: bool = False,
        arrays: bool | None = True,
        **options: Any,
    ) -> None:
        super().__init__(**options)
        self.dimensions = dimensions
        self.least = least
        self.most = most
        self.zero = zero
        self.whole = whole
        self.arrays = arrays
        self.bare = PURE in dimensions and len(dimensions) == 1

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Stated:
        kind = type(value)
        if kind is dict:
            return self._one_number(value) or self._from_object(value)
        if self.bare and (kind is float or kind is int):
            number = _number(value)
            return self._in_range(Stated(_ONE, number, number))
        raise ValidationError(self._what_it_takes(value))

    def _one_number(self, stated: dict[str, Any]) -> Stated | None:
        """Return the plain case, one number in a unit that does, at half the cost; None where it is another."""
        number, spelling = stated.get("value"), stated.get("unit")
        if type(number) is int or type(number) is float:
            number = _number(number)
        if type(number) is not float or type(spelling) is not str or len(stated) != 2 or self.arrays is None:
            return None
        unit = SPELLINGS.get(spelling)
        if unit is None or unit.dimension not in self.dimensions:
            return None
        return self._in_range(Stated(unit, number, unit.to_si(number)))

    def _from_object(self, stated: dict[str, Any]) -> Stated:
        errors: dict[str, Any] = {}
        if stated.keys() != _MEMBERS:
            _refuse_members(stated, errors)
        unit = value = None
        if "unit" in stated:
            unit = self._unit(stated["unit"], errors)
        if "value" in stated:
            try:
                value = self._value(stated["value"])
            except ValidationError as error:
                errors["value"] = error.messages
        if errors or unit is None or value is None:
            raise ValidationError(errors)
        if type(value) is float:
            return self._in_range(Stated(unit, value, unit.to_si(value)))
        with np.errstate(over="ignore", under="ignore", invalid="ignore"):
            return self._all_in_range(Stated(unit, value, unit.to_si(value)))

    def _unit(self, spelling: Any, errors: dict[str, Any]) -> Unit | None:
        if type(spelling) is not str:
            errors["unit"] = [f"must be a word, not {shortened(spelling)}"]
            return None
        try:
            unit = look_up(spelling)
        except KeyError:
            known = [unit.symbol for name in self.dimensions for unit in DIMENSIONS[name].units]
            errors["unit"] = [f"{shortened(spelling)} is no unit of this service{hint(spelling, known)}; {self.wanted}"]
            return None
        if unit.dimension not in self.dimensions:
            errors["unit"] = [f"{unit.symbol} is the unit of {DIMENSIONS[unit.dimension].phrase}; {self.wanted}"]
            return None
        return unit

    @property
    def wanted(self) -> str:
        """What the field takes, as words: each dimension with three units that would do."""
        choices = (f"{DIMENSIONS[name].phrase}, in {DIMENSIONS[name].proposal}" for name in self.dimensions)
        return f"wanted is {', or '.join(choices)}"

    def _what_it_takes(self, value: Any) -> str:
        form = 'a quantity such as {"value": ..., "unit": "' + DIMENSIONS[self.dimensions[0]].units[0].symbol + '"}'
        return f"must be {'a number or ' if self.bare else ''}{form}, not {shortened(value)}"

    def _value(self, value: Any) -> float | FloatArray:
        kind = type(value)
        if kind is list and self.arrays is not False:
            return _numbers(value)
        if (kind is float or kind is int) and self.arrays is not None:
            return _number(value)
        form = {True: "a number or an array of numbers", False: "one number", None: "an array of numbers"}[self.arrays]
        raise ValidationError(f"must be {form}, not {shortened(value)}")

    def _in_range(self, stated: Stated) -> Stated:
        si = stated.si
        if (self.lowest(stated.unit) <= si <= self.most or (self.zero and si == 0.0)) and not (self.whole and si % 1.0):
            return stated
        reason = self.range_in_words(stated.unit)
        raise ValidationError([reason] if stated.unit is _ONE and self.bare else {"value": [reason]})

    def _all_in_range(self, stated: Stated) -> Stated:
        si: Any = stated.si
        least = self.lowest(stated.unit)
        if least <= si.min() and si.max() <= self.most and not self.whole:
            return stated
        good = (si >= least) & (si <= self.most)
        if self.zero:
            good |= si == 0.0
        if self.whole:
            good &= si % 1.0 == 0.0
        if not good.all():
            stated.bad = np.flatnonzero(~good)
            stated.reason = self.range_in_words(stated.unit)
        return stated

    def lowest(self, unit: Unit) -> float:
        """Return the least value that is accepted in a unit's dimension, in SI."""
        return self.least

    def range_in_words(self, unit: Unit) -> str:
        """Return the range that is accepted, as words."""
        si = DIMENSIONS[unit.dimension].si.symbol
        ends = [f"{end:g}" + ("" if si == "1" else f" {si}") for end in (self.lowest(unit), self.most)]
        number = "a whole number" if self.whole else "0, or" if self.zero else ""
        return " ".join(word for word in ("must be", number, "from", ends[0], "to", ends[1]) if word)


def faults_of(rows: NDArray[np.intp], reason: str) -> dict[Any, Any]:
    """Return the messages of an array's elements that share a fault: the first few, and how many more there are."""
    messages: dict[Any, list[str]] = {int(row): [reason] for row in rows[:LISTED]}
    if rows.size > LISTED:
        messages[WHOLE] = [f"{rows.size - LISTED} more elements have this fault"]
    return messages


def _refuse_members(stated: dict[str, Any], errors: dict[str, Any]) -> None:
    for name in sorted(_MEMBERS - stated.keys()):
        errors[name] = ["is missing"]
    unknown = [name for name in stated if name not in _MEMBERS]
    for name in unknown[:LISTED]:
        errors[name] = [
            f"uncertainty {LATER}" if name == "uncertainty" else f"is not a member here{hint(name, _MEMBERS)}"
        ]


def _number(value: float) -> float:
    """Return a number as a double; minus zero as zero."""
    try:
        return float(value) + 0.0
    except OverflowError:
        raise ValidationError("is too large for a double") from None


def _numbers(value: list[Any]) -> FloatArray:
    """Return an array of numbers as doubles, refusing whatever is no number with its index."""
    if not value:
        raise ValidationError("must not be an empty array")
    if not _NUMBERS.issuperset(map(type, value)):
        _refuse_elements(value)
    try:
        numbers = np.array(value, dtype=np.float64)
    except OverflowError:
        raise ValidationError("holds a number that is too large for a double") from None
    numbers += 0.0  # minus zero as zero
    return numbers


def _refuse_elements(value: list[Any]) -> None:
    wrong = [row for row, element in enumerate(value) if type(element) not in _NUMBERS]
    messages: dict[Any, list[str]] = {row: [f"must be a number, not {shortened(value[row])}"] for row in wrong[:LISTED]}
    if len(wrong) > LISTED:
        messages[WHOLE] = [f"{len(wrong) - LISTED} more elements are no numbers"]
    raise ValidationError(messages)
