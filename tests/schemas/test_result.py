"""What a response holds: units, forms, and nothing non-finite."""

from dataclasses import fields
from importlib import import_module
from types import SimpleNamespace

import numpy as np
import orjson
import pytest
from jsonschema import Draft202012Validator

from schemas.density_of_states import DensityOfStatesRequest, DensityOfStatesResult
from schemas.fermi_level import FermiLevelRequest, FermiLevelResult
from schemas.openapi import components
from schemas.result import Answer, Levels, LevelsMember, NonFinite, Result
from schemas.thermal_occupancy import ThermalOccupancyRequest, ThermalOccupancyResult
from schemas.units import look_up
from schemas.vocabulary import ENTRIES, KINDS

PROVENANCE = {"service": "fillmark", "version": "0", "constants": "", "models": [], "request_sha256": "0" * 64}
CHARGE = 1.602176634e-19  # elementary charge, exact in the SI
ENVELOPE = {"energy_zero", "provenance", "grid", "row", "omitted"}
ENDPOINTS = {
    "fermi_level": (FermiLevelRequest(), FermiLevelResult(), "FermiLevel"),
    "density_of_states": (DensityOfStatesRequest(), DensityOfStatesResult(), "DensityOfStates"),
    "thermal_occupancy": (ThermalOccupancyRequest(), ThermalOccupancyResult(), "ThermalOccupancy"),
}
COMPONENTS = components()
REQUEST, RESULT, _ = ENDPOINTS["fermi_level"]


def answer(result, count=None, **changes):
    """A result of ones, of the shape that a calculator returns."""
    values = {}
    for name, field in result.fields.items():
        if isinstance(field, Answer):
            shape = (() if count is None else (count,)) + ((3,) if field.form == "curve" else ())
            values[name] = np.ones(shape) if shape else 1.0
    if "levels" in result.fields:
        column = np.ones(2)
        numbers = np.array([[1, 1], [1, 2]])
        values["levels"] = None if count else SimpleNamespace(
            quantum_numbers=numbers, edge=column, degeneracy=column, population=column, share=column, total=2
        )  # fmt: skip
    words = {"regime": "degenerate", "method": "closed-form"}
    values |= {name: word if count is None else [word] * count for name, word in words.items() if name in result.fields}
    values |= {"cautions": (), **changes}
    return SimpleNamespace(**values)


def dump(result, request, obj):
    written = result.dump(obj, request=request, provenance=PROVENANCE)
    return orjson.loads(orjson.dumps(written, option=orjson.OPT_SERIALIZE_NUMPY))


@pytest.mark.parametrize("endpoint", ENDPOINTS)
def test_a_response_has_exactly_what_its_calculator_returns(endpoint):
    _, result, name = ENDPOINTS[endpoint]
    returned = {field.name for field in fields(getattr(import_module(f"service.calculators.{endpoint}"), name))}
    assert set(result.fields) - ENVELOPE == returned


def test_levels_are_exactly_what_the_calculators_list():
    ladder = import_module("service.calculators.ladder")
    assert {field.name for field in fields(ladder.Levels)} == set(Levels().fields)


@pytest.mark.parametrize("batch", [False, True], ids=["one", "batch"])
@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("endpoint", ENDPOINTS)
def test_every_response_is_as_the_openapi_document_says(body, kind, endpoint, batch):
    request, result, name = ENDPOINTS[endpoint]
    changes = {"combine": "grid", "invalid_rows": "omit", "temperature": {"value": [1, -1], "unit": "K"}}
    written = dump(result, request.load(body(kind, **(changes if batch else {}))), answer(result, 1 if batch else None))
    schema = {"$ref": f"#/components/schemas/{name}Result", "components": {"schemas": COMPONENTS}}
    Draft202012Validator(schema).validate(written)


def test_energies_are_written_in_electronvolts_with_their_zero(body):
    written = dump(RESULT, REQUEST.load(body()), answer(RESULT, fermi_energy=CHARGE))
    assert written["energy_zero"] == "band edge"
    assert written["fermi_energy"] == {"value": 1.0, "unit": "eV"}
    assert written["provenance"] == PROVENANCE
    assert written["regime"] == "degenerate"
    assert written["cautions"] == []


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("endpoint", ENDPOINTS)
def test_every_field_has_its_laboratory_unit_for_the_kind_or_is_absent(body, kind, endpoint):
    request, result, _ = ENDPOINTS[endpoint]
    written = dump(result, request.load(body(kind)), answer(result))
    columns = written.pop("levels", {})
    for name in result.quantities():
        units = ENTRIES[name].units
        there = {**columns, **written}.get(name)
        assert (there and there["unit"]) == units.get(kind)


@pytest.mark.parametrize(
    ("kind", "density", "states", "population"),
    [
        # the contract: per volume for kinds with a volume, per area in a sheet, per length on a line
        ("film", "cm^-3", "eV^-1 cm^-3", "cm^-2"),
        ("wire", "cm^-3", "eV^-1 cm^-3", "cm^-1"),
        ("cylinder", "cm^-3", "eV^-1 cm^-3", "cm^-1"),
        ("box", "cm^-3", "eV^-1 cm^-3", "1"),
        ("sphere", "cm^-3", "eV^-1 cm^-3", "1"),
        ("sheet", "cm^-2", "eV^-1 cm^-2", "cm^-2"),
        ("line", "cm^-1", "eV^-1 cm^-1", "cm^-1"),
    ],
)
def test_densities_are_per_what_the_kind_has(body, kind, density, states, population):
    request, result, _ = ENDPOINTS["density_of_states"]
    written = dump(result, request.load(body(kind)), answer(result))
    assert written["integrated_states"]["unit"] == density
    assert written["density_of_states"]["unit"] == states
    assert written["levels"]["population"]["unit"] == population


