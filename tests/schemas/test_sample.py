"""The sample of a request: what each geometry kind takes, and what is left for later versions."""

import hashlib
import json

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from near import near
from schemas.fermi_level import FermiLevelRequest
from schemas.units import look_up
from schemas.vocabulary import KINDS

REQUEST = FermiLevelRequest()


def test_one_sample_loads_as_floats(body):
    loaded = REQUEST.load(body("film", band={"effective_mass": 0.067, "relative_permittivity": 12.9}))
    assert loaded.pop("canonical")
    assert loaded == {
        "sample": {
            "kind": "film",
            "confinement": "hard-wall",
            "carrier_density": 1e27,
            "density_measure": "volume",
            "lengths": {"thickness": 1.2e-8},
            "temperature": 300.0,
            "effective_mass": (0.067, 0.067, 0.067),
            "valleys": 1.0,
            "spin_degeneracy": 2.0,
            "relative_permittivity": 12.9,
            "count": None,
        },
        "energies": None,
        "broadening": None,
        "grid": None,
        "rows": None,
        "omitted": None,
        "output_units": {},
    }
    sample = loaded["sample"]
    numbers = [sample["carrier_density"], sample["temperature"], sample["valleys"], *sample["effective_mass"]]
    assert {type(number) for number in numbers} == {float}


@pytest.mark.parametrize("kind", KINDS)
def test_every_kind_takes_its_lengths_and_no_others(body, refused, kind):
    assert list(REQUEST.load(body(kind))["sample"]["lengths"]) == list(KINDS[kind].lengths)
    geometry = {"kind": kind, "radius": {"value": 1, "unit": "nm"}}
    faults = refused(REQUEST, body(kind, geometry=geometry))
    assert set(faults) == {"#/geometry/radius", *(f"#/geometry/{name}" for name in KINDS[kind].lengths)}


@pytest.mark.parametrize(
    ("kind", "taken"),
    [
        # the contract's table of fields
        ("bulk", {"cm^-3": "volume"}),
        ("film", {"cm^-3": "volume", "cm^-2": "area"}),
        ("wire", {"cm^-3": "volume", "cm^-1": "length"}),
        ("cylinder", {"cm^-3": "volume", "cm^-1": "length"}),
        ("box", {"cm^-3": "volume", "1": "count"}),
        ("sphere", {"cm^-3": "volume", "1": "count"}),
        ("sheet", {"cm^-2": "area"}),
        ("line", {"cm^-1": "length"}),
    ],
)
def test_a_density_is_taken_per_what_the_kind_allows(body, refused, kind, taken):
    for unit in ("cm^-3", "cm^-2", "cm^-1", "1"):
        stated = body(kind, carrier_density={"value": 5, "unit": unit})
        if unit in taken:
            assert REQUEST.load(stated)["sample"]["density_measure"] == taken[unit]
        else:
            detail = refused(REQUEST, stated)["#/carrier_density/unit"]
            assert f"a {kind} takes" in detail
            assert all(symbol in detail for symbol in taken)


def test_zero_kelvin_is_exact(body):
    assert REQUEST.load(body(temperature={"value": 0, "unit": "mK"}))["sample"]["temperature"] == 0.0


def test_three_masses_are_the_axes(body):
    masses = [0.19, {"value": 0.19, "unit": "1"}, {"value": [0.9, 1.0], "unit": "1"}]
    loaded = REQUEST.load(body(band={"effective_mass": masses}))["sample"]["effective_mass"]
    assert [mass.tolist() for mass in loaded] == [[0.19, 0.19], [0.19, 0.19], [0.9, 1.0]]


def test_one_mass_is_the_same_object_on_all_axes(body):
    for mass in (0.3, {"value": [0.3, 0.4], "unit": "1"}):
        x, y, z = REQUEST.load(body(band={"effective_mass": mass}))["sample"]["effective_mass"]
        assert x is y is z


@pytest.mark.parametrize(
    ("changes", "pointer", "words"),
    [
        ({"carrier_density": None}, "#/carrier_density", "is missing"),
        ({"geometry": None}, "#/geometry", "is missing"),
        ({"temperature": None}, "#/temperature", "is missing"),
        ({"temprature": {"value": 1, "unit": "K"}}, "#/temprature", "did you mean temperature?"),
        ({"geometry": 3}, "#/geometry", "must be an object, not a number"),
        ({"geometry": {}}, "#/geometry/kind", "is missing; it is one of bulk, film"),
        ({"geometry": {"kind": "cube"}}, "#/geometry/kind", "'cube' is none of bulk, film"),
        ({"geometry": {"kind": ["film"]}}, "#/geometry/kind", "an array is none of bulk, film"),
        ({"geometry": {"kind": "filn"}}, "#/geometry/kind", "did you mean film?"),
        ({"band": []}, "#/band", "must be an object, not an array"),
        ({"band": {"effective_mas": 1}}, "#/band/effective_mas", "did you mean effective_mass?"),
        ({"band": {"effective_mass": [1, 2]}}, "#/band/effective_mass", "not an array of 2"),
        ({"band": {"effective_mass": [1, 2, -1]}}, "#/band/effective_mass/2", "must be from"),
        ({"band": {"effective_mass": {"value": 1, "unit": "kg"}}}, "#/band/effective_mass/unit", "a pure number"),
        ({"band": {"spin_degeneracy": 3}}, "#/band/spin_degeneracy", "must be a whole number from 1 to 2"),
        ({"band": {"valleys": 0}}, "#/band/valleys", "must be a whole number from 1 to 1000"),
        ({"band": {"relative_permittivity": 0.5}}, "#/band/relative_permittivity", "must be from 1 to"),
        ({"combine": "paired"}, "#/combine", "is none of grid"),
        ({"invalid_rows": "skip"}, "#/invalid_rows", "is none of reject, omit"),
    ],
)
def test_a_fault_is_named_where_it_lies(body, refused, changes, pointer, words):
    faults = refused(REQUEST, body(**changes))
    assert words in faults[pointer]
    assert len(faults) == 1


