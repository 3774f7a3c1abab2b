"""What the service says of itself: GET /v1, its units, its cautions, and its kinds of problem."""

import hashlib
from collections.abc import Mapping
from dataclasses import asdict
from typing import Any, Final

import orjson
from flask import Flask, Response, request

import service
from schemas.catalogues import units_catalogue
from schemas.limits import Limits
from service.calculators.cautions import CATALOGUE
from service.calculators.cost import MOST_LEVELS
from service.physics import constants
from service.settings import Settings
from service.web.endpoints import ENDPOINTS
from service.web.negotiation import chosen_format
from service.web.problems import KINDS
from service.web.query import check_parameters

_CONSTANTS: Final = {
    "elementary_charge": (constants.ELEMENTARY_CHARGE, "C"),
    "planck": (constants.PLANCK, "J s"),
    "boltzmann": (constants.BOLTZMANN, "J/K"),
    "avogadro": (constants.AVOGADRO, "mol^-1"),
    "speed_of_light": (constants.SPEED_OF_LIGHT, "m/s"),
    "electron_mass": (constants.ELECTRON_MASS, "kg"),
    "vacuum_permittivity": (constants.VACUUM_PERMITTIVITY, "F/m"),
    "bohr_radius": (constants.BOHR_RADIUS, "m"),
}


def service_entry(settings: Settings) -> dict[str, Any]:
    """Return the body of GET /v1."""
    limits = Limits(settings.max_samples, settings.max_energies, settings.max_curve_points)
    return {
        "name": "fillmark",
        "version": service.VERSION,
        "limits": {**asdict(limits), "levels": MOST_LEVELS, "body_bytes": settings.max_body_bytes},
        "constants": {
            "edition": constants.EDITION,
            "values": {name: {"value": value, "unit": unit} for name, (value, unit) in _CONSTANTS.items()},
        },
        "links": {
            **{endpoint.name: f"/v1/{endpoint.name}" for endpoint in ENDPOINTS},
            "units": "/v1/units",
            "cautions": "/v1/cautions",
            "openapi": "/openapi.json",
            "problems": "/problems",
            "livez": "/livez",
            "readyz": "/readyz",
        },
    }


def register(app: Flask, settings: Settings) -> None:
    """Add the catalogues, each written once and served with a validator."""
    cautions = {"cautions": [asdict(entry) for entry in CATALOGUE.values()]}
    problems = {
        "problems": [
            {"type": f"/problems/{kind.slug}", "title": kind.title, "status": kind.status} for kind in KINDS.values()
        ]
    }
    add_document(app, "/v1", service_entry(settings))
    add_document(app, "/v1/units", units_catalogue())
    add_document(app, "/v1/cautions", cautions)
    add_document(app, "/problems", problems)
    for entry in problems["problems"]:
        add_document(app, str(entry["type"]), entry)


def add_document(app: Flask, path: str, document: Mapping[str, Any]) -> None:
    """Serve a document that does not change while the service runs."""
    body = orjson.dumps(document)
    tag = hashlib.sha256(body).hexdigest()[:40]

    def view() -> Response:
        check_parameters(request, ("format",))
        made = Response(body, content_type=chosen_format(request))
        made.headers["ETag"] = f'"{tag}"'
        made.headers["Cache-Control"] = "public, max-age=3600"
        made.headers["Vary"] = "Accept"
        made.make_conditional(request)
        return made

    app.add_url_rule(path, path, view, methods=["GET"])
