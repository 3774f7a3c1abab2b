"""The sample of a request, whatever the endpoint: density, geometry, temperature, band."""

from collections.abc import Mapping
from typing import Any, ClassVar, Final, cast

import orjson
from marshmallow import ValidationError

from schemas.batch import Column, Samples, Values, arrange, put
from schemas.limits import DEFAULT_LIMITS, Limits
from schemas.output_units import check_for_kind
from schemas.quantity import PURE, Quantity, Stated
from schemas.strict import LATER, Member, Object, StrictSchema, Word, hint, shortened
from schemas.units import DIMENSIONS, Unit
from schemas.vocabulary import KINDS, MEASURES

AXES: Final = ("x", "y", "z")
SOFT_WALLS: Final = ("finite-well", "triangular", "parabolic")
_LATER: Final = {name: f"{name} {LATER}" for name in ("material", "propagation")}
_SOFT: Final = {name: f"{name} {LATER}" for name in ("barrier", "barrier_mass", "field", "level_spacing")}
_BAND_DEFAULTS: Final = (("valleys", 1.0), ("spin_degeneracy", 2.0), ("relative_permittivity", 1.0))
_SORTED: Final = orjson.OPT_SORT_KEYS | orjson.OPT_SERIALIZE_NUMPY
_DENSITY_MEASURES: Final = {dimension: measure for measure, dimension in MEASURES.items()}


def _pure(sentence: str, **options: Any) -> Quantity:
    return Quantity(PURE, metadata={"description": sentence}, **options)


class GeometryRequest(StrictSchema):
    """What every geometry kind takes; the lengths are added for each."""

    later = _SOFT

    kind = Word(*KINDS, required=True, metadata={"description": "The shape of the sample."})
    confinement = Word("hard-wall", later=SOFT_WALLS, metadata={"description": "What the walls are: infinitely high."})


def _geometry(kind: str) -> StrictSchema:
    lengths = {
        name: Quantity("length", least=1e-12, most=1e3, required=True, metadata={"description": sentence})
        for name, sentence in KINDS[kind].lengths.items()
    }
    only = {"kind": Word(kind, required=True, metadata={"description": KINDS[kind].sentence})}
    schema = type(
        f"{kind.capitalize()}Geometry", (GeometryRequest,), {"__doc__": KINDS[kind].sentence, **only, **lengths}
    )
    made: StrictSchema = schema()
    return made


GEOMETRIES: Final[Mapping[str, StrictSchema]] = {kind: _geometry(kind) for kind in KINDS}
"""One schema for each geometry kind."""


class Geometry(Member):
    """The geometry: its kind decides which other members there are."""

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Any:
        if type(value) is not dict:
            raise ValidationError(f"must be an object, not {shortened(value)}")
        if "kind" not in value:
            raise ValidationError({"kind": [f"is missing; it is one of {', '.join(KINDS)}"]})
        kind = value["kind"]
        schema = GEOMETRIES.get(kind) if type(kind) is str else None
        if schema is None:
            near = hint(kind, KINDS) if type(kind) is str else ""
            raise ValidationError({"kind": [f"{shortened(kind)} is none of {', '.join(KINDS)}{near}"]})
        return schema.load(value)


class EffectiveMass(Member):
    """One mass for all directions, or three for the axes x, y and z, in electron masses."""

    def __init__(self, **options: Any) -> None:
        super().__init__(**options)
        self.one = Quantity(PURE, least=1e-6, most=1e6)

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Any:
        if type(value) is not list:
            return self.one.deserialize(value)
        if len(value) != len(AXES):
            raise ValidationError(
                f"must be one mass or three, for the axes x, y and z, not an array of {len(value)}; one mass a sample "
                'is {"value": [...], "unit": "1"}'
            )
        masses, errors = [], {}
        for axis, mass in enumerate(value):
            try:
                masses.append(self.one.deserialize(mass))
            except ValidationError as error:
                errors[axis] = error.messages
        if errors:
            raise ValidationError(errors)
        return masses


class Valleys(Quantity):
    """A count of valleys; groups of valleys are for a later version."""

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Stated:
        if type(value) is list:
            raise ValidationError(f"a list of valley groups {LATER}; this one takes a count")
        return super()._deserialize(value, attr, data, **options)


