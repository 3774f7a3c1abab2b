"""The vocabulary of results."""

import pytest

from schemas.density_of_states import DensityOfStatesResult
from schemas.fermi_level import FermiLevelResult
from schemas.thermal_occupancy import ThermalOccupancyResult
from schemas.units import DIMENSIONS, look_up
from schemas.vocabulary import ENTRIES, KINDS, MEASURES


def test_every_quantity_is_in_some_response_and_every_answer_in_the_vocabulary():
    named = {*FermiLevelResult.quantities(), *DensityOfStatesResult.quantities(), *ThermalOccupancyResult.quantities()}
    assert named == set(ENTRIES)


@pytest.mark.parametrize("name", ENTRIES)
def test_every_quantity_has_a_sentence_and_units_of_this_service(name):
    entry = ENTRIES[name]
    assert entry.sentence.endswith(".")
    assert set(entry.units) <= set(KINDS)
    assert all(look_up(symbol).symbol == symbol for symbol in entry.units.values())


def test_every_measure_is_a_dimension():
    assert set(MEASURES.values()) <= set(DIMENSIONS)


def test_the_kinds_are_those_of_the_geometries():
    # the calculators have a row for each kind; a new geometry is a row on both sides
    from service.physics.geometry import GEOMETRIES

    assert {kind for kind, _ in GEOMETRIES} == set(KINDS)
