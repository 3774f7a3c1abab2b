"""Make the tables of the zeros of Bessel and spherical Bessel functions up to 1000, to the last digit of a double.

Run by hand, never by the service::

    python -m service.physics.tables.make_bessel_zeros

Newton steps on the forward recurrence in 80-bit arithmetic, whose error of about 1e-19 leaves one zero in a thousand
to be rounded to the second nearest double. The recurrence starts from Hankel's series, below 30 from python-flint's
balls, which also judge a sample of the results. Writes ``bessel_zeros.npz`` beside itself: for each family the zeros,
order by order and ascending within an order, and how many each order has; and what gives the zeros beyond, the terms of
the phase and of the first zeros of large orders. It prints the checksum that the package
keeps and a test compares.
"""

import hashlib
from fractions import Fraction
from itertools import pairwise
from pathlib import Path

import numpy as np
from flint import arb, ctx
from mpmath import mp, mpf

FOLDER = Path(__file__).parent
END = 1000.0
"""Every zero below it is tabulated."""

PHASE_ORDERS = 6
"""Odd orders of the phase's series in 1/nu: 1, 3, ... 11."""

FIRST_ZEROS = 7
"""The zeros of a large order that lie too near its turning point for the phase's series."""

EXTENDED = np.longdouble
HANKEL_FROM = 30.0
"""Above, Hankel's series is exact to 80 bits: its smallest term is exp(-2 x)."""


def from_balls(order: int, x: np.ndarray) -> np.ndarray:
    """Return J_order in extended precision, from balls, as the sum of two doubles."""
    values = []
    for point in x:
        high, low = float(point), float(point - EXTENDED(float(point)))
        ball = (arb(high) + arb(low)).bessel_j(arb(order))
        first = float(ball.mid())
        values.append(EXTENDED(first) + EXTENDED(float((ball - first).mid())))
    return np.array(values, dtype=EXTENDED)


def hankel(order: int, x: np.ndarray) -> np.ndarray:
    """Return J_order for large x by DLMF 10.17.3, without the common factor sqrt(2 / pi x)."""
    angle = x - (2 * order + 1) * np.arctan(EXTENDED(1))
    term, even, odd = np.ones_like(x), np.ones_like(x), np.zeros_like(x)
    for k in range(1, 61):
        term = term * (4 * order**2 - (2 * k - 1) ** 2) / (8 * k * x)
        if k % 2:
            odd += term if k % 4 == 1 else -term
        else:
            even += term if k % 4 == 0 else -term
    return np.cos(angle) * even - np.sin(angle) * odd


