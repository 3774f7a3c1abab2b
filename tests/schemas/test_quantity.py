"""The quantity field: what it reads, what it refuses and where it says the fault lies."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from marshmallow import ValidationError

from schemas.problems import faults
from schemas.quantity import Quantity
from schemas.units import DIMENSIONS

LENGTH = Quantity("length", least=1e-12, most=1e3)
TEMPERATURE = Quantity("temperature", least=1e-12, most=1e9, zero=True)
MASS = Quantity("dimensionless", least=1e-6, most=1e6)
COUNT = Quantity("dimensionless", least=1, most=1000, whole=True)
ENERGY = Quantity("energy", least=-1.0, most=1.0, arrays=False)
ENERGIES = Quantity("energy", least=-1.0, most=1.0, arrays=None)
DENSITY = Quantity("number per volume", "number per area", least=1e-30, most=1e36)


def told(field, value):
    with pytest.raises(ValidationError) as raised:
        field.deserialize(value)
    return {fault["pointer"]: fault["detail"] for fault in faults(raised.value.messages)}


def test_a_quantity_is_kept_as_stated_and_in_si():
    stated = LENGTH.deserialize({"value": 12, "unit": "nm"})
    assert (stated.value, stated.unit.symbol, stated.si) == (12.0, "nm", 1.2e-8)


def test_a_pure_number_may_be_bare():
    assert MASS.deserialize(0.067).si == 0.067
    assert MASS.deserialize({"value": 6.7, "unit": "%"}).si == 0.067


def test_minus_zero_is_zero():
    assert str(TEMPERATURE.deserialize({"value": -0.0, "unit": "K"}).si) == "0.0"
    assert str(TEMPERATURE.deserialize({"value": [-0.0], "unit": "K"}).si[0]) == "0.0"


def test_an_array_is_an_array_of_doubles():
    stated = LENGTH.deserialize({"value": [1, 2.5, 2**40], "unit": "pm"})
    assert stated.si.dtype == np.float64
    assert stated.si.tolist() == [1e-12, 2.5e-12, 2**40 / 1e12]


@pytest.mark.parametrize(
    ("field", "value", "pointer", "detail"),
    [
        (LENGTH, 12, "#", 'must be a quantity such as {"value": ..., "unit": "nm"}, not a number'),
        (LENGTH, "12 nm", "#", """must be a quantity such as {"value": ..., "unit": "nm"}, not '12 nm'"""),
        (MASS, True, "#", 'must be a number or a quantity such as {"value": ..., "unit": "1"}, not a boolean'),
        (MASS, 0, "#", "must be from 1e-06 to 1e+06"),
        (MASS, 10**400, "#", "is too large for a double"),
        (COUNT, 1.5, "#", "must be a whole number from 1 to 1000"),
        (COUNT, {"value": 250, "unit": "%"}, "#/value", "must be a whole number from 1 to 1000"),
        (LENGTH, {"value": 0, "unit": "nm"}, "#/value", "must be from 1e-12 m to 1000 m"),
        (LENGTH, {"value": 1e308, "unit": "m"}, "#/value", "must be from 1e-12 m to 1000 m"),
        (DENSITY, {"value": 1e308, "unit": "cm^-3"}, "#/value", "must be from 1e-30 m^-3 to 1e+36 m^-3"),
        (TEMPERATURE, {"value": -1, "unit": "K"}, "#/value", "must be 0, or from 1e-12 K to 1e+09 K"),
        (TEMPERATURE, {"value": float("nan"), "unit": "K"}, "#/value", "must be 0, or from 1e-12 K to 1e+09 K"),
        (LENGTH, {"value": "12", "unit": "nm"}, "#/value", "must be a number or an array of numbers, not '12'"),
        (LENGTH, {"value": None, "unit": "nm"}, "#/value", "must be a number or an array of numbers, not null"),
        (LENGTH, {"value": True, "unit": "nm"}, "#/value", "must be a number or an array of numbers, not a boolean"),
        (LENGTH, {"value": [], "unit": "nm"}, "#/value", "must not be an empty array"),
        (LENGTH, {"value": [1, 10**400], "unit": "nm"}, "#/value", "holds a number that is too large for a double"),
        (ENERGY, {"value": [1], "unit": "eV"}, "#/value", "must be one number, not an array"),
        (ENERGIES, {"value": 1, "unit": "eV"}, "#/value", "must be an array of numbers, not a number"),
        (LENGTH, {"value": 1}, "#/unit", "is missing"),
        (LENGTH, {"unit": "nm"}, "#/value", "is missing"),
        (LENGTH, {"value": 1, "unit": None}, "#/unit", "must be a word, not null"),
        (LENGTH, {"value": 1, "unit": ["nm"]}, "#/unit", "must be a word, not an array"),
        (LENGTH, {"value": 1, "unit": "nm", "uncertainty": 1}, "#/uncertainty",
         "uncertainty comes with a later version of this service"),
        (LENGTH, {"value": 1, "unit": "nm", "units": 1}, "#/units", "is not a member here; did you mean unit?"),
        (LENGTH, {"value": 1, "unit": "K"}, "#/unit",
         "K is the unit of a temperature; wanted is a length, in nm, um or angstrom"),
        (LENGTH, {"value": 1, "unit": "nmm"}, "#/unit",
         "'nmm' is no unit of this service; did you mean nm?; wanted is a length, in nm, um or angstrom"),
        (DENSITY, {"value": 1, "unit": "cm^-1"}, "#/unit",
         "cm^-1 is the unit of a number per length, or a wavenumber; wanted is a number per volume, in cm^-3, m^-3 or "
         "nm^-3, or a number per area, in cm^-2, m^-2 or nm^-2"),
    ],
)  # fmt: skip
def test_a_fault_is_named_where_it_lies(field, value, pointer, detail):
    assert told(field, value) == {pointer: detail}


def test_all_faults_of_a_quantity_come_at_once():
    assert set(told(LENGTH, {"value": "x", "unit": "furlong", "error": 1})) == {"#/value", "#/unit", "#/error"}
    assert set(told(LENGTH, {})) == {"#/value", "#/unit"}


def test_elements_that_are_no_numbers_are_named_by_index():
    assert told(LENGTH, {"value": [1, True, "2", None, [4], {}, 6.0], "unit": "nm"}) == {
        "#/value/1": "must be a number, not a boolean",
        "#/value/2": "must be a number, not '2'",
        "#/value/3": "must be a number, not null",
        "#/value/4": "must be a number, not an array",
        "#/value/5": "must be a number, not an object",
    }


def test_a_flood_of_bad_elements_is_counted():
    details = told(LENGTH, {"value": ["x"] * 100_000, "unit": "nm"})
    assert len(details) == 21
    assert details["#/value"] == "99980 more elements are no numbers"


@pytest.mark.parametrize(
    ("field", "values", "bad"),
    [
        (TEMPERATURE, [0.0, -1.0, 300.0, 1e-13], [1, 3]),
        (LENGTH, [1.0, 0.0], [1]),
        (COUNT, [1.0, 2.5, 3.0, 0.0], [1, 3]),
        (TEMPERATURE, [0.0, 1.0], None),
        (COUNT, [1.0, 2.0], None),
        (LENGTH, [float("nan"), 1.0], [0]),
    ],
)
def test_elements_out_of_range_are_noted_for_the_batch_to_judge(field, values, bad):
    stated = field.deserialize({"value": values, "unit": field_unit(field)})
    assert (None if stated.bad is None else stated.bad.tolist()) == bad


def field_unit(field):
    return DIMENSIONS[field.dimensions[0]].si.symbol


@given(st.floats(min_value=1e-10, max_value=1e2), st.sampled_from(DIMENSIONS["length"].units))
def test_the_spelling_of_a_unit_changes_nothing(value, unit):
    read = {LENGTH.deserialize({"value": unit.from_si(value), "unit": spelling}).si for spelling in unit.spellings}
    assert len(read) == 1


JSON = st.recursive(
    st.none() | st.booleans() | st.floats() | st.integers() | st.text(max_size=5),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.sampled_from(["value", "unit", "x"]), inner),
    max_leaves=6,
)


@given(JSON)
def test_anything_else_is_refused_and_nothing_breaks(value):
    for field in (LENGTH, MASS, ENERGIES):
        try:
            stated = field.deserialize(value)
        except ValidationError:
            continue
        assert np.all(np.isfinite(stated.si)) or stated.bad is not None
