"""One file per endpoint: frozen dataclass in, frozen dataclass out, SI units."""
