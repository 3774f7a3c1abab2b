"""Ladders filled level by level: wires and round wires against plain sums, their curves and their limits."""

import math
from itertools import pairwise

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

from external_values import parameters, value
from near import near
from round_levels import RoundLevels
from service.physics.broadening import Broadening
from service.physics.constants import BOLTZMANN, ELECTRON_MASS, ELEMENTARY_CHARGE
from service.physics.filling.level_sum import LevelSum
from service.physics.levels.finite_well import FiniteWell
from service.physics.levels.parabolic import ParabolicWell
from service.physics.levels.rectangular import RectangularLevels

EV = ELEMENTARY_CHARGE
MASS = 0.067 * ELECTRON_MASS


def wire(width=20e-9, height=15e-9, mass=MASS):
    return LevelSum(RectangularLevels((width, height), (mass, mass)), 1, mass, 2.0)


def plain_density(states, ladder, potential, temperature):
    """Return the density of a wire by mpmath, level by level, in 30 digits."""
    thermal_energy = mpmath.mpf(BOLTZMANN) * temperature
    room = mpmath.mpf(states._per_energy) * mpmath.sqrt(thermal_energy)
    total = mpmath.mpf(0)
    for edge, degeneracy in zip(ladder.edge.tolist(), ladder.degeneracy.tolist(), strict=True):
        eta = (potential - mpmath.mpf(edge)) / thermal_energy
        if eta > 60:
            series = sum(mpmath.mpf(c) * eta ** (-2 * k) for k, c in enumerate(SOMMERFELD, start=1))
            total += degeneracy * mpmath.sqrt(eta) / mpmath.gamma(1.5) * (1 + series)
        elif eta > -90:
            total += degeneracy * -mpmath.polylog(mpmath.mpf(1) / 2, -mpmath.exp(eta)).real
    return room * total


with mpmath.workdps(40):
    SOMMERFELD = [
        2 * (1 - mpmath.mpf(2) ** (1 - 2 * k)) * mpmath.zeta(2 * k) * mpmath.ff(mpmath.mpf(1) / 2, 2 * k)
        for k in range(1, 16)
    ]


@pytest.mark.parametrize("temperature", [0.01, 4.2, 300.0, 5000.0])
@pytest.mark.parametrize("density", [1e3, 1e8, 3e9])
def test_the_chemical_potential_of_a_wire_is_that_of_thirty_digits(density, temperature):
    states = wire()
    got = states.chemical_potential(density, temperature)
    ladder = RectangularLevels((20e-9, 15e-9), (MASS, MASS)).levels_up_to(max(got, 0) + 95 * BOLTZMANN * temperature)
    with mpmath.workdps(35):
        filled = plain_density(states, ladder, mpmath.mpf(got), temperature)
        step = mpmath.mpf(max(abs(got), BOLTZMANN * temperature)) * mpmath.mpf(10) ** -12
        above = plain_density(states, ladder, mpmath.mpf(got) + step, temperature)
        below = plain_density(states, ladder, mpmath.mpf(got) - step, temperature)
    # The 1e-12 of max(|mu|, kT): the stated density lies between those a step to either side.
    assert below < density < above
    assert abs(float(filled / density) - 1) < 1e-9


@pytest.mark.parametrize(
    "row", [*parameters("confinement", "fermi_energy"), *parameters("confinement", "occupied_subbands")]
)
def test_a_wire_is_what_the_source_says(row):
    if "width" not in row["inputs"]:
        pytest.skip("a film")
    mass = value(row, "effective_mass_ratio") * ELECTRON_MASS
    width, height = value(row, "width"), value(row, "height")
    states = wire(width, height, mass)
    filled = states.fermi_energy(value(row, "carrier_density") * width * height)
    got = states.levels_below(filled) if "subbands" in row["quantity"] else (states.lowest_level + filled) / EV
    assert got == near(row["expected"], rel=row["tolerance_rel"]), row["source"]


