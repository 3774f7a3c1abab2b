"""Settings, read from a mapping such as the environment: pure, and refused with one clear line where they are wrong."""

from collections.abc import Mapping
from dataclasses import dataclass, fields
from typing import Final

from service.errors import SettingsError

PREFIX: Final = "FILLMARK_"


@dataclass(frozen=True, slots=True)
class Settings:
    """What a service runs with; each by an environment variable of the same name with the prefix ``FILLMARK_``.

    Attributes
    ----------
    host : str
        Address to listen on.
    port : int
        Port to listen on; 0 lets the system choose.
    workers : int
        Processes.
    threads : int
        Threads of each process.
    max_samples : int
        Samples that one request may hold.
    max_energies : int
        Points that a curve may have.
    max_curve_points : int
        Samples times points of a curve.
    max_body_bytes : int
        Bytes of a request's body.
    graceful_timeout : int
        Seconds in which requests in flight finish after SIGTERM.
    max_requests : int
        Requests after which a worker is replaced; 0 for never.
    """

    host: str = "127.0.0.1"
    port: int = 8000
    workers: int = 2
    threads: int = 2
    max_samples: int = 200_000
    max_energies: int = 100_000
    max_curve_points: int = 5_000_000
    max_body_bytes: int = 64_000_000
    graceful_timeout: int = 30
    max_requests: int = 50_000

    @classmethod
    def from_environ(cls, environ: Mapping[str, str]) -> "Settings":
        """Return the settings of an environment.

        Raises
        ------
        SettingsError
            With one line, where a value is wrong or a name under the prefix is not known.
        """
        known = {PREFIX + field.name.upper(): field for field in fields(cls)}
        stated: dict[str, str | int] = {}
        for name, text in environ.items():
            if not name.startswith(PREFIX):
                continue
            if name not in known:
                raise SettingsError(f"{name} is no setting of fillmark; there are {', '.join(sorted(known))}")
            stated[known[name].name] = text if known[name].type in (str, "str") else _whole(name, text)
        settings = cls(**stated)  # type: ignore[arg-type]
        settings._check()
        return settings

    def _check(self) -> None:
        for name, least, most in _RANGES:
            value = getattr(self, name)
            if not least <= value <= most:
                raise SettingsError(f"{PREFIX}{name.upper()} is {value}; it must be from {least} to {most}")
        if not self.host or any(character.isspace() for character in self.host):
            raise SettingsError(f"{PREFIX}HOST is {self.host!r}; it must be an address or a host's name")


_RANGES: Final = (
    ("port", 0, 65535),
    ("workers", 1, 256),
    ("threads", 1, 256),
    ("max_samples", 1, 10_000_000),
    ("max_energies", 2, 10_000_000),
    ("max_curve_points", 2, 100_000_000),
    ("max_body_bytes", 1024, 1 << 32),
    ("graceful_timeout", 1, 3600),
    ("max_requests", 0, 1 << 31),
)


_MOST_DIGITS: Final = 20
"""More than any setting needs, and fewer than Python refuses to read."""


def _whole(name: str, text: str) -> int:
    digits = text.strip()
    if digits.isascii() and digits.isdigit() and len(digits) <= _MOST_DIGITS:
        return int(digits)
    raise SettingsError(f"{name} is {text[:40]!r}; it must be a whole number")
