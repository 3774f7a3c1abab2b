r"""The occupation of a hard-wall film's subbands, summed over all of them, for many samples at once.

.. math:: S(\eta, b) = \sum_{i \ge 1} F_0\bigl(\eta - b (i^2 - 1)\bigr), \qquad b = a / kT

Three exact ways, each short where the others are long:

- *window*: levels far below eta in closed form, those within 40 of it one by one;
- *poles*: the continuum, its surface term, and the residues at the poles of the Fermi function,
  q_n = exp(2 pi i sqrt((eta + b + i pi (2n+1))/b));
- *smooth*: the same where every residue is beneath the last digit.
"""

import math
from collections.abc import Iterator
from typing import Final

import numpy as np
from numpy.typing import NDArray

from service.physics.fermi_dirac import fermi_dirac_integral, inverse_fermi_dirac_integral
from service.physics.filling.film_ladder import filled_levels, ground_energy, sum_of_levels
from service.physics.values import FloatArray

REACH: Final = 40.0
"""A level this far above eta holds exp(-40) = 4e-18 of its room; one this far below is full to that."""

BENEATH: Final = 41.0
"""exp(-41) = 2e-18: a residue this small is beneath the last digit."""

POLES: Final = 14
"""The most residues that any film sums: the last is beneath the last digit wherever poles are used."""

_ELEMENTS: Final = 1 << 19
"""Samples times levels at a time."""


def first_residue(eta: FloatArray, spacing: FloatArray) -> FloatArray:
    """Return -ln|q_0|, how far beneath one the largest residue is; below the first level what it is there.

    Further below, the residues shrink faster than the occupation itself, as long as b < 0.25.
    """
    above_edge = np.maximum(eta, 0.0) + spacing
    real = np.sqrt(0.5 * (np.hypot(above_edge, math.pi) + above_edge))
    return np.asarray(math.pi**2 / (real * np.sqrt(spacing)))


def is_smooth(eta: FloatArray, spacing: FloatArray) -> NDArray[np.bool_]:
    """Tell where all residues are beneath the last digit."""
    return first_residue(eta, spacing) > BENEATH


def has_few_poles(eta: FloatArray, spacing: FloatArray) -> NDArray[np.bool_]:
    """Tell where the residues fall fast; below the first level they would cancel, and are not used."""
    return (eta >= 0.0) & (spacing < 1.0) & (spacing * (eta + spacing) < 9.0)


