"""Thermal occupancy: how the occupation falls off, what each level holds, and how much is excited."""

from dataclasses import dataclass
from typing import cast

import numpy as np
from numpy.typing import NDArray

from service.calculators.cautions import Caution, curve_cautions, sample_cautions, step_cautions
from service.calculators.cost import refuse_enormous, refuse_long_curve, within_levels
from service.calculators.curve import default_energies, edge_on_grid, mean_over_cells, relative_energies
from service.calculators.ladder import Levels, levels
from service.calculators.sample import ElectronGas, Sample, electron_gas, refuse_vanishing
from service.physics.occupancy import occupation, thermal_broadening, transition_width
from service.physics.values import FloatArray, Values


@dataclass(frozen=True, slots=True)
class ThermalOccupancy:
    """The occupancy of one sample, curves of shape (M,), or of N samples, shape (N, M); None is absent for this kind.

    Attributes
    ----------
    energy : ndarray
        From the band edge [J].
    occupation : ndarray
        f(E) [1].
    thermal_broadening : ndarray
        -df/dE; at T = 0 its regular part, zero [J^-1].
    occupied_density : ndarray or None
        g(E) f(E); absent in box and sphere, whose states are lines: their levels carry it [J^-1 m^-3] ....
    levels : Levels or None
        One sample only; absent in bulk.
    excited_fraction : float or ndarray
        Carriers above the Fermi energy over all carriers [1].
    mean_energy : float or ndarray
        Per carrier, from the band edge [J].
    transition_width : float or ndarray
        From f = 0.9 to f = 0.1 [J].
    fermi_energy, chemical_potential, lowest_level : float or ndarray
        From the band edge [J].
    method : str or list of str
        Which way the answer was computed.
    relative_error_bound : float or ndarray
        Bound on the error of the chemical potential over max(|mu|, kT) [1].
    cautions : tuple of Caution
        Where the model is at its edge.
    """

    energy: FloatArray
    occupation: FloatArray
    thermal_broadening: FloatArray
    occupied_density: FloatArray | None
    levels: Levels | None
    excited_fraction: Values
    mean_energy: Values
    transition_width: Values
    fermi_energy: Values
    chemical_potential: Values
    lowest_level: Values
    method: str | list[str]
    relative_error_bound: Values
    cautions: tuple[Caution, ...]


@within_levels
def thermal_occupancy(sample: Sample, energies: FloatArray | None = None) -> ThermalOccupancy:
    """Return the thermal occupancy of one sample or many.

    Parameters
    ----------
    sample : Sample
        The sample or samples.
    energies : ndarray, shape (M,), or None
        From the band edge, the same for all samples; None for a range that shows what matters [J].

    Raises
    ------
    SampleError
        Where the sample, as stated, has no answer, or would cost too much.
    """
    gas = electron_gas(sample)
    refuse_enormous(gas)
    states = gas.states
    lowest = gas.per_sample(states.lowest_level)
    fermi_energy = states.fermi_energy(gas.density)
    refuse_vanishing(gas, fermi_energy)
    chemical_potential = states.chemical_potential(gas.density, sample.temperature)
    if energies is None:
        energies = default_energies(gas, fermi_energy, chemical_potential)
    relative = relative_energies(gas, energies)
    refuse_long_curve(gas, relative)
    occupied = occupation(relative, _column(chemical_potential), _column(sample.temperature))
    on_edge = edge_on_grid(states, relative, energies)
    return ThermalOccupancy(
        energy=np.broadcast_to(energies, relative.shape),
        occupation=occupied,
        thermal_broadening=thermal_broadening(relative, _column(chemical_potential), _column(sample.temperature)),
        occupied_density=_occupied_density(gas, relative, occupied, on_edge),
        levels=levels(gas, cast(float, fermi_energy), cast(float, chemical_potential)),
        excited_fraction=states.excited_density(fermi_energy, chemical_potential, sample.temperature) / gas.density,
        mean_energy=lowest
        + states.total_energy_density(gas.density, chemical_potential, sample.temperature) / gas.density,
        transition_width=transition_width(sample.temperature),
        fermi_energy=lowest + fermi_energy,
        chemical_potential=lowest + chemical_potential,
        lowest_level=lowest,
        method=gas.words(states.method),
        relative_error_bound=gas.per_sample(states.relative_error_bound),
        cautions=(
            *sample_cautions(gas, fermi_energy, chemical_potential),
            *step_cautions(gas),
            *(curve_cautions(on_edge, gas.is_batch) if states.free_dimensions else ()),
        ),
    )


def _column(value: Values) -> Values:
    """Return per-sample values as a column, to stand against rows of energies."""
    return value[:, None] if isinstance(value, np.ndarray) else value


def _occupied_density(
    gas: ElectronGas, relative: FloatArray, occupied: FloatArray, on_edge: NDArray[np.bool_]
) -> FloatArray | None:
    if gas.states.free_dimensions == 0:
        return None
    density = cast(FloatArray, gas.states.density_of_states(relative))
    if on_edge.any():
        density = np.where(on_edge, mean_over_cells(gas.states, relative, gas), density)
    return density * occupied / _column(gas.extent)
