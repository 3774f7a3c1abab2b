"""What every calculator returns: quantities in their laboratory units, words, cautions and provenance.

`dump` writes a calculator's dataclass as a dict that orjson takes as it is (``OPT_SERIALIZE_NUMPY``): arrays stay
arrays, nothing is done element by element, and one sample costs a few microseconds.
"""

import sys
from collections.abc import Mapping, Sequence
from typing import Any, ClassVar, Final, Literal, cast

import numpy as np
from marshmallow import Schema, fields

from schemas.units import DIMENSIONS, SPELLINGS, FloatArray, Unit
from schemas.vocabulary import ENTRIES, Entry

ENERGY_ZERO: Final = "band edge"

_LARGEST: Final = sys.float_info.max

Plan = Sequence[tuple[str, Unit | None]]
"""Members of a response in order, each with its unit; None for what is written as it is."""


class NonFinite(ArithmeticError):
    """A result is infinite or no number: nothing of the kind leaves this service."""


class Answer(fields.Field[Any]):
    """A quantity of a response, known to the vocabulary by its name.

    Parameters
    ----------
    form : str
        ``sample``: a number for one sample, an array for many; ``curve``: an array for one, a list of arrays for many;
        ``column``: an array.
    """

    def __init__(self, form: Literal["sample", "curve", "column"] = "sample") -> None:
        super().__init__()
        self.form = form

    @property
    def entry(self) -> Entry:
        """Its entry in the vocabulary."""
        return ENTRIES[cast(str, self.name)]


class Words(fields.Field[Any]):
    """A word for one sample, a list of words for many."""

    def __init__(self, *words: str, sentence: str) -> None:
        super().__init__(metadata={"description": sentence})
        self.words = words


class Plain(fields.Field[Any]):
    """A member that is written as it is, with its JSON Schema."""

    def __init__(self, schema: Mapping[str, Any]) -> None:
        super().__init__()
        self.schema = schema


class Levels(Schema):
    """The first levels of one sample, lowest first, as columns of equal length."""

    quantum_numbers = Plain(
        {
            "type": "array",
            "items": {"type": "array", "items": {"type": "integer"}},
            "description": "One set of quantum numbers for each level, the lowest in lexical order where several share "
            "the energy.",
        }
    )
    edge = Answer("column")
    degeneracy = Answer("column")
    population = Answer("column")
    share = Answer("column")
    total = Plain(
        {
            "type": "integer",
            "minimum": 0,
            "description": "Levels up to the Fermi energy, or to 40 kT above the chemical potential if that is higher.",
        }
    )


class LevelsMember(fields.Field[Any]):
    """The levels: one sample only, and none in bulk."""

    columns: ClassVar[Schema] = Levels()
    absent: ClassVar[frozenset[str]] = frozenset(("bulk",))


