"""fillmark: the electron gas of real conductors as a REST service."""

from importlib.metadata import version

VERSION = version("fillmark")
"""The version of the installed distribution."""
