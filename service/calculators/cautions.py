"""Cautions: where the model is at its edge, computed from the sample against the thresholds of the catalogue."""

import math
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, reduce
from importlib.resources import files
from types import MappingProxyType
from typing import Final

import numpy as np
from numpy.typing import NDArray

from service.calculators.sample import CLASSICAL_BELOW, ElectronGas
from service.physics.constants import REDUCED_PLANCK, SPEED_OF_LIGHT
from service.physics.values import Values, smallest

Flags = bool | NDArray[np.bool_]
"""Whether a caution holds, for one sample or for each of many."""


@dataclass(frozen=True, slots=True)
class CatalogueEntry:
    """One caution as the catalogue describes it.

    Attributes
    ----------
    code, text : str
        What a response carries.
    quantity : str
        What is compared with the threshold.
    threshold : float
        The number compared with, in `unit`.
    unit, source : str
        The threshold's unit, and where it comes from.
    """

    code: str
    text: str
    quantity: str
    threshold: float
    unit: str
    source: str


@dataclass(frozen=True, slots=True)
class Caution:
    """One caution of a response.

    Attributes
    ----------
    code, text : str
        As the catalogue has them.
    rows : ndarray of int or None
        The samples concerned in a batch, by their index among those computed; None for one sample.
    """

    code: str
    text: str
    rows: NDArray[np.intp] | None


def read_catalogue() -> Mapping[str, CatalogueEntry]:
    """Return the catalogue of cautions by code, in the file's order."""
    text = files("service.data").joinpath("cautions.toml").read_text(encoding="utf-8")
    entries = (CatalogueEntry(**entry) for entry in tomllib.loads(text)["caution"])
    return MappingProxyType({entry.code: entry for entry in entries})


CATALOGUE: Final = read_catalogue()


def _raise_where(code: str, flags: Flags) -> tuple[Caution, ...]:
    """Return the caution as a tuple of one, or of none where it holds for no sample."""
    if isinstance(flags, np.ndarray):
        rows = np.flatnonzero(flags)
        return (Caution(code, CATALOGUE[code].text, rows),) if rows.size else ()
    return (Caution(code, CATALOGUE[code].text, None),) if flags else ()


@cache
def _threshold(code: str) -> float:
    return CATALOGUE[code].threshold


def sample_cautions(gas: ElectronGas, fermi_energy: Values, chemical_potential: Values) -> tuple[Caution, ...]:
    """Return the cautions that concern any result of this gas; energies from the lowest level [J]."""
    return (
        *_raise_where("strong-interactions", _interactions_are_strong(gas, chemical_potential)),
        *_raise_where("relativistic-speed", _speed_is_relativistic(gas, fermi_energy)),
        *_confinement_cautions(gas, fermi_energy),
        *_count_cautions(gas),
    )


def fermi_level_cautions(gas: ElectronGas, fermi_energy: Values, chemical_potential: Values) -> tuple[Caution, ...]:
    """Return the cautions of a Fermi-level result; energies from the lowest level [J]."""
    return (
        *sample_cautions(gas, fermi_energy, chemical_potential),
        *_raise_where("reduced-temperature-unbounded", fermi_energy == 0.0),
    )


def curve_cautions(on_edge: Flags, is_batch: bool) -> tuple[Caution, ...]:
    """Return the caution of a curve with grid points on a diverging edge; `on_edge` has the curve's shape."""
    if not np.any(on_edge):
        return ()
    return _raise_where("edge-on-grid", np.any(on_edge, axis=-1) if is_batch else True)


def step_cautions(gas: ElectronGas) -> tuple[Caution, ...]:
    """Return the caution of an occupation that is a step."""
    return _raise_where("step-at-zero-temperature", gas.per_sample(gas.sample.temperature) == 0.0)


def _interactions_are_strong(gas: ElectronGas, chemical_potential: Values) -> Flags:
    quantum = chemical_potential >= CLASSICAL_BELOW * gas.thermal_energy
    return (gas.wigner_seitz_ratio > _threshold("strong-interactions")) & quantum


def _speed_is_relativistic(gas: ElectronGas, fermi_energy: Values) -> Flags:
    """Compare m v^2 / 2 rather than speeds: the Fermi energy, and 3 kT / 2."""
    limit = 0.5 * gas.mass * (_threshold("relativistic-speed") * SPEED_OF_LIGHT) ** 2
    return (gas.states.lowest_level + fermi_energy > limit) | (1.5 * gas.thermal_energy > limit)


def _confinement_cautions(gas: ElectronGas, fermi_energy: Values) -> tuple[Caution, ...]:
    """Return what a confined gas with a volume is warned of; an ideal gas has no walls and no bulk to compare with."""
    if not gas.sample.lengths:
        return ()
    wavevector = (6.0 * math.pi**2 * gas.mean_density / (gas.sample.spin_degeneracy * gas.sample.valleys)) ** (1.0 / 3)
    thinnest = reduce(smallest, gas.sample.lengths.values())
    spill_out = 0.75 * math.pi > _threshold("wall-spill-out") * wavevector * thinnest
    bulk = (REDUCED_PLANCK * wavevector) ** 2 / (2.0 * gas.mass)
    off = abs(gas.states.lowest_level + fermi_energy - bulk) > _threshold("confinement-matters") * bulk
    return (*_raise_where("wall-spill-out", spill_out), *_raise_where("confinement-matters", off))


def _count_cautions(gas: ElectronGas) -> tuple[Caution, ...]:
    if gas.states.free_dimensions != 0:
        return ()
    return _raise_where("few-carriers", gas.density < _threshold("few-carriers"))
