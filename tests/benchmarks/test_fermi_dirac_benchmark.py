"""Integrals and chemical potentials against C with GSL, Newton steps on SciPy, and brentq around quad.

Run with `pytest tests/benchmarks/test_fermi_dirac_benchmark.py --benchmark-disable -s`. Each ratio is the median of
pairs timed in turn, one thread, within one run; the goals are the project's.
"""

import shutil
import subprocess
import time
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq
from scipy.special import expit

from service.physics.fermi_dirac import fermi_dirac_integral, inverse_fermi_dirac_integral
from service.physics.kane import inverse_kane_density, kane_density, kane_density_derivative

RANDOM = np.random.default_rng(20261201)
SIZE = 200_000
ROUNDS = 5

FASTER_THAN_GSL = 4.0
FASTER_THAN_NEWTON_ON_GSL = 20.0
FASTER_THAN_BRENTQ_AROUND_QUAD = 1e5
KANE_SECONDS = {0.3: 1.5e-6, 3.0: 4e-6}


def seconds(call):
    began = time.perf_counter()
    call()
    return time.perf_counter() - began


def nanoseconds(call, size, rounds=ROUNDS):
    call()
    return 1e9 * min(seconds(call) for _ in range(rounds)) / size


@pytest.fixture(scope="module")
def gsl(tmp_path_factory):
    """Compile the program beside this file, and return what runs it: nanoseconds a value, and the results."""
    compiler = shutil.which("gcc") or shutil.which("cc")
    if compiler is None:
        pytest.skip("no C compiler")
    folder = tmp_path_factory.mktemp("gsl")
    program = folder / "gsl_fermi_dirac"
    source = Path(__file__).with_name("gsl_fermi_dirac.c")
    command = [compiler, "-O2", str(source), "-o", str(program), "-lgsl", "-lgslcblas", "-lm"]
    built = subprocess.run(command, capture_output=True, text=True, check=False)
    if built.returncode:
        pytest.skip("no GSL to compile against (Debian: libgsl-dev)")

    def run(work, values):
        data = folder / "values"
        values.tofile(data)
        timed = subprocess.run([program, work, data], capture_output=True, text=True, check=True)
        return float(timed.stdout), np.fromfile(data)

    return run


def ratio_to_gsl(gsl, work, values, ours):
    """Return the median ratio of times of pairs run in turn, our nanoseconds, and GSL's results."""
    pairs = []
    for _ in range(ROUNDS):
        theirs, results = gsl(work, values)
        pairs.append((theirs, nanoseconds(lambda: ours(values), values.size, 3)))
    return np.median([theirs / own for theirs, own in pairs]), np.median([own for _, own in pairs]), results


