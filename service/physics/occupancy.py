"""The occupation of a state, its fall over energy, and the width of the fall."""

import math

import numpy as np

from service.physics.constants import BOLTZMANN
from service.physics.values import FloatArray, Values

_BEYOND = 745.0
"""exp(-745) is the last double above zero: further from the chemical potential the occupation is 1 or 0."""


def _reduced(energy: Values, chemical_potential: Values, temperature: Values) -> FloatArray:
    """Return (E - mu) / kT, held within what exp() can take; at T = 0 an end of that range, or 0 at mu."""
    distance = np.asarray(energy, dtype=np.float64) - chemical_potential
    thermal_energy = BOLTZMANN * np.asarray(temperature, dtype=np.float64)
    end = np.asarray(np.sign(distance) * np.full(thermal_energy.shape, _BEYOND))
    within = np.abs(distance) < _BEYOND * thermal_energy
    return np.asarray(np.divide(distance, thermal_energy, out=end, where=within))


def _decay(reduced: FloatArray) -> FloatArray:
    """Return exp(-|E - mu|/kT), and nothing beyond the last double, so that T = 0 is a step and not a smear."""
    return np.asarray(np.where(np.abs(reduced) >= _BEYOND, 0.0, np.exp(-np.abs(reduced))))


def occupation(energy: Values, chemical_potential: Values, temperature: Values) -> FloatArray:
    r"""Return the Fermi-Dirac occupation of a state.

    .. math:: f(E) = \frac{1}{1 + e^{(E - \mu)/kT}}

    Parameters
    ----------
    energy : float or ndarray
        Energy of the state [J].
    chemical_potential : float or ndarray
        mu, from the same zero, of a shape that broadcasts [J].
    temperature : float or ndarray
        Zero included, of a shape that broadcasts [K].

    Returns
    -------
    ndarray
        f, of the common shape; at T = 0 the step 1, 1/2 at mu, 0 [1].

    Notes
    -----
    Neither tail overflows or is taken as a difference: f keeps its relative precision down to the last double. So does
    1 - f, the occupation by holes: it is f with the energy and the chemical potential exchanged.

    References
    ----------
    N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), eq. (2.48).

    Examples
    --------
    >>> float(occupation(1.0, 1.0, 300.0))
    0.5
    >>> occupation(np.array([0.9, 1.0, 1.1]), 1.0, 0.0).tolist()
    [1.0, 0.5, 0.0]
    """
    reduced = _reduced(energy, chemical_potential, temperature)
    decay = _decay(reduced)
    return np.asarray(np.where(reduced > 0.0, decay, 1.0) / (1.0 + decay))


def thermal_broadening(energy: Values, chemical_potential: Values, temperature: Values) -> FloatArray:
    r"""Return the fall of the occupation over energy.

    .. math:: -\frac{df}{dE} = \frac{1}{4 kT \cosh^2((E - \mu)/2kT)}

    Parameters
    ----------
    energy : float or ndarray
        Energy of the state [J].
    chemical_potential : float or ndarray
        mu, from the same zero, of a shape that broadcasts [J].
    temperature : float or ndarray
        Zero included, of a shape that broadcasts [K].

    Returns
    -------
    ndarray
        -df/dE, of the common shape; at T = 0 its regular part, zero [J^-1].

    References
    ----------
    N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), eq. (2.66) ff.

    Examples
    --------
    >>> bool(np.isclose(thermal_broadening(1.0, 1.0, 300.0) * BOLTZMANN * 300.0, 0.25))
    True
    """
    reduced = _reduced(energy, chemical_potential, temperature)
    decay = _decay(reduced)
    thermal_energy = BOLTZMANN * np.broadcast_to(np.asarray(temperature, dtype=np.float64), reduced.shape)
    warm = thermal_energy > 0.0
    return np.divide(decay / (1.0 + decay) ** 2, thermal_energy, out=np.zeros(reduced.shape), where=warm)


def transition_width(temperature: Values) -> Values:
    r"""Return the energy over which the occupation falls from 0.9 to 0.1.

    .. math:: \Delta E = 2 \ln 9\; kT = 4.394\, kT

    Parameters
    ----------
    temperature : float or ndarray, shape (N,)
        Zero included [K].

    Returns
    -------
    float or ndarray, shape (N,)
        The width [J].

    References
    ----------
    From the definition of f; common practice.

    Examples
    --------
    >>> round(transition_width(1.0) / BOLTZMANN, 3)
    4.394
    """
    return 2.0 * math.log(9.0) * BOLTZMANN * temperature
