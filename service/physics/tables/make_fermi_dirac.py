"""Make the tables of the Fermi-Dirac integrals and of their inverses, to more digits than a double holds.

Run by hand, never by the service::

    python -m service.physics.tables.make_fermi_dirac

It needs python-flint and mpmath, whose ball arithmetic gives each value with a proved bound, and writes
``fermi_dirac.npz`` beside itself. A test holds the file against the checksum in the package, which this script prints.
"""

import hashlib
import math
from pathlib import Path
from typing import Any

import numpy as np
from flint import acb, arb, ctx
from mpmath import mp, mpf

FOLDER = Path(__file__).parent
HALF_ORDERS = (-3, -1, 1, 2, 3, 4, 5)
"""Twice the orders whose integrals are tabulated; 0 and below have closed forms where they are whole."""

LOW, HIGH, CELLS_PER_UNIT, DEGREE = -40, 40, 32, 6
"""The integrals: one polynomial in (eta - centre of the cell) for each of 32 cells a unit of eta."""

CELLS_PER_OCTAVE = 64
OCTAVES = {-1: (-30, 3), 1: (-30, 8)}
"""The inverses: 64 cells an octave of the value, by its exponent, from 2^-30 up to where the series take over."""

SERIES_TERMS = 13
INVERSE_TERMS = 8


def integral(order: Any, eta: Any) -> Any:
    """Return F_j(eta) = -Li_(j+1)(-exp(eta)), DLMF 25.12.16."""
    return -(acb(-(arb(eta).exp())).polylog(acb(order + 1))).real


def nodes(half_width: float) -> list[Any]:
    """Return the Chebyshev points of a cell, as exact multiples that balls can hold."""
    count = DEGREE + 1
    return [arb(half_width) * ((2 * arb(k) + 1) * arb.pi() / (2 * count)).cos() for k in range(count)]


def interpolation(points: list[Any]) -> Any:
    """Return the matrix from values at the points to the coefficients of the polynomial through them."""
    from flint import arb_mat

    return arb_mat([[point**power for power in range(len(points))] for point in points]).inv()


def coefficients(matrix: Any, values: list[Any]) -> list[float]:
    """Return the polynomial's coefficients, lowest power first, each the nearest double."""
    from flint import arb_mat

    column = matrix * arb_mat([[value] for value in values])
    return [float(column[row, 0].mid()) for row in range(len(values))]


def integral_table(half_order: int) -> np.ndarray:
    """Return the polynomials of one order, shape (DEGREE + 1, cells), highest power first."""
    width = 1.0 / CELLS_PER_UNIT
    points = nodes(width / 2)
    matrix = interpolation(points)
    order = arb(half_order) / 2
    rows = []
    for cell in range((HIGH - LOW) * CELLS_PER_UNIT):
        centre = LOW + (cell + 0.5) * width
        rows.append(coefficients(matrix, [integral(order, arb(centre) + point) for point in points]))
    return np.array(rows).T[::-1].copy()


def eta_of(half_order: int, value: Any, guess: Any) -> Any:
    """Return the inverse by Newton steps in balls' midpoints, to all digits of the precision in force."""
    order = arb(half_order) / 2
    eta = guess
    for _ in range(60):
        step = ((integral(order, eta) - value) / integral(order - 1, eta)).mid()
        eta = (eta - step).mid()
        if abs(float(step)) < 1e-40 * max(1.0, abs(float(eta))):
            break
    return eta


def inverse_table(half_order: int) -> np.ndarray:
    """Return the polynomials in the significand, shape (DEGREE + 1, cells), highest power first."""
    first, last = OCTAVES[half_order]
    points = nodes(0.5 / CELLS_PER_OCTAVE)
    matrix = interpolation(points)
    rows = []
    guess = arb(first * math.log(2.0))
    for octave in range(first, last):
        for cell in range(CELLS_PER_OCTAVE):
            centre = 1.0 + (cell + 0.5) / CELLS_PER_OCTAVE
            values = [(arb(centre) + point) * arb(2) ** octave for point in points]
            etas = []
            for value in values:
                guess = eta_of(half_order, value, guess)
                etas.append(guess)
            rows.append(coefficients(matrix, etas))
    return np.array(rows).T[::-1].copy()


def sommerfeld(half_order: int) -> list[Any]:
    """Return s_k of F_j = eta^(j+1)/Gamma(j+2) (1 + sum s_k eta^(-2k)): A. Sommerfeld, Z. Phys. 47, 1 (1928)."""
    order = mpf(half_order) / 2
    terms = []
    for k in range(1, SERIES_TERMS + 1):
        falling = mpf(1)
        for m in range(2 * k):
            falling *= order + 1 - m
        terms.append(2 * (1 - mpf(2) ** (1 - 2 * k)) * mp.zeta(2 * k) * falling)
    return terms


def power(series: list[Any], exponent: Any) -> list[Any]:
    """Return a power of a series that begins with one, to the same length (J. C. P. Miller's recurrence)."""
    result = [mpf(1)]
    for n in range(1, len(series)):
        total = sum((exponent * k - (n - k)) * series[k] * result[n - k] for k in range(1, n + 1))
        result.append(total / n)
    return result


def inverse_series(half_order: int) -> list[Any]:
    """Return r_k of eta = x (1 + sum r_k x^(-2k)), x = (Gamma(j+2) F_j)^(1/(j+1)), by reversion of Sommerfeld's."""
    order = mpf(half_order) / 2
    terms = sommerfeld(half_order)
    length = INVERSE_TERMS + 1
    root = [mpf(1)] + [mpf(0)] * (length - 1)
    for _ in range(length):
        inner = [mpf(1)] + [mpf(0)] * (length - 1)
        for k in range(1, length):
            shifted = power(root, -2 * k)
            for n in range(k, length):
                inner[n] += terms[k - 1] * shifted[n - k]
        root = power(inner, -1 / (order + 1))
    return root[1:]


def main() -> None:
    """Write the tables and print the checksum."""
    ctx.prec = 200
    mp.dps = 60
    tables: dict[str, np.ndarray] = {}
    for half_order in HALF_ORDERS:
        tables[f"integral_{half_order}"] = integral_table(half_order)
        tables[f"series_{half_order}"] = np.array([float(term) for term in sommerfeld(half_order)])
        print(f"order {half_order}/2 done", flush=True)
    for half_order in OCTAVES:
        tables[f"inverse_{half_order}"] = inverse_table(half_order)
        tables[f"inverse_series_{half_order}"] = np.array([float(term) for term in inverse_series(half_order)])
        print(f"inverse of order {half_order}/2 done", flush=True)
    np.savez(FOLDER / "fermi_dirac.npz", **tables)
    digest = hashlib.sha256()
    for name in sorted(tables):
        digest.update(name.encode() + np.ascontiguousarray(tables[name]).tobytes())
    print(digest.hexdigest())


if __name__ == "__main__":
    main()
