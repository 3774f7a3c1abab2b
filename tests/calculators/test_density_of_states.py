"""The density of states: sharp against counted states, broadened against its own integral, edges on the grid."""

import dataclasses

import numpy as np
import pytest
from scipy.integrate import cumulative_simpson

from near import near
from samples import KINDS, WITH_CURVE, batch, sample
from service.calculators.curve import DEFAULT_POINTS
from service.calculators.density_of_states import density_of_states
from service.calculators.fermi_level import fermi_level
from service.errors import SampleError
from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN

THERMAL = BOLTZMANN * 300.0
SHAPES = [Broadening("gaussian", THERMAL), Broadening("lorentzian", THERMAL), Broadening("thermal", THERMAL)]


@pytest.mark.parametrize("kind", WITH_CURVE)
def test_states_below_the_fermi_energy_hold_all_carriers(kind):
    one = sample(kind, temperature=0.0)
    fermi_energy = fermi_level(one).fermi_energy
    curve = density_of_states(one, np.array([0.5 * fermi_energy, fermi_energy, 1.5 * fermi_energy]))
    # The states below E vary by (E/n) dn/dE, a few, times the rounding of E itself.
    assert curve.integrated_states[1] == near(one.carrier_density, rel=1e-13)
    assert (np.diff(curve.integrated_states) > 0).all()


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("shape", SHAPES, ids=lambda shape: shape.kind)
def test_the_integral_is_that_of_the_density_of_states(kind, shape):
    energies = np.linspace(0.02, 0.3, 1201) * 1.602176634e-19
    curve = density_of_states(sample(kind), energies, shape)
    assert (curve.density_of_states > 0).all()
    grown = cumulative_simpson(curve.density_of_states, x=energies, initial=0)
    # Simpson's own error at a step of 0.009 widths is below 1e-9 of the whole rise.
    rise = curve.integrated_states - curve.integrated_states[0]
    assert rise == near(grown, rel=1e-8, abs=1e-8 * grown[-1])


@pytest.mark.parametrize("kind", WITH_CURVE)
def test_thermally_broadened_states_at_the_chemical_potential_hold_all_carriers(kind):
    one = sample(kind)
    potential = fermi_level(one).chemical_potential
    curve = density_of_states(one, np.array([potential]), Broadening("thermal", np.nan))
    # The definition of the chemical potential; the bound is that of mu, times dln n / d(mu / kT) < 10.
    assert curve.integrated_states[0] == near(one.carrier_density, rel=1e-11)


@pytest.mark.parametrize("kind", KINDS)
def test_a_batch_gives_each_sample_what_it_gives_alone(kind):
    ones = [sample(kind, temperature=temperature) for temperature in (77.0, 300.0)]
    energies = np.linspace(0.01, 0.4, 7) * 1.602176634e-19
    together = density_of_states(batch(ones), energies, SHAPES[0])
    assert together.levels is None
    assert together.energy.shape == (2, 7)
    for row, one in enumerate(ones):
        alone = density_of_states(one, energies, SHAPES[0])
        for name in ("density_of_states", "integrated_states"):
            assert getattr(together, name)[row] == near(getattr(alone, name), rel=1e-13), name


@pytest.mark.parametrize("kind", ["box", "sphere"])
def test_lines_that_nothing_broadens_are_refused_and_point_to_the_levels(kind):
    with pytest.raises(SampleError, match="levels"):
        density_of_states(sample(kind), None, Broadening("none", np.nan))


@pytest.mark.parametrize("kind", ["box", "sphere"])
def test_lines_are_thermally_broadened_unless_it_is_cold(kind):
    assert np.isfinite(density_of_states(sample(kind)).density_of_states).all()
    with pytest.raises(SampleError, match="width"):
        density_of_states(sample(kind, temperature=0.0))
    with pytest.raises(SampleError) as refused:
        density_of_states(batch([sample(kind), sample(kind, temperature=0.0)]))
    assert [fault.row for fault in refused.value.faults] == [1]


@pytest.mark.parametrize("kind", KINDS)
def test_the_range_shown_unasked_runs_from_the_band_edge_past_all_carriers(kind):
    curve = density_of_states(sample(kind))
    assert curve.energy.shape == (DEFAULT_POINTS,)
    assert curve.energy[0] == 0.0
    assert (np.diff(curve.energy) >= 0).all()
    assert curve.energy[-1] > curve.fermi_energy
    assert np.isfinite(curve.density_of_states).all()


def test_a_line_has_the_mean_of_its_cell_on_its_edge_and_says_so():
    energies = np.array([-1.0, 0.0, 1.0, 2.0]) * 1e-21
    one = sample("line")
    curve = density_of_states(one, energies)
    assert [caution.code for caution in curve.cautions if caution.code == "edge-on-grid"] == ["edge-on-grid"]
    half_cell = density_of_states(one, np.array([0.5e-21])).integrated_states[0]
    assert curve.density_of_states[1] == near(half_cell / 1e-21, rel=1e-14)
    assert curve.density_of_states[0] == 0.0
    assert np.isfinite(curve.density_of_states).all()


def test_a_grid_in_any_order_gives_each_energy_its_own_value():
    energies = np.array([2.0, 0.0, 1.0, -1.0]) * 1e-21
    shuffled = density_of_states(sample("line"), energies)
    ordered = density_of_states(sample("line"), np.sort(energies))
    assert shuffled.density_of_states[np.argsort(energies)] == near(ordered.density_of_states, rel=1e-15)


@pytest.mark.parametrize("temperature", [0.0, 300.0])
def test_a_grid_of_one_point_on_an_edge_is_finite(temperature):
    curve = density_of_states(sample("line", temperature=temperature), np.array([0.0]))
    assert np.isfinite(curve.density_of_states).all() and curve.density_of_states[0] > 0


def test_columns_of_levels_are_of_one_length_and_hold_all_carriers():
    ladder = density_of_states(sample("film")).levels
    lengths = {len(getattr(ladder, field.name)) for field in dataclasses.fields(ladder) if field.name != "total"}
    assert lengths == {ladder.total}
    # Levels above the reach of 40 kT hold less than a rounding.
    assert ladder.share.sum() == near(1, rel=1e-13)


def test_bulk_has_no_levels():
    assert density_of_states(sample("bulk")).levels is None
