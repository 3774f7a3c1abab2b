"""Tables for the Fermi-Dirac integrals, and the script that makes them."""
