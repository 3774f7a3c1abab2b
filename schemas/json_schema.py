"""How each field of this project reads in JSON Schema, true to what it takes."""

from collections.abc import Mapping
from functools import singledispatch
from typing import Any, Final

from marshmallow import fields

from schemas.curve import Broadening, Energies, Points
from schemas.limits import Limits
from schemas.output_units import OutputUnits
from schemas.quantity import Quantity
from schemas.result import Answer, LevelsMember, Plain, Words
from schemas.sample import GEOMETRIES, EffectiveMass, Geometry, Nonparabolicity
from schemas.strict import Object, StrictSchema, Word
from schemas.units import DIMENSIONS
from schemas.vocabulary import ENTRIES, KINDS

JsonSchema = dict[str, Any]

PREFIX: Final = "#/components/schemas/"


def reference(name: str) -> JsonSchema:
    """Return a reference to a named schema."""
    return {"$ref": PREFIX + name}


def unit_name(dimension: str) -> str:
    """Return the name under which the units of a dimension stand.

    Examples
    --------
    >>> unit_name("number per volume")
    'NumberPerVolumeUnit'
    """
    return "".join(word[0].upper() + word[1:] for word in dimension.split()) + "Unit"


@singledispatch
def json_schema(field: fields.Field[Any], limits: Limits) -> JsonSchema:
    """Return how a field of this project reads in JSON Schema; nothing for a field that apispec knows by itself."""
    return {}


@json_schema.register
def _(field: Word, limits: Limits) -> JsonSchema:
    return {"type": "string", "enum": list(field.words)}


@json_schema.register
def _(field: Object, limits: Limits) -> JsonSchema:
    if isinstance(field.schema, Broadening):
        return _broadening(field.schema, limits)
    return reference(type(field.schema).__name__.removesuffix("Request"))


@json_schema.register
def _(field: Quantity, limits: Limits) -> JsonSchema:
    return _quantity(field, limits)


@json_schema.register
def _(field: Nonparabolicity, limits: Limits) -> JsonSchema:
    stated = _quantity(field, limits)
    stated["properties"]["value"] = {"const": 0}
    return stated


@json_schema.register
def _(field: EffectiveMass, limits: Limits) -> JsonSchema:
    one = _quantity(field.one, limits)
    return {"anyOf": [*one["anyOf"], {"type": "array", "items": one, "minItems": 3, "maxItems": 3}]}


@json_schema.register
def _(field: Geometry, limits: Limits) -> JsonSchema:
    names = {kind: f"{kind.capitalize()}Geometry" for kind in GEOMETRIES}
    return {
        "oneOf": [reference(name) for name in names.values()],
        "discriminator": {"propertyName": "kind", "mapping": {kind: PREFIX + name for kind, name in names.items()}},
    }


@json_schema.register
def _(field: Energies, limits: Limits) -> JsonSchema:
    array = _quantity(field.array, limits)
    array["properties"]["value"]["maxItems"] = limits.energies
    return {"anyOf": [reference("EnergyRange"), array]}


@json_schema.register
def _(field: Points, limits: Limits) -> JsonSchema:
    return {"type": "integer", "minimum": 2, "maximum": limits.energies}


@json_schema.register
def _(field: OutputUnits, limits: Limits) -> JsonSchema:
    asked = {name: units(*ENTRIES[name].dimensions) for name in field.names}
    return {"anyOf": [{"const": "SI"}, {"type": "object", "properties": asked, "additionalProperties": False}]}


@json_schema.register
def _(field: Answer, limits: Limits) -> JsonSchema:
    entry = field.entry
    number: JsonSchema = {"type": "number"}
    array: JsonSchema = {"type": "array", "items": number}
    forms: dict[str, list[JsonSchema]] = {
        "sample": [{"type": ["number", "null"]} if entry.undefined else number, array],
        "curve": [array, {"type": "array", "items": array}],
        "column": [array],
    }
    value = forms[field.form]
    symbols = [unit.symbol for name in entry.dimensions for unit in DIMENSIONS[name].units]
    return {
        "type": "object",
        "description": f"{entry.sentence} {_default_unit(entry.units)}",
        "properties": {
            "value": {"anyOf": value} if len(value) > 1 else value[0],
            "unit": {"type": "string", "enum": symbols},
        },
        "required": ["value", "unit"],
        "additionalProperties": False,
    }


