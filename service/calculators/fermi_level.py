"""Fermi level: where it lies at T = 0 and at T, and what the carriers there are like."""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np

from service.calculators.cautions import Caution, fermi_level_cautions
from service.calculators.cost import refuse_enormous, within_levels
from service.calculators.sample import CLASSICAL_BELOW, DEGENERATE_ABOVE, Sample, electron_gas, refuse_vanishing
from service.physics.constants import BOLTZMANN, REDUCED_PLANCK
from service.physics.values import Values

UNBOUNDED: Final = 1e300
"""Stands for a reduced temperature without bound where an array must stay finite; its caution says so."""


@dataclass(frozen=True, slots=True)
class FermiLevel:
    """The Fermi level of one sample (floats) or of N samples (arrays of shape (N,)); None is absent for this kind.

    Attributes
    ----------
    fermi_energy, chemical_potential, lowest_level : float or ndarray
        From the band edge [J].
    chemical_potential_above_lowest_level : float or ndarray
        From the lowest level, with its own full precision [J].
    fermi_temperature : float or ndarray
        (fermi_energy - lowest_level) / k [K].
    reduced_temperature : float, ndarray or None
        T / T_F; None where T_F = 0 [1].
    fermi_wavevector, fermi_wavelength, fermi_velocity : float or ndarray
        Of the carriers at the Fermi energy, with the density-of-states mass [1/m], [m], [m/s].
    density_of_states_at_fermi_level : float, ndarray or None
        Per volume; per area in a sheet, per length on a line; absent in box and sphere [J^-1 m^-3] ....
    occupied_levels : float, ndarray or None
        Orbital levels that hold carriers at T = 0; absent in bulk [1].
    effective_dimension : float, ndarray or None
        2 (E_F - E_1) g(E_F) / n; absent in box and sphere [1].
    wigner_seitz_ratio : float or ndarray
        r_s of the mean density [1].
    regime : str or list of str
        ``degenerate``, ``intermediate`` or ``classical``.
    method : str or list of str
        Which way the answer was computed.
    relative_error_bound : float or ndarray
        Bound on the error of the chemical potential over max(|mu|, kT) [1].
    cautions : tuple of Caution
        Where the model is at its edge.
    """

    fermi_energy: Values
    chemical_potential: Values
    lowest_level: Values
    chemical_potential_above_lowest_level: Values
    fermi_temperature: Values
    reduced_temperature: Values | None
    fermi_wavevector: Values
    fermi_wavelength: Values
    fermi_velocity: Values
    density_of_states_at_fermi_level: Values | None
    occupied_levels: Values | None
    effective_dimension: Values | None
    wigner_seitz_ratio: Values
    regime: str | list[str]
    method: str | list[str]
    relative_error_bound: Values
    cautions: tuple[Caution, ...]


@within_levels
def fermi_level(sample: Sample) -> FermiLevel:
    """Return the Fermi level of one sample or many.

    Raises
    ------
    SampleError
        Where the sample, as stated, has no answer, or would cost too much.
    """
    gas = electron_gas(sample)
    refuse_enormous(gas)
    states, density = gas.states, gas.density
    lowest = gas.per_sample(states.lowest_level)
    fermi_energy = states.fermi_energy(density)
    refuse_vanishing(gas, fermi_energy)
    chemical_potential = states.chemical_potential(density, sample.temperature)
    fermi_temperature = fermi_energy / BOLTZMANN
    wavevector = (2.0 * gas.mass) ** 0.5 * (lowest + fermi_energy) ** 0.5 / REDUCED_PLANCK
    natural_density_of_states = None if states.free_dimensions == 0 else states.density_of_states(fermi_energy)
    return FermiLevel(
        fermi_energy=lowest + fermi_energy,
        chemical_potential=lowest + chemical_potential,
        lowest_level=lowest,
        chemical_potential_above_lowest_level=chemical_potential,
        fermi_temperature=fermi_temperature,
        reduced_temperature=_reduced_temperature(sample.temperature, fermi_temperature),
        fermi_wavevector=wavevector,
        fermi_wavelength=2.0 * math.pi / wavevector,
        fermi_velocity=REDUCED_PLANCK * wavevector / gas.mass,
        density_of_states_at_fermi_level=(
            None if natural_density_of_states is None else natural_density_of_states / gas.extent
        ),
        occupied_levels=None if sample.kind == "bulk" else states.levels_below(fermi_energy),
        effective_dimension=(
            None if natural_density_of_states is None else 2.0 * fermi_energy * natural_density_of_states / density
        ),
        wigner_seitz_ratio=gas.wigner_seitz_ratio,
        regime=_regime(chemical_potential, gas.thermal_energy),
        method=gas.words(states.method),
        relative_error_bound=gas.per_sample(states.relative_error_bound),
        cautions=fermi_level_cautions(gas, fermi_energy, chemical_potential),
    )


def _reduced_temperature(temperature: Values, fermi_temperature: Values) -> Values | None:
    """Return T / T_F; where T_F = 0 (the first level alone holds all), None for one sample, finite in an array."""
    if not isinstance(fermi_temperature, np.ndarray):
        return temperature / fermi_temperature if fermi_temperature > 0.0 else None
    stand_in = np.where(np.equal(temperature, 0.0), 0.0, UNBOUNDED)
    return np.divide(temperature, fermi_temperature, out=stand_in, where=fermi_temperature > 0.0)


def _regime(chemical_potential: Values, thermal_energy: Values) -> str | list[str]:
    """Name the regime by (mu - lowest level) / kT, without dividing, so that T = 0 needs no case of its own."""
    degenerate = chemical_potential > DEGENERATE_ABOVE * thermal_energy
    classical = chemical_potential < CLASSICAL_BELOW * thermal_energy
    if isinstance(degenerate, np.ndarray):
        words = np.array(["intermediate", "degenerate", "classical"], dtype=object)
        at_zero = np.equal(thermal_energy, 0.0)
        named: list[str] = words[np.where(degenerate | at_zero, 1, np.where(classical, 2, 0))].tolist()
        return named
    if degenerate or thermal_energy == 0.0:
        return "degenerate"
    return "classical" if classical else "intermediate"
