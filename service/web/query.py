"""The query of an address: parameters that are known, each stated once."""

from flask import Request

from service.web.problems import RequestError


def check_parameters(request: Request, known: tuple[str, ...]) -> None:
    """Refuse a parameter that is not known, or stated twice: of two values, one would be ignored in silence.

    Raises
    ------
    RequestError
        Naming the parameter.
    """
    for name, values in request.args.lists():
        if name not in known:
            detail = f"the query parameter {name[:40]!r} is not known; there is {', '.join(known)}"
            raise RequestError("bad-request", detail)
        if len(values) > 1:
            raise RequestError("bad-request", f"the query parameter {name!r} is stated {len(values)} times")