@json_schema.register
def _(field: Words, limits: Limits) -> JsonSchema:
    word = {"type": "string", "enum": list(field.words)}
    return {"anyOf": [word, {"type": "array", "items": word}]}


@json_schema.register
def _(field: Plain, limits: Limits) -> JsonSchema:
    return dict(field.schema)


@json_schema.register
def _(field: LevelsMember, limits: Limits) -> JsonSchema:
    return {**reference("Levels"), "description": "The first levels of one sample; absent in bulk and in a batch."}


def _default_unit(units: Mapping[str, str]) -> str:
    """Say in which unit a response writes a field, by geometry kind where it differs."""
    symbols = list(dict.fromkeys(units.values()))
    if len(symbols) == 1:
        said = f"In {symbols[0]} unless output_units asks otherwise"
    else:
        each = (f"{symbol} ({', '.join(k for k, s in units.items() if s == symbol)})" for symbol in symbols)
        said = f"In {', '.join(each)} unless output_units asks otherwise"
    absent = [kind for kind in KINDS if kind not in units]
    return f"{said}; absent for {', '.join(absent)}." if absent else f"{said}."


def units(*dimensions: str) -> JsonSchema:
    """Return the units of one dimension or of several."""
    choices = [reference(unit_name(name)) for name in dimensions]
    return choices[0] if len(choices) == 1 else {"anyOf": choices}


def _quantity(field: Quantity, limits: Limits) -> JsonSchema:
    """Return a quantity: an object, or a bare number where the field is a pure number."""
    number = _number(field)
    elements = {"type": "number"}  # of any sign: with "invalid_rows": "omit" one out of range is no error
    array = {"type": "array", "items": elements, "minItems": 1, "maxItems": limits.samples}
    value = {True: {"anyOf": [number, array]}, False: number, None: array}[field.arrays]
    stated = {
        "type": "object",
        "properties": {"value": value, "unit": units(*field.dimensions)},
        "required": ["value", "unit"],
        "additionalProperties": False,
    }
    if not field.bare:
        return stated
    bare = dict(number)
    if field.whole:
        bare = {"type": "integer", "minimum": int(field.least), "maximum": int(field.most)}
    return {"anyOf": [bare, stated]}


def _number(field: Quantity) -> JsonSchema:
    """Return the numbers of a quantity, whatever its unit: of the range only its sign holds in every unit."""
    if field.zero or field.least == 0.0:
        return {"type": "number", "minimum": 0}
    return {"type": "number", "exclusiveMinimum": 0} if field.least > 0.0 else {"type": "number"}


def _broadening(schema: StrictSchema, limits: Limits) -> JsonSchema:
    """Return the three forms of a broadening: no width, one of its own, and a width that has to be stated."""
    width = {"width": _quantity(schema.fields["width"], limits)}  # type: ignore[arg-type]

    def form(kinds: list[str], others: JsonSchema, required: list[str]) -> JsonSchema:
        return {
            "type": "object",
            "properties": {"kind": {"type": "string", "enum": kinds}, **others},
            "required": required,
            "additionalProperties": False,
        }

    return {
        "oneOf": [
            form(["none"], {}, ["kind"]),
            form(["thermal"], width, ["kind"]),
            form(["gaussian", "lorentzian"], width, ["kind", "width"]),
        ]
    }


def unit_schema(dimension: str) -> JsonSchema:
    """Return the units of a dimension: their symbols, and the other spellings that are read."""
    listed = DIMENSIONS[dimension].units
    symbols = [unit.symbol for unit in listed]
    others = [spelling for unit in listed for spelling in unit.spellings[1:]]
    return {
        "type": "string",
        "description": f"The unit of {DIMENSIONS[dimension].phrase}.",
        "anyOf": [{"title": "symbol", "enum": symbols}, {"title": "another spelling", "enum": others}],
        "examples": symbols[:3],
    }
