"""The JSON Schemas against what the request schemas really take, by an independent validator (jsonschema)."""

import json
from typing import Any

import numpy as np
import orjson
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from jsonschema import Draft202012Validator
from marshmallow import ValidationError
from openapi_spec_validator import validate

from schemas import openapi
from schemas.density_of_states import DensityOfStatesRequest
from schemas.fermi_level import FermiLevelRequest
from schemas.json_schema import PREFIX, unit_name
from schemas.limits import Limits
from schemas.problems import faults
from schemas.thermal_occupancy import ThermalOccupancyRequest
from schemas.units import DIMENSIONS, look_up

COMPONENTS = openapi.components()
REQUESTS = {
    "FermiLevelRequest": FermiLevelRequest(),
    "DensityOfStatesRequest": DensityOfStatesRequest(),
    "ThermalOccupancyRequest": ThermalOccupancyRequest(),
}
SEMANTIC = ("must be from", "must be 0, or", "must be a whole number", "must be above", "arrays must have one length",
            "is the unit of", "the limit is", "more elements have this fault")  # fmt: skip
"""Parts of faults that no JSON Schema shows: ranges in SI, and members at odds with one another."""


def validator(name):
    return Draft202012Validator({"$ref": f"#/components/schemas/{name}", "components": {"schemas": COMPONENTS}})


VALIDATORS = {name: validator(name) for name in COMPONENTS}


def test_the_components_make_a_valid_openapi_document():
    document = {"openapi": "3.1.0", "info": {"title": "t", "version": "0"}, "paths": {}}
    validate({**document, "components": {"schemas": COMPONENTS}})


def test_every_reference_leads_somewhere_and_nothing_is_left_over():
    text = json.dumps(COMPONENTS)
    named = {part.partition('"')[0] for part in text.split(PREFIX)[1:]}
    tops = {*REQUESTS, "FermiLevelResult", "DensityOfStatesResult", "ThermalOccupancyResult"}
    assert named | tops | {"Problem", "Service", "Units", "Cautions"} == set(COMPONENTS)


@pytest.mark.parametrize("name", COMPONENTS)
def test_every_schema_says_what_it_is(name):
    assert COMPONENTS[name]["description"].endswith(".")


@pytest.mark.parametrize("name", REQUESTS)
def test_the_examples_load_and_are_valid(name):
    for example in COMPONENTS[name]["examples"]:
        VALIDATORS[name].validate(example)
        REQUESTS[name].load(example)


def test_the_geometry_has_a_discriminator_on_its_kind():
    geometry = COMPONENTS["FermiLevelRequest"]["properties"]["geometry"]
    assert geometry["discriminator"]["propertyName"] == "kind"
    assert set(geometry["discriminator"]["mapping"].values()) == {choice["$ref"] for choice in geometry["oneOf"]}
    assert COMPONENTS["FilmGeometry"]["properties"]["kind"]["enum"] == ["film"]


def test_limits_are_those_that_the_service_has():
    made = openapi.components(Limits(samples=7, energies=5))
    assert '"maxItems": 7' in json.dumps(made["FilmGeometry"])
    assert made["EnergyRange"]["properties"]["points"]["maximum"] == 5
    assert made["DensityOfStatesRequest"]["properties"]["energies"]["anyOf"][1]["properties"]["value"]["maxItems"] == 5


def test_a_unit_is_any_spelling_that_is_read():
    for dimension in DIMENSIONS:
        name = unit_name(dimension)
        if name in COMPONENTS:
            spellings = [spelling for unit in DIMENSIONS[dimension].units for spelling in unit.spellings]
            listed = [spelling for choice in COMPONENTS[name]["anyOf"] for spelling in choice["enum"]]
            assert sorted(listed) == sorted(spellings)


def test_a_response_s_units_are_symbols_and_its_constant_is_said():
    result = COMPONENTS["FermiLevelResult"]
    assert result["properties"]["energy_zero"]["const"] == "band edge"
    assert result["properties"]["fermi_velocity"]["properties"]["unit"]["enum"][0] == "m/s"
    said = result["properties"]["density_of_states_at_fermi_level"]["description"]
    assert "eV^-1 cm^-2 (sheet)" in said
    assert said.endswith("absent for box, sphere.")
    assert {"energy_zero", "cautions", "provenance", "regime", "method", "fermi_energy"} <= set(result["required"])
    assert not {"occupied_levels", "grid", "row", "omitted"} & set(result["required"])


