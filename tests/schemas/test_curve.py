"""The energies of curves, and broadening."""

import numpy as np
import pytest

from near import near
from schemas.density_of_states import DensityOfStatesRequest
from schemas.limits import Limits
from schemas.thermal_occupancy import ThermalOccupancyRequest

REQUEST = DensityOfStatesRequest()
CHARGE = 1.602176634e-19  # elementary charge, exact in the SI


def ev(value, unit="eV"):
    return {"value": value, "unit": unit}


def span(start=0.0, stop=1.5, points=4):
    return {"from": ev(start), "to": ev(stop), "points": points}


def test_a_range_is_evenly_spaced_with_both_ends(body):
    energies = REQUEST.load(body(energies=span()))["energies"]
    assert energies.tolist() == [value * CHARGE for value in (0.0, 0.5, 1.0, 1.5)]


def test_ends_in_different_units_are_spaced_in_si(body):
    energies = REQUEST.load(body(energies={**span(points=3.0), "from": ev(500, "meV")}))["energies"]
    # one rounding an element beside the conversion's own
    assert energies == near(np.array([0.5, 1.0, 1.5]) * CHARGE, rel=4 * np.finfo(float).eps)


def test_an_array_of_energies_is_taken_as_it_is(body):
    energies = REQUEST.load(body(energies=ev([1.0, -0.5, 1.0])))["energies"]
    assert energies.tolist() == [CHARGE, -0.5 * CHARGE, CHARGE]


def test_energies_are_no_samples(body):
    loaded = REQUEST.load(body(energies=ev([1.0, 2.0]), temperature={"value": [1, 2, 3], "unit": "K"}))
    assert loaded["sample"]["count"] == 3
    assert loaded["energies"].shape == (2,)


def test_without_energies_the_service_chooses(body):
    assert REQUEST.load(body())["energies"] is None


@pytest.mark.parametrize(
    ("energies", "pointer", "words"),
    [
        (3, "#/energies", "must be a range or a quantity with an array, not a number"),
        ({}, "#/energies/from", "is missing"),
        (ev(1.0), "#/energies/value", "must be an array of numbers, not a number"),
        (ev([1.0, 1e20]), "#/energies/value/1", "must be from -1e-06 J to 1e-06 J"),
        (ev([1.0], "K"), "#/energies/unit", "wanted is an energy"),
        (span(points=1), "#/energies/points", "must be 2 or more"),
        (span(points=2.5), "#/energies/points", "must be a whole number, not a number"),
        (span(points=True), "#/energies/points", "must be a whole number, not a boolean"),
        (span(1.0, 1.0), "#/energies/to", "must be above from"),
        ({**span(), "to": ev([1.0, 2.0])}, "#/energies/to/value", "must be one number, not an array"),
        ({**span(), "step": 1}, "#/energies/step", "is not a member here"),
    ],
)
def test_a_fault_of_the_energies_is_named_where_it_lies(body, refused, energies, pointer, words):
    assert words in refused(REQUEST, body(energies=energies))[pointer]


@pytest.mark.parametrize(
    ("changes", "pointer", "detail"),
    [
        ({"energies": span(points=11)}, "#/energies/points", "11 energies; the limit is 10"),
        ({"energies": ev([1.0] * 11)}, "#/energies/value", "11 energies; the limit is 10"),
        ({"energies": span(points=7), "temperature": {"value": [1, 2, 3], "unit": "K"}}, "#/energies/points",
         "3 samples x 7 energies = 21; the limit is 20, for so many samples 6 energies"),
        ({"temperature": {"value": [1, 2, 3, 4], "unit": "K"}}, "#/energies",
         "4 samples x 6 energies = 24; the limit is 20, for so many samples 5 energies"),
    ],
)  # fmt: skip
def test_more_points_than_the_limits_are_refused(body, refused, changes, pointer, detail):
    limits = Limits(energies=10, curve_points=20, default_energies=6)
    assert refused(REQUEST, body(**changes), limits=limits) == {pointer: detail}


@pytest.mark.parametrize(
    ("broadening", "loaded"),
    [
        ({"kind": "none"}, {"kind": "none", "width": None}),
        ({"kind": "thermal"}, {"kind": "thermal", "width": None}),
        ({"kind": "thermal", "width": ev(1)}, {"kind": "thermal", "width": CHARGE}),
        ({"kind": "gaussian", "width": ev(1)}, {"kind": "gaussian", "width": CHARGE}),
        ({"kind": "lorentzian", "width": ev(1)}, {"kind": "lorentzian", "width": CHARGE}),
    ],
)
def test_broadening_loads(body, broadening, loaded):
    assert REQUEST.load(body(broadening=broadening))["broadening"] == loaded


@pytest.mark.parametrize(
    ("broadening", "pointer", "words"),
    [
        ("none", "#/broadening", "must be an object, not 'none'"),
        ({}, "#/broadening/kind", "is missing"),
        ({"kind": "box"}, "#/broadening/kind", "'box' is none of none, gaussian, lorentzian, thermal"),
        ({"kind": "none", "width": ev(1)}, "#/broadening/width", "must not be there: nothing is broadened"),
        ({"kind": "gaussian"}, "#/broadening/width", "is missing: gaussian broadening has no width of its own"),
        ({"kind": "lorentzian"}, "#/broadening/width", "is missing"),
        ({"kind": "gaussian", "width": ev(0)}, "#/broadening/width/value", "must be from 1e-36 J to 1e-06 J"),
        ({"kind": "gaussian", "width": ev([1, 2])}, "#/broadening/width/value", "must be one number, not an array"),
    ],
)
def test_a_fault_of_the_broadening_is_named_where_it_lies(body, refused, broadening, pointer, words):
    assert words in refused(REQUEST, body(broadening=broadening))[pointer]


def test_thermal_occupancy_takes_energies_and_no_broadening(body, refused):
    request = ThermalOccupancyRequest()
    assert request.load(body(energies=span()))["energies"].shape == (4,)
    assert refused(request, body(broadening={"kind": "none"})) == {"#/broadening": "is not a member here"}
