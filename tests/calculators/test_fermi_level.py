"""The Fermi level: one sample and many, each kind's fields, and the limits in which the textbook has a closed form."""

import dataclasses
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from near import near
from samples import KINDS, batch, sample
from service.calculators.fermi_level import UNBOUNDED, fermi_level
from service.errors import SampleError, Unsupported
from service.physics.constants import BOLTZMANN, ELECTRON_MASS, REDUCED_PLANCK

# Two roundings of a double at each of the handful of operations from input to result.
ROUNDING = 1e-14


@pytest.mark.parametrize("kind", KINDS)
def test_a_batch_gives_each_sample_what_it_gives_alone(kind):
    ones = [
        sample(kind, temperature=temperature, mass=0.2 + 0.01 * temperature / 300) for temperature in (0.0, 4.2, 300.0)
    ]
    together = fermi_level(batch(ones))
    for row, one in enumerate(ones):
        alone = fermi_level(one)
        for field in dataclasses.fields(alone):
            single, many = getattr(alone, field.name), getattr(together, field.name)
            if field.name == "cautions":
                here = {caution.code for caution in many if row in caution.rows}
                assert here == {caution.code for caution in single}
            elif single is None:
                assert many is None
            elif isinstance(single, str):
                assert many[row] == single
            else:
                # Energies against the larger of themselves and kT: mu may pass through zero.
                scale = BOLTZMANN * one.temperature if "potential" in field.name else 0.0
                assert many[row] == near(single, rel=ROUNDING, abs=ROUNDING * scale), field.name


@pytest.mark.parametrize(
    ("kind", "absent"),
    [
        ("bulk", {"occupied_levels"}),
        ("film", set()),
        ("wire", set()),
        ("cylinder", set()),
        ("sheet", set()),
        ("line", set()),
        ("box", {"density_of_states_at_fermi_level", "effective_dimension"}),
        ("sphere", {"density_of_states_at_fermi_level", "effective_dimension"}),
    ],
)
def test_only_what_makes_no_sense_for_a_kind_is_absent(kind, absent):
    result = fermi_level(sample(kind))
    assert {field.name for field in dataclasses.fields(result) if getattr(result, field.name) is None} == absent


@pytest.mark.parametrize(("kind", "dimension"), [("bulk", 3), ("sheet", 2), ("line", 1)])
def test_an_ideal_gas_has_its_own_dimension(kind, dimension):
    assert fermi_level(sample(kind)).effective_dimension == near(dimension, rel=ROUNDING)


def test_the_effective_dimension_of_a_film_runs_from_two_to_three():
    thin = fermi_level(sample("film", lengths={"thickness": 1e-9}))
    thick = fermi_level(sample("film", lengths={"thickness": 1e-4}))
    assert thin.effective_dimension == near(2, rel=ROUNDING)
    # The surface term leaves pi / (2 k_F L) of relative order: 1e-5 here.
    assert thick.effective_dimension == near(3, rel=1e-4)


@pytest.mark.parametrize("kind", KINDS)
def test_wavevector_wavelength_and_velocity_follow_from_the_fermi_energy(kind):
    result = fermi_level(sample(kind))
    mass = 0.2 * ELECTRON_MASS
    momentum = math.sqrt(2 * mass * result.fermi_energy)
    assert result.fermi_wavevector == near(momentum / REDUCED_PLANCK, rel=ROUNDING)
    assert result.fermi_wavelength * result.fermi_wavevector == near(2 * math.pi, rel=ROUNDING)
    assert result.fermi_velocity == near(momentum / mass, rel=ROUNDING)


def test_bulk_follows_the_closed_form_with_valleys_spin_and_three_masses():
    result = fermi_level(sample("bulk", mass=(0.19, 0.19, 0.916), valleys=6.0, spin_degeneracy=2.0, temperature=0.0))
    mass = (0.19 * 0.19 * 0.916) ** (1 / 3) * ELECTRON_MASS
    wavevector = (6 * math.pi**2 * 2e25 / 12) ** (1 / 3)
    assert result.fermi_wavevector == near(wavevector, rel=ROUNDING)
    assert result.fermi_energy == near((REDUCED_PLANCK * wavevector) ** 2 / (2 * mass), rel=ROUNDING)
    assert result.chemical_potential == result.fermi_energy


@pytest.mark.parametrize(
    ("temperature", "regime"), [(0.0, "degenerate"), (10.0, "degenerate"), (2000.0, "intermediate"), (2e5, "classical")]
)
def test_the_regime_follows_the_temperature(temperature, regime):
    assert fermi_level(sample("bulk", temperature=temperature)).regime == regime
    assert fermi_level(batch([sample("bulk", temperature=temperature)])).regime == [regime]


def test_one_electron_in_a_box_has_no_reduced_temperature_and_says_so():
    lonely = sample("box", carrier_density=1.0, density_measure="count")
    alone = fermi_level(lonely)
    assert alone.fermi_temperature == 0.0
    assert alone.reduced_temperature is None
    assert "reduced-temperature-unbounded" in {caution.code for caution in alone.cautions}
    together = fermi_level(batch([lonely, dataclasses.replace(lonely, temperature=0.0)]))
    assert together.reduced_temperature.tolist() == [UNBOUNDED, 0.0]


