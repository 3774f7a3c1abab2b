"""What the catalogues say: GET /v1, /v1/units and /v1/cautions."""

from collections.abc import Mapping
from typing import Any

from marshmallow import RAISE, Schema, fields

from schemas.units import DIMENSIONS


class Catalogue(Schema):
    """The base of these shapes."""

    class Meta:
        """Nothing beside the members declared."""

        unknown = RAISE


def _text(sentence: str, **options: Any) -> fields.String:
    return fields.String(required=True, metadata={"description": sentence}, **options)


class UnitEntry(Catalogue):
    """One unit."""

    symbol = _text("As this service writes it.")
    ucum = _text("Its UCUM code, or null where UCUM has no such unit.", allow_none=True)
    qudt = _text("Its QUDT IRI, or null where QUDT has no such unit.", allow_none=True)
    dimension = _text("The name of its dimension.")
    si = _text("The symbol of the coherent SI unit of that dimension.")
    factor = fields.Float(
        required=True, metadata={"description": "Its size in that SI unit, the nearest double.", "exclusiveMinimum": 0}
    )
    spellings = fields.List(
        fields.String(), required=True, metadata={"description": "All that is read as this unit, the symbol first."}
    )
    source = _text("Where its size is from.")


class Units(Catalogue):
    """The closed vocabulary of units."""

    units = fields.List(fields.Nested(UnitEntry), required=True)


class CautionEntry(Catalogue):
    """One caution."""

    code = _text("What a response carries.")
    text = _text("What it means, for a person.")
    quantity = _text("What is compared with the threshold.")
    threshold = fields.Float(required=True, metadata={"description": "The number compared with, in `unit`."})
    unit = _text("The threshold's unit.")
    source = _text("Where the threshold is from.")


class Cautions(Catalogue):
    """All cautions that a response may carry."""

    cautions = fields.List(fields.Nested(CautionEntry), required=True)


class LimitsEntry(Catalogue):
    """The most that one request may hold."""

    samples = fields.Integer(required=True, metadata={"description": "Samples."})
    energies = fields.Integer(required=True, metadata={"description": "Points of a curve."})
    curve_points = fields.Integer(required=True, metadata={"description": "Samples times points of a curve."})
    default_energies = fields.Integer(
        required=True, metadata={"description": "Points of a curve where the request states none."}
    )
    levels = fields.Integer(
        required=True, metadata={"description": "Levels that one request may add up, over all samples and energies."}
    )
    body_bytes = fields.Integer(required=True, metadata={"description": "Bytes of a request's body."})


class ConstantEntry(Catalogue):
    """One physical constant."""

    value = fields.Float(required=True)
    unit = fields.String(required=True)


class Constants(Catalogue):
    """The physical constants that every number rests on."""

    edition = _text("The set of recommended values.")
    values = fields.Dict(keys=fields.String(), values=fields.Nested(ConstantEntry), required=True)


class Service(Catalogue):
    """What this service is, and where its parts are."""

    name = _text("Its name.")
    version = _text("Its version.")
    limits = fields.Nested(LimitsEntry, required=True)
    constants = fields.Nested(Constants, required=True)
    links = fields.Dict(
        keys=fields.String(),
        values=fields.String(),
        required=True,
        metadata={"description": "The service's paths by what they are."},
    )


def units_catalogue() -> Mapping[str, Any]:
    """Return the body of GET /v1/units."""
    entries = [
        {
            "symbol": unit.symbol,
            "ucum": unit.ucum,
            "qudt": unit.qudt,
            "dimension": dimension.name,
            "si": dimension.si.symbol,
            "factor": unit.factor,
            "spellings": unit.spellings,
            "source": unit.source,
        }
        for dimension in DIMENSIONS.values()
        for unit in dimension.units
    ]
    body: Mapping[str, Any] = Units().dump({"units": entries})
    return body
