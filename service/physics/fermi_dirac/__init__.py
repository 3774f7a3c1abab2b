"""Fermi-Dirac integrals: complete, inverted, and from an energy up."""

from service.physics.fermi_dirac.complete import fermi_dirac_integral
from service.physics.fermi_dirac.inverse import inverse_fermi_dirac_integral
from service.physics.fermi_dirac.tail import fermi_dirac_tail

__all__ = ["fermi_dirac_integral", "fermi_dirac_tail", "inverse_fermi_dirac_integral"]
