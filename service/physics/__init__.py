"""Electron-gas physics in SI units: pure NumPy and SciPy, no HTTP, no schemas."""
