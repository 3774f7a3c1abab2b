r"""The density of a non-parabolic band by quadrature: at any beta, and from any energy up.

In the angle :math:`\theta` of :math:`\sqrt{\beta t} = \sinh\theta` the root of the dispersion is a product of two
hyperbolic functions, so its two branch points are gone and one set of panels serves every beta.
"""

import math
from typing import Final

import numpy as np

from service.physics.kane.limits import GAMMA
from service.physics.values import FloatArray, Values

_BREAKS: Final = np.array([-40.0, -30.0, -20.0, -15.0, -10.0, -6.0, -3.0, -1.0, 0.0, 1.0, 4.0, 10.0, 20.0, 40.0])
"""Ends of the panels about the step: each short against its distance to the poles at eta + i pi (2n + 1)."""

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(24)
_CHUNK: Final = 1 << 10
_SMALL: Final = 1e-200
"""In place of beta = 0, so that the angle has a scale; the square of its root is still a double."""


def kane_tail(eta: Values, beta: Values, start: Values) -> Values:
    r"""Return the density of carriers above an energy in a non-parabolic band.

    .. math::

        n(\eta, \beta, b) = \frac{2}{\sqrt{\pi}} \int_b^\infty
        \frac{\sqrt{\gamma}\, \gamma'\, dt}{1 + e^{t - \eta}}, \qquad \gamma(t) = t (1 + \beta t)

    Parameters
    ----------
    eta : float or ndarray
        Reduced chemical potential mu / kT [1].
    beta : float or ndarray
        alpha kT, of at least 0, of a shape that broadcasts with eta [1].
    start : float or ndarray
        b >= 0, the energy over kT, likewise [1].

    Returns
    -------
    float or ndarray
        The density over that of a parabolic band at exp(eta) = 1 without exclusion, of the common shape [1].

    Notes
    -----
    Gauss-Legendre on panels that follow the step, and the closed form below them, where all is filled; nothing is
    subtracted. The relative error is below 1e-13 against mpmath's quadrature.

    References
    ----------
    E. O. Kane, J. Phys. Chem. Solids 1, 249 (1957), for the dispersion.

    Examples
    --------
    >>> round(kane_tail(0.0, 0.0, 0.0), 12)
    0.765147024625
    """
    if not any(isinstance(argument, np.ndarray) for argument in (eta, beta, start)):
        return float(quadrature(np.array([eta]), np.array([beta]), np.array([start]))[0][0])
    etas, betas, starts = np.broadcast_arrays(eta, beta, start)
    return quadrature(etas.ravel(), betas.ravel(), starts.ravel())[0].reshape(etas.shape)


def quadrature(eta: FloatArray, beta: FloatArray, start: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the tails of flat arrays and their derivatives by eta [1]."""
    density, slope = np.empty(eta.shape), np.empty(eta.shape)
    for at in range(0, eta.size, _CHUNK):
        part = slice(at, at + _CHUNK)
        density[part], slope[part] = _panels(eta[part], np.maximum(beta[part], _SMALL), start[part])
    return density, slope


def _panels(eta: FloatArray, beta: FloatArray, start: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return one chunk's tails and derivatives by the panels about the larger of step and start."""
    step = np.maximum(eta, start)
    # All measured from the step, so that a step far from zero keeps its digits through the square roots.
    ends = np.maximum(_BREAKS, (start - step)[:, None])
    energy, strength = step[:, None] + ends, beta[:, None]
    root, stretch = np.sqrt(energy), np.sqrt(1.0 + strength * energy)
    scale = np.sqrt(strength)
    sum_of_roots = root[:, 1:] * stretch[:, :-1] + root[:, :-1] * stretch[:, 1:]
    width = np.divide(np.diff(ends), sum_of_roots, out=np.zeros_like(sum_of_roots), where=sum_of_roots > 0.0)
    half = 0.5 * np.arcsinh(scale * width) / scale

    angle = (scale * half)[..., None] * (1.0 + _NODES)
    scale, strength = scale[..., None], strength[..., None]
    sine, cosine = np.sinh(angle) / scale, np.cosh(angle)
    first, stretch = root[:, :-1, None], stretch[:, :-1, None]
    # sinh^2(A + d) - sinh^2(A) = sinh(2 A + d) sinh(d): the energy above the panel's lower end.
    above = sine * (2.0 * first * stretch * cosine + (2.0 * stretch * stretch - 1.0) * sine)
    beyond = (step - eta)[:, None, None] + ends[:, :-1, None] + above
    root, stretch = first * cosine + stretch * sine, stretch * cosine + strength * first * sine
    states = (root * stretch) ** 2 * (2.0 * stretch * stretch - 1.0)
    decay = np.exp(-np.abs(beyond))
    filled = np.where(beyond > 0.0, decay, 1.0) / (1.0 + decay)
    edge = decay / (1.0 + decay) ** 2
    per_panel = half * (4.0 / math.sqrt(math.pi))
    density = np.einsum("spn,n,sp->s", states * filled, _WEIGHTS, per_panel)
    slope = np.einsum("spn,n,sp->s", states * edge, _WEIGHTS, per_panel)
    full = np.maximum(step + _BREAKS[0] - start, 0.0)
    return density + _filled(beta, start, full), slope


def _filled(beta: FloatArray, start: FloatArray, length: FloatArray) -> FloatArray:
    """Return the states of a stretch on which all are filled to within exp(-40)."""
    end = start + length
    gamma = end * (1.0 + beta * end)
    difference = length * (1.0 + beta * (start + end))
    ratio = np.divide(difference, gamma, out=np.zeros_like(gamma), where=gamma > 0.0)
    below = start * (1.0 + beta * start)
    short = -np.expm1(1.5 * np.log1p(-np.minimum(ratio, 0.5))) * gamma**1.5
    return np.asarray(np.where(ratio < 0.5, short, gamma**1.5 - below**1.5) / GAMMA)