class Nonparabolicity(Quantity):
    """Zero: this version computes parabolic bands."""

    def range_in_words(self, unit: Any) -> str:
        """Return the range that is accepted, as words."""
        return f"must be 0: nonparabolicity {LATER}"


class BandRequest(StrictSchema):
    """The band of the carriers."""

    effective_mass = EffectiveMass(
        metadata={"description": "In electron masses: one number, or three for the axes x, y and z; default 1."}
    )
    valleys = Valleys(
        PURE,
        least=1,
        most=1000,
        whole=True,
        metadata={"description": "How many equivalent valleys the band has; default 1."},
    )
    spin_degeneracy = _pure("States for each orbital level and valley; default 2.", least=1, most=2, whole=True)
    relative_permittivity = _pure("Static background permittivity; default 1.", least=1, most=1e6)
    nonparabolicity = Nonparabolicity(
        "per energy",
        least=0.0,
        most=0.0,
        arrays=False,
        metadata={"description": "alpha of E (1 + alpha E); zero in this version."},
    )


class CarrierDensity(Quantity):
    """A density, from the smallest whose Fermi energy a double can hold."""

    _least: ClassVar[Mapping[str, float]] = {
        MEASURES["volume"]: 1e-280,
        MEASURES["area"]: 1e-270,
        # On a line the Fermi energy goes with the square of the density.
        MEASURES["length"]: 1e-130,
        MEASURES["count"]: 1e-280,
    }

    def lowest(self, unit: Unit) -> float:
        """Return the least density of the unit's measure."""
        return self._least[unit.dimension]


class SampleRequest(StrictSchema):
    """What every calculator takes; each adds its own `output_units`."""

    later = _LATER

    carrier_density = CarrierDensity(
        *MEASURES.values(),
        least=1e-280,
        most=1e36,
        required=True,
        metadata={
            "description": "Carriers per volume; in a film also per area, in a wire or cylinder also per length, in a "
            "box or sphere also a count (unit 1); in a sheet per area only, on a line per length only."
        },
    )
    geometry = Geometry(required=True, metadata={"description": "The shape of the sample and its lengths."})
    temperature = Quantity(
        "temperature",
        least=1e-12,
        most=1e9,
        zero=True,
        required=True,
        metadata={"description": "The temperature; 0 K is exact."},
    )
    band = Object(BandRequest(), metadata={"description": "The band of the carriers."})
    combine = Word("grid", metadata={"description": "Cross the arrays instead of pairing them."})
    invalid_rows = Word(
        "reject",
        "omit",
        metadata={"description": "Refuse a batch with a value out of range (default), or leave those samples out."},
    )

    def load(
        self,
        data: Any,
        *,
        many: bool | None = None,
        partial: Any = None,
        unknown: Any = None,
        limits: Limits = DEFAULT_LIMITS,
    ) -> dict[str, Any]:
        """Return the request with its sample in SI.

        Raises
        ------
        ValidationError
            With every fault of the request.
        """
        errors: dict[Any, Any] = {}
        try:
            stated = super().load(data)
        except ValidationError as error:
            if not isinstance(error.messages, dict):
                raise
            errors = error.messages
            stated = cast(dict[str, Any], error.valid_data)
        geometry = stated.get("geometry", {})
        kind = geometry.get("kind")
        measure = _density_measure(stated.get("carrier_density"), kind, errors)
        units = stated.get("output_units", {})
        for name, messages in check_for_kind(units, kind).items():
            put(errors, ("output_units", name), messages)
        single = None if errors else _single(stated, kind)
        samples = single or arrange(
            _columns(stated, kind),
            stated.get("combine") == "grid",
            stated.get("invalid_rows") == "omit",
            limits,
            errors,
        )
        curve = self._curve(stated, samples, limits, errors)
        if errors or samples is None:
            raise ValidationError(errors)
        return {
            "sample": {
                "kind": kind,
                "confinement": geometry.get("confinement", "hard-wall"),
                "density_measure": measure,
                "count": samples.count,
                **_parameters(samples.values, kind),
            },
            **curve,
            "grid": samples.grid,
            "rows": samples.rows,
            "omitted": samples.omitted,
            "output_units": units,
            "canonical": orjson.dumps(_canonical(stated), option=_SORTED),
        }

    def _curve(
        self, stated: dict[str, Any], samples: Samples | None, limits: Limits, errors: dict[Any, Any]
    ) -> dict[str, Any]:
        """Return what an endpoint with curves adds."""
        return {"energies": None, "broadening": None}


