"""Curves over energy: the grid when none is stated, and grid points that lie on a diverging edge."""

from typing import Any, cast

import numpy as np
from numpy.typing import NDArray

from service.calculators.sample import ElectronGas
from service.physics.filling.states import States
from service.physics.values import FloatArray, Values

DEFAULT_POINTS = 401
"""Points of the grid when the request states none."""

_SPREAD_POINTS = 201
_STEP_POINTS = DEFAULT_POINTS - _SPREAD_POINTS


def relative_energies(gas: ElectronGas, energies: FloatArray) -> FloatArray:
    """Return energies from the lowest level, one row a sample for a batch [J]."""
    lowest = gas.states.lowest_level
    if gas.sample.count is None:
        return energies - lowest
    lowest_column = np.broadcast_to(lowest, (gas.sample.count,))[:, None]
    return cast(FloatArray, np.atleast_2d(energies) - lowest_column)


def default_energies(gas: ElectronGas, fermi_energy: Values, chemical_potential: Values) -> FloatArray:
    """Return a grid from the band edge to above the last carriers, denser where the occupation falls.

    Half of the points are spread evenly from the band edge to half as far again as the Fermi energy and ten kT above
    all carriers; half lie within 12 kT of the chemical potential, where the occupation falls. At T = 0 all are even.

    Parameters
    ----------
    gas : ElectronGas
        The gas.
    fermi_energy, chemical_potential : float or ndarray, shape (N,)
        From the lowest level [J].

    Returns
    -------
    ndarray, shape (M,) or (N, M)
        Energies from the band edge, ascending [J].
    """
    lowest, thermal_energy, filled, center = np.broadcast_arrays(
        *(
            np.atleast_1d(value)
            for value in (gas.states.lowest_level, gas.thermal_energy, fermi_energy, chemical_potential)
        )
    )
    top = lowest + np.maximum(1.5 * filled, np.maximum(center, 0.0)) + 10.0 * thermal_energy
    top = np.where(top > 0.0, top, 1.0)
    even = np.linspace(0.0, top, DEFAULT_POINTS, axis=-1)
    spread = np.linspace(0.0, top, _SPREAD_POINTS, axis=-1)
    low = np.clip(lowest + center - 12.0 * thermal_energy, 0.0, top)
    high = np.clip(lowest + center + 12.0 * thermal_energy, 0.0, top)
    narrow = thermal_energy < 0.02 * top
    fine = low[:, None] + (high - low)[:, None] * (np.arange(_STEP_POINTS) + 0.5) / _STEP_POINTS
    both = np.sort(np.concatenate([spread, fine], axis=-1), axis=-1)
    grid = np.where((narrow & (thermal_energy > 0.0))[:, None], both, even)
    return grid if gas.is_batch else grid[0]


def edge_on_grid(states: States, energies: FloatArray, from_band_edge: FloatArray) -> NDArray[np.bool_]:
    """Tell which grid points lie, to within rounding, on an edge where a one-dimensional density of states diverges.

    Parameters
    ----------
    states : States
        The states.
    energies : ndarray, shape (M,) or (N, M)
        From the lowest level [J].
    from_band_edge : ndarray
        The same from the band edge, whose rounding is that of the grid [J].

    Returns
    -------
    ndarray of bool
        True on an edge.
    """
    if not states.shows_edges(float(energies.max())):
        return np.zeros(energies.shape, dtype=bool)
    rounding = 4.0 * np.finfo(np.float64).eps * np.maximum(np.abs(from_band_edge), np.abs(energies))
    above = np.nextafter(energies + rounding, np.inf)
    on_edge: Any = states.levels_below(above) != states.levels_below(energies - rounding)
    return cast("NDArray[np.bool_]", on_edge)


def mean_over_cells(states: States, energies: FloatArray, gas: ElectronGas) -> FloatArray:
    """Return the mean density of states over each grid point's cell, half way to its neighbours [J^-1 m^-D].

    A grid of one point has no neighbours: its cell is kT wide, or, at T = 0, a thousandth of its energy.
    """
    ascending = np.sort(energies, axis=-1)
    if ascending.shape[-1] > 1:
        middles = 0.5 * (ascending[..., 1:] + ascending[..., :-1])
        first = 2.0 * ascending[..., :1] - middles[..., :1]
        last = 2.0 * ascending[..., -1:] - middles[..., -1:]
        bounds = np.concatenate([first, middles, last], axis=-1)
    else:
        thermal_energy = np.reshape(gas.thermal_energy, (-1, 1) if gas.is_batch else (1,))
        fallback = 1e-3 * (np.abs(ascending) + np.reshape(gas.states.lowest_level, (-1, 1) if gas.is_batch else (1,)))
        half = 0.5 * np.where(thermal_energy > 0.0, thermal_energy, np.where(fallback > 0.0, fallback, 1e-23))
        bounds = np.concatenate([ascending - half, ascending + half], axis=-1)
    below = cast(FloatArray, states.states_below(bounds))
    widths = np.diff(bounds, axis=-1)
    means = np.divide(np.diff(below, axis=-1), widths, out=np.zeros_like(widths), where=widths > 0.0)
    order = np.argsort(np.argsort(energies, axis=-1, kind="stable"), axis=-1, kind="stable")
    return np.take_along_axis(means, order, axis=-1)
