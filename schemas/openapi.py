"""The JSON Schemas of everything that the service takes and returns, made from its marshmallow schemas.

`components` is what an OpenAPI 3.1 document holds under ``components/schemas``. apispec walks the marshmallow schemas;
`schemas.json_schema` says how our own fields read. What they allow is at most out of range, or at odds with the rest of
the request; what they forbid is refused.
"""

from collections.abc import Mapping
from typing import Any, Final

from apispec import APISpec
from apispec.ext.marshmallow import MarshmallowPlugin
from marshmallow import Schema, fields

from schemas.catalogues import (
    CautionEntry,
    Cautions,
    ConstantEntry,
    Constants,
    LimitsEntry,
    Service,
    UnitEntry,
    Units,
)
from schemas.curve import EnergyRange
from schemas.density_of_states import DensityOfStatesRequest, DensityOfStatesResult
from schemas.examples import EXAMPLES
from schemas.fermi_level import FermiLevelRequest, FermiLevelResult
from schemas.json_schema import PREFIX, JsonSchema, json_schema, unit_name, unit_schema, units
from schemas.limits import DEFAULT_LIMITS, Limits
from schemas.problems import FaultEntry, Problem
from schemas.result import Answer, Levels, Result, Words
from schemas.sample import GEOMETRIES, BandRequest, SampleRequest
from schemas.thermal_occupancy import ThermalOccupancyRequest, ThermalOccupancyResult
from schemas.units import DIMENSIONS
from schemas.vocabulary import KINDS, MEASURES

NAMED: Final[Mapping[str, Schema]] = {
    "FermiLevelRequest": FermiLevelRequest(),
    "FermiLevelResult": FermiLevelResult(),
    "DensityOfStatesRequest": DensityOfStatesRequest(),
    "DensityOfStatesResult": DensityOfStatesResult(),
    "ThermalOccupancyRequest": ThermalOccupancyRequest(),
    "ThermalOccupancyResult": ThermalOccupancyResult(),
    **{f"{kind.capitalize()}Geometry": schema for kind, schema in GEOMETRIES.items()},
    "Band": BandRequest(),
    "EnergyRange": EnergyRange(),
    "Levels": Levels(),
    "Problem": Problem(),
    "FaultEntry": FaultEntry(),
    "Service": Service(),
    "LimitsEntry": LimitsEntry(),
    "Constants": Constants(),
    "ConstantEntry": ConstantEntry(),
    "Units": Units(),
    "UnitEntry": UnitEntry(),
    "Cautions": Cautions(),
    "CautionEntry": CautionEntry(),
}
"""The schemas that the document names."""

NAMES: Final = {type(schema): name for name, schema in NAMED.items()}


def _density_by_kind() -> list[JsonSchema]:
    """Return the rules that tie the unit of a carrier density to the geometry kind."""
    groups: dict[tuple[str, ...], list[str]] = {}
    for kind, row in KINDS.items():
        groups.setdefault(row.densities, []).append(kind)
    return [
        {
            "if": {"properties": {"geometry": {"properties": {"kind": {"enum": kinds}}, "required": ["kind"]}}},
            "then": {
                "properties": {
                    "carrier_density": {"properties": {"unit": units(*(MEASURES[measure] for measure in measures))}}
                }
            },
        }
        for measures, kinds in groups.items()
    ]


def _field_function(limits: Limits) -> Any:
    """Return the function by which apispec asks for a field."""

    def own_field(converter: Any, field: fields.Field[Any], **options: Any) -> JsonSchema:
        return json_schema(field, limits)

    return own_field


def components(limits: Limits = DEFAULT_LIMITS) -> dict[str, JsonSchema]:
    """Return every schema of the document by its name.

    Parameters
    ----------
    limits : Limits
        The published limits, which the schemas of arrays name.

    Returns
    -------
    dict
        What stands under ``components/schemas``.
    """
    plugin = MarshmallowPlugin(schema_name_resolver=_name)
    document = APISpec(title="", version="", openapi_version="3.1.0", plugins=[plugin])
    converter: Any = plugin.converter  # apispec leaves it without types
    converter.add_attribute_function(_field_function(limits))
    for name, schema in NAMED.items():
        if name not in document.components.schemas:
            document.components.schema(name, schema=schema)
    made: dict[str, JsonSchema] = dict(document.components.schemas)
    for name, schema in NAMED.items():
        _complete(made[name], schema)
    used = str(made)
    for dimension in DIMENSIONS:
        if f"{PREFIX}{unit_name(dimension)}'" in used:
            made[unit_name(dimension)] = unit_schema(dimension)
    return dict(sorted(made.items()))


def _name(schema: Any) -> str:
    return NAMES[schema if isinstance(schema, type) else type(schema)]


def _complete(made: JsonSchema, schema: Schema) -> None:
    """Add to a schema what marshmallow does not declare."""
    made["description"] = (type(schema).__doc__ or "").strip().splitlines()[0]
    made["additionalProperties"] = False
    if isinstance(schema, SampleRequest):
        made["allOf"] = _density_by_kind()
        made["examples"] = EXAMPLES[NAMES[type(schema)]]
    if isinstance(schema, Result):
        made["required"] = sorted(_always(schema))
    if isinstance(schema, Levels):
        made["required"] = sorted(schema.fields)


def _always(schema: Result) -> list[str]:
    """Return the members that every response has."""
    names = ["energy_zero", "cautions", "provenance"]
    for name, field in schema.fields.items():
        if isinstance(field, Words) or (isinstance(field, Answer) and len(field.entry.units) == len(KINDS)):
            names.append(name)
    return names