def _density_measure(density: Stated | None, kind: str | None, errors: dict[Any, Any]) -> str | None:
    """Return what the carrier density is counted per, where the geometry takes it so."""
    if density is None or kind is None:
        return None
    measure = _DENSITY_MEASURES[density.unit.dimension]
    allowed = KINDS[kind].densities
    if measure not in allowed:
        choices = (DIMENSIONS[MEASURES[name]] for name in allowed)
        wanted = ", or ".join(f"{choice.phrase}, in {choice.proposal}" for choice in choices)
        stated = DIMENSIONS[density.unit.dimension].phrase
        put(errors, ("carrier_density", "unit"), [f"{density.unit.symbol} is {stated}; a {kind} takes {wanted}"])
    return measure


def _single(stated: dict[str, Any], kind: str) -> Samples | None:
    """Return the one sample of a request whose quantities are plain numbers; None where any is an array."""
    geometry, band = stated["geometry"], stated.get("band", {})
    mass = band.get("effective_mass", 1.0)
    parameters = [
        stated["carrier_density"],
        *(geometry[name] for name in KINDS[kind].lengths),
        stated["temperature"],
        *(mass if type(mass) is list else (mass,)),
        *(band.get(name, default) for name, default in _BAND_DEFAULTS),
    ]
    values = [parameter if type(parameter) is float else parameter.si for parameter in parameters]
    if any(type(value) is not float for value in values):
        return None
    return Samples(None, values, {"axes": [], "shape": []} if "combine" in stated else None)


def _columns(stated: dict[str, Any], kind: str | None) -> list[Column]:
    """Return the parameters of the samples that have loaded, in the order of the contract."""
    columns = []
    if "carrier_density" in stated:
        columns.append(Column(("carrier_density",), "carrier_density", stated["carrier_density"]))
    geometry = stated.get("geometry", {})
    for name in KINDS[kind].lengths if kind else ():
        if name in geometry:
            columns.append(Column(("geometry", name), name, geometry[name]))
    if "temperature" in stated:
        columns.append(Column(("temperature",), "temperature", stated["temperature"]))
    band = stated.get("band", {})
    mass = band.get("effective_mass", 1.0)
    if type(mass) is list:
        for number, (axis, one) in enumerate(zip(AXES, mass, strict=True)):
            columns.append(Column(("band", "effective_mass", number), f"effective_mass_{axis}", one))
    else:
        columns.append(Column(("band", "effective_mass"), "effective_mass", mass))
    for name, default in _BAND_DEFAULTS:
        columns.append(Column(("band", name), name, band.get(name, default)))
    return columns


def _parameters(values: list[Values], kind: str) -> dict[str, Any]:
    """Return the values of all columns under their names in a sample."""
    lengths = KINDS[kind].lengths
    density, temperature = values[0], values[1 + len(lengths)]
    masses = tuple(values[2 + len(lengths) : -len(_BAND_DEFAULTS)])
    return {
        "carrier_density": density,
        "lengths": dict(zip(lengths, values[1:], strict=False)),
        "temperature": temperature,
        "effective_mass": masses if len(masses) > 1 else masses * 3,
        **dict(zip((name for name, _ in _BAND_DEFAULTS), values[-len(_BAND_DEFAULTS) :], strict=True)),
    }


def _canonical(stated: Any) -> Any:
    """Return what was stated in its canonical form: units by symbol, numbers as doubles."""
    if isinstance(stated, Stated):
        return {"unit": stated.unit.symbol, "value": stated.value}
    if isinstance(stated, dict):
        return {name: _canonical(value) for name, value in stated.items()}
    if isinstance(stated, list):
        return [_canonical(value) for value in stated]
    return stated.symbol if isinstance(stated, Unit) else stated
