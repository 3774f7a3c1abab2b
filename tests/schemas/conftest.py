"""Requests to start from, and what a schema says about a bad one."""

from typing import Any

import pytest
from marshmallow import ValidationError

from schemas.problems import faults

LENGTHS = {
    "bulk": (),
    "film": ("thickness",),
    "wire": ("width", "height"),
    "cylinder": ("diameter",),
    "box": ("length", "width", "height"),
    "sphere": ("diameter",),
    "sheet": (),
    "line": (),
}
DENSITIES = {"sheet": "cm^-2", "line": "cm^-1"}


@pytest.fixture(scope="session")
def body():
    """A request of a geometry kind, with top-level members changed; None takes one away."""

    def make(kind: str = "film", **changes: Any) -> dict[str, Any]:
        stated = {
            "carrier_density": {"value": 1e12 if kind in DENSITIES else 1e21, "unit": DENSITIES.get(kind, "cm^-3")},
            "geometry": {"kind": kind, **{name: {"value": 12, "unit": "nm"} for name in LENGTHS[kind]}},
            "temperature": {"value": 300, "unit": "K"},
        }
        stated.update(changes)
        return {name: value for name, value in stated.items() if value is not None}

    return make


@pytest.fixture(scope="session")
def refused():
    """The faults for which a schema refuses a request, by pointer."""

    def load(schema: Any, stated: Any, **options: Any) -> dict[str, str]:
        with pytest.raises(ValidationError) as raised:
            schema.load(stated, **options)
        return {fault["pointer"]: fault["detail"] for fault in faults(raised.value.messages)}

    return load
