"""Where geometry is decided: each kind's free dimensions, its lengths, and the states that its confinement makes.

No calculator asks "which kind?": it takes the row, builds the states, and works on those. A new geometry is one file
under `filling/` and one row here.
"""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Final

from service.physics.bands import Band
from service.physics.filling.cylinder import Cylinder
from service.physics.filling.film import HardWallFilm
from service.physics.filling.ideal import IdealGas
from service.physics.filling.level_count import LevelCount
from service.physics.filling.level_sum import LevelSum
from service.physics.filling.per_sample import one_or_many
from service.physics.filling.sphere import Sphere
from service.physics.filling.states import States
from service.physics.levels.rectangular import RectangularLevels
from service.physics.values import Values

Lengths = Mapping[str, Values]
"""The lengths of a geometry by name, each a float or an array of shape (N,) [m]."""


@dataclass(frozen=True, slots=True)
class Geometry:
    """One row of the table of geometries.

    Attributes
    ----------
    free_dimensions : int
        Directions in which the carriers are free: 3 in bulk, 2 in a film, 1 in a wire, 0 in a box [1].
    mass_axes : str
        The axes over which the density-of-states mass is taken: the axes in which the carriers move at all.
    has_volume : bool
        Whether the sample has a volume: all kinds but the ideal sheet and line.
    isotropic : bool
        Whether the levels are known for one mass only, the same along every axis.
    models : tuple of str
        The models that a result rests on, as its provenance names them.
    states : callable
        Builds the states from a band and the lengths.
    extent : callable
        What turns a density per volume into the natural density: thickness [m], cross-section [m^2] or volume [m^3].
    """

    free_dimensions: int
    mass_axes: str
    has_volume: bool
    isotropic: bool
    models: tuple[str, ...]
    states: Callable[[Band, Lengths], States]
    extent: Callable[[Lengths], Values]


def _bulk(band: Band, lengths: Lengths) -> States:
    return IdealGas(3, band.mass("xyz"), band.degeneracy)


def _sheet(band: Band, lengths: Lengths) -> States:
    return IdealGas(2, band.mass("xy"), band.degeneracy)


def _line(band: Band, lengths: Lengths) -> States:
    return IdealGas(1, band.mass("x"), band.degeneracy)


def _film(band: Band, lengths: Lengths) -> States:
    return HardWallFilm(band, lengths["thickness"])


def _wire(band: Band, lengths: Lengths) -> States:
    def build(mass_x: float, mass_y: float, mass_z: float, degeneracy: float, width: float, height: float) -> States:
        return LevelSum(RectangularLevels((width, height), (mass_y, mass_z)), 1, mass_x, degeneracy)

    return one_or_many(build, *band.parts(), lengths["width"], lengths["height"])


def _cylinder(band: Band, lengths: Lengths) -> States:
    return one_or_many(Cylinder, band.mass_x, band.degeneracy, lengths["diameter"])


def _box(band: Band, lengths: Lengths) -> States:
    def build(mass_x: float, mass_y: float, mass_z: float, degeneracy: float, *sides: float) -> States:
        return LevelCount(RectangularLevels(sides, (mass_x, mass_y, mass_z)), degeneracy)

    return one_or_many(build, *band.parts(), lengths["length"], lengths["width"], lengths["height"])


def _sphere(band: Band, lengths: Lengths) -> States:
    return one_or_many(Sphere, band.mass_x, band.degeneracy, lengths["diameter"])


def _none(lengths: Lengths) -> Values:
    return 1.0


def _thickness(lengths: Lengths) -> Values:
    return lengths["thickness"]


def _rectangle(lengths: Lengths) -> Values:
    return lengths["width"] * lengths["height"]


def _circle(lengths: Lengths) -> Values:
    return math.pi / 4.0 * lengths["diameter"] ** 2


def _cuboid(lengths: Lengths) -> Values:
    return lengths["length"] * lengths["width"] * lengths["height"]


def _ball(lengths: Lengths) -> Values:
    return math.pi / 6.0 * lengths["diameter"] ** 3


_IDEAL = ("free electrons in a parabolic band", "Fermi-Dirac statistics")
_HARD_WALLS = ("free electrons in a parabolic band", "infinite potential walls", "Fermi-Dirac statistics")

GEOMETRIES: Final[Mapping[tuple[str, str], Geometry]] = MappingProxyType(
    {
        ("bulk", "hard-wall"): Geometry(3, "xyz", True, False, _IDEAL, _bulk, _none),
        ("sheet", "hard-wall"): Geometry(2, "xy", False, False, _IDEAL, _sheet, _none),
        ("line", "hard-wall"): Geometry(1, "x", False, False, _IDEAL, _line, _none),
        ("film", "hard-wall"): Geometry(2, "xyz", True, False, _HARD_WALLS, _film, _thickness),
        ("wire", "hard-wall"): Geometry(1, "xyz", True, False, _HARD_WALLS, _wire, _rectangle),
        ("cylinder", "hard-wall"): Geometry(1, "xyz", True, True, _HARD_WALLS, _cylinder, _circle),
        ("box", "hard-wall"): Geometry(0, "xyz", True, False, _HARD_WALLS, _box, _cuboid),
        ("sphere", "hard-wall"): Geometry(0, "xyz", True, True, _HARD_WALLS, _sphere, _ball),
    }
)
