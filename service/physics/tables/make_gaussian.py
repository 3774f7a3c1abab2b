"""Make the tables of power laws smeared by a Gaussian, to more digits than a double holds.

Run by hand, never by the service::

    python -m service.physics.tables.make_gaussian

It needs python-flint, whose ball arithmetic gives each value with a proved bound, and writes ``gaussian.npz`` beside
itself. A test holds the file against the checksum in the package, which this script prints.
"""

import hashlib
from pathlib import Path
from typing import Any

import numpy as np
from flint import acb, arb, ctx

from service.physics.tables.make_fermi_dirac import coefficients, interpolation, nodes

FOLDER = Path(__file__).parent
DOUBLE_POWERS = (1, 2, 3, 4, 5)
"""Twice nu, in the smeared power law t^(nu - 1) / Gamma(nu)."""

REACH, CELLS_PER_UNIT = 10, 32
"""Cells from -10 to 10; beyond, the asymptotic series are exact to the last digit."""


def above(power: Any, x: Any) -> Any:
    """Return the smeared power law at x >= 0, as the sum of two positive Kummer functions (DLMF 12.4, 12.7.12)."""
    square = acb(x * x / 2)
    even = acb(square).hypgeom_1f1(acb(power / 2), acb(0.5)) / acb((1 + power) / 2).gamma()
    odd = acb(square).hypgeom_1f1(acb((1 + power) / 2), acb(1.5)) / acb(power / 2).gamma()
    shape = acb.pi().sqrt() * (even + acb(2).sqrt() * acb(x) * odd)
    return (acb(2) ** (-acb(power) / 2) * shape * (-square).exp() / (2 * acb.pi()).sqrt()).real


def below(power: Any, depth: Any) -> Any:
    """Return the smeared power law at x = -depth over the Gaussian's own height there (DLMF 12.7.14)."""
    return (acb(2) ** (-acb(power) / 2) * acb(depth * depth / 2).hypgeom_u(acb(power / 2), acb(0.5))).real


def main() -> None:
    """Write the tables and print the checksum."""
    ctx.prec = 200
    width = 1.0 / CELLS_PER_UNIT
    points = nodes(width / 2)
    matrix = interpolation(points)
    tables = {}
    for double_power in DOUBLE_POWERS:
        power = arb(double_power) / 2
        for name, function in (("above", above), ("below", below)):
            rows = []
            for cell in range(REACH * CELLS_PER_UNIT):
                centre = arb((cell + 0.5) * width)
                rows.append(coefficients(matrix, [function(power, centre + point) for point in points]))
            tables[f"{name}_{double_power}"] = np.array(rows).T[::-1].copy()
    np.savez(FOLDER / "gaussian.npz", **tables)
    digest = hashlib.sha256()
    for name in sorted(tables):
        digest.update(name.encode() + np.ascontiguousarray(tables[name]).tobytes())
    print(digest.hexdigest())


if __name__ == "__main__":
    main()
