"""From the bytes of a request to its JSON: strict, bounded, and read once."""

import json
from typing import Any, Final

import orjson
from flask import Request

from service.web.problems import RequestError

MEDIA_TYPE: Final = "application/json"

_CHECKED_FOR_DUPLICATES: Final = 16_384
"""Bytes up to which a second parse looks for duplicate member names; above, the last of two names wins."""


_PIECE: Final = 1 << 16


class _DuplicateName(ValueError):
    """An object names a member twice."""


def stated_request(request: Request, most_bytes: int) -> Any:
    """Return the JSON that a request states, in its body or, with GET, in its query.

    Raises
    ------
    RequestError
        Where there is none, or none that this service reads.
    """
    if request.method in ("GET", "HEAD"):
        text = request.args.get("request")
        if text is None:
            raise RequestError("bad-request", "GET takes the request as JSON in the query parameter `request`")
        return parsed(text.encode())
    if request.content_type != MEDIA_TYPE:
        _check_type(request)
    if request.environ.get("HTTP_CONTENT_ENCODING", "identity").lower() != "identity":
        raise RequestError("unsupported-media-type", "the body must be sent as it is, without a content encoding")
    return parsed(_body(request, most_bytes))


def _check_type(request: Request) -> None:
    """Refuse a body of another type, or in another encoding than JSON's own (RFC 8259, section 8.1)."""
    accepted = {"Accept-Post": MEDIA_TYPE}
    if request.mimetype != MEDIA_TYPE:
        sent = request.mimetype[:80] or "none"
        raise RequestError("unsupported-media-type", f"the body's type must be {MEDIA_TYPE}, not {sent}", accepted)
    charset = request.mimetype_params.get("charset", "utf-8")
    if charset.lower() != "utf-8":
        raise RequestError("unsupported-media-type", f"JSON is sent in UTF-8, not in {charset[:40]!r}", accepted)


def _body(request: Request, most_bytes: int) -> bytes:
    """Return the body, whole."""
    length = request.content_length
    if length is not None and length > most_bytes:
        raise RequestError("body-too-large", f"the body has {length} bytes; the limit is {most_bytes}")
    try:
        body = _in_chunks(request, most_bytes) if length is None else request.get_data(cache=False)
    except (RequestError, MemoryError):
        raise
    except Exception as error:
        # Each server has its own errors for a body that is framed wrongly or breaks off: all of the sender's making.
        raise RequestError("bad-request", "the body broke off, or is framed wrongly") from error
    if length is not None and len(body) < length:
        raise RequestError("bad-request", f"the body broke off after {len(body)} of {length} bytes")
    return body


def _in_chunks(request: Request, most_bytes: int) -> bytes:
    """Return a body that states no length, read no further than one byte beyond the limit."""
    pieces, left = [], most_bytes + 1
    while left > 0 and (piece := request.stream.read(min(left, _PIECE))):
        pieces.append(piece)
        left -= len(piece)
    if left == 0:
        raise RequestError("body-too-large", f"the body has more than {most_bytes} bytes, which is the limit")
    return b"".join(pieces)


def parsed(body: bytes) -> Any:
    """Return the JSON value of some bytes.

    Raises
    ------
    RequestError
        Where they are no JSON, hold a number beyond a double, or name a member twice.
    """
    if not body:
        raise RequestError("not-json", "the request is empty; it must be a JSON object")
    try:
        value = orjson.loads(body)
        # As many colons as members leave no room for a member named twice, nor for a colon in a text: most bodies.
        if len(body) <= _CHECKED_FOR_DUPLICATES and body.count(b":") != _members(value):
            json.loads(body, object_pairs_hook=_without_duplicates)
    except orjson.JSONDecodeError as error:
        raise RequestError("not-json", f"the request is no JSON: {error}") from None
    except _DuplicateName as error:
        raise RequestError("not-json", f"an object names the member {str(error)[:60]!r} twice") from None
    except (RecursionError, ValueError):
        raise RequestError("not-json", "the request is nested too deeply") from None
    return value


def _members(value: Any) -> int:
    """Return how many members all objects of a value have."""
    if type(value) is dict:
        return len(value) + sum(map(_members, value.values()))
    return sum(map(_members, value)) if type(value) is list else 0


def _without_duplicates(pairs: list[tuple[str, Any]]) -> None:
    if len({name for name, _ in pairs}) < len(pairs):
        names = [name for name, _ in pairs]
        raise _DuplicateName(next(name for name in names if names.count(name) > 1))
