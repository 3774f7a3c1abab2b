r"""The energy of a hard-wall film's carriers, and those above an energy: sums over all subbands.

Energies are in units of kT, from the lowest level; b is the scale of the ladder in the same unit.
"""

import math
from typing import Final

import numpy as np

from service.physics.fermi_dirac import fermi_dirac_integral, fermi_dirac_tail
from service.physics.filling.film_ladder import levels_up_to, sum_of_squared_levels
from service.physics.filling.film_sum import REACH, is_smooth, levels_in_reach, window
from service.physics.values import FloatArray

_FINE: Final = 0.01
"""Below this spacing between neighbouring levels the sum above an energy goes over into its integral and four terms."""


def energy_sum(eta: FloatArray, spacing: FloatArray) -> FloatArray:
    r"""Return the energy of all carriers, from the lowest level.

    .. math:: U = \sum_i b (i^2-1) F_0(x_i) + F_1(x_i), \qquad x_i = \eta - b(i^2-1)

    Parameters
    ----------
    eta : ndarray, shape (N,)
        Chemical potential above the lowest level over kT [1].
    spacing : ndarray, shape (N,)
        b, the scale of the ladder over kT [1].

    Returns
    -------
    ndarray, shape (N,)
        U in units of a level's states in kT times kT [1].

    Notes
    -----
    Where levels are dense, by the continuum and its surface term; else full levels in closed form and those in reach
    one by one.

    References
    ----------
    NIST DLMF 25.12.16; Poisson's sum formula, DLMF 1.8.14.
    """
    total = np.empty_like(eta)
    smooth = is_smooth(eta, spacing)
    if smooth.any():
        total[smooth] = _dense_energy(eta[smooth], spacing[smooth])
    if not smooth.all():
        total[~smooth] = _window_energy(eta[~smooth], spacing[~smooth])
    return total


def _dense_energy(eta: FloatArray, spacing: FloatArray) -> FloatArray:
    """Return the continuum's energy from the band edge, less what the lowest level's height makes of it."""
    above_edge = eta + spacing
    scale = 0.5 * np.sqrt(math.pi / spacing)
    three_halves, one_half = fermi_dirac_integral(1.5, above_edge), fermi_dirac_integral(0.5, above_edge)
    first, zeroth = fermi_dirac_integral(1.0, above_edge), fermi_dirac_integral(0.0, above_edge)
    from_edge = 1.5 * scale * three_halves - 0.5 * first
    return np.asarray(from_edge - spacing * (scale * one_half - 0.5 * zeroth))


def _window_energy(eta: FloatArray, spacing: FloatArray) -> FloatArray:
    full, length = window(eta, spacing)
    total = full * (0.5 * eta**2 + math.pi**2 / 6.0) - 0.5 * spacing**2 * sum_of_squared_levels(full)
    for rows, above in levels_in_reach(eta, spacing, full, length):
        height = eta[rows, None] - above
        population = np.asarray(fermi_dirac_integral(0.0, above))
        total[rows] += (height * population + np.asarray(fermi_dirac_integral(1.0, above))).sum(axis=1)
    return np.asarray(total)


def tail_sum(eta: FloatArray, spacing: FloatArray, start: FloatArray) -> FloatArray:
    r"""Return the carriers above an energy.

    .. math::

        \sum_i F_0\bigl(\min(\eta - s, \eta - b(i^2-1))\bigr)
        = \frac{\sqrt{\pi/b}}{2} F_{1/2}(\eta + b, s + b) - \tfrac12 h
        - \sum_{p \ge 2} \frac{B_p(\theta)}{p!} h^{(p-1)}

    Parameters
    ----------
    eta : ndarray, shape (N,)
        Chemical potential above the lowest level over kT [1].
    spacing : ndarray, shape (N,)
        b, the scale of the ladder over kT [1].
    start : ndarray, shape (N,)
        s >= 0, the energy above the lowest level over kT [1].

    Returns
    -------
    ndarray, shape (N,)
        The carriers in units of a level's states in kT [1].

    Notes
    -----
    Level by level, or, where neighbouring levels lie within 0.01 of one another, by the Euler-Maclaurin sum from the
    point between two levels where the energy lies; h is F_0 there, and theta the way to the next level. The boundary
    terms of integral and sum cancel by algebra, so no digit is lost. The first term left out is below 1e-13.

    References
    ----------
    NIST DLMF 24.17.1 (Euler-Maclaurin with Bernoulli polynomials).
    """
    place = np.sqrt(1.0 + start / spacing)
    fine = 2.0 * spacing * place < _FINE
    total = np.empty_like(eta)
    if fine.any():
        total[fine] = _fine_tail(eta[fine], spacing[fine], start[fine], place[fine])
    if not fine.all():
        total[~fine] = _level_tail(eta[~fine], spacing[~fine], start[~fine])
    return total


def _fine_tail(eta: FloatArray, spacing: FloatArray, start: FloatArray, place: FloatArray) -> FloatArray:
    theta = np.asarray(levels_up_to(start / spacing)) + 1.0 - place
    above = eta - start
    h, f = np.asarray(fermi_dirac_integral(0.0, above)), np.asarray(fermi_dirac_integral(-1.0, above))
    f_slope = np.asarray(fermi_dirac_integral(-2.0, above))
    rise, bend = -2.0 * spacing * place, -2.0 * spacing
    second = f_slope * rise**2 + f * bend
    third = f_slope * (1.0 - 2.0 * f) * rise**3 + 3.0 * f_slope * rise * bend
    bernoulli = (
        theta**2 - theta + 1.0 / 6.0,
        theta**3 - 1.5 * theta**2 + 0.5 * theta,
        theta**4 - 2.0 * theta**3 + theta**2 - 1.0 / 30.0,
    )
    bulk = 0.5 * np.sqrt(math.pi / spacing) * fermi_dirac_tail(0.5, eta + spacing, start + spacing)
    corrections = bernoulli[0] / 2.0 * f * rise + bernoulli[1] / 6.0 * second + bernoulli[2] / 24.0 * third
    return np.asarray(bulk - 0.5 * h - corrections)


def _level_tail(eta: FloatArray, spacing: FloatArray, start: FloatArray) -> FloatArray:
    below = np.asarray(levels_up_to(start / spacing))
    total = below * np.asarray(fermi_dirac_integral(0.0, eta - start))
    last = np.floor(np.sqrt(1.0 + (np.maximum(np.maximum(eta, start), 0.0) + REACH) / spacing))
    length = (last - below).astype(np.intp) + 1
    for rows, above in levels_in_reach(eta, spacing, below, length):
        total[rows] += np.asarray(fermi_dirac_integral(0.0, above)).sum(axis=1)
    return np.asarray(total)
