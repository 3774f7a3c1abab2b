"""The thermal occupancy: f, -df/dE, g f and what the levels hold, at T = 0 and above."""

import math

import numpy as np
import pytest
from scipy.integrate import simpson

from near import near
from samples import KINDS, WITH_CURVE, batch, sample
from service.calculators.fermi_level import fermi_level
from service.calculators.thermal_occupancy import thermal_occupancy
from service.physics.constants import BOLTZMANN


@pytest.mark.parametrize("kind", KINDS)
def test_at_the_chemical_potential_half_the_states_are_filled(kind):
    one = sample(kind)
    potential = fermi_level(one).chemical_potential
    result = thermal_occupancy(one, np.array([potential]))
    # Energy and mu meet within a rounding of their distance to the lowest level.
    assert result.occupation[0] == near(0.5, rel=1e-13)
    assert result.thermal_broadening[0] * 4 * BOLTZMANN * 300 == near(1, rel=1e-13)


@pytest.mark.parametrize("kind", ["bulk", "film", "sheet"])
def test_the_occupied_density_integrates_to_all_carriers(kind):
    one = sample(kind)
    level = fermi_level(one)
    top = max(level.chemical_potential, 0.0) + 45 * BOLTZMANN * 300
    # Nodes on the subband edges keep the rule on smooth pieces; E = E_i + u^2 smooths the root of bulk.
    edges = thermal_occupancy(one).levels
    starts = [0.0] if edges is None else [*edges.edge.tolist()]
    total = 0.0
    for low, high in zip(starts, [*starts[1:], top], strict=True):
        if high <= low:
            continue
        root = np.linspace(0, math.sqrt(high - low), 20001)
        energies = low + root**2
        # The ends stand inside the piece by more than the rounding of an edge and of its height above the lowest.
        energies[0], energies[-1] = low * (1 + 1e-15), high * (1 - 1e-15)
        curve = thermal_occupancy(one, energies)
        total += simpson(curve.occupied_density * 2 * root, x=root)
    # Simpson at 20,001 nodes over some tens of kT: below 1e-9.
    assert total == near(one.carrier_density, rel=1e-8)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("temperature", [0.0, 4.2, 300.0, 3000.0])
def test_the_levels_hold_all_carriers(kind, temperature):
    if kind == "bulk":
        pytest.skip("bulk has no levels")
    ladder = thermal_occupancy(sample(kind, temperature=temperature)).levels
    if ladder.total == len(ladder.edge):
        # Each population and their sum round; what lies above the reach of 40 kT is below 1e-16.
        assert ladder.share.sum() == near(1, rel=1e-11)
    assert (np.diff(ladder.edge) > 0).all()
    assert (ladder.population >= 0).all()


@pytest.mark.parametrize("kind", KINDS)
def test_at_zero_temperature_the_step_is_exact(kind):
    one = sample(kind, temperature=0.0)
    result = thermal_occupancy(one)
    assert set(np.unique(result.occupation)) <= {0.0, 0.5, 1.0}
    assert not result.thermal_broadening.any()
    assert result.excited_fraction == 0.0
    assert result.transition_width == 0.0
    assert "step-at-zero-temperature" in {caution.code for caution in result.cautions}


@pytest.mark.parametrize(("kind", "share"), [("bulk", 3 / 5), ("sheet", 1 / 2), ("line", 1 / 3)])
def test_the_mean_energy_of_an_ideal_gas_at_zero_temperature(kind, share):
    # D / (D + 2) of the Fermi energy: N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), eq. (2.31) for D = 3.
    result = thermal_occupancy(sample(kind, temperature=0.0))
    assert result.mean_energy == near(share * result.fermi_energy, rel=1e-14)


@pytest.mark.parametrize(("kind", "dimension"), [("bulk", 3), ("sheet", 2), ("line", 1)])
def test_far_above_the_fermi_temperature_equipartition_holds(kind, dimension):
    one = sample(kind, carrier_density=sample(kind).carrier_density * 1e-9, temperature=3000.0)
    result = thermal_occupancy(one)
    # The first quantum correction is of the order of exp(mu / kT).
    correction = math.exp(result.chemical_potential / (BOLTZMANN * 3000))
    assert correction < 1e-4
    assert result.mean_energy == near(dimension / 2 * BOLTZMANN * 3000, rel=correction)


@pytest.mark.parametrize("kind", KINDS)
def test_the_transition_is_4_394_kT_wide(kind):
    # 2 ln 9: shared reference row "occupancy_10_90_width_over_kT".
    result = thermal_occupancy(sample(kind, temperature=100.0))
    assert result.transition_width == near(4.3944491546724387656 * BOLTZMANN * 100, rel=1e-15)


@pytest.mark.parametrize("kind", KINDS)
def test_what_is_excited_grows_with_temperature(kind):
    fractions = [thermal_occupancy(sample(kind, temperature=t)).excited_fraction for t in (0.0, 30.0, 300.0, 3000.0)]
    assert fractions == sorted(fractions)
    assert 0 < fractions[-1] < 1


def test_excited_carriers_of_a_cold_sheet_are_ln_2_kT_over_the_fermi_energy():
    # Exact in two dimensions far below T_F: the integral of f above mu is kT ln 2.
    one = sample("sheet", temperature=1.0)
    result = thermal_occupancy(one)
    assert result.excited_fraction == near(math.log(2) * BOLTZMANN / result.fermi_energy, rel=1e-13)


@pytest.mark.parametrize("kind", KINDS)
def test_a_batch_gives_each_sample_what_it_gives_alone(kind):
    ones = [sample(kind, temperature=temperature) for temperature in (0.0, 77.0, 300.0)]
    energies = np.linspace(0.01, 0.4, 5) * 1.602176634e-19
    together = thermal_occupancy(batch(ones), energies)
    assert (together.occupied_density is None) == (kind not in WITH_CURVE)
    for row, one in enumerate(ones):
        alone = thermal_occupancy(one, energies)
        for name in ("occupation", "thermal_broadening", "excited_fraction", "mean_energy", "transition_width"):
            # exp((E - mu)/kT) multiplies the rounding of mu by up to |E - mu| / kT, 50 here.
            assert getattr(together, name)[row] == near(getattr(alone, name), rel=1e-12), name