@pytest.mark.parametrize(
    ("changes", "pointer"),
    [
        ({"material": "Cu"}, "#/material"),
        ({"propagation": {"kind": "monte-carlo"}}, "#/propagation"),
        ({"temperature": {"value": 4, "unit": "K", "uncertainty": 1}}, "#/temperature/uncertainty"),
        ({"band": {"valleys": [{"effective_mass": 1, "count": 2}]}}, "#/band/valleys"),
        ({"band": {"nonparabolicity": {"value": 0.6, "unit": "eV^-1"}}}, "#/band/nonparabolicity/value"),
        *(
            ({"geometry": {"kind": "film", "thickness": {"value": 1, "unit": "nm"}, "confinement": word}},
             "#/geometry/confinement")
            for word in ("finite-well", "triangular", "parabolic")
        ),
        *(
            ({"geometry": {"kind": "film", "thickness": {"value": 1, "unit": "nm"}, name: 1}}, f"#/geometry/{name}")
            for name in ("barrier", "barrier_mass", "field", "level_spacing")
        ),
    ],
)  # fmt: skip
def test_what_a_later_version_brings_is_refused_as_such(body, refused, changes, pointer):
    faults = refused(REQUEST, body(**changes))
    assert "comes with a later version of this service" in faults[pointer]
    assert len(faults) == 1


def test_a_stated_zero_of_nonparabolicity_is_taken(body):
    REQUEST.load(body(band={"nonparabolicity": {"value": 0, "unit": "eV^-1"}}))


def test_a_body_is_an_object(refused):
    assert refused(REQUEST, [1]) == {"#": "must be an object, not an array"}


def test_all_faults_of_a_request_come_at_once(body, refused):
    faults = refused(
        REQUEST,
        body(
            carrier_density={"value": True, "unit": "cm^-3"},
            geometry={"kind": "box", "length": {"value": [1, 2], "unit": "nm"}, "width": {"value": 1, "unit": "eV"}},
            temperature={"value": [1, -2, 3], "unit": "K"},
            band={"valleys": "two"},
            output_units={"fermi_energy": "K"},
            colour="red",
        ),
    )
    assert set(faults) == {
        "#/carrier_density/value",
        "#/geometry/height",
        "#/geometry/length/value",
        "#/geometry/width/unit",
        "#/temperature/value",
        "#/temperature/value/1",
        "#/band/valleys",
        "#/output_units/fermi_energy",
        "#/colour",
    }


def test_the_canonical_request_is_what_it_says(body):
    stated = body(band={"effective_mass": [1, 2, {"value": 3, "unit": "1"}]}, output_units={"fermi_energy": "µeV"})
    assert json.loads(REQUEST.load(stated)["canonical"]) == {
        "band": {"effective_mass": [{"unit": "1", "value": number} for number in (1.0, 2.0, 3.0)]},
        "carrier_density": {"unit": "cm^-3", "value": 1e21},
        "geometry": {"kind": "film", "thickness": {"unit": "nm", "value": 12.0}},
        "output_units": {"fermi_energy": "ueV"},
        "temperature": {"unit": "K", "value": 300.0},
    }
    stated = body(carrier_density={"value": 5, "unit": "nm-3"})
    assert REQUEST.load(stated)["canonical"] == (
        b'{"carrier_density":{"unit":"nm^-3","value":5.0},"geometry":{"kind":"film","thickness":'
        b'{"unit":"nm","value":12.0}},"temperature":{"unit":"K","value":300.0}}'
    )


@given(data=st.data())
def test_order_of_members_and_spelling_of_units_change_nothing(body, data):
    plain = body("wire", band={"effective_mass": 0.1, "valleys": 2})
    other = json.loads(json.dumps(plain))
    for path in (("carrier_density",), ("geometry", "width"), ("geometry", "height"), ("temperature",)):
        quantity = other
        for name in path:
            quantity = quantity[name]
        quantity["unit"] = data.draw(
            st.sampled_from({"cm^-3": ("1/cm^3", "cm⁻³", "cm-3")}.get(quantity["unit"], (quantity["unit"],)))
        )
    shuffled = {name: other[name] for name in data.draw(st.permutations(list(other)))}
    shuffled["geometry"] = {
        name: other["geometry"][name] for name in data.draw(st.permutations(list(other["geometry"])))
    }
    first, second = REQUEST.load(plain), REQUEST.load(shuffled)
    assert hashlib.sha256(first["canonical"]).digest() == hashlib.sha256(second["canonical"]).digest()
    assert first == second


@given(st.floats(min_value=1.0, max_value=1e6), st.sampled_from(["nm", "um", "pm", "angstrom", "m", "a0"]))
def test_a_length_in_any_unit_is_the_same_length(body, nanometres, unit):
    metres = look_up("nm").to_si(nanometres)
    stated = body(geometry={"kind": "film", "thickness": {"value": look_up(unit).from_si(metres), "unit": unit}})
    read = REQUEST.load(stated)["sample"]["lengths"]["thickness"]
    # one conversion out and one in, each within one unit in the last place
    assert read == near(metres, rel=4 * np.finfo(float).eps)
