"""Each quantity of a response: what it is, in one sentence, and its laboratory unit for each geometry kind with it."""

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Final

from schemas.units import SPELLINGS


@dataclass(frozen=True, slots=True)
class Kind:
    """A geometry kind.

    Attributes
    ----------
    sentence : str
        What it is.
    lengths : mapping of str to str
        Its lengths by name, each with a sentence.
    densities : tuple of str
        What a carrier density may be counted per: ``volume``, ``area``, ``length`` or ``count``.
    mean, natural : str
        What results are counted per: the mean over the sample, and per free direction.
    """

    sentence: str
    lengths: Mapping[str, str]
    densities: tuple[str, ...]
    mean: str
    natural: str


MEASURES: Final[Mapping[str, str]] = MappingProxyType(
    {
        "volume": "number per volume",
        "area": "number per area",
        "length": "number per length",
        "count": "dimensionless",
    }
)
"""The dimension of a carrier density by what it is counted per."""

KINDS: Final[Mapping[str, Kind]] = MappingProxyType(
    {
        "bulk": Kind("A sample without walls.", {}, ("volume",), "volume", "volume"),
        "film": Kind(
            "A slab between two walls, thin along z.",
            {"thickness": "Distance between the walls."},
            ("volume", "area"),
            "volume",
            "area",
        ),
        "wire": Kind(
            "A wire of rectangular cross-section along x.",
            {"width": "Size of the cross-section along y.", "height": "Size of the cross-section along z."},
            ("volume", "length"),
            "volume",
            "length",
        ),
        "cylinder": Kind(
            "A wire of circular cross-section along x.",
            {"diameter": "Diameter of the cross-section."},
            ("volume", "length"),
            "volume",
            "length",
        ),
        "box": Kind(
            "A rectangular box.",
            {"length": "Size along x.", "width": "Size along y.", "height": "Size along z."},
            ("volume", "count"),
            "volume",
            "count",
        ),
        "sphere": Kind("A ball.", {"diameter": "Diameter of the ball."}, ("volume", "count"), "volume", "count"),
        "sheet": Kind("The ideal two-dimensional gas.", {}, ("area",), "area", "area"),
        "line": Kind("The ideal one-dimensional gas, along x.", {}, ("length",), "length", "length"),
    }
)
"""The geometry kinds, in the order of the contract."""


@dataclass(frozen=True, slots=True)
class Entry:
    """A quantity of a response.

    Attributes
    ----------
    sentence : str
        What it is.
    units : mapping of str to str
        The laboratory unit for each geometry kind that has the quantity.
    undefined : bool
        Whether one sample may have no value of it, written as null.
    """

    sentence: str
    units: Mapping[str, str]
    undefined: bool = False

    @property
    def dimensions(self) -> tuple[str, ...]:
        """The dimensions that it may have."""
        return tuple(dict.fromkeys(SPELLINGS[symbol].dimension for symbol in self.units.values()))


_COUNTED: Final = {"volume": "cm^-3", "area": "cm^-2", "length": "cm^-1", "count": "1"}
_PER_ENERGY: Final = {"volume": "eV^-1 cm^-3", "area": "eV^-1 cm^-2", "length": "eV^-1 cm^-1"}
_LINES: Final = ("box", "sphere")


def _everywhere(symbol: str, *absent: str) -> Mapping[str, str]:
    return MappingProxyType({kind: symbol for kind in KINDS if kind not in absent})


def _per_mean(symbols: Mapping[str, str], *absent: str) -> Mapping[str, str]:
    return MappingProxyType({kind: symbols[row.mean] for kind, row in KINDS.items() if kind not in absent})


def _per_natural(symbols: Mapping[str, str], *absent: str) -> Mapping[str, str]:
    return MappingProxyType({kind: symbols[row.natural] for kind, row in KINDS.items() if kind not in absent})


ENTRIES: Final[Mapping[str, Entry]] = MappingProxyType(
    {
        "fermi_energy": Entry(
            "The chemical potential at T = 0 at the same density; in a box or sphere the highest occupied level.",
            _everywhere("eV"),
        ),
        "chemical_potential": Entry(
            "The chemical potential at the sample's temperature; in a box or sphere at T = 0 midway between the "
            "highest occupied and the lowest empty level, or the highest occupied level where that is part-filled.",
            _everywhere("eV"),
        ),
        "lowest_level": Entry(
            "The edge of the lowest level; zero without walls, where it is the band edge.", _everywhere("eV")
        ),
        "chemical_potential_above_lowest_level": Entry(
            "The chemical potential from the lowest level, with its own full precision.", _everywhere("eV")
        ),
        "fermi_temperature": Entry("(Fermi energy - lowest level) / k.", _everywhere("K")),
        "reduced_temperature": Entry(
            "T / T_F; null for one sample whose Fermi temperature is zero.", _everywhere("1"), undefined=True
        ),
        "fermi_wavevector": Entry("The wavevector at the Fermi energy.", _everywhere("nm^-1")),
        "fermi_wavelength": Entry("2 pi over the Fermi wavevector.", _everywhere("nm")),
        "fermi_velocity": Entry("The group velocity at the Fermi energy.", _everywhere("m/s")),
        "density_of_states_at_fermi_level": Entry(
            "The density of states at the Fermi energy, spin and valleys counted.", _per_mean(_PER_ENERGY, *_LINES)
        ),
        "occupied_levels": Entry(
            "Orbital levels that hold carriers at T = 0; in a film or wire their subbands.", _everywhere("1", "bulk")
        ),
        "effective_dimension": Entry(
            "2 (E_F - E_1) g(E_F) / n: 3 in bulk, 2 in a sheet, 1 on a line, between these in a crossover.",
            _everywhere("1", *_LINES),
        ),
        "wigner_seitz_ratio": Entry(
            "r_s: the radius per carrier at the mean density over the effective Bohr radius.", _everywhere("1")
        ),
        "relative_error_bound": Entry(
            "Bound on the error of the chemical potential over the larger of |mu| and kT.", _everywhere("1")
        ),
        "energy": Entry("The energies of the curves.", _everywhere("eV")),
        "density_of_states": Entry("The density of states, spin and valleys counted.", _per_mean(_PER_ENERGY)),
        "integrated_states": Entry(
            "The integral of the density of states from below all states; with lorentzian broadening from the lowest "
            "level.",
            _per_mean(_COUNTED),
        ),
        "occupation": Entry("The occupation f of a state of that energy.", _everywhere("1")),
        "thermal_broadening": Entry("-df/dE; at T = 0 its regular part, zero.", _everywhere("eV^-1")),
        "occupied_density": Entry("The density of states times the occupation.", _per_mean(_PER_ENERGY, *_LINES)),
        "excited_fraction": Entry("Carriers above the Fermi energy over all carriers.", _everywhere("1")),
        "mean_energy": Entry("The mean energy of a carrier.", _everywhere("eV")),
        "transition_width": Entry("The energy over which f falls from 0.9 to 0.1: 2 ln 9 kT.", _everywhere("eV")),
        "edge": Entry("The energy of the level, or of the bottom of its subband.", _everywhere("eV", "bulk")),
        "degeneracy": Entry("Orbital levels at that energy, spin and valleys not counted.", _everywhere("1", "bulk")),
        "population": Entry("Carriers in the level, per free area or length.", _per_natural(_COUNTED, "bulk")),
        "share": Entry("Population over all carriers.", _everywhere("1", "bulk")),
    }
)
"""The quantities of a response by name."""
