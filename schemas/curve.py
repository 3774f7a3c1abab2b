"""What an endpoint with curves over energy also takes: the energies, and how the states are broadened."""

from collections.abc import Mapping
from typing import Any, Final

import numpy as np
from marshmallow import ValidationError

from schemas.batch import Samples, put
from schemas.limits import Limits
from schemas.quantity import Quantity, Stated, faults_of
from schemas.sample import SampleRequest
from schemas.strict import Member, StrictSchema, Word, shortened
from schemas.units import FloatArray

HIGHEST: Final = 1e-6
"""The largest energy that a curve may reach on either side of the band edge [J]."""

_RANGE: Final = ("from", "to", "points")


class Points(Member):
    """A count of points, two or more."""

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> int:
        if type(value) not in (int, float) or value % 1:
            raise ValidationError(f"must be a whole number, not {shortened(value)}")
        if value < 2:
            raise ValidationError("must be 2 or more")
        return int(value)


def _end(sentence: str) -> Quantity:
    return Quantity(
        "energy", least=-HIGHEST, most=HIGHEST, arrays=False, required=True, metadata={"description": sentence}
    )


class EnergyRange(
    StrictSchema.from_dict(  # type: ignore[misc]
        {
            "from": _end("The first energy, from the band edge."),
            "to": _end("The last energy, above the first."),
            "points": Points(required=True, metadata={"description": "How many energies, evenly spaced."}),
        }
    )
):
    """Evenly spaced energies, from the band edge."""


class Energies(Member):
    """A range of energies, or an array of them."""

    span = EnergyRange()
    array = Quantity("energy", least=-HIGHEST, most=HIGHEST, arrays=None)

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Any:
        if type(value) is not dict:
            raise ValidationError(f"must be a range or a quantity with an array, not {shortened(value)}")
        if "value" in value or "unit" in value:
            stated = self.array.deserialize(value)
            if stated.bad is not None:
                raise ValidationError({"value": faults_of(stated.bad, stated.reason)})
            return stated
        loaded = self.span.load(value)
        if loaded["from"].si >= loaded["to"].si:
            raise ValidationError({"to": ["must be above from"]})
        return loaded


class Broadening(StrictSchema):
    """How sharp states are spread over energy."""

    kind = Word("none", "gaussian", "lorentzian", "thermal", required=True)
    width = Quantity("energy", least=1e-36, most=HIGHEST, arrays=False)

    def load(self, data: Any, *, many: bool | None = None, partial: Any = None, unknown: Any = None) -> Any:
        """Return the broadening, its width being there where its kind needs one."""
        loaded = super().load(data)
        kind, stated = loaded["kind"], "width" in loaded
        if kind == "none" and stated:
            raise ValidationError({"width": ["must not be there: nothing is broadened"]})
        if kind in ("gaussian", "lorentzian") and not stated:
            raise ValidationError({"width": [f"is missing: {kind} broadening has no width of its own"]})
        return loaded


class CurveRequest(SampleRequest):
    """A sample, or arrays of samples, and the energies of their curves."""

    energies = Energies(
        metadata={
            "description": "From the band edge, the same for all samples; absent, a range that shows what matters."
        }
    )

    def _curve(
        self, stated: dict[str, Any], samples: Samples | None, limits: Limits, errors: dict[Any, Any]
    ) -> dict[str, Any]:
        if "energies" in errors:
            return {}
        energies = stated.get("energies")
        points, path = _size(energies, limits)
        if points > limits.energies:
            put(errors, path, [f"{points} energies; the limit is {limits.energies}"])
        count = 1 if samples is None or samples.count is None else samples.count
        if points * count > limits.curve_points:
            product = f"{count} samples x {points} energies = {count * points}"
            most = limits.curve_points // count
            put(errors, path, [f"{product}; the limit is {limits.curve_points}, for so many samples {most} energies"])
        if errors:
            return {}
        return {"energies": _grid(energies), "broadening": _broadening(stated.get("broadening"))}


def _size(energies: Any, limits: Limits) -> tuple[int, tuple[str, ...]]:
    """Return how many energies there are, and where the request says so."""
    if energies is None:
        return limits.default_energies, ("energies",)
    if isinstance(energies, Stated):
        return len(np.atleast_1d(energies.si)), ("energies", "value")
    return energies["points"], ("energies", "points")


def _grid(energies: Any) -> FloatArray | None:
    """Return the energies in SI, evenly spaced in the unit of both ends where they share it: there they are round."""
    if energies is None:
        return None
    if isinstance(energies, Stated):
        return np.atleast_1d(energies.si)
    start, stop, points = (energies[name] for name in _RANGE)
    if start.unit is stop.unit:
        spaced: FloatArray = start.unit.to_si(np.linspace(start.value, stop.value, points))
        return spaced
    return np.linspace(start.si, stop.si, points)


def _broadening(stated: dict[str, Any] | None) -> dict[str, Any] | None:
    if stated is None:
        return None
    return {"kind": stated["kind"], "width": stated["width"].si if "width" in stated else None}
