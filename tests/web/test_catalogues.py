"""What the service says of itself, against its own schemas and its own behaviour."""

import pytest

from schemas.catalogues import Cautions, Service, Units
from service.web.health import DRAINING


@pytest.mark.parametrize(("path", "schema"), [("/v1", Service()), ("/v1/units", Units()), ("/v1/cautions", Cautions())])
def test_a_catalogue_is_of_its_schema_and_has_a_validator(path, schema, client):
    answer = client.get(path)
    assert answer.status_code == 200
    schema.load(answer.json)
    again = client.get(path, headers={"If-None-Match": answer.headers["ETag"]})
    assert (again.status_code, again.data) == (304, b"")


def test_every_link_leads_somewhere(client):
    for name, path in client.get("/v1").json["links"].items():
        assert client.get(path).status_code in (200, 400), name


def test_every_spelling_of_the_catalogue_is_read_as_its_unit(client, sample_request):
    units = {unit["symbol"]: unit for unit in client.get("/v1/units").json["units"]}
    expected = None
    for spelling in units["cm^-3"]["spellings"]:
        request = sample_request("bulk", carrier_density={"value": 2e19, "unit": spelling})
        answer = client.post("/v1/fermi-level", json=request)
        expected = expected or answer.data
        assert answer.data == expected, spelling


def test_cautions_that_are_raised_are_in_the_catalogue(client, sample_request):
    known = {entry["code"]: entry["text"] for entry in client.get("/v1/cautions").json["cautions"]}
    raised = client.post("/v1/fermi-level", json=sample_request("film")).json["cautions"]
    assert raised
    for caution in raised:
        assert known[caution["code"]] == caution["text"]


def test_the_probes_tell_life_and_readiness(client):
    assert client.get("/livez").json == {"status": "live"}
    assert client.get("/readyz").json == {"status": "ready"}
    DRAINING.set()
    try:
        draining = client.get("/readyz")
        assert draining.status_code == 503
        assert draining.content_type == "application/problem+json"
        assert "Retry-After" in draining.headers
        assert client.get(draining.json["type"]).json["status"] == 503
        assert client.get("/livez").status_code == 200
    finally:
        DRAINING.clear()
