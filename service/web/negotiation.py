"""Which form the caller wants: the `format` parameter, else `Accept` with its q-values."""

from typing import Final

from flask import Request

from service.web.problems import RequestError

JSON: Final = "application/json"

FORMATS: Final = {"json": JSON}
"""What can be had, by its short name."""

COMING: Final = ("csv", "arrow", "svg", "png", "html")
"""Short names that the contract keeps for later versions."""

_PLAIN: Final = frozenset(("", "*/*", JSON))


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
    best = request.accept_mimetypes.best_match(list(FORMATS.values()))
    if best is None:
        raise _not_acceptable("nothing that Accept names can be had")
    return best


def _not_acceptable(reason: str) -> RequestError:
    available = ", ".join(f"{media} (format={short})" for short, media in FORMATS.items())
    return RequestError("not-acceptable", f"{reason}; there is {available}", {"Vary": "Accept"})
