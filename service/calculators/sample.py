"""The sample as the caller states it, in SI, and the electron gas that it holds."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from service.errors import Fault, SampleError, Unsupported
from service.physics.bands import FREE_AXES, Band
from service.physics.constants import BOLTZMANN, ELECTRON_MASS
from service.physics.filling.states import States
from service.physics.geometry import GEOMETRIES, Geometry
from service.physics.interactions import wigner_seitz_ratio
from service.physics.values import Values

DEGENERATE_ABOVE: Final = 5.0
CLASSICAL_BELOW: Final = -4.0
"""Bounds on (mu - lowest level) / kT between the regimes: rules of thumb, common practice."""


@dataclass(frozen=True, slots=True)
class Sample:
    """One sample (floats) or N samples (arrays of shape (N,)), as the request states them.

    Attributes
    ----------
    kind, confinement : str
        The geometry, by the contract's words.
    carrier_density : float or ndarray
        Carriers per `density_measure` [m^-3, m^-2, m^-1 or 1].
    density_measure : str
        ``volume``, ``area``, ``length`` or ``count``.
    lengths : mapping of str to float or ndarray
        The geometry's lengths by name [m].
    temperature : float or ndarray
        The temperature, zero included [K].
    effective_mass : tuple of three
        Masses along x, y, z in electron masses [1].
    valleys, spin_degeneracy : float or ndarray
        Equivalent valleys, and states per orbital level and valley [1].
    relative_permittivity : float or ndarray
        Static background permittivity over that of the vacuum [1].
    count : int or None
        N, or None for one sample stated as numbers.
    """

    kind: str
    confinement: str
    carrier_density: Values
    density_measure: str
    lengths: Mapping[str, Values]
    temperature: Values
    effective_mass: tuple[Values, Values, Values]
    valleys: Values
    spin_degeneracy: Values
    relative_permittivity: Values
    count: int | None

    def take(self, rows: NDArray[np.intp]) -> "Sample":
        """Return some of N samples."""
        mass_x, mass_y, mass_z = (_rows(mass, rows) for mass in self.effective_mass)
        return replace(
            self,
            carrier_density=_rows(self.carrier_density, rows),
            lengths={name: _rows(length, rows) for name, length in self.lengths.items()},
            temperature=_rows(self.temperature, rows),
            effective_mass=(mass_x, mass_y, mass_z),
            valleys=_rows(self.valleys, rows),
            spin_degeneracy=_rows(self.spin_degeneracy, rows),
            relative_permittivity=_rows(self.relative_permittivity, rows),
            count=len(rows),
        )


def _rows(values: Values, rows: NDArray[np.intp]) -> Values:
    return values[rows] if isinstance(values, np.ndarray) else values


@dataclass(frozen=True, slots=True)
class ElectronGas:
    """What a sample holds: its states, its density in their natural measure, and what one number must stand for.

    Attributes
    ----------
    sample : Sample
        The sample itself.
    geometry : Geometry
        Its row in the table of geometries.
    states : States
        Its single-particle states.
    extent : float or ndarray
        Natural density over mean density: thickness, cross-section, volume, or 1 [m^(3-D)].
    density : float or ndarray
        Carriers per natural measure [m^-D].
    mean_density : float or ndarray
        Carriers per volume; per area in a sheet, per length on a line [m^-3, m^-2, m^-1].
    mass : float or ndarray
        The density-of-states mass over the axes in which carriers move at all [kg].
    free_mass : float or ndarray
        The density-of-states mass over the free directions alone [kg].
    thermal_energy : float or ndarray
        kT [J].
    wigner_seitz_ratio : float or ndarray
        r_s of the mean density [1].
    """

    sample: Sample
    geometry: Geometry
    states: States
    extent: Values
    density: Values
    mean_density: Values
    mass: Values
    free_mass: Values
    thermal_energy: Values
    wigner_seitz_ratio: Values

    @property
    def is_batch(self) -> bool:
        """Whether the request holds arrays of samples rather than one."""
        return self.sample.count is not None

    def per_sample(self, value: Values) -> Values:
        """Return a number that all samples share as the batch needs it: as it is for one, repeated for N."""
        if self.sample.count is None or isinstance(value, np.ndarray):
            return value
        return np.full(self.sample.count, value)

    def words(self, word: str | list[str]) -> str | list[str]:
        """Return a word that all samples share: one for one sample, a list for a batch; a list as it is."""
        return word if self.sample.count is None or isinstance(word, list) else [word] * self.sample.count


def electron_gas(sample: Sample) -> ElectronGas:
    """Return the electron gas of a sample.

    Raises
    ------
    Unsupported
        Where the geometry's levels are known for one mass only and the sample states several.
    """
    geometry = GEOMETRIES[sample.kind, sample.confinement]
    mass_x, mass_y, mass_z = (mass * ELECTRON_MASS for mass in sample.effective_mass)
    if geometry.isotropic:
        _require_one_mass(sample)
    band = Band(mass_x, mass_y, mass_z, sample.spin_degeneracy * sample.valleys)
    extent = geometry.extent(sample.lengths)
    density = sample.carrier_density * extent if sample.density_measure == "volume" else sample.carrier_density
    mean_density = sample.carrier_density if sample.density_measure == "volume" else density / extent
    mass = band.mass(geometry.mass_axes)
    mean_dimensions = 3 if geometry.has_volume else geometry.free_dimensions
    return ElectronGas(
        sample=sample,
        geometry=geometry,
        states=geometry.states(band, sample.lengths),
        extent=extent,
        density=density,
        mean_density=mean_density,
        mass=mass,
        free_mass=band.mass(FREE_AXES[geometry.free_dimensions]),
        thermal_energy=BOLTZMANN * sample.temperature,
        wigner_seitz_ratio=wigner_seitz_ratio(mean_dimensions, mean_density, mass, sample.relative_permittivity),
    )


def _require_one_mass(sample: Sample) -> None:
    mass_x, mass_y, mass_z = sample.effective_mass
    if mass_y is mass_x and mass_z is mass_x:
        return
    unequal: Any = np.atleast_1d((mass_y != mass_x) | (mass_z != mass_x))
    path = ("band", "effective_mass")
    detail = f"a {sample.kind} takes one effective mass, the same along every axis"
    if sample.count is None:
        if unequal[0]:
            raise Unsupported(Fault(path, detail))
        return
    rows = np.flatnonzero(unequal)
    if rows.size:
        raise Unsupported(*(Fault(path, detail, row=int(row)) for row in rows))


def refuse_vanishing(gas: ElectronGas, fermi_energy: Values) -> None:
    """Refuse samples so dilute that their Fermi energy is beneath the smallest double; a box's may well be zero.

    Raises
    ------
    SampleError
        With every such sample.
    """
    if gas.states.free_dimensions == 0:
        return
    path, detail = ("carrier_density",), "is so dilute that its Fermi energy is beneath the smallest double"
    if not isinstance(fermi_energy, np.ndarray):
        if fermi_energy == 0.0:
            raise SampleError(Fault(path, detail))
    elif not fermi_energy.all():
        raise SampleError(*(Fault(path, detail, row=int(row)) for row in np.flatnonzero(fermi_energy == 0.0)))
