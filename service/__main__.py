"""The command: ``fillmark serve``, or ``python -m service serve``."""

import argparse
import os
import sys
from collections.abc import Mapping, Sequence

import service
from service.errors import SettingsError
from service.server import serve
from service.settings import PREFIX, Settings

_OPTIONS = {
    "host": "address to listen on",
    "port": "port to listen on; 0 lets the system choose",
    "workers": "processes",
    "threads": "threads of each process",
}


def parser() -> argparse.ArgumentParser:
    """Return the parser of the command line."""
    described = "The electron gas of real conductors as a REST service: Fermi level, density of states, occupancy."
    top = argparse.ArgumentParser(prog="fillmark", description=described)
    top.add_argument("--version", action="version", version=f"fillmark {service.VERSION}")
    commands = top.add_subparsers(dest="command", required=True, metavar="COMMAND")
    serving = commands.add_parser(
        "serve",
        help="run the service",
        description="Run the service until it is stopped by Ctrl-C or SIGTERM.",
        epilog=f"Every option also by environment variable, and more limits beside: {PREFIX}HOST, {PREFIX}PORT, "
        f"{PREFIX}WORKERS, {PREFIX}THREADS, {PREFIX}MAX_SAMPLES, {PREFIX}MAX_ENERGIES, {PREFIX}MAX_CURVE_POINTS, "
        f"{PREFIX}MAX_BODY_BYTES, {PREFIX}GRACEFUL_TIMEOUT, {PREFIX}MAX_REQUESTS.",
    )
    defaults = Settings()
    for name, sentence in _OPTIONS.items():
        default = getattr(defaults, name)
        serving.add_argument(f"--{name}", metavar="N" if name != "host" else "ADDRESS", help=f"{sentence} ({default})")
    return top


def settings_of(stated: argparse.Namespace, environ: Mapping[str, str]) -> Settings:
    """Return the settings of the environment, overruled by the command line.

    Raises
    ------
    SettingsError
        With one line, where one is wrong.
    """
    chosen = {f"{PREFIX}{name.upper()}": getattr(stated, name) for name in _OPTIONS}
    return Settings.from_environ({**environ, **{name: text for name, text in chosen.items() if text is not None}})


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit status: 2 where a setting is wrong."""
    stated = parser().parse_args(arguments)
    try:
        serve(settings_of(stated, os.environ))
    except SettingsError as error:
        print(f"fillmark: {error}", file=sys.stderr)
        return 2
    return 0


if __name__ == "__main__":
    sys.exit(main())
