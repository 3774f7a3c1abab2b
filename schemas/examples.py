"""Requests that stand in the OpenAPI document: a conducting-oxide film, a metal at three temperatures, a grain."""

from collections.abc import Mapping
from typing import Any, Final

_FILM: Final = {
    "carrier_density": {"value": 5e20, "unit": "cm^-3"},
    "geometry": {"kind": "film", "thickness": {"value": 20, "unit": "nm"}},
    "temperature": {"value": 300, "unit": "K"},
    "band": {"effective_mass": 0.3, "relative_permittivity": 9},
}
_BOX: Final = {
    "carrier_density": {"value": 40, "unit": "1"},
    "geometry": {
        "kind": "box",
        "length": {"value": 12, "unit": "nm"},
        "width": {"value": 10, "unit": "nm"},
        "height": {"value": 5, "unit": "nm"},
    },
    "temperature": {"value": 4.2, "unit": "K"},
}
_METAL: Final = {
    "carrier_density": {"value": 8.49e22, "unit": "cm^-3"},
    "geometry": {"kind": "bulk"},
    "temperature": {"value": [4.2, 77, 300], "unit": "K"},
    "output_units": {"fermi_velocity": "km/s"},
}
_RANGE: Final = {"from": {"value": 0, "unit": "eV"}, "to": {"value": 1.5, "unit": "eV"}, "points": 301}
_LINE_SHAPE: Final = {"kind": "gaussian", "width": {"value": 5, "unit": "meV"}}

EXAMPLES: Final[Mapping[str, list[dict[str, Any]]]] = {
    "FermiLevelRequest": [_FILM, _METAL],
    "DensityOfStatesRequest": [{**_FILM, "energies": _RANGE}, {**_BOX, "broadening": _LINE_SHAPE}],
    "ThermalOccupancyRequest": [{**_FILM, "energies": _RANGE}, _BOX],
}
"""Worked examples by the name of their schema."""