def first_two(family: str, x: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the functions of the orders 0 and 1, but for a common factor."""
    if family == "sphere":
        return np.sin(x), np.sin(x) / x - np.cos(x)
    far = x > HANKEL_FROM
    values = []
    for order in (0, 1):
        value = np.empty_like(x)
        value[far] = hankel(order, x[far])
        factor = np.sqrt(2 * np.arctan(EXTENDED(1)) * x[~far])
        value[~far] = from_balls(order, x[~far]) * factor
        values.append(value)
    return values[0], values[1]


def newton_step(family: str, order: int, x: np.ndarray) -> np.ndarray:
    """Return f / f' of the order's function, by the forward recurrence, stable below the turning point."""
    spherical = family == "sphere"
    lower, upper = first_two(family, x)
    for k in range(1, order + 1):
        lower, upper = upper, (2 * k + spherical) / x * upper - lower
    return lower / (order / x * lower - upper)


def guesses(nu: float, end: float) -> np.ndarray:
    """Return the order's zeros below the end by the quantised phase, good to a hundredth of their spacing."""
    turning = np.sqrt(end**2 - nu**2) - nu * np.arccos(nu / end) if end > nu else 0.0
    count = int(turning / np.pi + 0.25) + 1
    phase = (np.arange(1, count + 1) - 0.25) * np.pi
    # A start above each root: the phase is convex, so Newton steps come down to it without leaving x > nu.
    x = nu + phase + np.cbrt(9 * phase**2 * max(nu, 1e-9) / 8)
    for _ in range(60):
        root = np.sqrt(x**2 - nu**2)
        x = np.maximum(x - (root - nu * np.arccos(nu / x) - phase) * x / root, nu * (1 + 1e-9))
    return x


def zeros(family: str) -> tuple[np.ndarray, np.ndarray]:
    """Return one family's zeros below the end, order by order, and how many each order has."""
    found, counts = [], []
    order = 0
    while True:
        x = guesses(order + 0.5 * (family == "sphere"), END + 1.0).astype(EXTENDED)
        for _ in range(8):
            step = newton_step(family, order, x)
            x = x - step
            if np.max(np.abs(step) / x) < 1e-18:
                break
        nearest = x.astype(np.float64)
        nearest = nearest[nearest < END]
        if not nearest.size:
            return np.concatenate(found), np.array(counts, dtype=np.int64)
        found.append(nearest)
        counts.append(nearest.size)
        order += 1


def check(family: str, table: np.ndarray, counts: np.ndarray) -> float:
    """Return the largest relative error of a sample, judged by balls, after the zeros are seen to interlace."""
    rows = np.split(table, np.cumsum(counts)[:-1])
    for row, following in pairwise(rows):
        later = row[1:]
        assert later.size <= following.size <= row.size, "a zero is missing"
        assert np.all(row[: following.size] < following), "a zero is missing"
        assert np.all(following[: later.size] < later), "a zero is missing"
    worst = 0.0
    generator = np.random.default_rng(1)
    for order in generator.integers(0, counts.size, 300):
        x = float(generator.choice(rows[order]))
        nu = arb(int(order)) + (arb(0.5) if family == "sphere" else 0)
        value = arb(x).bessel_j(nu)
        slope = nu / x * value - arb(x).bessel_j(nu + 1)
        worst = max(worst, abs(float((value / slope).mid())) / x)
        assert float((value / slope).rad()) < 1e-20, "the balls are too wide to judge"
    return worst


def phase_series() -> list[list[float]]:
    """Return the terms of the phase of J_nu beyond the turning point, from the Debye polynomials (DLMF 10.19.8)."""

    def product(first: list[Fraction], second: list[Fraction]) -> list[Fraction]:
        result = [Fraction(0)] * (len(first) + len(second) - 1)
        for i, a in enumerate(first):
            for j, b in enumerate(second):
                result[i + j] += a * b
        return result

    def total(*parts: list[Fraction]) -> list[Fraction]:
        length = max(map(len, parts))
        return [sum((part[i] for part in parts if i < len(part)), Fraction(0)) for i in range(length)]

    zero = Fraction(0)
    polynomials: list[list[Fraction]] = [[Fraction(1)]]
    while len(polynomials) < 2 * PHASE_ORDERS:
        last = polynomials[-1]
        slope = [k * c for k, c in enumerate(last)][1:] or [zero]
        inner = product([Fraction(1, 8), zero, Fraction(-5, 8)], last)
        integral = [zero, *(c / (k + 1) for k, c in enumerate(inner))]
        polynomials.append(total(product([zero, zero, Fraction(1, 2), zero, Fraction(-1, 2)], slope), integral))
    logarithm: list[list[Fraction]] = [[zero]]
    for n in range(1, 2 * PHASE_ORDERS):
        cross = [[-Fraction(k, n) * c for c in product(logarithm[k], polynomials[n - k])] for k in range(1, n)]
        logarithm.append(total(polynomials[n], *cross))
    # At an imaginary argument: i^(n + 2 j) = i (-1)^((n - 1)/2 + j) for odd n.
    return [
        [float(logarithm[n][n + 2 * j] * (-1) ** ((n - 1) // 2 + j)) for j in range(n + 1)]
        for n in range(1, 2 * PHASE_ORDERS, 2)
    ]


def first_zeros() -> list[list[float]]:
    """Return the first zeros of a large order, over the order, as polynomials in its power -2/3.

    The terms up to the fifth are known (DLMF 10.21.40); the rest, at most 1e-9 beyond order 900, is fitted to zeros.
    """
    orders = np.arange(850, 3001, 86)
    found = []
    for order in orders:
        x = guesses(float(order), order + 12.0 * np.cbrt(order) + 30.0).astype(EXTENDED)[:FIRST_ZEROS]
        for _ in range(8):
            x = x - newton_step("cylinder", int(order), x)
        found.append(x / order)
    small = orders.astype(EXTENDED) ** (-EXTENDED(2) / 3)
    reach = float(small[0])
    polynomials = []
    with mp.workdps(40):
        for n, ratio in enumerate(np.array(found).T):
            a = -mp.airyaizero(n + 1) / mp.cbrt(2)
            known = [
                mpf(1),
                a,
                3 * a**2 / 10,
                mpf(1) / 70 - a**3 / 350,
                -479 * a**4 / 63000 - a / 3150,
                20231 * a**5 / 8085000 - 551 * a**2 / 161700,
            ]
            exact = [EXTENDED(float(term)) + EXTENDED(float(term - mpf(float(term)))) for term in known]
            rest = (ratio - sum(term * small**k for k, term in enumerate(exact))) / small**6
            fitted = np.polynomial.polynomial.polyfit((small / reach).astype(float), rest.astype(float), 3)
            polynomials.append([float(term) for term in known] + [c / reach**k for k, c in enumerate(fitted)])
    return polynomials


def main() -> None:
    """Write the tables and print the checksum."""
    if np.finfo(EXTENDED).nmant < 63:
        raise SystemExit("this machine has no 80-bit floating point")
    ctx.prec = 4096
    tables: dict[str, np.ndarray] = {}
    for family in ("cylinder", "sphere"):
        table, counts = zeros(family)
        print(family, table.size, "zeros,", counts.size, "orders, error", check(family, table, counts), flush=True)
        tables[f"{family}_zeros"], tables[f"{family}_counts"] = table, counts
    for n, terms in enumerate(phase_series()):
        tables[f"phase_{2 * n + 1}"] = np.array(terms)
    tables["first_zeros"] = np.array(first_zeros())
    np.savez(FOLDER / "bessel_zeros.npz", **tables)
    digest = hashlib.sha256()
    for name in sorted(tables):
        digest.update(name.encode() + np.ascontiguousarray(tables[name]).tobytes())
    print(digest.hexdigest())


if __name__ == "__main__":
    main()
