"""The same sums over a hard-wall film's subbands for one sample, in plain floats: a tenth of NumPy's cost for one."""

import cmath
import math

from service.physics.fermi_dirac import fermi_dirac_integral, inverse_fermi_dirac_integral
from service.physics.filling.film_ladder import filled_levels, ground_energy, sum_of_levels
from service.physics.filling.film_sum import BENEATH, POLES, REACH
from service.physics.values import Values

FEW_POLES = 1.0
"""Square of the levels' spacing at eta below which the residues are fewer than the levels in reach: costs in floats."""


def occupation_sum(eta: float, spacing: float) -> tuple[float, float, float]:
    """Return S, as `film_sum.occupation_sum` does, and its first and second derivative with respect to eta."""
    above_edge = eta + spacing
    height = max(eta, 0.0) + spacing
    real = math.sqrt(0.5 * (math.hypot(height, math.pi) + height))
    smooth = _PI_SQUARED > BENEATH * real * math.sqrt(spacing)
    if smooth or (eta >= 0.0 and spacing < 1.0 and spacing * above_edge < FEW_POLES):
        total, slope, bend = _continuum(above_edge, spacing)
        if smooth:
            return total, slope, bend
        residue, residue_slope, residue_bend = _residues(above_edge, spacing)
        return total + residue, slope + residue_slope, bend + residue_bend
    return _window(eta, spacing)


_PI_SQUARED = math.pi**2


def _continuum(above_edge: float, spacing: float) -> tuple[float, float, float]:
    scale = 0.5 * math.sqrt(math.pi / spacing)
    decay = math.exp(-abs(above_edge))
    filled = (1.0 if above_edge >= 0.0 else decay) / (1.0 + decay)
    surface = max(above_edge, 0.0) + math.log1p(decay)
    return (
        scale * _one(fermi_dirac_integral(0.5, above_edge)) - 0.5 * surface,
        scale * _one(fermi_dirac_integral(-0.5, above_edge)) - 0.5 * filled,
        scale * _one(fermi_dirac_integral(-1.5, above_edge)) - 0.5 * decay / (1.0 + decay) ** 2,
    )


def _one(value: Values) -> float:
    """Return a value known to be one sample's as the float that it is."""
    return value  # type: ignore[return-value]


def _residues(above_edge: float, spacing: float) -> tuple[float, float, float]:
    wave = 2j * math.pi / math.sqrt(spacing)
    total = slope = bend = 0.0
    for n in range(POLES):
        root = cmath.sqrt(complex(above_edge, math.pi * (2 * n + 1)))
        residue = cmath.exp(wave * root)
        size = abs(residue)
        total += math.log1p(size * size - 2.0 * residue.real)
        turn = wave / root
        ratio = residue / (1.0 - residue)
        first = turn * ratio
        slope -= first.real
        # The derivative of turn ratio, with respect to eta: root grows by 1 / (2 root).
        bend -= (0.5 * first * (turn / (1.0 - residue) - 1.0 / (root * root))).real
        if size < 1e-18:
            break
    return total, slope, bend


def _window(eta: float, spacing: float) -> tuple[float, float, float]:
    full = math.floor(math.sqrt(1.0 + (eta - REACH) / spacing)) if eta > REACH else 0
    last = math.floor(math.sqrt(1.0 + (max(eta, 0.0) + REACH) / spacing))
    total = full * eta - spacing * _one(sum_of_levels(float(full)))
    slope, bend = float(full), 0.0
    # Above the lowest level S is of the order of one and more: there one logarithm of a product serves for all.
    product = 1.0
    for number in range(full + 1, last + 1):
        above = eta - spacing * ((number - 1) * (number + 1))
        decay = math.exp(-abs(above))
        share = 1.0 / (1.0 + decay)
        if eta > 0.0:
            product *= 1.0 + decay
        else:
            total += math.log1p(decay)
        bend += decay * share * share
        if above >= 0.0:
            total += above
            slope += share
        else:
            slope += decay * share
    return total + math.log(product), slope, bend


def reduced_chemical_potential(load: float, spacing: float) -> float:
    """Return eta such that S(eta, b) is the load, as `film_sum.reduced_chemical_potential` does.

    By Halley's steps on ln S, of third order: each sum costs more than its second derivative.
    """
    density = load / spacing
    eta = min(
        _one(ground_energy(density, filled_levels(density))) * spacing,
        load + math.log(-math.expm1(-load)),
    )
    if spacing < 0.3:
        width = 2.0 * math.sqrt(spacing / math.pi)
        above_edge = eta + spacing
        surface = 0.5 * (max(above_edge, 0.0) + math.log1p(math.exp(-abs(above_edge))))
        eta = min(_one(inverse_fermi_dirac_integral(0.5, (load + surface) * width)) - spacing, eta)
    for _ in range(60):
        total, slope, bend = occupation_sum(eta, spacing)
        newton = -math.log(total / load) * total / slope
        # f''/f' of ln S, held within what a step of Newton's allows, where S bends sharply at an edge.
        curvature = max(-1.0, min(1.0, (bend / slope - slope / total) * newton))
        eta += newton / (1.0 + 0.5 * curvature)
        # A step leaves its cube behind.
        if abs(newton) <= max(3e-6, 1e-14 * abs(eta)):
            break
    return eta
