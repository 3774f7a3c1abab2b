"""Each caution on both sides of its threshold, and the catalogue that names them."""

import math

import numpy as np
import pytest

from samples import batch, sample
from service.calculators.cautions import CATALOGUE
from service.calculators.density_of_states import density_of_states
from service.calculators.fermi_level import fermi_level
from service.calculators.thermal_occupancy import thermal_occupancy
from service.physics.constants import BOHR_RADIUS, BOLTZMANN, ELECTRON_MASS, REDUCED_PLANCK, SPEED_OF_LIGHT

MARGIN = 1e-6


def codes(result):
    return {caution.code for caution in result.cautions}


def density_at(ratio):
    """Return the bulk density of a metal of mass 1 and permittivity 1 with this r_s."""
    return 3 / (4 * math.pi * (ratio * BOHR_RADIUS) ** 3)


def metal(density, temperature=0.0):
    return sample("bulk", mass=1.0, relative_permittivity=1.0, carrier_density=density, temperature=temperature)


def test_interactions_are_strong_beyond_r_s_of_6():
    assert "strong-interactions" in codes(fermi_level(metal(density_at(6 * (1 + MARGIN)))))
    assert "strong-interactions" not in codes(fermi_level(metal(density_at(6 * (1 - MARGIN)))))


def test_a_classical_gas_is_not_warned_of_r_s():
    assert "strong-interactions" not in codes(fermi_level(metal(density_at(100), temperature=1e6)))


def density_of_speed(speed):
    wavevector = ELECTRON_MASS * speed / REDUCED_PLANCK
    return wavevector**3 / (3 * math.pi**2)


def test_a_fermi_velocity_above_a_tenth_of_light_is_relativistic():
    limit = 0.1 * SPEED_OF_LIGHT
    assert "relativistic-speed" in codes(fermi_level(metal(density_of_speed(limit * (1 + MARGIN)))))
    assert "relativistic-speed" not in codes(fermi_level(metal(density_of_speed(limit * (1 - MARGIN)))))


def test_a_thermal_velocity_above_a_tenth_of_light_is_relativistic():
    limit = ELECTRON_MASS * (0.1 * SPEED_OF_LIGHT) ** 2 / (3 * BOLTZMANN)
    assert "relativistic-speed" in codes(fermi_level(metal(1e20, temperature=limit * (1 + MARGIN))))
    assert "relativistic-speed" not in codes(fermi_level(metal(1e20, temperature=limit * (1 - MARGIN))))


def test_walls_closer_than_their_spill_out_times_a_hundred_are_warned_of():
    wavevector = (3 * math.pi**2 * 2e25) ** (1 / 3)
    limit = 2 * (3 * math.pi / (8 * wavevector)) / 0.01
    for thickness, warned in ((limit * (1 - MARGIN), True), (limit * (1 + MARGIN), False)):
        assert ("wall-spill-out" in codes(fermi_level(sample("film", lengths={"thickness": thickness})))) is warned
    assert "wall-spill-out" not in codes(fermi_level(sample("sheet")))


def test_confinement_matters_where_the_bulk_formula_is_off_by_one_per_cent():
    bulk = fermi_level(sample("bulk", temperature=0.0)).fermi_energy
    seen = set()
    for thickness in np.geomspace(10e-9, 3e-6, 40):
        result = fermi_level(sample("film", lengths={"thickness": float(thickness)}, temperature=0.0))
        off = abs(result.fermi_energy / bulk - 1) > 0.01
        assert ("confinement-matters" in codes(result)) is off
        seen.add(off)
    assert seen == {True, False}


def test_fewer_than_ten_carriers_in_a_box_are_few():
    for kind in ("box", "sphere"):
        assert "few-carriers" in codes(fermi_level(sample(kind, carrier_density=9.0, density_measure="count")))
        assert "few-carriers" not in codes(fermi_level(sample(kind, carrier_density=10.0, density_measure="count")))
    assert "few-carriers" not in codes(fermi_level(sample("film")))


def test_a_fermi_temperature_of_zero_has_no_reduced_temperature():
    for count, warned in ((2.0, True), (3.0, False)):
        result = fermi_level(sample("box", carrier_density=count, density_measure="count"))
        assert ("reduced-temperature-unbounded" in codes(result)) is warned


def test_a_step_is_announced_at_zero_temperature_alone():
    assert "step-at-zero-temperature" in codes(thermal_occupancy(sample("sheet", temperature=0.0)))
    assert "step-at-zero-temperature" not in codes(thermal_occupancy(sample("sheet", temperature=1e-9)))


def test_an_edge_on_the_grid_is_announced_on_a_line_and_not_in_bulk():
    grid = np.array([0.0, 1e-21])
    assert "edge-on-grid" in codes(density_of_states(sample("line"), grid))
    assert "edge-on-grid" in codes(thermal_occupancy(sample("line"), grid))
    assert "edge-on-grid" not in codes(density_of_states(sample("line"), grid + 1e-22))
    assert "edge-on-grid" not in codes(density_of_states(sample("bulk"), grid))


def test_a_batch_names_the_rows_concerned():
    cautions = fermi_level(batch([metal(density_at(5)), metal(density_at(7)), metal(density_at(8))])).cautions
    assert {caution.code: caution.rows.tolist() for caution in cautions} == {"strong-interactions": [1, 2]}


@pytest.mark.parametrize("entry", CATALOGUE.values(), ids=CATALOGUE)
def test_each_entry_of_the_catalogue_is_whole(entry):
    assert entry.text.endswith(".") and entry.source and entry.quantity and entry.unit
    assert math.isfinite(entry.threshold)
