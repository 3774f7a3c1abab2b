"""Errors as RFC 9457 problems, and the way from nested messages to JSON pointers."""

from collections.abc import Iterator
from typing import Any, Final
from urllib.parse import quote

from marshmallow import RAISE, Schema, fields

from schemas.strict import WHOLE

MOST: Final = 100
"""Faults in one problem; the rest are counted. A problem's body stays under 64 kB."""

_LONGEST_POINTER: Final = 200
_UNRESERVED: Final = "!$&'()*+,;=:@-._~"


class FaultEntry(Schema):
    """One fault of a request."""

    class Meta:
        """Nothing beside the members below."""

        unknown = RAISE

    pointer = fields.String(
        required=True,
        metadata={"description": "Where the fault is: a JSON pointer (RFC 6901) as a URI fragment."},
    )
    detail = fields.String(required=True, metadata={"description": "What is wrong, and what would do."})


class Problem(Schema):
    """An error (RFC 9457)."""

    class Meta:
        """Nothing beside the members below."""

        unknown = RAISE

    type = fields.String(required=True, metadata={"format": "uri-reference", "description": "The kind of problem."})
    title = fields.String(required=True, metadata={"description": "The kind of problem, for a person."})
    status = fields.Integer(
        required=True, metadata={"minimum": 400, "maximum": 599, "description": "The HTTP status, again."}
    )
    detail = fields.String(metadata={"description": "What went wrong this time."})
    instance = fields.String(metadata={"format": "uri-reference", "description": "The request that went wrong."})
    errors = fields.List(
        fields.Nested(FaultEntry), metadata={"description": "All faults of the request, up to a hundred."}
    )


def pointer(path: tuple[str | int, ...]) -> str:
    """Return a path as a JSON pointer in a URI fragment.

    Examples
    --------
    >>> pointer(("temperature", "value", 3))
    '#/temperature/value/3'
    >>> pointer(("a/b", "c~d", "e f"))
    '#/a~1b/c~0d/e%20f'
    """
    text = "".join("/" + quote(str(step).replace("~", "~0").replace("/", "~1"), safe=_UNRESERVED) for step in path)
    return "#" + text if len(text) <= _LONGEST_POINTER else "#" + text[:_LONGEST_POINTER] + "..."


def faults(messages: Any) -> list[dict[str, str]]:
    """Return the nested messages of a ValidationError as a problem's `errors`.

    Examples
    --------
    >>> faults({"geometry": {"thickness": {"unit": ["is missing"]}}})
    [{'pointer': '#/geometry/thickness/unit', 'detail': 'is missing'}]
    """
    found = [{"pointer": pointer(path), "detail": detail} for path, detail in _flat(messages, ())]
    if len(found) > MOST:
        found[MOST - 1 :] = [{"pointer": "#", "detail": f"{len(found) - MOST + 1} more faults"}]
    return found


def _flat(messages: Any, path: tuple[str | int, ...]) -> Iterator[tuple[tuple[str | int, ...], str]]:
    if isinstance(messages, dict):
        for name, inner in messages.items():
            yield from _flat(inner, path if name == WHOLE else (*path, name))
    elif isinstance(messages, list):
        for inner in messages:
            yield from _flat(inner, path)
    else:
        yield path, str(messages)
