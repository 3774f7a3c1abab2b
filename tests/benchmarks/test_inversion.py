"""The chemical potential from a density, against the ways that a laboratory's own script would take.

Ratios within one run; run with `pytest tests/benchmarks --benchmark-only -s`. Each pair times the same densities.
"""

import time

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq
from scipy.special import expit

from service.physics.bands import Band
from service.physics.constants import BOLTZMANN, ELECTRON_MASS
from service.physics.fermi_dirac import fermi_dirac_integral, inverse_fermi_dirac_integral
from service.physics.filling.film import HardWallFilm

RANDOM = np.random.default_rng(20261201)


def half_order(eta):
    """Return F_1/2 as a plain script has it: Gauss-Legendre in the root of t, split at the step."""
    nodes, weights = np.polynomial.legendre.leggauss(48)
    step = np.sqrt(np.maximum(eta, 0.0))[:, None]
    low, high = np.maximum(step - 4.0, 0.0), step + 7.0
    total = 0.0
    for a, b in ((0.0 * low, low), (low, step), (step, high)):
        root = a + 0.5 * (b - a) * (1.0 + nodes)
        total = total + np.sum(weights * 0.5 * (b - a) * root**2 * expit(eta[:, None] - root**2), axis=1)
    return total * 2.0 / 0.886226925452758


def half_order_slope(eta):
    nodes, weights = np.polynomial.legendre.leggauss(48)
    step = np.sqrt(np.maximum(eta, 0.0))[:, None]
    low, high = np.maximum(step - 4.0, 0.0), step + 7.0
    total = 0.0
    for a, b in ((0.0 * low, low), (low, step), (step, high)):
        root = a + 0.5 * (b - a) * (1.0 + nodes)
        total = total + np.sum(weights * 0.5 * (b - a) * expit(eta[:, None] - root**2), axis=1)
    return total * 2.0 / 1.772453850905516


def newton(value):
    """Return eta by Newton steps from the Joyce-Dixon guess, as the usual library-based solve does."""
    eta = np.log(value) + value / np.sqrt(8.0)
    eta = np.where(eta > 6.0, (0.75 * np.sqrt(np.pi) * value) ** (2.0 / 3.0), eta)
    for _ in range(6):
        eta = eta - (half_order(eta) - value) / half_order_slope(eta)
    return eta


def bracketed(value):
    def integrand(t, eta):
        return np.sqrt(t) / (1.0 + np.exp(min(t - eta, 700.0)))

    def excess(eta):
        return quad(integrand, 0, max(eta, 0) + 60, args=(eta,), limit=200)[0] / 0.886226925452758 - value

    return brentq(excess, -50, 60, xtol=1e-12)


def median_time(function, repeat):
    times = []
    for _ in range(repeat):
        began = time.perf_counter()
        function()
        times.append(time.perf_counter() - began)
    return float(np.median(times))


@pytest.mark.parametrize("size", [100_000])
def test_the_inverse_against_newton_steps_and_against_brentq_around_quad(benchmark, size):
    eta = RANDOM.uniform(-15, 35, size)
    value = fermi_dirac_integral(0.5, eta)
    found = benchmark(lambda: inverse_fermi_dirac_integral(0.5, value))
    assert np.abs(found - eta).max() < 1e-13
    ours, theirs = [], []
    part = value[:5000]
    for _ in range(5):
        ours.append(median_time(lambda: inverse_fermi_dirac_integral(0.5, part), 5) / part.size)
        theirs.append(median_time(lambda: newton(part), 1) / part.size)
    slow = median_time(lambda: [bracketed(float(one)) for one in part[:5]], 3) / 5
    mine = float(np.median(ours))
    print(
        f"\ninverse of F_1/2: {mine * 1e9:.1f} ns a solve; Newton steps on SciPy {np.median(theirs) / mine:.0f} x, "
        f"brentq around quad {slow / mine:.0f} x"
    )


@pytest.mark.parametrize("order", [-1.5, -0.5, 0.5, 1.5, 2.5])
def test_the_integral_against_the_same_by_quadrature(benchmark, order):
    eta = RANDOM.uniform(-40, 40, 100_000)
    benchmark(lambda: fermi_dirac_integral(order, eta))
    if order == 0.5:
        ours = median_time(lambda: fermi_dirac_integral(order, eta[:5000]), 9)
        theirs = median_time(lambda: half_order(eta[:5000]), 3)
        print(f"\nF_1/2: quadrature {theirs / ours:.0f} x")


def film(thickness):
    masses = (0.3 * ELECTRON_MASS,) * 3
    return HardWallFilm(Band(*masses, 2.0), thickness)


@pytest.mark.parametrize("thickness", [1e-9, 1e-8, 1e-7, 1e-6, 1e-5, 1e-4, 1e-3])
def test_one_film_takes_the_same_time_over_six_decades(benchmark, thickness):
    states, density = film(thickness), 5e26 * thickness
    benchmark(lambda: states.chemical_potential(density, 300.0))


def test_one_film_against_adding_up_its_levels(benchmark):
    thickness = 1e-5
    states, density = film(thickness), 5e26 * thickness
    got = benchmark(lambda: states.chemical_potential(density, 300.0))
    thermal_energy = BOLTZMANN * 300.0
    reach = got + 45 * thermal_energy
    edges = states.ladder(reach, 10**7)[0].edge
    per_energy = states.density_of_states(0.0)

    def summed(potential):
        reduced = (potential - edges) / thermal_energy
        terms = np.maximum(reduced, 0) + np.log1p(np.exp(-np.abs(reduced)))
        return per_energy * thermal_energy * terms.sum() - density

    theirs = median_time(lambda: brentq(summed, 0.5 * got, reach, xtol=1e-14 * got), 3)
    ours = median_time(lambda: states.chemical_potential(density, 300.0), 50)
    print(f"\na film of {edges.size} subbands in reach: adding them up takes {theirs / ours:.0f} x")


@pytest.mark.parametrize("size", [1000, 10_000, 100_000])
def test_many_films_of_mixed_sizes_and_temperatures(benchmark, size):
    thickness, temperature = 10 ** RANDOM.uniform(-9, -3, size), 10 ** RANDOM.uniform(-2, 3.3, size)
    states, density = film(thickness), 10 ** RANDOM.uniform(22, 29, size) * thickness
    benchmark(lambda: states.chemical_potential(density, temperature))
