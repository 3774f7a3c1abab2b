"""Samples for tests, in SI: one call states what a test is about and leaves the rest as the contract's defaults."""

from typing import Any

import numpy as np

from service.calculators.sample import Sample

LENGTHS: dict[str, dict[str, float]] = {
    "bulk": {},
    "sheet": {},
    "line": {},
    "film": {"thickness": 12e-9},
    "wire": {"width": 11e-9, "height": 9e-9},
    "cylinder": {"diameter": 10e-9},
    "box": {"length": 9e-9, "width": 8e-9, "height": 7e-9},
    "sphere": {"diameter": 8e-9},
}
DENSITIES = {"sheet": (4e16, "area"), "line": (3e8, "length")}
KINDS = tuple(LENGTHS)
WITH_CURVE = tuple(kind for kind in KINDS if kind not in ("box", "sphere"))


def sample(kind: str, **stated: Any) -> Sample:
    """Return one sample of a kind: 2e25 m^-3 (or a usual sheet or line density) at 300 K, mass 0.2, unless stated."""
    density, measure = DENSITIES.get(kind, (2e25, "volume"))
    mass = stated.pop("mass", 0.2)
    fields: dict[str, Any] = {
        "kind": kind,
        "confinement": "hard-wall",
        "carrier_density": density,
        "density_measure": measure,
        "lengths": LENGTHS[kind],
        "temperature": 300.0,
        "effective_mass": mass if isinstance(mass, tuple) else (mass, mass, mass),
        "valleys": 1.0,
        "spin_degeneracy": 2.0,
        "relative_permittivity": 10.0,
        "count": None,
    }
    return Sample(**{**fields, **stated})


def batch(samples: list[Sample]) -> Sample:
    """Return samples of one kind as one batch of arrays."""
    first = samples[0]

    def column(name: str) -> Any:
        return np.array([getattr(one, name) for one in samples])

    masses = np.array([one.effective_mass for one in samples])
    return Sample(
        kind=first.kind,
        confinement=first.confinement,
        carrier_density=column("carrier_density"),
        density_measure=first.density_measure,
        lengths={name: np.array([one.lengths[name] for one in samples]) for name in first.lengths},
        temperature=column("temperature"),
        effective_mass=(masses[:, 0].copy(), masses[:, 1].copy(), masses[:, 2].copy()),
        valleys=column("valleys"),
        spin_degeneracy=column("spin_degeneracy"),
        relative_permittivity=column("relative_permittivity"),
        count=len(samples),
    )
