"""Make densities.csv: carriers of a non-parabolic band by mpmath's quadrature of the definition, to 30 digits.

Run by hand, ``python tests/reference/kane/make_densities.py``, in about a minute. The tables that ship come from the
trapezoidal rule in long doubles, in another variable: neither the method nor the arithmetic is the same.
"""

from datetime import UTC, datetime
from pathlib import Path

import mpmath
from mpmath import mp, mpf

DIGITS = 30
BETAS = (0.0, 1e-9, 3e-4, 0.026, 0.11, 0.3, 1.0, 2.999, 3.0, 7.5, 100.0)
ETAS = (-700.0, -60.0, -20.5, -20.0, -19.9, -9.1, -3.0, 0.0, 0.24, 2.6, 7.7, 19.2, 33.3, 39.9, 40.0, 75.0, 1e3, 1e6)
TAILS = ((-300.0, 0.0), (-3.0, 2.0), (4.0, 4.0), (30.0, 31.5), (30.0, 12.0), (300.0, 1.0), (300.0, 340.0))
REACH = 100
"""How far from the step every state is filled, or empty, to within exp(-100): beneath the digits written."""

PANELS = (-100, -60, -30, -12, -5, -2, 0, 2, 5, 12, 30, 60, 100)


def gamma(energy: mpf, beta: mpf) -> mpf:
    """Return the dispersion's left side."""
    return energy * (1 + beta * energy)


def density(eta: mpf, beta: mpf, start: mpf, slope: bool) -> mpf:
    """Return the density from an energy up, or its derivative by eta, in the root of the energy."""
    low = max(eta - REACH, start)
    bends = [low + factor / beta for factor in (mpf("0.1"), 1, 5)] if beta > mpf("1e-3") else []
    ends = sorted(
        end
        for end in {low, *(eta + p for p in PANELS), *(low + p for p in (1, 5, 30, 100)), *bends}
        if low <= end <= max(eta, low) + 100
    )
    scale = mpmath.exp(max(low - eta, 0))  # mpmath's tolerance is absolute

    def integrand(root: mpf) -> mpf:
        energy = root * root
        states = 2 * energy * mpmath.sqrt(1 + beta * energy) * (1 + 2 * beta * energy)
        occupied = 1 / (1 + mpmath.exp(energy - eta))
        return scale * states * (occupied * (1 - occupied) if slope else occupied)

    part = mpmath.quad(integrand, [mpmath.sqrt(end) for end in ends]) / scale
    if not slope:
        part += (gamma(low, beta) ** 1.5 - gamma(start, beta) ** 1.5) * 2 / 3
    return part * 2 / mpmath.sqrt(mpmath.pi)


def main() -> None:
    """Write the table beside this script."""
    mp.dps = DIGITS + 10
    lines = [
        f"# generator: {Path(__file__).name}, mpmath {mpmath.__version__}, quadrature of the definition",
        f"# digits: {DIGITS}; date: {datetime.now(UTC):%Y-%m-%d}; constants: none, all quantities are pure numbers",
        "# eta, beta and start are the doubles that read back from their text",
        "eta,beta,start,density,derivative",
    ]
    places = [(eta, 0.0) for eta in ETAS] + list(TAILS)
    for beta in BETAS:
        for eta, start in places:
            found = [density(mpf(eta), mpf(beta), mpf(start), slope) for slope in (False, True)]
            lines.append(f"{eta!r},{beta!r},{start!r}," + ",".join(mpmath.nstr(value, DIGITS) for value in found))
    Path(__file__).with_name("densities.csv").write_text("\n".join(lines) + "\n", encoding="ascii")


if __name__ == "__main__":
    main()