JUNK = (
    st.none() | st.booleans() | st.integers(-3, 3) | st.floats(-3, 3) | st.text(max_size=3) | st.just([]) | st.just({})
)
NUMBERS = st.integers(-1, 3) | st.floats(-1.0, 10.0, allow_nan=False)


def quantities(*units):
    values = NUMBERS | st.lists(NUMBERS | JUNK, max_size=3)
    return st.fixed_dictionaries({"value": values | JUNK, "unit": st.sampled_from(units) | JUNK}) | JUNK | NUMBERS


LENGTHS = quantities("nm", "µm", "1/cm")
GEOMETRIES = st.fixed_dictionaries(
    {"kind": st.sampled_from(["bulk", "film", "wire", "box", "sheet", "line", "cube"]) | JUNK},
    optional={name: LENGTHS for name in ("thickness", "width", "height", "length", "confinement")},
)
BANDS = st.fixed_dictionaries(
    {},
    optional={
        "effective_mass": quantities("1", "%") | st.lists(quantities("1"), min_size=2, max_size=4),
        "valleys": quantities("1"),
        "spin_degeneracy": quantities("1", "K"),
        "nonparabolicity": quantities("eV^-1"),
        "mass": JUNK,
    },
)
ENERGIES = quantities("eV", "meV") | st.fixed_dictionaries(
    {"from": quantities("eV"), "to": quantities("eV"), "points": JUNK | st.integers(0, 5)}
)
BROADENINGS = st.fixed_dictionaries(
    {"kind": st.sampled_from(["none", "gaussian", "lorentzian", "thermal"]) | JUNK},
    optional={"width": quantities("meV")},
)
BODIES = st.fixed_dictionaries(
    {
        "carrier_density": quantities("cm^-3", "cm⁻²", "nm-1", "1"),
        "geometry": GEOMETRIES | JUNK,
        "temperature": quantities("K", "mK", "eV"),
    },
    optional={
        "band": BANDS | JUNK,
        "combine": st.sampled_from(["grid", "paired"]) | JUNK,
        "invalid_rows": st.sampled_from(["omit", "reject", "drop"]) | JUNK,
        "output_units": st.dictionaries(
            st.sampled_from(["fermi_energy", "regime", "energy"]), st.sampled_from(["eV", "1/eV", "K"]) | JUNK
        )
        | st.sampled_from(["SI", "eV"]),
        "energies": ENERGIES,
        "broadening": BROADENINGS,
        "extra": JUNK,
    },
)


def sound(data: Any) -> Any:
    """A body that loads, to change one member of."""
    return data.draw(st.sampled_from([example for name in REQUESTS for example in COMPONENTS[name]["examples"]]))


@settings(max_examples=150, deadline=None)
@given(data=st.data())
def test_what_loads_is_valid_and_what_is_valid_is_refused_for_its_meaning_alone(data):
    name = data.draw(st.sampled_from(list(REQUESTS)))
    changes = data.draw(BODIES)
    kept = data.draw(st.sets(st.sampled_from(sorted(changes)), max_size=2))
    body = {**sound(data), **{member: changes[member] for member in kept}}
    valid = VALIDATORS[name].is_valid(body)
    try:
        REQUESTS[name].load(body)
    except ValidationError as error:
        if valid:
            details = [fault["detail"] for fault in faults(error.messages)]
            assert all(any(words in detail for words in SEMANTIC) for detail in details), details
    else:
        assert valid, body


def test_a_number_that_may_be_undefined_may_be_null():
    value = COMPONENTS["FermiLevelResult"]["properties"]["reduced_temperature"]["properties"]["value"]
    assert {"type": ["number", "null"]} in value["anyOf"]


def test_arrays_written_by_orjson_are_arrays_of_the_schema():
    number = {"value": np.array([1.0, 2.0]), "unit": "eV"}
    written = orjson.loads(orjson.dumps(number, option=orjson.OPT_SERIALIZE_NUMPY))
    schema = COMPONENTS["FermiLevelResult"]["properties"]["fermi_energy"]
    Draft202012Validator(schema).validate(written)
    assert look_up("eV").symbol in schema["properties"]["unit"]["enum"]