@pytest.mark.parametrize("states", [wire(), LevelSum(RoundLevels("cylinder", 18e-9, MASS), 1, MASS, 2.0)])
@pytest.mark.parametrize("temperature", [77.0, 1000.0])
def test_energy_and_carriers_above_are_integrals_over_the_density_of_states(states, temperature):
    density, thermal_energy = 5e8, BOLTZMANN * temperature
    potential = states.chemical_potential(density, temperature)
    edges = states.ladder(max(potential, 0) + 45 * thermal_energy, 10**6)[0].edge

    def integral(start, power):
        ends = [start, *edges[edges > start].tolist(), max(potential, edges[-1]) + 45 * thermal_energy]
        total = 0.0
        for low, high in pairwise(ends):

            def occupied(root, low=low):
                energy = low + root * root
                f = 1 / (1 + math.exp(min(700.0, (energy - potential) / thermal_energy)))
                return 2 * root * states.density_of_states(energy) * f * energy**power

            # E = edge + u^2 takes the divergence away; just above the edge the open level itself begins.
            total += quad(occupied, 1e-16 * high**0.5, math.sqrt(high - low), epsrel=1e-9, limit=300)[0]
        return total

    # quad's own bound of 1e-9 on each piece.
    assert states.carriers_above(0.0, potential, temperature) == near(density, rel=1e-12)
    assert integral(0.0, 0) == near(density, rel=1e-7)
    assert states.energy_density(potential, temperature) == near(integral(0.0, 1), rel=1e-7)
    start = potential + 0.3 * thermal_energy
    if start > 0:
        assert states.carriers_above(start, potential, temperature) == near(integral(start, 0), rel=1e-7)


def test_the_ground_state_is_the_limit_of_the_cold_one():
    states = wire()
    cold, ground = states.chemical_potential(2e9, 1e-4), states.chemical_potential(2e9, 0.0)
    # The next correction goes with (kT)^2 over the distance to the nearest edge: far below 1e-9 at 0.1 mK.
    assert cold == near(ground, rel=1e-9)
    assert states.states_below(ground) == near(2e9, rel=1e-13)
    assert states.energy_density(cold, 1e-4) == near(states.ground_energy_density(2e9), rel=1e-9)


def reference_lorentzian(states, source, energy, width):
    """Return the broadened states by the levels up to many widths, and the rest by Weyl's integral far out."""
    ladder = source.levels_up_to(4000 * source.lowest)
    x = (energy - ladder.edge) / width
    root = np.sqrt(x + 1j)
    near = float(np.dot(ladder.degeneracy, root.real / np.hypot(x, 1.0))) / math.gamma(0.5)
    _, first, second, _ = source.weyl

    def beyond(wavenumber):
        z = (energy - (wavenumber**2 - source.lowest)) / width
        larger = np.sqrt(0.5 * (np.hypot(z, 1.0) + abs(z)))
        shape = 0.5 / larger if z < 0 else larger
        return (2 * second * wavenumber + first) * shape / np.hypot(z, 1.0) / math.gamma(0.5)

    cut = math.sqrt(4001 * source.lowest)
    far = quad(beyond, cut, 1e4 * cut, limit=500)[0]
    # Past that the integrand is 2 c2 k / (2 (k^2/width)^(3/2)) / Gamma(1/2).
    far += second * width**1.5 / (1e4 * cut) / math.gamma(0.5)
    return states._per_energy * (near + far) / math.sqrt(width)


def test_a_lorentzian_over_a_wire_takes_in_every_level_to_infinity():
    source = RectangularLevels((20e-9, 15e-9), (MASS, MASS))
    states = LevelSum(source, 1, MASS, 2.0)
    width = 0.01 * EV
    for energy in (0.02 * EV, 0.3 * EV):
        got = states.spread_states(energy, Broadening("lorentzian", width))[0]
        # The reference's sharp cut leaves the levels' ripple at k L of some hundreds: 1e-5 of the tail, itself a few
        # per cent of the whole.
        assert got == near(reference_lorentzian(states, source, energy, width), rel=1e-5)


def test_a_lorentzian_over_a_ladder_without_end_or_law_is_refused():
    states = LevelSum(ParabolicWell(0.01 * EV), 2, MASS, 2.0)
    with pytest.raises(ValueError, match="no finite sum"):
        states.spread_states(0.1 * EV, Broadening("lorentzian", 1e-3 * EV))


def test_a_finite_well_and_a_parabola_fill_as_films_do():
    for source in (FiniteWell(10e-9, MASS, 0.3 * EV, MASS), ParabolicWell(0.02 * EV)):
        states = LevelSum(source, 2, MASS, 2.0)
        density = 5e15
        filled = states.fermi_energy(density)
        assert states.states_below(filled) == near(density, rel=1e-13)
        potential = states.chemical_potential(density, 300.0)
        assert states.carrier_density(potential, 300.0) == near(density, rel=1e-12)
        assert states.spread_states(potential, Broadening("thermal", BOLTZMANN * 300))[1] == near(density, rel=1e-12)