def test_units_asked_for_are_given(body):
    units = {"fermi_energy": "meV", "fermi_velocity": "km/s"}
    written = dump(RESULT, REQUEST.load(body(output_units=units)), answer(RESULT, fermi_energy=CHARGE))
    assert written["fermi_energy"] == {"value": 1000.0, "unit": "meV"}
    assert written["fermi_velocity"] == {"value": 1e-3, "unit": "km/s"}
    assert written["lowest_level"]["unit"] == "eV"


def test_si_everywhere_is_si_everywhere(body):
    request, result, _ = ENDPOINTS["density_of_states"]
    written = dump(result, request.load(body("wire", output_units="SI")), answer(result))
    columns = written.pop("levels")
    named = {**written, **columns}
    for name in result.quantities():
        assert look_up(named[name]["unit"]).factor == 1.0
        assert np.all(np.array(named[name]["value"]) == 1.0)


def test_arrays_in_are_arrays_out(body):
    request, result, _ = ENDPOINTS["thermal_occupancy"]
    loaded = request.load(body(temperature={"value": [1, 2], "unit": "K"}))
    written = dump(result, loaded, answer(result, count=2))
    assert written["mean_energy"]["value"] == [1 / CHARGE] * 2
    assert written["occupation"]["value"] == [[1.0] * 3] * 2
    assert written["method"] == ["closed-form"] * 2
    assert "levels" not in written


def test_energies_shared_by_all_samples_are_written_for_each(body):
    request, result, _ = ENDPOINTS["thermal_occupancy"]
    loaded = request.load(body(temperature={"value": [1, 2], "unit": "K"}, output_units={"energy": "J"}))
    shared = np.broadcast_to(np.array([1.0, 2.0, 3.0]), (2, 3))
    turned = np.array([[1.0, 4.0], [2.0, 5.0], [3.0, 6.0]]).T
    written = dump(result, loaded, answer(result, count=2, energy=shared, occupation=turned))
    assert written["energy"] == {"value": [[1.0, 2.0, 3.0]] * 2, "unit": "J"}
    assert written["occupation"]["value"] == [[1.0, 2.0, 3.0], [4.0, 5.0, 6.0]]


def test_a_grid_and_rows_left_out_are_told(body):
    loaded = REQUEST.load(body(temperature={"value": [1, -2, 3], "unit": "K"}, combine="grid", invalid_rows="omit"))
    written = dump(RESULT, loaded, answer(RESULT, count=2))
    assert written["grid"] == {"axes": ["temperature"], "shape": [3]}
    assert written["row"] == [0, 2]
    assert [entry["row"] for entry in written["omitted"]] == [1]
    assert not {"grid", "row", "omitted"} & set(dump(RESULT, REQUEST.load(body()), answer(RESULT)))


def test_a_number_that_is_undefined_is_null(body):
    written = dump(RESULT, REQUEST.load(body()), answer(RESULT, reduced_temperature=None))
    assert written["reduced_temperature"] == {"value": None, "unit": "1"}


def test_cautions_are_written_with_their_rows(body):
    caution = SimpleNamespace(code="few-carriers", text="Few.", rows=None)
    rows = SimpleNamespace(code="few-carriers", text="Few.", rows=np.array([0, 1, 2, 3])[::2])
    written = dump(RESULT, REQUEST.load(body()), answer(RESULT, cautions=(caution, rows)))
    assert written["cautions"] == [
        {"code": "few-carriers", "text": "Few."},
        {"code": "few-carriers", "text": "Few.", "rows": [0, 2]},
    ]


@pytest.mark.parametrize("value", [np.inf, -np.inf, np.nan, np.array([1.0, np.nan]), np.float64(np.inf)])
def test_nothing_non_finite_is_written(body, value):
    with pytest.raises(NonFinite):
        dump(RESULT, REQUEST.load(body()), answer(RESULT, fermi_energy=value))


def test_whole_numbers_of_numpy_are_written_as_numbers(body):
    written = dump(RESULT, REQUEST.load(body()), answer(RESULT, occupied_levels=np.int64(3)))
    assert written["occupied_levels"] == {"value": 3.0, "unit": "1"}


def test_the_keys_are_the_same_whatever_the_numbers(body):
    loaded = REQUEST.load(body())
    ones, others = (dump(RESULT, loaded, answer(RESULT, reduced_temperature=value)) for value in (1.0, None))
    assert list(ones) == list(others)


def test_a_result_without_levels_has_no_columns():
    assert "edge" not in FermiLevelResult.quantities()
    assert {"edge", "degeneracy", "population", "share"} < set(DensityOfStatesResult.quantities())
    assert Result.quantities() == ()
    assert LevelsMember.absent == {"bulk"}
