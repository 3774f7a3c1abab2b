"""Tables of special functions, and the scripts that make them."""

FERMI_DIRAC_CHECKSUM = "7606787994d13c1ed9cee1d19f4e6b2de018a0dc509e6d376cf3886433feeefd"
"""SHA-256 of the names and bytes of the arrays in ``fermi_dirac.npz``, as ``make_fermi_dirac`` prints it."""

GAUSSIAN_CHECKSUM = "96f17a64c4e1ee125252eccddaa95300b24a0b7549aa14cfb9a9b3db1e35fd3d"
"""The same of ``gaussian.npz``, as ``make_gaussian`` prints it."""

BESSEL_ZEROS_CHECKSUM = "2d31d1b3fcfbbd0f10270c3c439120447bd1bde57e89626addda6aafcf00cfc2"
"""The same of ``bessel_zeros.npz``, as ``make_bessel_zeros`` prints it."""
