"""Whether the process lives, and whether it takes requests: false while it drains."""

from threading import Event
from typing import Final

import orjson
from flask import Flask, Response

from service.web.problems import KINDS, problem

DRAINING: Final = Event()
"""Set when the process was told to stop: what is in flight finishes, and nothing new should be sent."""


def register(app: Flask) -> None:
    """Add the two probes."""
    app.add_url_rule("/livez", "livez", _live, methods=["GET"])
    app.add_url_rule("/readyz", "readyz", _ready, methods=["GET"])


def _live() -> Response:
    return _said({"status": "live"})


def _ready() -> Response:
    if not DRAINING.is_set():
        return _said({"status": "ready"})
    return problem(KINDS["draining"], "this process finishes what is in flight", headers={"Retry-After": "1"})


def _said(body: dict[str, str]) -> Response:
    answer = Response(orjson.dumps(body), content_type="application/json")
    answer.headers["Cache-Control"] = "no-store"
    return answer
