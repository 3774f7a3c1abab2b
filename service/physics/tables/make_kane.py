"""Make the tables of the density in a non-parabolic band and of its inverse, to more digits than a double holds.

Run by hand, never by the service, in less than a minute::

    python -m service.physics.tables.make_kane

The trapezoidal rule of an even, entire integrand but for the poles of the occupation, in long doubles of 64 bits or
more: NumPy has them on Linux and macOS on x86-64, and this script refuses less. It writes ``kane.npz`` beside itself. A
test holds the file against the checksum in the package, which this script prints.
"""

import hashlib
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from service.physics.fermi_dirac import fermi_dirac_integral
from service.physics.kane import layout
from service.physics.kane.inverse import iterated
from service.physics.kane.limits import BOTTOM_SCALE

FOLDER = Path(__file__).parent
POINTS = (14, 14)
"""Chebyshev points a cell along each variable: more than the highest powers that are kept."""

Long = np.longdouble
LongArray = NDArray[np.longdouble]
PI = 4 * np.arctan(Long(1))
GAMMA = Long(3) / 4 * np.sqrt(PI)


def abscissae(beta: LongArray, highest_eta: float) -> tuple[LongArray, LongArray]:
    """Return energies and weights, a row a beta, such that the sum of weights times occupations is the density.

    In the angle sqrt(beta t) = sinh(sqrt(beta) y) the only singularities are the poles of the occupation; the nearest,
    at t = eta + i pi, sets the step so that what the rule leaves out is below exp(-52). Below eta = 0 the pole recedes,
    but exp(-t) grows towards it.
    """
    scale = np.sqrt(beta)[:, None]
    highest_eta = max(highest_eta, 0.0)
    pole = np.sqrt(complex(highest_eta, np.pi))
    step = [2 * np.pi / 52 * float((np.arcsinh(float(s) * pole) / float(s)).imag) for s in scale[:, 0]]
    reach = np.arcsinh(scale[:, 0] * np.sqrt(Long(highest_eta + 60.0))) / scale[:, 0]
    count = int(max(reach / step)) + 1
    angle = np.arange(1, count + 1, dtype=Long) * np.array(step, dtype=Long)[:, None]
    exponential = np.exp(scale * angle)
    sine, cosine = (exponential - 1 / exponential) / 2, (exponential + 1 / exponential) / 2
    small = scale * angle < 0.25  # where the difference of exponentials would lose digits
    sine[small] = np.sinh((scale * angle)[small])
    root = sine / scale
    weight = (2 * root * cosine) ** 2 * (2 * cosine * cosine - 1) / np.sqrt(PI) * np.array(step, dtype=Long)[:, None]
    return root * root, weight


def density_and_slope(eta: LongArray, energy: LongArray, weight: LongArray) -> tuple[LongArray, LongArray]:
    """Return densities and derivatives by eta, shape that of eta, the abscissae along one more axis."""
    beyond = energy - eta[..., None]
    decay = np.exp(-np.abs(beyond))
    filled = np.where(beyond > 0, decay, 1) / (1 + decay)
    return (weight * filled).sum(axis=-1), (weight * decay / (1 + decay) ** 2).sum(axis=-1)


def points(count: int) -> tuple[LongArray, LongArray]:
    """Return the Chebyshev points in (-1, 1), and the matrix from values there to a polynomial's coefficients."""
    angle = (2 * np.arange(count, dtype=Long) + 1) * PI / (2 * count)
    to_chebyshev = np.array([np.cos(k * angle) for k in range(count)]) * 2 / count
    to_chebyshev[0] /= 2
    return np.cos(angle), to_chebyshev


def chebyshev(count: int) -> LongArray:
    """Return the coefficients of the Chebyshev polynomials, one a row, lowest power first."""
    rows = np.zeros((count, count), dtype=Long)
    rows[0, 0] = rows[1, 1] = 1
    for k in range(2, count):
        rows[k, 1:] = 2 * rows[k - 1, :-1]
        rows[k] -= rows[k - 2]
    return rows


