"""Errors as RFC 9457 problems: one table from what went wrong to status and words, and never an HTML body."""

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any, Final
from urllib.parse import quote

import orjson
from flask import Flask, Response, current_app, request
from marshmallow import ValidationError
from werkzeug.exceptions import HTTPException

from schemas.problems import MOST, faults, pointer
from schemas.result import NonFinite
from service.errors import Fault, SampleError, TooLarge, Unsupported

MEDIA_TYPE: Final = "application/problem+json"
_LONGEST: Final = 500
"""Characters of a detail or an instance; a problem repeats no megabyte that was sent."""


_IN_A_PATH: Final = "/:@!$&'()*+,;=~"
"""Beside letters and digits, what stands in the path of a URI as it is (RFC 3986, section 3.3)."""


@dataclass(frozen=True, slots=True)
class Kind:
    """One kind of problem: its slug under /problems/, its status, and its title."""

    slug: str
    status: int
    title: str


class RequestError(Exception):
    """A request that HTTP itself lets us refuse: the problem's kind, what went wrong, and headers to send along."""

    def __init__(self, slug: str, detail: str, headers: Mapping[str, str] | None = None) -> None:
        super().__init__(detail)
        self.kind = KINDS[slug]
        self.headers = dict(headers or {})


KINDS: Final = {
    kind.slug: kind
    for kind in (
        Kind("not-json", 400, "The body is not the JSON that this service reads"),
        Kind("bad-request", 400, "The request is not well formed"),
        Kind("not-found", 404, "There is nothing at this address"),
        Kind("method-not-allowed", 405, "This address does not take this method"),
        Kind("not-acceptable", 406, "The answer cannot be had in this form"),
        Kind("body-too-large", 413, "The body is too large"),
        Kind("unsupported-media-type", 415, "The body is of a type that this service does not read"),
        Kind("invalid-request", 422, "The request was understood, but is wrong"),
        Kind("unsupported", 422, "The request asks for what this version does not compute"),
        Kind("too-large", 422, "The request is valid, but beyond a published limit"),
        Kind("out-of-range", 422, "A result is beyond the range of a double"),
        Kind("http-error", 400, "The request was refused"),
        Kind("internal", 500, "Something went wrong here"),
        Kind("draining", 503, "This process is about to stop"),
    )
}

_BY_STATUS: Final = {
    kind.status: kind
    for kind in reversed(KINDS.values())
    if kind.slug not in ("not-json", "http-error", "out-of-range", "too-large", "unsupported", "draining")
}


def problem(
    kind: Kind, detail: str, errors: Iterable[Mapping[str, str]] = (), headers: Mapping[str, str] | None = None
) -> Response:
    """Return a problem as a response."""
    body: dict[str, Any] = {
        "type": f"/problems/{kind.slug}",
        "title": kind.title,
        "status": kind.status,
        "detail": _cut(detail),
        "instance": quote(_cut(request.path), safe=_IN_A_PATH),
    }
    listed = list(errors)
    if listed:
        body["errors"] = listed
    answer = Response(orjson.dumps(body), status=kind.status, content_type=MEDIA_TYPE)
    answer.headers.update(headers or {})
    answer.headers["Cache-Control"] = "no-store"
    return answer


def _cut(text: str) -> str:
    return text if len(text) <= _LONGEST else text[:_LONGEST] + "..."


def _of_request(error: RequestError) -> Response:
    return problem(error.kind, str(error), headers=error.headers)


def _of_validation(error: ValidationError) -> Response:
    listed = faults(error.messages)
    first = f"{listed[0]['pointer']}: {listed[0]['detail']}"
    return problem(KINDS["invalid-request"], first if len(listed) == 1 else f"{first}; errors lists the others", listed)


def _of_sample(error: SampleError) -> Response:
    slug = {TooLarge: "too-large", Unsupported: "unsupported"}.get(type(error), "invalid-request")
    listed = faults_of(error.faults)
    return problem(KINDS[slug], listed[0]["detail"], listed)


def faults_of(found: Iterable[Fault]) -> list[dict[str, str]]:
    """Return a calculator's faults as the entries of a problem, a batch's with their row; many are counted."""
    listed = [
        {
            "pointer": pointer(fault.path),
            "detail": fault.detail if fault.row is None else f"row {fault.row}: {fault.detail}",
        }
        for fault in found
    ]
    if len(listed) > MOST:
        listed[MOST - 1 :] = [{"pointer": "#", "detail": f"{len(listed) - MOST + 1} more faults"}]
    return listed


def _of_range(error: Exception) -> Response:
    detail = "a result is beyond the range of a double; ask for a less extreme sample, or another output unit"
    return problem(KINDS["out-of-range"], detail, [{"pointer": "#", "detail": detail}])


def _of_http(error: HTTPException) -> Response:
    status = error.code or 500
    kind = _BY_STATUS.get(status) or Kind("http-error", status, error.name)
    # Headers such as Allow are the framework's knowledge; its HTML body is not wanted.
    kept = {name: value for name, value in error.get_headers() if name.lower() in ("allow", "retry-after")}
    return problem(kind, _DETAILS.get(status, error.name), headers=kept)


_DETAILS: Final = {
    404: "no such address; GET /v1 lists what there is",
    405: "this address takes the methods that Allow lists",
}


def _of_anything(error: Exception) -> Response:
    # Flask logs only what no handler takes.
    current_app.logger.error("%s %s failed", request.method, request.url_rule, exc_info=error)
    return problem(KINDS["internal"], "the request could not be answered; it has been logged")


def register(app: Flask) -> None:
    """Answer every error of an application as a problem."""
    app.register_error_handler(RequestError, _of_request)
    app.register_error_handler(ValidationError, _of_validation)
    app.register_error_handler(SampleError, _of_sample)
    for kind in (NonFinite, OverflowError, ZeroDivisionError):
        app.register_error_handler(kind, _of_range)
    app.register_error_handler(HTTPException, _of_http)
    app.register_error_handler(Exception, _of_anything)
