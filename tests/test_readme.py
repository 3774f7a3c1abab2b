"""The README's requests have the README's answers, and these agree with an independent calculation in 30 digits."""

import itertools
import json
import math
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from mpmath import MPContext

from service.web.app import create_app

README = (Path(__file__).parents[1] / "README.md").read_text(encoding="utf-8")
EXAMPLE = re.compile(r"```sh\ncurl -s \S+:8000(\S+) [^\n]*-d '([^']+)'\n```\n.*?```json\n(.*?)```", re.DOTALL)
EXAMPLES = [(path, json.loads(body), json.loads(answer)) for path, body, answer in EXAMPLE.findall(README)]
AGREEMENT = 1e-12
"""The service's promise for mu, of max(|mu|, kT); the last digits may differ between releases of NumPy."""


def ask(path: str, body: Any) -> Any:
    response = create_app().test_client().post(path, json=body)
    assert response.status_code == 200, response.text
    return response.get_json()


def assert_close(stated: Any, found: Any) -> None:
    if isinstance(stated, dict):
        for name, value in stated.items():
            assert_close(value, found[name])
    elif isinstance(stated, list):
        assert len(stated) == len(found)
        for one, other in zip(stated, found, strict=True):
            assert_close(one, other)
    elif isinstance(stated, float):
        assert math.isclose(stated, found, rel_tol=AGREEMENT)
    else:
        assert stated == found


@pytest.mark.parametrize(("path", "body", "stated"), EXAMPLES)
def test_a_request_of_the_readme_has_the_answer_that_it_states(path: str, body: Any, stated: Any) -> None:
    assert_close(stated, ask(path, body))


def test_the_readme_shows_a_sample_of_each_sort_and_one_answer_whole() -> None:
    assert {body["geometry"]["kind"] for _, body, _ in EXAMPLES} >= {"bulk", "film", "wire", "box"}
    assert {path for path, _, _ in EXAMPLES} == {
        "/v1/fermi-level",
        "/v1/density-of-states",
        "/v1/thermal-occupancy",
    }
    path, body, stated = EXAMPLES[0]
    assert set(stated) == set(ask(path, body))


# The independent calculation: CODATA 2022 as published, the textbook sums over levels, mpmath's own quadrature.

mp = MPContext()
mp.dps = 30
mpf = mp.mpf

SI = {"1": 1, "nm": mpf("1e-9"), "cm^-1": 100, "cm^-2": 10**4, "cm^-3": 10**6}
CHARGE, BOLTZMANN = mpf("1.602176634e-19"), mpf("1.380649e-23")
ELECTRON_MASS, REDUCED_PLANCK = mpf("9.1093837139e-31"), mpf("6.62607015e-34") / (2 * mp.pi)


def size(quantity: Any) -> Any:
    return mpf(str(quantity["value"])) * SI[quantity["unit"]]


def fermi_dirac_integral(order: Any, eta: Any) -> Any:
    """Integrate over t = x^(1/2), which takes the root at the origin away; split where the occupation falls."""
    if order == 0:
        return mp.log1p(mp.exp(eta))
    edge = mp.sqrt(max(eta, 0))
    points = sorted({mpf(0), max(edge - 3, 0), edge, edge + 3, edge + 12})
    return mp.quad(lambda t: 2 * t ** (2 * order + 1) / (mp.exp(t * t - eta) + 1), points) / mp.gamma(order + 1)


def levels(geometry: Any, mass: Any) -> Iterator[Any]:
    """Yield the lowest hard-wall levels, more than any of the README's samples fills."""
    lengths = [size(geometry[name]) for name in ("thickness", "length", "width", "height") if name in geometry]
    steps = [(REDUCED_PLANCK * mp.pi / length) ** 2 / (2 * mass) for length in lengths]
    for numbers in itertools.product(range(1, {0: 1, 1: 41, 2: 13, 3: 22}[len(steps)]), repeat=len(steps)):
        yield sum((step * number**2 for step, number in zip(steps, numbers, strict=True)), mpf(0))


def carriers(geometry: Any, mass: Any, temperature: Any, potential: Any) -> Any:
    """Return the carriers per free direction."""
    kt = BOLTZMANN * temperature
    free = {"bulk": 3, "film": 2, "wire": 1, "box": 0}[geometry["kind"]]
    if free == 0:
        return sum(2 / (mp.exp((level - potential) / kt) + 1) for level in levels(geometry, mass))
    scale = 2 * (mass * kt / (2 * mp.pi * REDUCED_PLANCK**2)) ** (mpf(free) / 2)
    filled = ((potential - level) / kt for level in levels(geometry, mass))
    return scale * sum(fermi_dirac_integral(mpf(free) / 2 - 1, eta) for eta in filled if eta > -80)


@pytest.mark.parametrize(
    ("body", "stated"), [(body, stated) for path, body, stated in EXAMPLES if path == "/v1/fermi-level"]
)
def test_a_chemical_potential_of_the_readme_is_right(body: Any, stated: Any) -> None:
    geometry, density = body["geometry"], size(body["carrier_density"])
    if geometry["kind"] == "film" and body["carrier_density"]["unit"] == "cm^-3":
        density *= size(geometry["thickness"])
    mass = mpf(str(body.get("band", {}).get("effective_mass", 1))) * ELECTRON_MASS
    temperatures, potentials = body["temperature"]["value"], stated["chemical_potential"]["value"]
    if not isinstance(temperatures, list):
        temperatures, potentials = [temperatures], [potentials]
    for temperature, potential in zip(temperatures, potentials, strict=True):
        spacing = max(mpf(potential), BOLTZMANN * temperature / CHARGE) * AGREEMENT

        def missing(shift: Any, temperature: Any = temperature, potential: Any = potential, step: Any = spacing) -> Any:
            return carriers(geometry, mass, temperature, (potential + shift * step) * CHARGE) - density

        # The density crosses the stated one within one part in 1e12 of the potential.
        assert missing(-1) < 0 < missing(1)
