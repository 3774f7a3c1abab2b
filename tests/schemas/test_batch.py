"""Arrays of samples: paired, crossed, refused, left out."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from schemas.batch import put
from schemas.fermi_level import FermiLevelRequest
from schemas.limits import Limits

REQUEST = FermiLevelRequest()


def kelvin(*values):
    return {"value": list(values), "unit": "K"}


def film(*nanometres):
    return {"kind": "film", "thickness": {"value": list(nanometres), "unit": "nm"}}


def test_arrays_are_paired_and_single_values_apply_to_all(body):
    sample = REQUEST.load(body(geometry=film(5, 10), temperature=kelvin(4, 300)))["sample"]
    assert sample["count"] == 2
    assert sample["lengths"]["thickness"].tolist() == [5e-9, 1e-8]
    assert sample["temperature"].tolist() == [4.0, 300.0]
    assert sample["carrier_density"].tolist() == [1e27, 1e27]
    arrays = [value for value in sample.values() if isinstance(value, np.ndarray)]
    arrays += [*sample["lengths"].values(), *sample["effective_mass"]]
    assert {(value.shape, value.dtype.name) for value in arrays} == {((2,), "float64")}


def test_an_array_of_one_is_an_array(body):
    sample = REQUEST.load(body(temperature=kelvin(4)))["sample"]
    assert sample["count"] == 1
    assert sample["valleys"].tolist() == [1.0]


def test_arrays_of_different_lengths_are_refused_each(body, refused):
    faults = refused(REQUEST, body(geometry=film(5, 10), temperature=kelvin(1, 2, 3)))
    assert set(faults) == {"#/geometry/thickness/value", "#/temperature/value"}
    assert "thickness has 2, temperature has 3" in faults["#/temperature/value"]


def test_a_grid_runs_in_c_order_over_axes_in_the_order_of_the_contract(body):
    stated = {
        "combine": "grid",
        "band": {"effective_mass": [1, 1, {"value": [1, 2], "unit": "1"}], "valleys": {"value": [1, 2], "unit": "1"}},
        "temperature": kelvin(4, 77, 300),
        "geometry": film(5),
        "carrier_density": {"value": [1, 2], "unit": "nm^-3"},
    }
    loaded = REQUEST.load(stated)
    assert loaded["grid"] == {
        "axes": ["carrier_density", "thickness", "temperature", "effective_mass_z", "valleys"],
        "shape": [2, 1, 3, 2, 2],
    }
    sample = loaded["sample"]
    assert sample["count"] == 24
    expected = np.meshgrid([1e27, 2e27], [5e-9], [4, 77, 300], [1, 2], [1, 2], indexing="ij")
    read = (
        sample["carrier_density"],
        sample["lengths"]["thickness"],
        sample["temperature"],
        sample["effective_mass"][2],
        sample["valleys"],
    )
    for values, axis in zip(read, expected, strict=True):
        assert values.tolist() == axis.ravel().tolist()
    assert sample["effective_mass"][0].tolist() == [1.0] * 24


def test_a_grid_of_one_axis_is_that_axis(body):
    loaded = REQUEST.load(body(temperature=kelvin(1, 2), combine="grid"))
    assert loaded["grid"] == {"axes": ["temperature"], "shape": [2]}
    assert loaded["sample"]["temperature"].tolist() == [1.0, 2.0]


def test_a_grid_without_arrays_is_one_sample(body):
    loaded = REQUEST.load(body(combine="grid"))
    assert loaded["grid"] == {"axes": [], "shape": []}
    assert loaded["sample"]["count"] is None


def test_rows_out_of_range_refuse_the_request(body, refused):
    faults = refused(REQUEST, body(geometry=film(5, -1, 6), temperature=kelvin(-3, 2, 3), invalid_rows="reject"))
    assert set(faults) == {"#/geometry/thickness/value/1", "#/temperature/value/0"}


def test_a_flood_of_rows_out_of_range_is_counted(body, refused):
    faults = refused(REQUEST, body(temperature=kelvin(*[-1] * 1000)))
    assert len(faults) == 21
    assert faults["#/temperature/value"] == "980 more elements have this fault"


def test_rows_out_of_range_are_left_out_where_asked(body):
    loaded = REQUEST.load(body(geometry=film(5, -1, 6, -2), temperature=kelvin(-3, 2, 3, -4), invalid_rows="omit"))
    assert loaded["rows"].tolist() == [2]
    assert loaded["sample"]["count"] == 1
    assert loaded["sample"]["temperature"].tolist() == [3.0]
    assert loaded["sample"]["valleys"].tolist() == [1.0]
    assert [(row["row"], row["pointer"]) for row in loaded["omitted"]] == [
        (0, "#/temperature/value/0"),
        (1, "#/geometry/thickness/value/1"),
        (3, "#/geometry/thickness/value/3"),
    ]
    assert loaded["omitted"][0]["detail"] == "must be 0, or from 1e-12 K to 1e+09 K"


def test_a_grid_leaves_out_every_sample_of_a_bad_element(body):
    loaded = REQUEST.load(body(geometry=film(5, -1), temperature=kelvin(1, -2, 3), invalid_rows="omit", combine="grid"))
    assert loaded["rows"].tolist() == [0, 2]
    assert loaded["grid"]["shape"] == [2, 3]
    assert loaded["sample"]["temperature"].tolist() == [1.0, 3.0]
    assert [(row["row"], row["pointer"]) for row in loaded["omitted"]] == [
        (1, "#/temperature/value/1"),
        (3, "#/geometry/thickness/value/1"),
        (4, "#/geometry/thickness/value/1"),
        (5, "#/geometry/thickness/value/1"),
    ]


def test_the_keys_of_a_batch_depend_on_the_request_alone(body):
    loaded = REQUEST.load(body(temperature=kelvin(1, 2), invalid_rows="omit"))
    assert loaded["rows"].tolist() == [0, 1]
    assert loaded["omitted"] == []
    assert REQUEST.load(body(invalid_rows="omit"))["rows"] is None


def test_a_request_with_no_row_left_is_refused(body, refused):
    faults = refused(REQUEST, body(temperature=kelvin(-1, -2), invalid_rows="omit"))
    assert set(faults) == {"#/temperature/value/0", "#/temperature/value/1"}


def test_a_value_for_all_samples_out_of_range_is_no_matter_of_rows(body, refused):
    faults = refused(REQUEST, body(temperature={"value": -1, "unit": "K"}, geometry=film(1, 2), invalid_rows="omit"))
    assert set(faults) == {"#/temperature/value"}


@pytest.mark.parametrize(
    ("changes", "pointer", "detail"),
    [
        ({"temperature": kelvin(1, 2, 3, 4)}, "#/temperature/value", "4 samples; the limit is 3"),
        ({"temperature": kelvin(1, 2, 3, 4), "combine": "grid"}, "#/combine", "4 samples; the limit is 3"),
        ({"temperature": kelvin(1, 2), "geometry": film(1, 2), "combine": "grid"}, "#/combine",
         "2 x 2 = 4 samples; the limit is 3"),
    ],
)  # fmt: skip
def test_more_samples_than_the_limit_are_refused(body, refused, changes, pointer, detail):
    assert refused(REQUEST, body(**changes), limits=Limits(samples=3)) == {pointer: detail}


def test_a_grid_of_a_million_axes_elements_is_refused_before_it_is_made(body, refused):
    many = [1.0] * 100_000
    stated = body(
        geometry={"kind": "film", "thickness": {"value": many, "unit": "nm"}},
        temperature={"value": many, "unit": "K"},
        combine="grid",
    )
    assert "100000 x 100000 = 10000000000 samples" in refused(REQUEST, stated)["#/combine"]


@given(
    st.lists(st.floats(min_value=-2, max_value=10), min_size=1, max_size=4),
    st.lists(st.floats(min_value=-2, max_value=10), min_size=1, max_size=4),
)
def test_kept_and_omitted_rows_make_up_the_whole_grid(body, temperatures, sizes):
    stated = body(geometry=film(*sizes), temperature=kelvin(*temperatures), combine="grid", invalid_rows="omit")
    good = [
        size >= 1e-3 and (temperature == 0.0 or temperature >= 1e-12) for size in sizes for temperature in temperatures
    ]
    if not any(good):
        return
    loaded = REQUEST.load(stated)
    assert loaded["rows"].tolist() == [row for row, fine in enumerate(good) if fine]
    assert [entry["row"] for entry in loaded["omitted"]] == [row for row, fine in enumerate(good) if not fine]
    assert loaded["sample"]["count"] == sum(good)


def test_a_fault_of_the_whole_hides_faults_of_its_parts():
    errors = {"geometry": ["must be an object"], "a": {"b": ["x"]}}
    put(errors, ("geometry", "thickness", "value"), ["y"])
    put(errors, ("a", "b"), {"c": ["y"]})
    put(errors, ("a",), {"d": ["z"], "b": ["y"]})
    assert errors == {"geometry": ["must be an object"], "a": {"b": ["x"], "d": ["z"]}}
