"""The query of an address: of a parameter stated twice, none is ignored in silence."""

import json
from urllib.parse import quote

import pytest


@pytest.mark.parametrize("again", ["request=%7B%7D", "format=json&format=csv", "format=json&format=json"])
def test_a_parameter_stated_twice_is_400(again, client, sample_request):
    answer = client.get(f"/v1/fermi-level?request={quote(json.dumps(sample_request('bulk')))}&{again}")
    assert (answer.status_code, answer.json["type"]) == (400, "/problems/bad-request")
    assert "2 times" in answer.json["detail"]


def test_the_catalogues_take_format_once(client):
    assert client.get("/v1/units?format=json").status_code == 200
    assert client.get("/v1/units?format=json&format=json").status_code == 400
