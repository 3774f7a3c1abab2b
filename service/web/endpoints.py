"""The calculators as endpoints: one row each, and the one way from a request's JSON to an answer's bytes."""

import hashlib
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any, Final

import numpy as np
import orjson

import service
from schemas.density_of_states import DensityOfStatesRequest, DensityOfStatesResult
from schemas.fermi_level import FermiLevelRequest, FermiLevelResult
from schemas.limits import Limits
from schemas.problems import pointer
from schemas.result import Result
from schemas.sample import SampleRequest
from schemas.thermal_occupancy import ThermalOccupancyRequest, ThermalOccupancyResult
from service.calculators.density_of_states import density_of_states
from service.calculators.fermi_level import fermi_level
from service.calculators.sample import Sample
from service.calculators.thermal_occupancy import thermal_occupancy
from service.errors import SampleError
from service.physics.broadening import Broadening
from service.physics.constants import EDITION
from service.physics.geometry import GEOMETRIES

Loaded = dict[str, Any]
"""A request as its schema loads it."""

_WRITTEN: Final = orjson.OPT_SERIALIZE_NUMPY


@dataclass(frozen=True, slots=True)
class Endpoint:
    """One calculator under /v1.

    Attributes
    ----------
    name : str
        Its path below /v1.
    summary, description : str
        What it answers, for the reference.
    request, result : schema
        What it takes and what it returns; their names in the OpenAPI document follow from their classes.
    calculate : callable
        From a sample and the request as loaded to the calculator's result.
    """

    name: str
    summary: str
    description: str
    request: SampleRequest
    result: Result
    calculate: Callable[[Sample, Loaded], Any]


def _fermi_level(sample: Sample, loaded: Loaded) -> Any:
    return fermi_level(sample)


def _density_of_states(sample: Sample, loaded: Loaded) -> Any:
    stated = loaded["broadening"]
    if stated is None:
        return density_of_states(sample, loaded["energies"])
    width = np.nan if stated["width"] is None else stated["width"]
    return density_of_states(sample, loaded["energies"], Broadening(stated["kind"], width))


def _thermal_occupancy(sample: Sample, loaded: Loaded) -> Any:
    return thermal_occupancy(sample, loaded["energies"])


ENDPOINTS: Final = (
    Endpoint(
        "fermi-level",
        "Where the Fermi level lies",
        "The Fermi energy at T = 0 and the chemical potential at T, from the band edge, and what the carriers there "
        "are like. In a box or sphere the Fermi energy is the highest occupied level; at T = 0 the chemical potential "
        "is midway to the lowest empty level where that one is full, and that level where it is part-filled.",
        FermiLevelRequest(),
        FermiLevelResult(),
        _fermi_level,
    ),
    Endpoint(
        "density-of-states",
        "The density of states over energy",
        "The density of states and its integral, sharp or broadened: gaussian (width: standard deviation), lorentzian "
        "(width: half width at half maximum) or thermal (width: kT, that of the sample unless stated). The integral "
        "runs from below all states; that of a lorentzian, whose tail has no finite integral, from the lowest level. "
        "The states of a box or sphere are lines: they are thermally broadened unless asked otherwise, and stand in "
        "`levels`. A grid point on a diverging subband edge holds the mean over its cell.",
        DensityOfStatesRequest(),
        DensityOfStatesResult(),
        _density_of_states,
    ),
    Endpoint(
        "thermal-occupancy",
        "How the occupation falls off",
        "The occupation and its fall over energy, the occupied density of states, what each level holds, and how much "
        "is excited. At T = 0 the occupation is a step and the array of -df/dE holds its regular part, zero.",
        ThermalOccupancyRequest(),
        ThermalOccupancyResult(),
        _thermal_occupancy,
    ),
)


def load(endpoint: Endpoint, stated: Any, limits: Limits) -> Loaded:
    """Return a request as its schema loads it.

    Raises
    ------
    ValidationError
        With every fault of the request.
    """
    return endpoint.request.load(stated, limits=limits)


def entity_tag(endpoint: Endpoint, loaded: Loaded, media_type: str) -> str:
    """Return a strong validator, known before anything is computed: the same request has the same answer."""
    digest = hashlib.sha256(loaded["canonical"])
    digest.update(_identity(endpoint.name, media_type))
    return digest.hexdigest()[:40]


@cache
def _identity(name: str, media_type: str) -> bytes:
    """Return what an answer depends on beside its request."""
    return "\0".join((service.VERSION, EDITION, np.__version__, name, media_type)).encode()


def answer(endpoint: Endpoint, loaded: Loaded) -> bytes:
    """Return the body of the answer to a request.

    Raises
    ------
    SampleError
        Where a sample has no answer and the request does not leave such samples out.
    NonFinite
        Where a result is beyond the range of a double.
    """
    # What overflows is refused where it is written, as the result that it is, rather than warned of here.
    with np.errstate(all="ignore"):
        result = _calculated(endpoint, loaded)
    return orjson.dumps(endpoint.result.dump(result, request=loaded, provenance=_provenance(loaded)), option=_WRITTEN)


def _calculated(endpoint: Endpoint, loaded: Loaded) -> Any:
    """Return the calculator's result; with `invalid_rows: omit`, without the samples that have no answer."""
    sample = Sample(**loaded["sample"])
    while True:
        try:
            return endpoint.calculate(sample, loaded)
        except SampleError as error:
            bad = sorted({fault.row for fault in error.faults if fault.row is not None})
            if loaded["rows"] is None or len(bad) != len(error.faults) or len(bad) >= (sample.count or 0):
                raise
            reasons = {fault.row: fault for fault in error.faults}
            rows = loaded["rows"]
            loaded["omitted"] += [
                {"row": int(rows[row]), "pointer": pointer(reasons[row].path), "detail": reasons[row].detail}
                for row in bad
            ]
            loaded["omitted"].sort(key=lambda entry: entry["row"])
            kept = np.delete(np.arange(len(rows)), bad)
            loaded["rows"], sample = rows[kept], sample.take(kept)


def _provenance(loaded: Loaded) -> Mapping[str, Any]:
    sample = loaded["sample"]
    return {
        "service": "fillmark",
        "version": service.VERSION,
        "constants": EDITION,
        "models": GEOMETRIES[sample["kind"], sample["confinement"]].models,
        "request_sha256": hashlib.sha256(loaded["canonical"]).hexdigest(),
    }
