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
from service.physics.filling.box import RectangularBox
from service.physics.filling.film import HardWallFilm
from service.physics.filling.ideal import IdealGas
from service.physics.filling.round import Cylinder, Sphere
from service.physics.filling.states import States
from service.physics.filling.wire import RectangularWire
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


def _nothing(lengths: Lengths) -> Values:
    return 1.0


_HARD_WALLS = ("free electrons in a parabolic band", "infinite potential walls", "Fermi-Dirac statistics")
_IDEAL = ("free electrons in a parabolic band", "Fermi-Dirac statistics")

GEOMETRIES: Final[Mapping[tuple[str, str], Geometry]] = MappingProxyType(
    {
        ("bulk", "hard-wall"): Geometry(
            3,
            "xyz",
            True,
            False,
            _IDEAL,
            lambda band, lengths: IdealGas(3, band.mass("xyz"), band.degeneracy),
            _nothing,
        ),
        ("sheet", "hard-wall"): Geometry(
            2,
            "xy",
            False,
            False,
            _IDEAL,
            lambda band, lengths: IdealGas(2, band.mass("xy"), band.degeneracy),
            _nothing,
        ),
        ("line", "hard-wall"): Geometry(
            1,
            "x",
            False,
            False,
            _IDEAL,
            lambda band, lengths: IdealGas(1, band.mass("x"), band.degeneracy),
            _nothing,
        ),
        ("film", "hard-wall"): Geometry(
            2,
            "xyz",
            True,
            False,
            _HARD_WALLS,
            lambda band, lengths: HardWallFilm(band, lengths["thickness"]),
            lambda lengths: lengths["thickness"],
        ),
        ("wire", "hard-wall"): Geometry(
            1,
            "xyz",
            True,
            False,
            _HARD_WALLS,
            lambda band, lengths: RectangularWire(band, lengths["width"], lengths["height"]),
            lambda lengths: lengths["width"] * lengths["height"],
        ),
        ("cylinder", "hard-wall"): Geometry(
            1,
            "xyz",
            True,
            True,
            _HARD_WALLS,
            lambda band, lengths: Cylinder(band, lengths["diameter"]),
            lambda lengths: math.pi / 4.0 * lengths["diameter"] ** 2,
        ),
        ("box", "hard-wall"): Geometry(
            0,
            "xyz",
            True,
            False,
            _HARD_WALLS,
            lambda band, lengths: RectangularBox(band, lengths["length"], lengths["width"], lengths["height"]),
            lambda lengths: lengths["length"] * lengths["width"] * lengths["height"],
        ),
        ("sphere", "hard-wall"): Geometry(
            0,
            "xyz",
            True,
            True,
            _HARD_WALLS,
            lambda band, lengths: Sphere(band, lengths["diameter"]),
            lambda lengths: math.pi / 6.0 * lengths["diameter"] ** 3,
        ),
    }
)
