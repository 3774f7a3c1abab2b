"""Make integrals.csv: complete Fermi-Dirac integrals by mpmath's quadrature of their definition, to 36 digits.

Run by hand, ``python tests/reference/fermi_dirac/make_integrals.py``, in about a minute. The tables that ship come from
polylogarithms in ball arithmetic: neither the formula nor the library is the same.
"""

import math
from datetime import UTC, datetime
from pathlib import Path

import mpmath
from mpmath import mp, mpf

DIGITS = 36
TWICE_ORDERS = (-3, -1, 1, 2, 3, 4, 5)
ETAS = (-700.0, -600.0, -100.0, -40.1, -40.0, -39.99, -20.3, -3.7, -1.0, -1e-9, 0.0, 0.015625, 0.5, 2.2, 7.0, 19.97)
ETAS += (39.99, math.nextafter(40.0, 0.0), 40.0, 40.1, 55.0, 90.0, 3e2, 1e3, 1e5, 1e8)
REACH = 120
"""How far from the step every state is filled, or empty, to within exp(-120): beneath the digits written."""

PANELS = (-120, -60, -30, -12, -5, -2, 0, 2, 5, 12, 30, 60, 120)


def integral(twice_order: int, eta: mpf) -> mpf:
    """Return F_j(eta), in the root of t; order -3/2 as the derivative of order -1/2 by eta."""
    order = mpf(twice_order) / 2
    start = max(eta - REACH, mpf(0))
    ends = sorted({start, *(eta + panel for panel in PANELS if eta + panel > start), *(mpf(p) for p in (1, 30, 120))})
    ends = [end for end in ends if end >= start]
    scale = mpmath.exp(max(-eta, 0))  # mpmath's tolerance is absolute

    def integrand(root: mpf) -> mpf:
        occupied = 1 / (1 + mpmath.exp(root * root - eta))
        if twice_order == -3:
            return scale * 2 * occupied * (1 - occupied)
        return scale * 2 * root ** (twice_order + 1) * occupied

    part = mpmath.quad(integrand, [mpmath.sqrt(end) for end in ends]) / scale
    if twice_order == -3:
        return part / mpmath.gamma(mpf(1) / 2)
    return (part + start ** (order + 1) / (order + 1)) / mpmath.gamma(order + 1)


def main() -> None:
    """Write the table beside this script."""
    mp.dps = DIGITS + 10
    lines = [
        f"# generator: {Path(__file__).name}, mpmath {mpmath.__version__}, quadrature of the definition",
        f"# digits: {DIGITS}; date: {datetime.now(UTC):%Y-%m-%d}; constants: none, all quantities are pure numbers",
        "# eta is the double that reads back from its text",
        "order,eta,integral",
    ]
    lines += [
        f"{twice_order / 2},{eta!r},{mpmath.nstr(integral(twice_order, mpf(eta)), DIGITS)}"
        for twice_order in TWICE_ORDERS
        for eta in ETAS
    ]
    Path(__file__).with_name("integrals.csv").write_text("\n".join(lines) + "\n", encoding="ascii")


if __name__ == "__main__":
    main()
