"""What a stated sample becomes: densities by measure, the one mass, words and numbers for one or many."""

import math

import numpy as np
import pytest

from near import near
from samples import KINDS, batch, sample
from service.calculators.sample import electron_gas
from service.physics.constants import BOLTZMANN, ELECTRON_MASS
from service.physics.geometry import GEOMETRIES

EXTENTS = {
    "bulk": 1.0,
    "sheet": 1.0,
    "line": 1.0,
    "film": 12e-9,
    "wire": 99e-18,
    "cylinder": math.pi * 25e-18,
    "box": 504e-27,
    "sphere": 4 / 3 * math.pi * 64e-27,
}


@pytest.mark.parametrize("kind", KINDS)
def test_the_natural_density_is_the_mean_density_times_the_extent(kind):
    gas = electron_gas(sample(kind))
    assert gas.extent == near(EXTENTS[kind], rel=1e-15)
    assert gas.density == near(gas.mean_density * EXTENTS[kind], rel=1e-15)


@pytest.mark.parametrize(("kind", "mass"), [("bulk", (1 * 2 * 4) ** (1 / 3)), ("sheet", 2**0.5), ("line", 1.0)])
def test_one_mass_stands_for_those_in_which_carriers_move(kind, mass):
    gas = electron_gas(sample(kind, mass=(1.0, 2.0, 4.0)))
    assert gas.mass == near(mass * ELECTRON_MASS, rel=1e-15)


def test_thermal_energy_and_degeneracy():
    gas = electron_gas(sample("bulk", valleys=6.0, temperature=10.0))
    assert gas.thermal_energy == BOLTZMANN * 10


def test_words_and_numbers_are_one_for_one_sample_and_many_for_a_batch():
    one, many = electron_gas(sample("bulk")), electron_gas(batch([sample("bulk")] * 3))
    assert one.words("closed-form") == "closed-form"
    assert many.words("closed-form") == ["closed-form"] * 3
    assert one.per_sample(2.0) == 2.0
    assert many.per_sample(2.0).tolist() == [2.0] * 3
    assert many.per_sample(np.array([1.0, 2.0, 3.0])).tolist() == [1.0, 2.0, 3.0]


def test_every_kind_of_the_contract_has_its_row_in_the_table_of_geometries():
    # The contract's kinds; hard walls, or the ideal gas, which has none.
    assert {kind for kind, _ in GEOMETRIES} == set(KINDS)
    for (kind, _), geometry in GEOMETRIES.items():
        assert geometry.has_volume == (kind not in ("sheet", "line"))
        assert geometry.isotropic == (kind in ("cylinder", "sphere"))
