"""Density of states over energy, sharp or broadened, and its integral."""

from dataclasses import dataclass
from typing import Any, cast

import numpy as np

from service.calculators.cautions import Caution, curve_cautions, sample_cautions
from service.calculators.cost import refuse_enormous, refuse_long_curve, within_levels
from service.calculators.curve import default_energies, edge_on_grid, mean_over_cells, relative_energies
from service.calculators.ladder import Levels, levels
from service.calculators.sample import ElectronGas, Sample, electron_gas, refuse_vanishing
from service.errors import Fault, SampleError
from service.physics.broadening import Broadening
from service.physics.values import FloatArray, Values


@dataclass(frozen=True, slots=True)
class DensityOfStates:
    """A density of states for one sample, shape (M,), or for N samples, shape (N, M); None is absent for this kind.

    Attributes
    ----------
    energy : ndarray
        From the band edge [J].
    density_of_states : ndarray
        Per volume; per area in a sheet, per length on a line [J^-1 m^-3] ....
    integrated_states : ndarray
        The integral of the density of states from below all states; with a Lorentzian, whose tail has no finite
        integral from below, from the lowest level [m^-3] ....
    levels : Levels or None
        One sample only; absent in bulk.
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
    density_of_states: FloatArray
    integrated_states: FloatArray
    levels: Levels | None
    fermi_energy: Values
    chemical_potential: Values
    lowest_level: Values
    method: str | list[str]
    relative_error_bound: Values
    cautions: tuple[Caution, ...]


@within_levels
def density_of_states(
    sample: Sample, energies: FloatArray | None = None, broadening: Broadening | None = None
) -> DensityOfStates:
    """Return the density of states of one sample or many.

    Parameters
    ----------
    sample : Sample
        The sample or samples.
    energies : ndarray, shape (M,), or None
        From the band edge, the same for all samples; None for a range that shows what matters [J].
    broadening : Broadening or None
        The line shape; a width of NaN stands for one not stated, kT for ``thermal``. None is ``none``, and
        ``thermal`` in a box or sphere, whose sharp states are lines.

    Raises
    ------
    SampleError
        Where the states are lines that nothing broadens, or the sample has no answer.
    """
    gas = electron_gas(sample)
    refuse_enormous(gas)
    states = gas.states
    shape = line_shape(gas, broadening)
    lowest = gas.per_sample(states.lowest_level)
    fermi_energy = states.fermi_energy(gas.density)
    refuse_vanishing(gas, fermi_energy)
    chemical_potential = states.chemical_potential(gas.density, sample.temperature)
    if energies is None:
        energies = default_energies(gas, fermi_energy, chemical_potential)
    relative = relative_energies(gas, energies)
    refuse_long_curve(gas, relative, 0.0 if shape.kind == "none" else shape.width)
    on_edge: Any = np.zeros(relative.shape, dtype=bool)
    if shape.kind == "none":
        on_edge = edge_on_grid(states, relative, energies)
        density, integrated = states.density_of_states(relative), states.states_below(relative)
        if on_edge.any():
            density = np.where(on_edge, mean_over_cells(states, relative, gas), density)
    else:
        density, integrated = states.spread_states(relative, shape)
    extent = gas.extent[:, None] if isinstance(gas.extent, np.ndarray) else gas.extent
    return DensityOfStates(
        energy=np.broadcast_to(energies, relative.shape),
        density_of_states=cast(FloatArray, density / extent),
        integrated_states=cast(FloatArray, integrated / extent),
        levels=levels(gas, cast(float, fermi_energy), cast(float, chemical_potential)),
        fermi_energy=lowest + fermi_energy,
        chemical_potential=lowest + chemical_potential,
        lowest_level=lowest,
        method=gas.words(states.method),
        relative_error_bound=gas.per_sample(states.relative_error_bound),
        cautions=(
            *sample_cautions(gas, fermi_energy, chemical_potential),
            *curve_cautions(on_edge, gas.is_batch),
        ),
    )


def line_shape(gas: ElectronGas, broadening: Broadening | None) -> Broadening:
    """Return the line shape to use, its width stated; lines that nothing broadens are refused."""
    lines = gas.states.free_dimensions == 0
    if broadening is None:
        broadening = Broadening("thermal" if lines else "none", np.nan)
    if broadening.kind == "none":
        if lines:
            detail = (
                f"the density of states of a {gas.sample.kind} is a set of lines: ask for gaussian, lorentzian or "
                "thermal broadening; the lines themselves stand in the response's levels"
            )
            raise SampleError(Fault(("broadening", "kind"), detail))
        return broadening
    if not np.isnan(broadening.width).any():
        return broadening
    cold = np.atleast_1d(gas.thermal_energy == 0.0)
    if cold.any():
        detail = "thermal broadening at T = 0 needs a width: its own width is kT, which is zero there"
        if not gas.is_batch:
            raise SampleError(Fault(("broadening",), detail))
        raise SampleError(*(Fault(("broadening",), detail, row=int(row)) for row in np.flatnonzero(cold)))
    return Broadening(broadening.kind, gas.thermal_energy)
