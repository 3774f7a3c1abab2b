"""The server: gunicorn with a configuration of ours, and what it says when it starts."""

import gc
import json
import os
import signal
import socket
import sys
from pathlib import Path
from types import FrameType
from typing import Any, Final

from gunicorn import util
from gunicorn.app.base import BaseApplication

from service.errors import SettingsError
from service.settings import Settings

_EXAMPLE: Final = {
    "carrier_density": {"value": 5e20, "unit": "cm^-3"},
    "geometry": {"kind": "film", "thickness": {"value": 20, "unit": "nm"}},
    "temperature": {"value": 300, "unit": "K"},
    "band": {"effective_mass": 0.3},
}
_SHARED_MEMORY: Final = Path("/dev/shm")


class Server(BaseApplication):  # type: ignore[misc]
    """gunicorn with the application loaded before the workers are forked, so that they share its memory."""

    def __init__(self, settings: Settings) -> None:
        self._settings = settings
        super().__init__()

    def load_config(self) -> None:
        """Set what gunicorn runs with."""
        for name, value in configuration(self._settings).items():
            self.cfg.set(name, value)

    def load(self) -> Any:
        """Return the application, warm: what a first request would import and read is there before the fork."""
        from service.web.app import create_app

        app = create_app(self._settings)
        client = app.test_client()
        for path in ("fermi-level", "density-of-states", "thermal-occupancy"):
            client.post(f"/v1/{path}", json=_EXAMPLE)
        # The collector need not walk, in every worker and again and again, what lives as long as the process; and
        # pages that it does not touch stay shared.
        gc.collect()
        gc.freeze()
        return app


def configuration(settings: Settings) -> dict[str, Any]:
    """Return gunicorn's settings for ours."""
    chosen: dict[str, Any] = {
        "bind": [address(settings.host, settings.port)],
        "workers": settings.workers,
        "threads": settings.threads,
        "worker_class": "gthread",
        "preload_app": True,
        "control_socket_disable": True,
        "graceful_timeout": settings.graceful_timeout,
        "max_requests": settings.max_requests,
        "max_requests_jitter": settings.max_requests // 10,
        "permit_unconventional_http_method": False,
        "limit_request_line": 8190,  # the most that gunicorn takes: a link holds a request
        "loglevel": "warning",
        "when_ready": _say_where,
        "post_worker_init": _drain_on_term,
        "proc_name": "fillmark",
    }
    # Heartbeats on a disk stall a worker when the disk does.
    if _SHARED_MEMORY.is_dir() and os.access(_SHARED_MEMORY, os.W_OK):
        chosen["worker_tmp_dir"] = str(_SHARED_MEMORY)
    return chosen


def address(host: str, port: int) -> str:
    """Return host and port as one address, an IPv6 host in brackets."""
    return f"[{host}]:{port}" if ":" in host else f"{host}:{port}"


def serve(settings: Settings) -> None:
    """Run the server until it is told to stop.

    Raises
    ------
    SettingsError
        Where the address cannot be listened on.
    """
    _require_free(settings.host, settings.port)
    # Threads of a numerical library would starve the other workers.
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    util.write_error = _write_problem
    Server(settings).run()


def _write_problem(client: socket.socket, status: int, reason: str, message: str) -> None:
    """Refuse what never reaches the application, such as a link too long, as a problem rather than a page of HTML."""
    body = json.dumps({"type": "about:blank", "title": reason, "status": status, "detail": message[:500]})
    head = f"HTTP/1.1 {status} {reason}\r\nConnection: close\r\nContent-Type: application/problem+json\r\n"
    util.write_nonblock(client, f"{head}Content-Length: {len(body)}\r\n\r\n{body}".encode("ascii"))


def _require_free(host: str, port: int) -> None:
    """Bind once before gunicorn does, which would try for seconds and print a page."""
    family = socket.AF_INET6 if ":" in host else socket.AF_INET
    try:
        with socket.socket(family, socket.SOCK_STREAM) as probe:
            probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
            probe.bind((host, port))
    except (OSError, TypeError) as error:  # TypeError: a name that cannot be one of a host
        reason = getattr(error, "strerror", None) or str(error)
        raise SettingsError(f"cannot listen on {address(host, port)}: {reason}") from None


def _say_where(arbiter: Any) -> None:
    """Say where the service listens and, to a person at a terminal, one line to try."""
    host, port = arbiter.LISTENERS[0].sock.getsockname()[:2]
    where = f"http://{address('127.0.0.1' if host in ('0.0.0.0', '::') else host, port)}"
    print(f"fillmark listens on {where}", flush=True)
    if sys.stdout.isatty():
        print(f"try: curl -s {where}/v1/fermi-level -H 'Content-Type: application/json' -d '{json.dumps(_EXAMPLE)}'")
        sys.stdout.flush()


def _drain_on_term(worker: Any) -> None:
    """Let readiness turn false as soon as a worker is told to stop, before what is in flight has finished."""
    from service.web.health import DRAINING

    stop: Any = signal.getsignal(signal.SIGTERM)

    def drain(number: int, frame: FrameType | None) -> None:
        DRAINING.set()
        stop(number, frame)

    signal.signal(signal.SIGTERM, drain)