class Result(Schema):
    """What every response has beside its calculator's own members."""

    energy_zero = Plain({"const": ENERGY_ZERO, "description": "Where every energy is measured from."})
    cautions = Plain(
        {
            "type": "array",
            "description": "Where the model is at its edge; see GET /v1/cautions.",
            "items": {
                "type": "object",
                "properties": {
                    "code": {"type": "string"},
                    "text": {"type": "string"},
                    "rows": {
                        "type": "array",
                        "items": {"type": "integer", "minimum": 0},
                        "description": "In a batch: the samples concerned, by their index among those computed.",
                    },
                },
                "required": ["code", "text"],
                "additionalProperties": False,
            },
        }
    )
    provenance = Plain(
        {
            "type": "object",
            "description": "What the numbers rest on; no clock, no random number.",
            "properties": {
                "service": {"type": "string"},
                "version": {"type": "string"},
                "constants": {"type": "string"},
                "models": {"type": "array", "items": {"type": "string"}},
                "request_sha256": {
                    "type": "string",
                    "pattern": "^[0-9a-f]{64}$",
                    "description": "SHA-256 of the canonical request, in which the order of members and the spelling "
                    "of units make no difference.",
                },
            },
            "required": ["service", "version", "constants", "models", "request_sha256"],
            "additionalProperties": False,
        }
    )
    grid = Plain(
        {
            "type": "object",
            "description": "With combine: grid. The axes in C order and their lengths.",
            "properties": {
                "axes": {"type": "array", "items": {"type": "string"}},
                "shape": {"type": "array", "items": {"type": "integer", "minimum": 1}},
            },
            "required": ["axes", "shape"],
            "additionalProperties": False,
        }
    )
    row = Plain(
        {
            "type": "array",
            "description": "With invalid_rows: omit. The index of each result's sample in the request.",
            "items": {"type": "integer", "minimum": 0},
        }
    )
    omitted = Plain(
        {
            "type": "array",
            "description": "With invalid_rows: omit. The samples left out, and why.",
            "items": {
                "type": "object",
                "properties": {
                    "row": {"type": "integer", "minimum": 0},
                    "pointer": {"type": "string"},
                    "detail": {"type": "string"},
                },
                "required": ["row", "pointer", "detail"],
                "additionalProperties": False,
            },
        }
    )

    @classmethod
    def quantities(cls) -> tuple[str, ...]:
        """Return the names of all members that have a unit, columns of levels too."""
        own = [name for name, field in cls._declared_fields.items() if isinstance(field, Answer)]
        if any(isinstance(field, LevelsMember) for field in cls._declared_fields.values()):
            own += [name for name, field in Levels._declared_fields.items() if isinstance(field, Answer)]
        return tuple(own)

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self._plans: dict[tuple[str, bool], Plan] = {}

    def dump(
        self,
        obj: Any,
        *,
        many: bool | None = None,
        request: Mapping[str, Any] | None = None,
        provenance: Mapping[str, Any] | None = None,
    ) -> dict[str, Any]:
        """Return a calculator's result as a response.

        Parameters
        ----------
        obj : dataclass
            The result, in SI.
        many : None
            Not used.
        request : mapping
            The request as its schema loaded it.
        provenance : mapping
            What the numbers rest on.

        Raises
        ------
        NonFinite
            Where a number is infinite or none at all.
        """
        assert request is not None
        written: dict[str, Any] = {"energy_zero": ENERGY_ZERO}
        for name, unit in self._plan(request["sample"]["kind"], request["output_units"]):
            value = getattr(obj, name)
            written[name] = value if unit is None else {"value": outward(value, unit), "unit": unit.symbol}
        if "levels" in written:
            if written["levels"] is None:
                del written["levels"]
            else:
                written["levels"] = _columns(written["levels"], request)
        written["cautions"] = [_caution(caution) for caution in obj.cautions]
        written["provenance"] = provenance
        for name, member in (("grid", "grid"), ("row", "rows"), ("omitted", "omitted")):
            if request[member] is not None:
                written[name] = request[member]
        return written

    def _plan(self, kind: str, output_units: str | Mapping[str, Unit]) -> Plan:
        if output_units and output_units != "SI":
            return plan(self.fields, kind, output_units)
        key = (kind, bool(output_units))
        if key not in self._plans:
            self._plans[key] = plan(self.fields, kind, output_units)
        return self._plans[key]


def plan(members: Mapping[str, fields.Field[Any]], kind: str, output_units: str | Mapping[str, Unit]) -> Plan:
    """Return the members that a geometry kind has, in the order of their declaration, each with its unit."""
    chosen: list[tuple[str, Unit | None]] = []
    for name, field in members.items():
        if isinstance(field, Answer):
            if kind in field.entry.units:
                chosen.append((name, _unit(name, kind, output_units)))
        elif isinstance(field, Words) or (isinstance(field, LevelsMember) and kind not in field.absent):
            chosen.append((name, None))
    return chosen


def _unit(name: str, kind: str, output_units: str | Mapping[str, Unit]) -> Unit:
    """Return the unit in which a field is written."""
    laboratory = SPELLINGS[ENTRIES[name].units[kind]]
    if isinstance(output_units, str):
        return DIMENSIONS[laboratory.dimension].si
    return output_units.get(name, laboratory)


def outward(value: Any, unit: Unit) -> float | FloatArray | None:
    """Return an SI value in a unit, ready to be written.

    Raises
    ------
    NonFinite
        Where a number is infinite or none at all.
    """
    if value is None:
        return None
    if isinstance(value, np.ndarray):
        array: FloatArray = np.ascontiguousarray(unit.from_si(value), dtype=np.float64)
        if not np.isfinite(array).all():
            raise NonFinite(f"a result in {unit.symbol} is not finite")
        return array
    number = unit.from_si(float(value))
    if not -_LARGEST <= number <= _LARGEST:
        raise NonFinite(f"a result in {unit.symbol} is not finite")
    return number


def _columns(levels: Any, request: Mapping[str, Any]) -> dict[str, Any]:
    written: dict[str, Any] = {"quantum_numbers": np.ascontiguousarray(levels.quantum_numbers)}
    for name, unit in plan(LevelsMember.columns.fields, request["sample"]["kind"], request["output_units"]):
        assert unit is not None
        written[name] = {"value": outward(getattr(levels, name), unit), "unit": unit.symbol}
    written["total"] = int(levels.total)
    return written


def _caution(caution: Any) -> dict[str, Any]:
    written: dict[str, Any] = {"code": caution.code, "text": caution.text}
    if caution.rows is not None:
        written["rows"] = np.ascontiguousarray(caution.rows)
    return written
