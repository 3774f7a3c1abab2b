"""The addresses of the calculators: the same request by POST, QUERY or GET."""

from collections.abc import Callable
from typing import Final

from flask import Flask, Request, Response, request

from schemas.limits import Limits
from service.settings import Settings
from service.web.body import MEDIA_TYPE, stated_request
from service.web.endpoints import ENDPOINTS, Endpoint, answer, entity_tag, load
from service.web.negotiation import Untyped, chosen_format
from service.web.problems import RequestError
from service.web.query import check_parameters

PARAMETERS: Final = ("request", "format")
METHODS: Final = ("GET", "HEAD", "OPTIONS", "POST", "QUERY")
SAFE: Final = ("GET", "HEAD", "QUERY")
CACHE_CONTROL: Final = "public, max-age=86400"
"""An answer depends on its request and this version alone, and its validator on both."""


def register(app: Flask, settings: Settings) -> None:
    """Add one address for each calculator."""
    limits = Limits(settings.max_samples, settings.max_energies, settings.max_curve_points)
    for endpoint in ENDPOINTS:
        view = _view(endpoint, limits, settings.max_body_bytes)
        path = f"/v1/{endpoint.name}"
        answered = [method for method in METHODS if method != "OPTIONS"]
        app.add_url_rule(path, endpoint.name, view, methods=answered, provide_automatic_options=False)
        app.add_url_rule(path, f"{endpoint.name}-options", _options, methods=["OPTIONS"])


def _view(endpoint: Endpoint, limits: Limits, most_bytes: int) -> Callable[[], Response]:
    def view() -> Response:
        # The proxy looks its request up at every use: once is enough.
        current: Request = request._get_current_object()  # type: ignore[attr-defined]
        if current.query_string:
            _check_query(current)
        media_type = chosen_format(current)
        loaded = load(endpoint, stated_request(current, most_bytes), limits)
        tag = entity_tag(endpoint, loaded, media_type)
        headers = {"ETag": f'"{tag}"', "Vary": "Accept"}
        if current.method in SAFE:
            headers["Accept-Query"], headers["Cache-Control"] = MEDIA_TYPE, CACHE_CONTROL
            if "If-None-Match" in current.headers and current.if_none_match.contains_weak(tag):
                return Response(status=304, headers=headers)
        return Response(answer(endpoint, loaded), content_type=media_type, headers=headers)

    return view


def _options() -> Response:
    """Say what an address takes, QUERY among it."""
    return Untyped(headers={"Allow": ", ".join(METHODS), "Accept-Query": MEDIA_TYPE})


def _check_query(current: Request) -> None:
    check_parameters(current, PARAMETERS)
    if "request" in current.args and current.method not in ("GET", "HEAD"):
        raise RequestError("bad-request", f"{current.method} takes the request in its body, not in the query")
