"""The units that a request asks for."""

import pytest

from schemas.density_of_states import DensityOfStatesRequest
from schemas.fermi_level import FermiLevelRequest

REQUEST = FermiLevelRequest()
CURVES = DensityOfStatesRequest()


def test_units_are_read_by_field_in_any_spelling(body):
    units = REQUEST.load(body(output_units={"fermi_energy": "µeV", "fermi_wavevector": "1/Å"}))["output_units"]
    assert {name: unit.symbol for name, unit in units.items()} == {
        "fermi_energy": "ueV",
        "fermi_wavevector": "angstrom^-1",
    }


def test_si_stands_for_all_fields(body):
    assert REQUEST.load(body(output_units="SI"))["output_units"] == "SI"


def test_a_column_of_levels_goes_by_its_own_name(body):
    units = CURVES.load(body(output_units={"edge": "meV", "population": "nm^-2"}))["output_units"]
    assert {name: unit.symbol for name, unit in units.items()} == {"edge": "meV", "population": "nm^-2"}


@pytest.mark.parametrize(
    ("units", "pointer", "words"),
    [
        ("eV", "#/output_units", "must be \"SI\" or an object of units by response field, not 'eV'"),
        (["SI"], "#/output_units", "not an array"),
        ({"fermi_enrgy": "eV"}, "#/output_units/fermi_enrgy", "did you mean fermi_energy?"),
        ({"regime": "eV"}, "#/output_units/regime", "is no field with a unit in this response"),
        ({"fermi_energy": 3}, "#/output_units/fermi_energy", "must be a word, not a number"),
        ({"fermi_energy": "evv"}, "#/output_units/fermi_energy", "'evv' is no unit of this service"),
        ({"fermi_energy": "nm"}, "#/output_units/fermi_energy", "wanted is an energy, in eV, meV or J"),
        (
            {"density_of_states_at_fermi_level": "eV^-1 cm^-2"},
            "#/output_units/density_of_states_at_fermi_level",
            "in a film wanted is a density of states per volume, in eV^-1 cm^-3, eV^-1 m^-3 or eV^-1 nm^-3",
        ),
    ],
)
def test_a_fault_is_named_where_it_lies(body, refused, units, pointer, words):
    faults = refused(REQUEST, body(output_units=units))
    assert words in faults[pointer]
    assert len(faults) == 1


def test_a_unit_for_a_field_that_this_kind_lacks_is_taken(body):
    assert REQUEST.load(body("bulk", output_units={"occupied_levels": "%"}))["output_units"]


def test_a_flood_of_units_is_cut(body, refused):
    faults = refused(REQUEST, body(output_units={f"field {number}": "eV" for number in range(1000)}))
    assert len(faults) == 22
    assert faults["#/output_units"] == "further units were not looked at"
