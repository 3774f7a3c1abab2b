"""Carriers of a band with first-order non-parabolicity, E(1 + alpha E): density, its inverse, and from an energy up."""

from service.physics.kane.density import kane_density, kane_density_derivative
from service.physics.kane.inverse import inverse_kane_density
from service.physics.kane.quadrature import kane_tail

__all__ = ["inverse_kane_density", "kane_density", "kane_density_derivative", "kane_tail"]