def arguments(reach):
    if reach == "-40 to 40":
        return RANDOM.uniform(-40, 40, SIZE)
    wide = np.concatenate([RANDOM.uniform(-700, 100, SIZE // 2), 10.0 ** RANDOM.uniform(0, 8, SIZE // 2)])
    return RANDOM.permutation(wide)


@pytest.mark.parametrize("reach", ["-40 to 40", "-700 to 1e8"])
@pytest.mark.parametrize("order", [-0.5, 0.5, 1.5])
def test_the_half_orders_against_gsl(gsl, order, reach):
    eta = arguments(reach)
    ratio, own, theirs = ratio_to_gsl(gsl, str(int(2 * order)), eta, lambda eta: fermi_dirac_integral(order, eta))
    apart = np.abs(theirs / fermi_dirac_integral(order, eta) - 1.0).max()
    print(f"\nF of order {order}, eta {reach}: {own:.1f} ns, GSL {ratio:.1f} x; at most {apart:.1e} apart")
    assert ratio >= FASTER_THAN_GSL
    assert apart < 1e-12  # GSL's own error; ours is measured against mpmath by the tests


@pytest.mark.parametrize("order", [-1.0, 0.0, 1.0, 2.0])
def test_the_whole_orders_against_gsl(gsl, order):
    eta = arguments("-40 to 40")
    ratio, own, _ = ratio_to_gsl(gsl, str(int(2 * order)), eta, lambda eta: fermi_dirac_integral(order, eta))
    print(f"\nF of order {order}: {own:.1f} ns, GSL {ratio:.1f} x")


@pytest.mark.parametrize("order", [-1.5, -1.0, -0.5, 0.0, 0.5, 1.0, 1.5, 2.0, 2.5])
def test_an_order_alone(benchmark, order):
    eta = arguments("-40 to 40")
    benchmark(lambda: fermi_dirac_integral(order, eta))


def by_quadrature(order, eta):
    """Return F_1/2 or F_-1/2 as a script on SciPy has it: Gauss-Legendre in the root of t, split at the step."""
    nodes, weights = np.polynomial.legendre.leggauss(48)
    step = np.sqrt(np.maximum(eta, 0.0))[:, None]
    ends = (0.0 * step, np.maximum(step - 4.0, 0.0), step, step + 7.0)
    total = 0.0
    for low, high in pairwise(ends):
        root = low + 0.5 * (high - low) * (1.0 + nodes)
        power = root**2 if order == 0.5 else 0.5
        total = total + np.sum(weights * (high - low) * power * expit(eta[:, None] - root**2), axis=1)
    return total * 2.0 / np.sqrt(np.pi)


def newton_on_scipy(value):
    """Return eta by Newton steps from the Joyce-Dixon guess, as the usual library-based solve does."""
    eta = np.log(value) + value / np.sqrt(8.0)
    eta = np.where(eta > 6.0, (0.75 * np.sqrt(np.pi) * value) ** (2.0 / 3.0), eta)
    for _ in range(6):
        eta = eta - (by_quadrature(0.5, eta) - value) / by_quadrature(-0.5, eta)
    return eta


def bracketed(value, beta=0.0):
    """Return eta by brentq around quad."""

    def integrand(t, eta):
        return np.sqrt(t * (1.0 + beta * t)) * (1.0 + 2.0 * beta * t) / (1.0 + np.exp(min(t - eta, 700.0)))

    def excess(eta):
        return quad(integrand, 0, max(eta, 0) + 60, args=(eta,), limit=200)[0] * 2.0 / np.sqrt(np.pi) - value

    return brentq(excess, -50, 60, xtol=1e-12)


@pytest.mark.parametrize("order", [-0.5, 0.0, 0.5])
def test_the_chemical_potential_against_newton_steps_on_gsl(gsl, order):
    eta = RANDOM.uniform(-15, 35, SIZE)
    value = fermi_dirac_integral(order, eta)
    work = f"inverse{int(2 * order)}"
    ratio, own, theirs = ratio_to_gsl(gsl, work, value, lambda value: inverse_fermi_dirac_integral(order, value))
    assert np.abs(theirs - eta).max() < 1e-11  # so that it is the same work
    print(f"\neta of F of order {order}: {own:.1f} ns, Newton steps on GSL in C {ratio:.0f} x")
    assert ratio >= FASTER_THAN_NEWTON_ON_GSL


def test_the_chemical_potential_of_a_million(benchmark):
    value = fermi_dirac_integral(0.5, RANDOM.uniform(-15, 35, 1_000_000))
    benchmark(lambda: inverse_fermi_dirac_integral(0.5, value))


def test_the_chemical_potential_against_newton_steps_on_scipy_and_brentq_around_quad():
    eta = RANDOM.uniform(-15, 35, SIZE)
    value = fermi_dirac_integral(0.5, eta)
    some, few = value[:3000], value[:5]
    assert np.abs(newton_on_scipy(some) - eta[:3000]).max() < 1e-9
    ratios = []
    for _ in range(ROUNDS):
        own = seconds(lambda: inverse_fermi_dirac_integral(0.5, value)) / value.size
        newton = seconds(lambda: newton_on_scipy(some)) / some.size
        ratios.append((newton / own, seconds(lambda: [bracketed(one) for one in few.tolist()]) / few.size / own))
    newton, brackets = np.median(ratios, axis=0)
    print(f"\neta of F of order 1/2: Newton steps on SciPy {newton:.0f} x, brentq around quad {brackets:.0f} x")
    assert brackets >= FASTER_THAN_BRENTQ_AROUND_QUAD


@pytest.mark.parametrize("highest_beta", [0.3, 3.0])
def test_a_non_parabolic_band_against_brentq_around_quad(highest_beta):
    eta, beta = RANDOM.uniform(-15, 35, SIZE), RANDOM.uniform(0, highest_beta, SIZE)
    value = kane_density(eta, beta)
    own = nanoseconds(lambda: inverse_kane_density(value, beta), SIZE)
    forward = nanoseconds(lambda: kane_density(eta, beta), SIZE)
    slope = nanoseconds(lambda: kane_density_derivative(eta, beta), SIZE)
    few = list(zip(value[:5].tolist(), beta[:5].tolist(), strict=True))
    brackets = nanoseconds(lambda: [bracketed(*one) for one in few], len(few), 2)
    print(
        f"\nbeta to {highest_beta}: density {forward:.0f} ns, derivative {slope:.0f} ns, "
        f"eta {own:.0f} ns; brentq around quad {brackets / own:.0f} x"
    )
    assert own < 1e9 * KANE_SECONDS[highest_beta]


def test_one_sample_at_a_time(benchmark):
    repeats = 20_000

    def one(call):
        return nanoseconds(lambda: [call() for _ in range(repeats)], repeats, 3) / 1000

    print(
        f"\none sample: F_1/2 {one(lambda: fermi_dirac_integral(0.5, 3.3)):.2f} us, "
        f"its inverse {one(lambda: inverse_fermi_dirac_integral(0.5, 3.3)):.2f} us, "
        f"with a bent band {one(lambda: kane_density(3.3, 0.1)):.2f} and "
        f"{one(lambda: inverse_kane_density(3.3, 0.1)):.2f} us"
    )
    benchmark(lambda: inverse_fermi_dirac_integral(0.5, 3.3))