def occupation_sum(eta: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    r"""Return S and its derivative with respect to eta.

    .. math:: S = \sum_i F_0(\eta - b(i^2-1)), \qquad S' = \sum_i F_{-1}(\eta - b(i^2-1))

    Parameters
    ----------
    eta : ndarray, shape (N,)
        Chemical potential above the lowest level over kT [1].
    spacing : ndarray, shape (N,)
        b, the scale of the ladder over kT [1].

    Returns
    -------
    tuple of ndarray, shape (N,)
        S and S' [1].

    Notes
    -----
    Against mpmath's level sums of 30 digits the relative error is at most 1e-14 (tests/physics/filling/test_film_sum).

    References
    ----------
    NIST DLMF 25.12.16; the residues from Poisson's sum formula, DLMF 1.8.14.
    """
    total, slope = np.empty_like(eta), np.empty_like(eta)
    smooth = is_smooth(eta, spacing)
    poles = ~smooth & has_few_poles(eta, spacing)
    window = ~smooth & ~poles
    by_continuum = smooth | poles
    if by_continuum.any():
        part = _continuum(eta[by_continuum], spacing[by_continuum])
        total[by_continuum], slope[by_continuum] = part
    if poles.any():
        residue, residue_slope = _residues(eta[poles], spacing[poles])
        total[poles] += residue
        slope[poles] += residue_slope
    if window.any():
        total[window], slope[window] = _window(eta[window], spacing[window])
    return total, slope


def _continuum(eta: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    above_edge = eta + spacing
    scale = 0.5 * np.sqrt(math.pi / spacing)
    total = scale * fermi_dirac_integral(0.5, above_edge) - 0.5 * np.asarray(fermi_dirac_integral(0.0, above_edge))
    slope = scale * fermi_dirac_integral(-0.5, above_edge) - 0.5 * np.asarray(fermi_dirac_integral(-1.0, above_edge))
    return np.asarray(total), np.asarray(slope)


def _residues(eta: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    r"""Return 2 Re sum ln(1 - q_n) and its derivative, in real arithmetic."""
    above_edge = eta + spacing
    root_spacing = np.sqrt(spacing)
    total, slope = np.zeros_like(eta), np.zeros_like(eta)
    for n in range(POLES):
        height = math.pi * (2 * n + 1)
        real = np.sqrt(0.5 * (np.hypot(above_edge, height) + above_edge))
        imaginary = 0.5 * height / real
        size = np.exp(-2.0 * math.pi * imaginary / root_spacing)
        angle = 2.0 * math.pi * real / root_spacing
        q_real, q_imaginary = size * np.cos(angle), size * np.sin(angle)
        total += np.log1p(size * size - 2.0 * q_real)
        # q/(1-q), and then -i pi / (w sqrt(b)) times it, w = real + i imaginary.
        distance = (1.0 - q_real) ** 2 + q_imaginary**2
        ratio_real, ratio_imaginary = (q_real - size * size) / distance, q_imaginary / distance
        modulus = real * real + imaginary * imaginary
        slope += 2.0 * math.pi * (ratio_imaginary * real - ratio_real * imaginary) / (modulus * root_spacing)
        if size.max() < 1e-18:
            break
    return total, slope


def window(eta: FloatArray, spacing: FloatArray) -> tuple[FloatArray, NDArray[np.intp]]:
    """Return how many levels are full, and how many more lie within reach of eta, sample by sample."""
    full = np.where(eta > REACH, np.floor(np.sqrt(1.0 + np.maximum(eta - REACH, 0.0) / spacing)), 0.0)
    last = np.floor(np.sqrt(1.0 + (np.maximum(eta, 0.0) + REACH) / spacing))
    return full, (last - full).astype(np.intp) + 1


def _window(eta: FloatArray, spacing: FloatArray) -> tuple[FloatArray, FloatArray]:
    full, length = window(eta, spacing)
    total = full * eta - spacing * sum_of_levels(full)
    slope = full.copy()
    for rows, above in levels_in_reach(eta, spacing, full, length):
        decay = np.exp(-np.abs(above))
        total[rows] += (np.maximum(above, 0.0) + np.log1p(decay)).sum(axis=1)
        slope[rows] += (np.where(above >= 0.0, 1.0, decay) / (1.0 + decay)).sum(axis=1)
    return np.asarray(total), slope


def levels_in_reach(
    eta: FloatArray, spacing: FloatArray, full: FloatArray, length: NDArray[np.intp]
) -> Iterator[tuple[NDArray[np.intp], FloatArray]]:
    """Yield rows of samples of like window, and eta above each of their levels in reach, shape (rows, levels)."""
    order = np.argsort(length, kind="stable")
    start = 0
    while start < order.size:
        # The longest window of a chunk sets its width: grow the chunk while it fits.
        width = int(length[order[min(start + 255, order.size - 1)]])
        stop = min(order.size, start + max(256, _ELEMENTS // width))
        width = int(length[order[stop - 1]])
        while stop - start > 256 and (stop - start) * width > 2 * _ELEMENTS:
            stop = start + (stop - start) // 2
            width = int(length[order[stop - 1]])
        rows = order[start:stop]
        number = full[rows, None] + np.arange(1.0, width + 1.0)
        yield rows, eta[rows, None] - spacing[rows, None] * ((number - 1.0) * (number + 1.0))
        start = stop


def first_guess(load: FloatArray, spacing: FloatArray) -> FloatArray:
    """Return eta near the root, never far on either side, for S = `load`."""
    ground = ground_energy(load / spacing, filled_levels(load / spacing)) * spacing
    alone = load + np.log(-np.expm1(-load))
    guess = np.minimum(ground, alone)
    dense = spacing < 0.3
    if dense.any():
        width = 2.0 * np.sqrt(spacing[dense] / math.pi)
        above_edge = guess[dense] + spacing[dense]
        for _ in range(2):
            surface = 0.5 * np.asarray(fermi_dirac_integral(0.0, above_edge))
            above_edge = np.asarray(inverse_fermi_dirac_integral(0.5, (load[dense] + surface) * width))
        guess[dense] = np.minimum(above_edge - spacing[dense], guess[dense])
    return np.asarray(guess)


def reduced_chemical_potential(load: FloatArray, spacing: FloatArray) -> FloatArray:
    r"""Return eta such that the subbands hold a load.

    .. math:: S(\eta, b) = r

    Parameters
    ----------
    load : ndarray, shape (N,)
        r, the density over that of one level's states in kT [1].
    spacing : ndarray, shape (N,)
        b, the scale of the ladder over kT [1].

    Returns
    -------
    ndarray, shape (N,)
        eta, from the lowest level [1].

    Notes
    -----
    Newton's steps on ln S, whose slope lies between 0 and 1, until a step is so short that the next is beneath the
    last digit.

    References
    ----------
    W. H. Press et al., Numerical Recipes, 3rd ed. (2007), section 9.4.
    """
    eta = first_guess(load, spacing)
    active = np.arange(load.size)
    for _ in range(60):
        total, slope = occupation_sum(eta[active], spacing[active])
        step = -np.log(total / load[active]) * total / slope
        eta[active] += step
        active = active[np.abs(step) > np.maximum(3e-9, 1e-14 * np.abs(eta[active]))]
        if not active.size:
            break
    return eta
