"""Which form the caller wants: the `format` parameter, else `Accept` with its q-values."""

from typing import Final

from flask import Request, Response
from werkzeug.datastructures import MIMEAccept

from service.web.problems import RequestError

JSON: Final = "application/json"

FORMATS: Final = {"json": JSON}
"""What can be had, by its short name."""

COMING: Final = ("csv", "arrow", "svg", "png", "html")
"""Short names that the contract keeps for later versions."""

_PLAIN: Final = frozenset(("", "*/*", JSON))


class Untyped(Response):
    """A response without a body, which has no media type either; Flask would call it HTML."""

    default_mimetype = None


def chosen_format(request: Request) -> str:
    """Return the media type to answer with.

    Raises
    ------
    RequestError
        Where nothing that the caller would take can be had.
    """
    short = request.args.get("format") if request.query_string else None
    if short is not None:
        if short in FORMATS:
            return FORMATS[short]
        later = "comes with a later version" if short in COMING else "is not known"
        raise _not_acceptable(f"the format {short[:40]!r} {later}")
    if request.environ.get("HTTP_ACCEPT", "").strip() in _PLAIN:
        return JSON
    best = max(FORMATS.values(), key=lambda media: _quality(request.accept_mimetypes, media))
    if _quality(request.accept_mimetypes, best) == 0:
        raise _not_acceptable("nothing that Accept names can be had")
    return best


def _quality(accepted: MIMEAccept, media: str) -> float:
    """Return how much a caller wants a media type: the quality of the most specific range that holds it.

    Parameters such as `charset` do not tell our forms apart, and clients send them: they are passed over, where
    werkzeug's own match asks that they be the same.
    """
    if not accepted:
        return 1.0
    specificity = {media: 2, f"{media.partition('/')[0]}/*": 1, "*/*": 0}
    named = ((stated.partition(";")[0].strip().lower(), quality) for stated, quality in accepted)
    found = [(specificity[name], quality) for name, quality in named if name in specificity]
    return max(found)[1] if found else 0.0


def _not_acceptable(reason: str) -> RequestError:
    available = ", ".join(f"{media} (format={short})" for short, media in FORMATS.items())
    return RequestError("not-acceptable", f"{reason}; there is {available}", {"Vary": "Accept"})