@pytest.mark.parametrize("kind", ["cylinder", "sphere"])
def test_a_round_shape_refuses_three_masses_and_names_the_rows(kind):
    odd = sample(kind, mass=(0.2, 0.3, 0.2))
    with pytest.raises(Unsupported) as alone:
        fermi_level(odd)
    assert [fault.row for fault in alone.value.faults] == [None]
    with pytest.raises(Unsupported) as together:
        fermi_level(batch([sample(kind), odd]))
    assert [(fault.path, fault.row) for fault in together.value.faults] == [(("band", "effective_mass"), 1)]


def test_a_density_per_area_or_length_or_a_count_is_the_density_times_the_extent():
    by_volume = fermi_level(sample("film"))
    by_area = fermi_level(sample("film", carrier_density=2e25 * 12e-9, density_measure="area"))
    assert by_area.fermi_energy == near(by_volume.fermi_energy, rel=ROUNDING)
    assert by_area.wigner_seitz_ratio == near(by_volume.wigner_seitz_ratio, rel=ROUNDING)
    cylinder = fermi_level(sample("cylinder", carrier_density=2e25 * math.pi * 25e-18, density_measure="length"))
    assert cylinder.fermi_energy == near(fermi_level(sample("cylinder")).fermi_energy, rel=ROUNDING)


@given(
    st.sampled_from(["bulk", "sheet", "line", "film"]),
    st.floats(-6, 4),
    st.floats(1.001, 10),
    st.just(0.0) | st.floats(1e-9, 2000),
)
@settings(max_examples=60, deadline=None)
def test_more_carriers_lie_higher(kind, decades, ratio, temperature):
    density = sample(kind).carrier_density * 10.0**decades
    fewer = fermi_level(sample(kind, carrier_density=density, temperature=temperature))
    more = fermi_level(sample(kind, carrier_density=density * ratio, temperature=temperature))
    assert more.chemical_potential > fewer.chemical_potential
    assert more.fermi_energy > fewer.fermi_energy


@given(st.floats(1e-3, 1e4), st.floats(1.01, 5))
@settings(max_examples=60, deadline=None)
def test_in_bulk_the_chemical_potential_falls_with_temperature(temperature, ratio):
    cooler = fermi_level(sample("bulk", temperature=temperature))
    warmer = fermi_level(sample("bulk", temperature=temperature * ratio))
    # Far below the Fermi temperature the fall, (pi kT)^2 / 12 E_F, is beneath the last digit.
    assert warmer.chemical_potential <= cooler.chemical_potential


def test_on_a_line_the_chemical_potential_first_rises_with_temperature():
    cold = fermi_level(sample("line", temperature=0.0))
    cool = fermi_level(sample("line", temperature=0.1 * cold.fermi_temperature))
    hot = fermi_level(sample("line", temperature=3 * cold.fermi_temperature))
    assert cool.chemical_potential > cold.chemical_potential > hot.chemical_potential


@pytest.mark.parametrize("temperature", [0.0, 300.0])
def test_a_thick_film_goes_over_into_bulk_by_its_surface_term(temperature):
    thickness = 1e-6
    film = fermi_level(sample("film", lengths={"thickness": thickness}, temperature=temperature))
    bulk = fermi_level(sample("bulk", temperature=temperature))
    excess = math.pi / (2 * bulk.fermi_wavevector * thickness)
    # The next term is of the square of the surface term.
    assert film.fermi_energy / bulk.fermi_energy - 1 == near(excess, rel=10 * excess)


def test_a_film_with_one_filled_subband_is_a_sheet_on_a_raised_floor():
    film = fermi_level(
        sample("film", carrier_density=1e15, density_measure="area", temperature=4.2, lengths={"thickness": 5e-9})
    )
    sheet = fermi_level(sample("sheet", carrier_density=1e15, temperature=4.2))
    assert film.occupied_levels == 1
    # Mean density and its film times thickness round once each; the second subband is empty to beyond a double.
    assert film.chemical_potential_above_lowest_level == near(sheet.chemical_potential, rel=ROUNDING)


def test_a_flat_wire_goes_over_into_a_film():
    wire = fermi_level(sample("wire", lengths={"width": 3e-6, "height": 5e-9}))
    film = fermi_level(sample("film", lengths={"thickness": 5e-9}))
    # The side walls leave a boundary term of order 1 / (k_F width).
    assert wire.fermi_energy == near(film.fermi_energy, rel=5 / (film.fermi_wavevector * 3e-6))


def test_arrays_stay_finite_and_of_one_length():
    many = fermi_level(batch([sample("film", temperature=float(t)) for t in np.geomspace(1e-3, 1e5, 17)]))
    for field in dataclasses.fields(many):
        value = getattr(many, field.name)
        if isinstance(value, np.ndarray):
            assert value.shape == (17,) and np.isfinite(value).all(), field.name


def test_a_density_whose_fermi_energy_is_beneath_a_double_is_refused():
    faint = sample("line", carrier_density=1e-200)
    with pytest.raises(SampleError, match="dilute"):
        fermi_level(faint)
    with pytest.raises(SampleError) as together:
        fermi_level(batch([sample("line"), faint]))
    assert [fault.row for fault in together.value.faults] == [1]


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("temperature", [0.0, 1e-12, 1e9])
@pytest.mark.parametrize("density", [1e-130, 1.0, 1e36])
def test_the_ends_of_the_accepted_ranges_are_answered_or_refused_and_never_break(kind, temperature, density):
    extreme = sample(kind, carrier_density=density, temperature=temperature)
    try:
        result = fermi_level(extreme)
    except SampleError:
        return
    for field in dataclasses.fields(result):
        number = getattr(result, field.name)
        if isinstance(number, float):
            assert math.isfinite(number), field.name