def coefficients(values: LongArray, terms: tuple[int, ...]) -> list[float]:
    """Return a cell's coefficients in the order of the table, from the values at its points.

    What is left out is left out of the Chebyshev series, where it is smallest, before the powers are made.
    """
    (_, along), (_, across) = points(POINTS[0]), points(POINTS[1])
    series = along @ values @ across.T
    for power in range(POINTS[0]):
        kept = terms[len(terms) - 1 - power] if power < len(terms) else 0
        series[power, kept:] = 0
    powers = chebyshev(POINTS[0]).T @ series @ chebyshev(POINTS[1])
    return [
        float(powers[len(terms) - 1 - row, count - 1 - column])
        for row, count in enumerate(terms)
        for column in range(count)
    ]


def beta_of(strength: LongArray, scale: LongArray) -> LongArray:
    """Return the beta of a place along the second variable, in cells."""
    share = strength / layout.STRENGTH_CELLS
    beta: LongArray = share / (scale + 1 / Long(layout.HIGHEST_BETA) - share * scale)
    return beta


def density_tables() -> tuple[np.ndarray, np.ndarray]:
    """Return the polynomials of the density and the scale of beta by cell of eta."""
    centres = layout.DENSITY_LOW + (np.arange(layout.DENSITY_CELLS) + 0.5) / layout.CELLS_PER_UNIT
    scales = 2.5 * fermi_dirac_integral(1.5, centres) / fermi_dirac_integral(0.5, centres)
    (x, _), (z, _) = points(POINTS[0]), points(POINTS[1])
    columns = []
    for centre, scale in zip(centres, scales, strict=True):
        eta = centre + x / (2 * layout.CELLS_PER_UNIT)
        for part in range(layout.STRENGTH_CELLS):
            beta = beta_of(part + (z + 1) / 2, Long(scale))
            energy, weight = abscissae(beta, float(eta.max()))
            density = density_and_slope(np.tile(eta[:, None], beta.size), energy, weight)[0]
            columns.append(coefficients(density / (1 + beta * Long(scale)) ** Long(1.5), layout.DENSITY_TERMS))
    return np.array(columns).T.copy(), scales


def sample_of(logarithm: LongArray, strength: LongArray) -> tuple[LongArray, LongArray]:
    """Return value and beta of a place, by iteration of the formulas of `parabolic_equivalent`."""
    equal = np.exp(logarithm)
    scale = BOTTOM_SCALE + np.cbrt(equal) ** 2
    for _ in range(200):
        beta = beta_of(strength, scale)
        value = equal * (1 + beta * scale) ** Long(1.5)
        square = np.cbrt(GAMMA * value) ** 2
        filled = 2 * square / (1 + np.sqrt(1 + 4 * beta * square))
        before, scale = scale, filled + BOTTOM_SCALE**2 / (filled + Long(BOTTOM_SCALE))
        if (np.abs(scale - before) <= 2e-18 * scale).all():
            break
    else:
        raise ArithmeticError("the place of a value did not settle")
    return value, beta


def inverse_table() -> np.ndarray:
    """Return the polynomials of the inverse: in doubles first, and one Newton step in long doubles."""
    (x, _), (z, _) = points(POINTS[0]), points(POINTS[1])
    x, z = np.repeat(x, z.size), np.tile(z, x.size)
    columns = []
    for cell in range(layout.INVERSE_CELLS):
        centre = layout.INVERSE_LOW + (cell + 0.5) / layout.CELLS_PER_UNIT
        logarithm = Long(centre) + x / (2 * layout.CELLS_PER_UNIT)
        for part in range(layout.STRENGTH_CELLS):
            value, beta = sample_of(logarithm, part + (z + 1) / 2)
            first = iterated(*(each.astype(np.float64) for each in (value, beta, np.exp(logarithm))))
            energy, weight = abscissae(beta, float(first.max()))
            eta = first.astype(Long)
            found, slope = density_and_slope(eta, energy, weight)
            eta += (value - found) / slope
            columns.append(coefficients(eta.reshape(POINTS), layout.INVERSE_TERMS))
    return np.array(columns).T.copy()


def main() -> None:
    """Write the tables and print the checksum."""
    if np.finfo(np.longdouble).nmant < 63:
        raise SystemExit("this machine's long double is too short")
    tables: dict[str, np.ndarray] = {}
    tables["density"], tables["density_scale"] = density_tables()
    print("density done", flush=True)
    tables["inverse"] = inverse_table()
    np.savez(FOLDER / "kane.npz", **tables)
    digest = hashlib.sha256()
    for name in sorted(tables):
        digest.update(name.encode() + np.ascontiguousarray(tables[name]).tobytes())
    print(digest.hexdigest())


if __name__ == "__main__":
    main()
