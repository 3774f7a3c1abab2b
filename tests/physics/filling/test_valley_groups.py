"""Groups of valleys: one common level, against the sum of what each group would hold alone at that level."""

from itertools import pairwise

import numpy as np
import pytest

from near import near
from service.physics.bands import Band
from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, ELECTRON_MASS, ELEMENTARY_CHARGE
from service.physics.filling.film import HardWallFilm
from service.physics.filling.ideal import IdealGas
from service.physics.filling.level_count import LevelCount
from service.physics.filling.valley_groups import ValleyGroups
from service.physics.levels.rectangular import RectangularLevels

EV = ELEMENTARY_CHARGE


def masses(*parts):
    return tuple(part * ELECTRON_MASS for part in parts)


def silicon(thickness=5e-9):
    """Return a (001) layer: two valleys with the heavy mass across it, four with the light one (Ando et al. 1982)."""
    two = HardWallFilm(Band(*masses(0.19, 0.19, 0.916), 4.0), thickness)
    four = HardWallFilm(Band(*masses(0.19, 0.916, 0.19), 8.0), thickness)
    return two, four, ValleyGroups([two, four])


@pytest.mark.parametrize("temperature", [0.0, 4.2, 300.0, 3000.0])
@pytest.mark.parametrize("density", [1e12, 1e16, 3e17])
def test_two_groups_of_a_silicon_layer_fill_to_one_level(density, temperature):
    two, four, both = silicon()
    offset = four.lowest_level - two.lowest_level
    assert both.lowest_level == two.lowest_level
    potential = both.chemical_potential(density, temperature)
    if temperature == 0.0:
        held = [two.states_below(potential), four.states_below(potential - offset)]
    else:
        held = [two.carrier_density(potential, temperature), four.carrier_density(potential - offset, temperature)]
    eta = abs(potential) / (BOLTZMANN * temperature) if temperature else 1.0
    # Each group's density rounds as eta does.
    assert sum(held) == near(density, rel=1e-13 + 1e-15 * eta)
    assert both.shares(density, potential, temperature) == near([part / density for part in held], rel=1e-12)


def test_equal_groups_are_one_group_of_the_sum_of_their_valleys():
    one, six = IdealGas(3, ELECTRON_MASS, 2.0), IdealGas(3, ELECTRON_MASS, 12.0)
    groups = ValleyGroups([one] * 6)
    density = 1e26
    for temperature in (0.0, 300.0, 1e5):
        got, expected = groups.chemical_potential(density, temperature), six.chemical_potential(density, temperature)
        assert got == near(expected, rel=1e-13, abs=1e-13 * BOLTZMANN * temperature)
    assert groups.ground_energy_density(density) == near(six.ground_energy_density(density), rel=1e-13)
    energies = np.linspace(-0.1, 1, 7) * EV
    for name in ("states_below", "density_of_states"):
        assert getattr(groups, name)(energies) == near(getattr(six, name)(energies), rel=1e-14)


def test_many_samples_are_each_their_own():
    thickness = np.array([3e-9, 5e-9, 20e-9])
    together = silicon(thickness)[2]
    temperature = np.array([0.0, 77.0, 300.0])
    many = together.chemical_potential(np.full(3, 1e16), temperature)
    for row in range(3):
        alone = silicon(float(thickness[row]))[2]
        expected = alone.chemical_potential(1e16, float(temperature[row]))
        assert many[row] == near(expected, rel=1e-12)
    kept = together.take(np.array([2])).chemical_potential(np.full(1, 1e16), temperature[2:])
    assert kept[0] == near(many[2], rel=1e-14)


@pytest.mark.parametrize("kind", ["thermal", "gaussian", "lorentzian"])
def test_broadened_states_are_those_of_the_groups(kind):
    two, four, both = silicon()
    offset, width = four.lowest_level - two.lowest_level, 0.01 * EV
    energies = np.linspace(0.0, 0.5, 6) * EV
    density, integrated = both.spread_states(energies, Broadening(kind, width))
    parts = (
        two.spread_states(energies, Broadening(kind, width)),
        four.spread_states(energies - offset, Broadening(kind, width)),
    )
    assert density == near(parts[0][0] + parts[1][0], rel=1e-14)
    rise = np.diff(parts[0][1] + parts[1][1])
    assert np.diff(integrated) == near(rise, rel=1e-12)


def test_energies_and_tails_add_up():
    two, four, both = silicon()
    offset, temperature = four.lowest_level - two.lowest_level, 300.0
    potential = both.chemical_potential(1e17, temperature)
    energy = two.energy_density(potential, temperature) + four.energy_density(potential - offset, temperature)
    energy += offset * four.carrier_density(potential - offset, temperature)
    assert both.energy_density(potential, temperature) == near(energy, rel=1e-14)
    above = two.carriers_above(potential, potential, temperature) + four.carriers_above(
        potential - offset, potential - offset, temperature
    )
    assert both.carriers_above(potential, potential, temperature) == near(above, rel=1e-14)
    assert both.compressibility(potential, temperature) > two.compressibility(potential, temperature)


def test_the_merged_ladder_is_in_order_and_names_the_group():
    ladder, total = silicon()[2].ladder(1.0 * EV, 10**4)
    assert (np.diff(ladder.edge) >= 0).all()
    assert total == len(ladder.edge)
    assert set(ladder.quantum_numbers[:, 0]) == {0, 1}


def test_shells_of_two_groups_in_a_box_fill_in_order():
    light = LevelCount(RectangularLevels((5e-9,) * 3, masses(0.1, 0.1, 0.1)), 2.0)
    heavy = LevelCount(RectangularLevels((5e-9,) * 3, masses(0.3, 0.3, 0.3)), 2.0)
    both = ValleyGroups([light, heavy])
    levels = sorted(
        [
            (edge + offset, 2 * room)
            for states, offset in ((light, light.lowest_level), (heavy, heavy.lowest_level))
            for edge, room in zip(*(lambda one: (one.edge, one.degeneracy))(states.ladder(3 * EV, 500)[0]), strict=True)
        ]
    )
    filled = 0.0
    for (edge, room), (following, _) in pairwise(levels[:13]):
        filled += room
        energy = both.lowest_level + both.fermi_energy(filled)
        assert energy == near(edge, rel=1e-12)
        middle = both.lowest_level + both.chemical_potential(filled, 0.0)
        assert middle == near(0.5 * (edge + following), rel=1e-12)
