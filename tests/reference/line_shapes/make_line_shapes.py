"""Make ``line_shapes.csv``: levels of no to three dimensions spread by each line shape, by mpmath from the definitions.

Run by hand, never by a test, in under a minute: ``python tests/reference/line_shapes/make_line_shapes.py``. Each
convolution is a quadrature of its own integral, and no row is written that a second calculation does not confirm to 18
digits: parabolic cylinder functions, polylogarithms, and for a Lorentzian the slope of the integral's closed form.
"""

import csv
import random
from datetime import UTC, datetime
from pathlib import Path

import mpmath
from mpmath import mpf

DIGITS = 30
PRINTED = 20
AGREEMENT = mpf(10) ** -18
SEED = 20240607
FIELDS = ("dimensions", "kind", "x", "start", "density", "integral")


def bell(t):
    return mpmath.exp(-t * t / 2) / mpmath.sqrt(2 * mpmath.pi)


def fall(t):
    decay = mpmath.exp(-abs(t))
    return decay / (1 + decay) ** 2


def resonance(t):
    return 1 / (mpmath.pi * (1 + t * t))


def above_edge(shape, x, reach):
    """Return energies between which the shape, met by the states above the edge, is smooth."""
    if x >= 0:
        marks = {x + reach * mpf(k) / 12 for k in range(-12, 13)} | {mpf(1) / 4, mpf(1)}
        return [mpf(0), *sorted(mark for mark in marks if 0 < mark <= x + reach)]
    scale = 1 / (1 - x) if shape is bell else mpf(1)
    return [mpf(0), *(scale * k for k in (1, 4, 12, 30, 60, 100))]


def smeared(power, shape, x, reach):
    """Return t^(power-1) / Gamma(power) convolved with a shape of short reach."""
    if power == 0:
        return shape(x)
    # A quadrature's tolerance is absolute: in the tail the shape's own height is divided out first.
    height = shape(x) if x < 0 else mpf(1)
    # The square root of t as the variable takes the edge's divergence away.
    roots = [mpmath.sqrt(mark) for mark in above_edge(shape, x, reach)]
    total = mpmath.quad(lambda root: 2 * root ** (2 * power - 1) * shape(x - root * root) / height, roots)
    return total * height / mpmath.gamma(power)


def bell_in_closed_form(power, x):
    """NIST DLMF 12.5.1; the exponentials of x^2 cancel, so it needs the digits of x^2 as well."""
    with mpmath.workdps(DIGITS + 20):
        return mpmath.exp(-x * x / 4) * mpmath.pcfd(-power, -x) / mpmath.sqrt(2 * mpmath.pi)


def fall_in_closed_form(power, x):
    """NIST DLMF 25.12.16; the polylogarithm forms 1 + exp(x), so it needs the digits of the tail."""
    with mpmath.workdps(DIGITS + max(0, int(-x))):
        return -mpmath.polylog(power - 1, -mpmath.exp(x)).real


def resonance_density(dimensions, x):
    """Return a level's density under a Lorentzian, by quadrature."""
    if dimensions == 0:
        return resonance(x)
    middle = mpmath.sqrt(abs(x))
    # The height far below the edge, for the same reason as above.
    height = 1 / (1 + abs(x)) if x < 0 else mpf(1)
    marks = {mpmath.sqrt(x + offset) for offset in (-64, -8, -1, 0, 1, 8, 64) if x + offset > 0}
    roots = sorted({mpf(0), mpf(1), middle / 2 + 1, *marks, 2 * middle + 20, 10 * middle + 200})
    total = mpmath.quad(
        lambda root: 2 * root ** (dimensions - 1) * resonance(x - root * root) / height, [*roots, mpmath.inf]
    )
    return total * height / mpmath.gamma(mpf(dimensions) / 2)


def resonance_integral(dimensions, x):
    """Return the antiderivative of the density under a Lorentzian; for no dimension the one from below."""
    z = mpmath.mpc(x, 1)
    angle = mpmath.atan2(1, -x) / mpmath.pi
    if dimensions == 0:
        return angle
    if dimensions == 2:
        return x * angle - mpmath.log(abs(z)) / mpmath.pi
    power = mpf(dimensions) / 2
    return mpmath.re(z**power) / mpmath.gamma(power + 1)


def confirmed(first, second, where):
    if abs(first - second) > AGREEMENT * abs(second):
        raise ArithmeticError(f"{where}: {first} and {second} disagree")
    return first


def short_row(dimensions, kind, x):
    shape, closed, reach = {
        "gaussian": (bell, bell_in_closed_form, mpf(13)),
        "thermal": (fall, fall_in_closed_form, mpf(75)),
    }[kind]
    power = mpf(dimensions) / 2
    values = []
    for part in (power, power + 1):
        second = shape(mpf(x)) if part == 0 else closed(part, mpf(x))
        values.append(confirmed(smeared(part, shape, mpf(x), reach), second, (dimensions, kind, x)))
    return dimensions, kind, x, 0.0, *values


def resonance_row(dimensions, x, start):
    density = resonance_density(dimensions, mpf(x))
    with mpmath.workdps(80):
        below = mpf(0) if dimensions == 0 else resonance_integral(dimensions, mpf(start))
        integral = resonance_integral(dimensions, mpf(x)) - below
        slope = mpmath.diff(lambda y: resonance_integral(dimensions, y), mpf(x))
    return dimensions, "lorentzian", x, start, confirmed(density, slope, (dimensions, x)), integral


def table(draw):
    starts = (0.0, -5.0, -1e3, 1e3, -1e8)
    for dimensions in range(4):
        points = [draw.uniform(-37, 37) for _ in range(14)] + [sign * draw.uniform(9.6, 10.4) for sign in (-1, 1)]
        for x in (*points, 10.0, -10.0, 0.0, draw.uniform(-1, 1), *(10 ** draw.uniform(2, 8) for _ in range(3))):
            yield short_row(dimensions, "gaussian", x)
        for x in (draw.uniform(-300, -40), *(draw.uniform(-40, 60) for _ in range(5))):
            yield short_row(dimensions, "thermal", x)
        for start in starts:
            far = [draw.uniform(-50, 50), 10 ** draw.uniform(2, 8), -(10 ** draw.uniform(2, 8))]
            for x in (*far, start + 1e-6, start - 1e-3, start + 0.3, start - 2.0):
                yield resonance_row(dimensions, x, start)


def main():
    mpmath.mp.dps = DIGITS
    rows = list(table(random.Random(SEED)))
    with Path(__file__).with_name("line_shapes.csv").open("w", newline="", encoding="utf-8") as file:
        file.write(f"# made by make_line_shapes.py, mpmath {mpmath.__version__}, {DIGITS} digits, seed {SEED}, ")
        file.write(f"{datetime.now(UTC):%Y-%m-%d}; no physical constants: energies over the width\n")
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(FIELDS)
        for dimensions, kind, x, start, *values in rows:
            printed = (mpmath.nstr(value, PRINTED, min_fixed=1, max_fixed=0) for value in values)
            writer.writerow((dimensions, kind, repr(x), repr(start), *printed))


if __name__ == "__main__":
    main()
