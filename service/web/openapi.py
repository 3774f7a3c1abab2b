"""The OpenAPI 3.1 document: the schemas' own components, and the operations of the table of endpoints."""

from collections.abc import Mapping
from typing import Any, Final

from flask import Flask

import service
from schemas.examples import EXAMPLES
from schemas.limits import Limits
from schemas.openapi import components
from service.settings import Settings
from service.web.catalogues import add_document
from service.web.endpoints import ENDPOINTS, Endpoint
from service.web.problems import KINDS, MEDIA_TYPE

_JSON: Final = "application/json"

_PROBLEMS: Final = {
    "400": "No JSON, or a request that is not well formed.",
    "406": "None of the forms asked for can be had.",
    "413": "The body is too large.",
    "414": "The link is too long: send the request by POST or QUERY.",
    "415": "The body is of a type that this service does not read.",
    "422": "Understood but wrong, or beyond a published limit: every fault with a pointer.",
    "500": "Something went wrong here; nothing internal is shown.",
}


def document(settings: Settings) -> dict[str, Any]:
    """Return the document for the limits in force."""
    limits = Limits(settings.max_samples, settings.max_energies, settings.max_curve_points)
    schemas = components(limits)
    return {
        "openapi": "3.1.0",
        "info": {
            "title": "fillmark",
            "version": service.VERSION,
            "summary": "The electron gas of real conductors, with units on every field.",
            "description": "Fermi level, density of states and thermal occupancy of bulk, films, wires and boxes. "
            "Results are model estimates, not ratings of any device. Each calculator also takes the method QUERY (RFC "
            "10008), which is POST made safe and cacheable; OpenAPI 3.1 has no word for it.",
        },
        "servers": [{"url": "/"}],
        "tags": [{"name": "calculators"}, {"name": "catalogues"}, {"name": "health"}],
        "paths": {
            **{f"/v1/{endpoint.name}": _calculator(endpoint) for endpoint in ENDPOINTS},
            "/v1": _catalogue("service", "What this service is", "Service"),
            "/v1/units": _catalogue("units", "The closed vocabulary of units", "Units"),
            "/v1/cautions": _catalogue("cautions", "The cautions that a response may carry", "Cautions"),
            "/livez": _probe("livez", "Whether the process lives"),
            "/readyz": _probe("readyz", "Whether the process takes requests", draining=True),
        },
        "components": {"schemas": schemas, "responses": _problem_responses()},
    }


def _problem_responses() -> Mapping[str, Any]:
    content = {MEDIA_TYPE: {"schema": {"$ref": "#/components/schemas/Problem"}}}
    return {f"Problem{status}": {"description": text, "content": content} for status, text in _PROBLEMS.items()}


def _refused(*statuses: str) -> dict[str, Any]:
    return {status: {"$ref": f"#/components/responses/Problem{status}"} for status in statuses}


_FORMAT: Final = {
    "name": "format",
    "in": "query",
    "description": "The form of the answer; overrules Accept.",
    "schema": {"type": "string", "enum": ["json"]},
}


def _calculator(endpoint: Endpoint) -> dict[str, Any]:
    request_name, result_name = type(endpoint.request).__name__, type(endpoint.result).__name__
    examples = {
        f"example-{number}": {"value": example} for number, example in enumerate(EXAMPLES[request_name], start=1)
    }
    schema = {"$ref": f"#/components/schemas/{request_name}"}
    answered = {
        "description": "The result.",
        "headers": {
            "ETag": {"description": "A strong validator of this answer.", "schema": {"type": "string"}},
            "Vary": {"description": "The answer depends on Accept.", "schema": {"type": "string"}},
        },
        "content": {_JSON: {"schema": {"$ref": f"#/components/schemas/{result_name}"}}},
    }
    common = {"summary": endpoint.summary, "description": endpoint.description, "tags": ["calculators"]}
    query = {
        "name": "request",
        "in": "query",
        "required": True,
        "description": "The request, as JSON.",
        "content": {_JSON: {"schema": schema, "examples": examples}},
    }
    return {
        "post": {
            **common,
            "operationId": endpoint.name,
            "parameters": [_FORMAT],
            "requestBody": {"required": True, "content": {_JSON: {"schema": schema, "examples": examples}}},
            "responses": {"200": answered, **_refused("400", "406", "413", "414", "415", "422", "500")},
            "x-also-by": "QUERY",
        },
        "get": {
            **common,
            "operationId": f"{endpoint.name}-by-link",
            "parameters": [query, _FORMAT],
            "responses": {
                "200": answered,
                "304": {"description": "What the caller has is still right."},
                **_refused("400", "406", "414", "422", "500"),
            },
        },
    }


def _catalogue(name: str, summary: str, schema: str) -> dict[str, Any]:
    return {
        "get": {
            "operationId": name,
            "summary": summary,
            "tags": ["catalogues"],
            "parameters": [_FORMAT],
            "responses": {
                "200": {
                    "description": "The catalogue.",
                    "content": {_JSON: {"schema": {"$ref": f"#/components/schemas/{schema}"}}},
                },
                **_refused("400", "406", "414"),
            },
        }
    }


def _probe(name: str, summary: str, draining: bool = False) -> dict[str, Any]:
    status = {"type": "object", "properties": {"status": {"type": "string"}}, "required": ["status"]}
    responses: dict[str, Any] = {"200": {"description": "It does.", "content": {_JSON: {"schema": status}}}}
    if draining:
        content = {MEDIA_TYPE: {"schema": {"$ref": "#/components/schemas/Problem"}}}
        responses["503"] = {"description": "It is about to stop.", "content": content}
    return {"get": {"operationId": name, "summary": summary, "tags": ["health"], "responses": responses}}


def register(app: Flask, settings: Settings) -> None:
    """Serve the document."""
    assert all(str(kind.status) in {*_PROBLEMS, "404", "405", "503"} for kind in KINDS.values())
    add_document(app, "/openapi.json", document(settings))
