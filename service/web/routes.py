"""The addresses of the calculators: the same request by POST, QUERY or GET."""

from collections.abc import Callable
from typing import Final

from flask import Flask, Response, request

from schemas.limits import Limits
from service.settings import Settings
from service.web.body import MEDIA_TYPE, stated_request
from service.web.endpoints import ENDPOINTS, Endpoint, answer, entity_tag, load
from service.web.negotiation import chosen_format
from service.web.problems import RequestError

SAFE: Final = ("GET", "HEAD", "QUERY")
CACHE_CONTROL: Final = "public, max-age=86400"
"""An answer depends on its request and this version alone, and its validator on both."""


def register(app: Flask, settings: Settings) -> None:
    """Add one address for each calculator."""
    limits = Limits(settings.max_samples, settings.max_energies, settings.max_curve_points)
    for endpoint in ENDPOINTS:
        view = _view(endpoint, limits, settings.max_body_bytes)
        app.add_url_rule(f"/v1/{endpoint.name}", endpoint.name, view, methods=["GET", "POST", "QUERY"])


def _view(endpoint: Endpoint, limits: Limits, most_bytes: int) -> Callable[[], Response]:
    allowed = {"request", "format"}

    def view() -> Response:
        if request.query_string:
            _check_parameters(allowed)
        media_type = chosen_format(request)
        loaded = load(endpoint, stated_request(request, most_bytes), limits)
        tag = entity_tag(endpoint, loaded, media_type)
        safe = request.method in SAFE
        if safe and "If-None-Match" in request.headers and request.if_none_match.contains_weak(tag):
            made = Response(status=304)
        else:
            made = Response(answer(endpoint, loaded), content_type=media_type)
        headers = made.headers
        headers["ETag"] = f'"{tag}"'
        headers["Vary"] = "Accept"
        headers["Accept-Query"] = MEDIA_TYPE
        if safe:
            headers["Cache-Control"] = CACHE_CONTROL
        return made

    return view


def _check_parameters(allowed: set[str]) -> None:
    for name in request.args:
        if name not in allowed:
            raise RequestError(
                "bad-request", f"the query parameter {name[:40]!r} is not known; there is request, format"
            )
    if "request" in request.args and request.method not in ("GET", "HEAD"):
        raise RequestError("bad-request", f"{request.method} takes the request in its body, not in the query")
