"""The ladder of levels of one sample: quantum numbers, edges, and what each level holds."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from service.calculators.sample import ElectronGas
from service.physics.filling.population import level_population
from service.physics.values import FloatArray

LEVELS_LISTED = 200
"""The most levels that a response lists; `total` says how many there are."""

REACH = 40.0
"""Levels this many kT above the chemical potential hold under 1e-17 of their room, and are not counted."""


@dataclass(frozen=True, slots=True)
class Levels:
    """The first levels of one sample, as columns of equal length.

    Attributes
    ----------
    quantum_numbers : ndarray of int, shape (L, Q)
        The lowest set in lexical order where several share an energy [1].
    edge : ndarray, shape (L,)
        Energy of the level or of the bottom of its subband, from the band edge [J].
    degeneracy : ndarray, shape (L,)
        Orbital levels at that energy, spin and valleys not counted [1].
    population : ndarray, shape (L,)
        Carriers in the level per natural measure [m^-D].
    share : ndarray, shape (L,)
        Population over all carriers [1].
    total : int
        Levels up to the Fermi energy, or to 40 kT above the chemical potential where that is higher.
    """

    quantum_numbers: NDArray[np.int64]
    edge: FloatArray
    degeneracy: FloatArray
    population: FloatArray
    share: FloatArray
    total: int


def levels(gas: ElectronGas, fermi_energy: float, chemical_potential: float) -> Levels | None:
    """Return the levels of one sample; None for a batch, and in bulk, which has no levels.

    Parameters
    ----------
    gas : ElectronGas
        The gas.
    fermi_energy, chemical_potential : float
        From the lowest level [J].

    Returns
    -------
    Levels or None
        The columns.
    """
    if gas.is_batch or gas.sample.kind == "bulk":
        return None
    sample, states = gas.sample, gas.states
    density, thermal_energy = float(gas.density), float(gas.thermal_energy)
    highest = max(fermi_energy, chemical_potential + REACH * thermal_energy, 0.0)
    ladder, total = states.ladder(highest, LEVELS_LISTED)
    population = level_population(
        ladder,
        states.free_dimensions,
        float(gas.free_mass),
        float(sample.spin_degeneracy * sample.valleys),
        density,
        chemical_potential,
        float(sample.temperature),
    )
    return Levels(
        quantum_numbers=ladder.quantum_numbers,
        edge=float(states.lowest_level) + ladder.edge,
        degeneracy=ladder.degeneracy,
        population=population,
        share=population / density,
        total=total,
    )
