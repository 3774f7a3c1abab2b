"""The catalogues' shapes."""

from schemas.catalogues import Cautions, Service, Units, units_catalogue
from schemas.units import DIMENSIONS, look_up


def test_every_unit_is_in_the_catalogue_with_all_that_the_contract_names():
    body = units_catalogue()
    assert Units().validate(body) == {}
    assert len(body["units"]) == sum(len(dimension.units) for dimension in DIMENSIONS.values())
    nanometre = next(entry for entry in body["units"] if entry["symbol"] == "nm")
    assert nanometre == {
        "symbol": "nm",
        "ucum": "nm",
        "qudt": "http://qudt.org/vocab/unit/NanoM",
        "dimension": "length",
        "si": "m",
        "factor": 1e-9,
        "spellings": ["nm"],
        "source": "SI Brochure, 9th edition (BIPM 2019)",
    }


def test_a_unit_that_a_vocabulary_lacks_has_null_there():
    bohr = next(entry for entry in units_catalogue()["units"] if entry["symbol"] == "a0")
    assert (bohr["ucum"], bohr["qudt"]) == (None, None)


def test_every_spelling_in_the_catalogue_is_read():
    for entry in units_catalogue()["units"]:
        assert {look_up(spelling).symbol for spelling in entry["spellings"]} == {entry["symbol"]}


def test_the_catalogue_of_cautions_has_the_members_of_its_entries():
    entry = {"code": "c", "text": "t", "quantity": "q", "threshold": 1.0, "unit": "1", "source": "s"}
    assert Cautions().dump({"cautions": [entry]}) == {"cautions": [entry]}


def test_the_service_describes_itself():
    described = {
        "name": "fillmark",
        "version": "0.1.0",
        "limits": {"samples": 1, "energies": 1, "curve_points": 1, "default_energies": 1, "levels": 1, "body_bytes": 1},
        "constants": {"edition": "CODATA 2022", "values": {"boltzmann": {"value": 1.380649e-23, "unit": "J/K"}}},
        "links": {"units": "/v1/units"},
    }
    assert Service().dump(described) == described
    assert Service().validate(described) == {}
