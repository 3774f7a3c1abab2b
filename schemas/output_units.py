"""The units that a request asks for, by response field."""

from collections.abc import Mapping
from typing import Any

from marshmallow import ValidationError

from schemas.strict import LISTED, WHOLE, Member, hint, shortened
from schemas.units import DIMENSIONS, Unit, look_up
from schemas.vocabulary import ENTRIES


class OutputUnits(Member):
    """``"SI"``, or a unit for each response field named; a column of `levels` goes by its own name, such as ``edge``.

    Parameters
    ----------
    *names : str
        The response fields that have a unit.
    """

    def __init__(self, *names: str, **options: Any) -> None:
        super().__init__(**options)
        self.names = names

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Any:
        if value == "SI":
            return value
        if type(value) is not dict:
            raise ValidationError(f'must be "SI" or an object of units by response field, not {shortened(value)}')
        units: dict[str, Unit] = {}
        errors: dict[str, Any] = {}
        for name, spelling in value.items():
            try:
                units[name] = self._unit(name, spelling)
            except ValidationError as error:
                errors[name] = error.messages
            if len(errors) > LISTED:
                errors[WHOLE] = ["further units were not looked at"]
                break
        if errors:
            raise ValidationError(errors, valid_data=units)
        return units

    def _unit(self, name: str, spelling: Any) -> Unit:
        if name not in self.names:
            raise ValidationError(f"is no field with a unit in this response{hint(name, self.names)}")
        if type(spelling) is not str:
            raise ValidationError(f"must be a word, not {shortened(spelling)}")
        dimensions = ENTRIES[name].dimensions
        try:
            unit = look_up(spelling)
        except KeyError:
            known = [unit.symbol for dimension in dimensions for unit in DIMENSIONS[dimension].units]
            near = hint(spelling, known)
            raise ValidationError(
                f"{shortened(spelling)} is no unit of this service{near}; {_wanted(dimensions)}"
            ) from None
        if unit.dimension not in dimensions:
            stated = DIMENSIONS[unit.dimension].phrase
            raise ValidationError(f"{unit.symbol} is the unit of {stated}; {_wanted(dimensions)}")
        return unit


def check_for_kind(units: str | Mapping[str, Unit], kind: str | None) -> dict[str, list[str]]:
    """Return what is wrong with units that would do for another geometry kind."""
    faults: dict[str, list[str]] = {}
    if kind is None or not isinstance(units, Mapping):
        return faults
    for name, unit in units.items():
        symbol = ENTRIES[name].units.get(kind)
        if symbol is None:
            continue
        dimension = look_up(symbol).dimension
        if unit.dimension != dimension:
            stated = DIMENSIONS[unit.dimension].phrase
            faults[name] = [f"{unit.symbol} is the unit of {stated}; in a {kind} {_wanted((dimension,))}"]
    return faults


def _wanted(dimensions: tuple[str, ...]) -> str:
    choices = (f"{DIMENSIONS[name].phrase}, in {DIMENSIONS[name].proposal}" for name in dimensions)
    return f"wanted is {', or '.join(choices)}"
