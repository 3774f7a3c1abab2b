"""Valid requests at random, far beyond what a bench sees: answered or refused, finite, in bounded time.

A longer run: `pytest -m soak tests/e2e`.
"""

import json
import math
import random
import time

import pytest

from service.web.app import create_app

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
MEASURES = {"sheet": ("m^-2", 10, 20), "line": ("m^-1", 5, 11)}


def quantity(value, unit):
    return {"value": value, "unit": unit}


def decades(draw, low, high):
    return 10 ** draw.uniform(low, high)


def random_request(draw):
    """Return an endpoint and a request: a third of them at the ends of what is accepted."""
    kind, wide = draw.choice(list(LENGTHS)), draw.random() < 0.3
    unit, low, high = MEASURES.get(kind, ("m^-3", 18, 30))
    density = decades(draw, -100, high + 6) if wide else decades(draw, low, high)
    lengths = {name: quantity(decades(draw, *((-12, 2) if wide else (-9, -5.5))), "m") for name in LENGTHS[kind]}
    temperature = draw.choice([0.0, decades(draw, *((-12, 9) if wide else (-2, 4)))])
    request = {
        "carrier_density": quantity(density, unit),
        "geometry": {"kind": kind, **lengths},
        "temperature": quantity(temperature, "K"),
        "band": {"effective_mass": decades(draw, *((-6, 6) if wide else (-2, 1)))},
    }
    endpoint = draw.choice(["fermi-level", "density-of-states", "thermal-occupancy"])
    if endpoint != "fermi-level" and draw.random() < 0.5:
        start = decades(draw, -6, 2) * draw.choice([-1, 1])
        end = start + decades(draw, -6, 2)
        request["energies"] = {
            "from": quantity(start, "eV"),
            "to": quantity(end, "eV"),
            "points": draw.choice([2, 401]),
        }
    if endpoint == "density-of-states" and draw.random() < 0.7:
        width = quantity(decades(draw, *((-12, 3) if wide else (-5, 0))), "eV")
        request["broadening"] = {"kind": draw.choice(["gaussian", "lorentzian", "thermal"]), "width": width}
    return endpoint, request


def numbers(answer, path=()):
    """Yield each number of an answer, and each null that is no stated exception."""
    if isinstance(answer, dict):
        for name, member in answer.items():
            yield from numbers(member, (*path, name))
    elif isinstance(answer, list):
        for member in answer:
            yield from numbers(member, path)
    elif isinstance(answer, float) or (answer is None and path[0] != "reduced_temperature"):
        yield answer


@pytest.mark.soak
@pytest.mark.parametrize("seed", range(4))
def test_any_valid_request_is_answered_or_refused_in_bounded_time(seed):
    draw, client = random.Random(seed), create_app().test_client()
    ends = time.monotonic() + 60
    while time.monotonic() < ends:
        endpoint, request = random_request(draw)
        began = time.monotonic()
        answer = client.post(f"/v1/{endpoint}", json=request)
        told = f"{endpoint} {json.dumps(request)}"
        assert answer.status_code in (200, 422), told
        if answer.status_code == 200:
            assert all(number is not None and math.isfinite(number) for number in numbers(answer.json)), told
        # The limits are set for a few seconds of one core; twice ten leaves room for a noisy machine.
        assert time.monotonic() - began < 20, told
