"""One application for the room's tests, and the requests that they vary."""

import pytest

from service.web.app import create_app

LENGTHS = {
    "bulk": {},
    "sheet": {},
    "line": {},
    "film": {"thickness": {"value": 20, "unit": "nm"}},
    "wire": {"width": {"value": 12, "unit": "nm"}, "height": {"value": 9, "unit": "nm"}},
    "cylinder": {"diameter": {"value": 10, "unit": "nm"}},
    "box": {
        "length": {"value": 9, "unit": "nm"},
        "width": {"value": 8, "unit": "nm"},
        "height": {"value": 7, "unit": "nm"},
    },
    "sphere": {"diameter": {"value": 8, "unit": "nm"}},
}
DENSITIES = {"sheet": {"value": 5e12, "unit": "cm^-2"}, "line": {"value": 3e6, "unit": "cm^-1"}}


def request_of(kind, **stated):
    """Return a request for one sample of a kind at 300 K, with what a test states instead."""
    return {
        "carrier_density": DENSITIES.get(kind, {"value": 2e19, "unit": "cm^-3"}),
        "geometry": {"kind": kind, **LENGTHS[kind]},
        "temperature": {"value": 300, "unit": "K"},
        "band": {"effective_mass": 0.2},
        **stated,
    }


@pytest.fixture(scope="session")
def app():
    return create_app()


@pytest.fixture
def client(app):
    return app.test_client()


@pytest.fixture
def post(client):
    def send(path, request):
        return client.post(f"/v1/{path}", json=request)

    return send


@pytest.fixture(scope="session")
def sample_request():
    return request_of
