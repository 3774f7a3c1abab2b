"""The same sums over a hard-wall film's subbands for one sample, in plain floats: a tenth of NumPy's cost for one."""

import cmath
import math

from service.physics.fermi_dirac import fermi_dirac_integral, inverse_fermi_dirac_integral
from service.physics.filling.film_ladder import filled_levels, ground_energy, sum_of_levels
from service.physics.filling.film_sum import BENEATH, POLES, REACH
from service.physics.values import Values


def occupation_sum(eta: float, spacing: float) -> tuple[float, float]:
    """Return S and its derivative with respect to eta, as `film_sum.occupation_sum` does."""
    above_edge = eta + spacing
    height = max(eta, 0.0) + spacing
    real = math.sqrt(0.5 * (math.hypot(height, math.pi) + height))
    smooth = math.pi**2 > BENEATH * real * math.sqrt(spacing)
    if smooth or (eta >= 0.0 and spacing < 1.0 and spacing * above_edge < 9.0):
        total, slope = _continuum(above_edge, spacing)
        if smooth:
            return total, slope
        residue, residue_slope = _residues(above_edge, spacing)
        return total + residue, slope + residue_slope
    return _window(eta, spacing)


def _continuum(above_edge: float, spacing: float) -> tuple[float, float]:
    scale = 0.5 * math.sqrt(math.pi / spacing)
    decay = math.exp(-abs(above_edge))
    filled = (1.0 if above_edge >= 0.0 else decay) / (1.0 + decay)
    surface = max(above_edge, 0.0) + math.log1p(decay)
    total = scale * _one(fermi_dirac_integral(0.5, above_edge)) - 0.5 * surface
    return total, scale * _one(fermi_dirac_integral(-0.5, above_edge)) - 0.5 * filled


def _one(value: Values) -> float:
    """Return a value known to be one sample's as the float that it is."""
    return value  # type: ignore[return-value]


def _residues(above_edge: float, spacing: float) -> tuple[float, float]:
    wave = 2j * math.pi / math.sqrt(spacing)
    total = slope = 0.0
    for n in range(POLES):
        root = cmath.sqrt(complex(above_edge, math.pi * (2 * n + 1)))
        residue = cmath.exp(wave * root)
        size = abs(residue)
        total += math.log1p(size * size - 2.0 * residue.real)
        slope -= (wave / root * residue / (1.0 - residue)).real
        if size < 1e-18:
            break
    return total, slope


def _window(eta: float, spacing: float) -> tuple[float, float]:
    full = math.floor(math.sqrt(1.0 + (eta - REACH) / spacing)) if eta > REACH else 0
    last = math.floor(math.sqrt(1.0 + (max(eta, 0.0) + REACH) / spacing))
    total = full * eta - spacing * _one(sum_of_levels(float(full)))
    slope = float(full)
    for number in range(full + 1, last + 1):
        above = eta - spacing * ((number - 1) * (number + 1))
        if above >= 0.0:
            decay = math.exp(-above)
            total += above + math.log1p(decay)
            slope += 1.0 / (1.0 + decay)
        else:
            decay = math.exp(above)
            total += math.log1p(decay)
            slope += decay / (1.0 + decay)
    return total, slope


def reduced_chemical_potential(load: float, spacing: float) -> float:
    """Return eta such that S(eta, b) is the load, as `film_sum.reduced_chemical_potential` does."""
    density = load / spacing
    eta = min(
        _one(ground_energy(density, filled_levels(density))) * spacing,
        load + math.log(-math.expm1(-load)),
    )
    if spacing < 0.3:
        width = 2.0 * math.sqrt(spacing / math.pi)
        above_edge = eta + spacing
        for _ in range(2):
            surface = 0.5 * (max(above_edge, 0.0) + math.log1p(math.exp(-abs(above_edge))))
            above_edge = _one(inverse_fermi_dirac_integral(0.5, (load + surface) * width))
        eta = min(above_edge - spacing, eta)
    for _ in range(60):
        total, slope = occupation_sum(eta, spacing)
        step = -math.log(total / load) * total / slope
        eta += step
        if abs(step) <= max(3e-9, 1e-14 * abs(eta)):
            break
    return eta
