"""Every error is a problem, also the framework's own: each status, its form, and nothing internal."""

import json

import pytest

from schemas.problems import MOST
from service.settings import Settings
from service.web.app import create_app
from service.web.problems import KINDS

JSON = "application/json"


def check(answer, status, slug):
    assert answer.status_code == status, answer.text
    assert answer.content_type == "application/problem+json"
    assert answer.json["type"] == f"/problems/{slug}"
    assert answer.json["status"] == status
    assert answer.json["title"] == KINDS[slug].title
    assert answer.json["detail"] and answer.json["instance"].startswith("/")
    assert len(answer.data) < 64_000


@pytest.mark.parametrize(
    "body",
    [
        b"",
        b"{",
        b"\xef\xbb\xbf{}",
        b'{"a": NaN}',
        b'{"a": 1e999}',
        b'{"a": Infinity}',
        b"[" * 30_000,
        b'{"a": 1, "a": 2}',
        b'{"g": {"a": 1, "a": 2}}',
        b"\xff\xfe",
        b"{'a': 1}",
    ],
)
def test_what_is_no_strict_json_is_400(body, client):
    answer = client.post("/v1/fermi-level", data=body, content_type=JSON)
    check(answer, 400, "not-json")


@pytest.mark.parametrize("body", [b"[]", b"1", b'"x"', b"null", b"{}"])
def test_what_is_json_but_no_request_is_422(body, client):
    check(client.post("/v1/fermi-level", data=body, content_type=JSON), 422, "invalid-request")


def test_depth_that_the_parsers_can_read_is_refused_as_a_request_and_not_as_json(client):
    body = b'{"a":' * 300 + b"1" + b"}" * 300
    check(client.post("/v1/fermi-level", data=body, content_type=JSON), 422, "invalid-request")


def test_get_without_its_request_is_400(client):
    check(client.get("/v1/fermi-level"), 400, "bad-request")


def test_an_unknown_query_parameter_is_400(client):
    check(client.post("/v1/fermi-level?fromat=json", json={}), 400, "bad-request")
    check(client.get("/v1/units?x=1"), 400, "bad-request")


def test_a_request_in_the_query_of_a_post_is_400(client):
    check(client.post("/v1/fermi-level?request={}", json={}), 400, "bad-request")


@pytest.mark.parametrize("path", ["/v2", "/v1/fermi-levels", "/nothing", "//v1", "/v1/materials", "/v1/fermi-level/x"])
def test_an_unknown_address_is_404(path, client):
    check(client.get(path), 404, "not-found")


@pytest.mark.parametrize(("method", "path"), [("DELETE", "/v1/fermi-level"), ("POST", "/v1/units"), ("PUT", "/livez")])
def test_a_method_that_an_address_does_not_take_is_405_and_says_which_it_takes(method, path, client):
    answer = client.open(path, method=method)
    check(answer, 405, "method-not-allowed")
    assert "GET" in answer.headers["Allow"]


@pytest.mark.parametrize("accept", ["text/html", "image/png", "application/json;q=0", "text/csv, application/xml"])
def test_a_form_that_cannot_be_had_is_406_with_the_list(accept, client, sample_request):
    answer = client.post("/v1/fermi-level", json=sample_request("bulk"), headers={"Accept": accept})
    check(answer, 406, "not-acceptable")
    assert "application/json" in answer.json["detail"]


@pytest.mark.parametrize("short", ["csv", "png", "nonsense"])
def test_a_format_that_cannot_be_had_is_406_whatever_accept_says(short, client, sample_request):
    answer = client.post(f"/v1/fermi-level?format={short}", json=sample_request("bulk"), headers={"Accept": "*/*"})
    check(answer, 406, "not-acceptable")


@pytest.mark.parametrize(
    "accept", ["", "*/*", "application/*", "text/html;q=0.9, application/json;q=0.1", "text/html, */*;q=0.01"]
)
def test_json_is_had_wherever_accept_lets_it(accept, client, sample_request):
    assert client.post("/v1/fermi-level", json=sample_request("bulk"), headers={"Accept": accept}).status_code == 200


def test_the_format_parameter_overrules_accept(client, sample_request):
    answer = client.post("/v1/fermi-level?format=json", json=sample_request("bulk"), headers={"Accept": "text/html"})
    assert (answer.status_code, answer.content_type) == (200, JSON)


def test_a_body_beyond_the_limit_is_413():
    small = create_app(Settings(max_body_bytes=1024)).test_client()
    check(small.post("/v1/fermi-level", data=b" " * 1025, content_type=JSON), 413, "body-too-large")
    assert small.post("/v1/fermi-level", data=b"{}" + b" " * 1022, content_type=JSON).status_code == 422


@pytest.mark.parametrize("kind", ["text/plain", "application/x-www-form-urlencoded", "", "application/vnd.api+json"])
def test_a_body_of_another_type_is_415(kind, client):
    check(client.post("/v1/fermi-level", data=b"{}", content_type=kind), 415, "unsupported-media-type")


def test_a_body_in_a_content_encoding_is_415(client):
    answer = client.post("/v1/fermi-level", data=b"{}", content_type=JSON, headers={"Content-Encoding": "gzip"})
    check(answer, 415, "unsupported-media-type")


def test_a_charset_beside_the_type_is_taken(client, sample_request):
    answer = client.post(
        "/v1/fermi-level", data=json.dumps(sample_request("bulk")), content_type="application/json; charset=utf-8"
    )
    assert answer.status_code == 200


def test_an_error_of_ours_is_500_shows_nothing_and_is_logged(monkeypatch, caplog, sample_request):
    broken = create_app()
    broken.config["PROPAGATE_EXCEPTIONS"] = False

    def fail(*_):
        raise RuntimeError("secret: /etc/passwd")

    monkeypatch.setattr("service.web.routes.answer", fail)
    answer = broken.test_client().post("/v1/fermi-level", json=sample_request("bulk"))
    check(answer, 500, "internal")
    assert "secret" not in answer.text and "Traceback" not in answer.text
    # What the caller may not see, the log has.
    (logged,) = [record for record in caplog.records if record.levelname == "ERROR"]
    assert logged.getMessage() == "POST /v1/fermi-level failed"
    assert "secret" in str(logged.exc_info[1])


def test_a_flood_of_faults_stays_small_and_counts_the_rest(client, sample_request):
    answer = client.post(
        "/v1/fermi-level", json=sample_request("bulk", temperature={"value": [-1.0] * 100_000, "unit": "K"})
    )
    check(answer, 422, "invalid-request")
    assert "more" in answer.json["errors"][-1]["detail"]


def test_a_flood_of_faults_in_every_object_stays_below_64_kb(client):
    wide = {f"{chr(0x1F600) * 50}{number}": chr(0x1F600) * 50 for number in range(300)}
    quantity = {"value": "x", "unit": chr(0x1F600) * 50, **wide}
    body = {
        **wide,
        "carrier_density": quantity,
        "temperature": quantity,
        "geometry": {"kind": "box", "length": quantity, "width": quantity, "height": quantity, **wide},
        "band": {"effective_mass": [quantity] * 3, "valleys": quantity, "relative_permittivity": quantity, **wide},
        "output_units": wide,
    }
    answer = client.post("/v1/fermi-level", json=body)
    check(answer, 422, "invalid-request")
    assert len(answer.json["errors"]) == MOST


def test_an_instance_is_a_uri_whatever_the_address_was(client):
    answer = client.get("/v1/%C3%A9%20%22%3Cb%3E")
    check(answer, 404, "not-found")
    assert answer.json["instance"] == "/v1/%C3%A9%20%22%3Cb%3E"


def test_a_megabyte_of_nonsense_is_not_repeated(client, sample_request):
    answer = client.post("/v1/fermi-level", json=sample_request("bulk", temperature={"value": 1, "unit": "m" * 10**6}))
    check(answer, 422, "invalid-request")


def test_every_kind_of_problem_can_be_looked_up(client):
    for entry in client.get("/problems").json["problems"]:
        assert client.get(entry["type"]).json == entry


def test_a_result_beyond_a_double_is_refused_and_not_written(monkeypatch, client, sample_request):
    from schemas.result import NonFinite

    def overflow(*_):
        raise NonFinite("too large")

    monkeypatch.setattr("service.web.routes.answer", overflow)
    check(client.post("/v1/fermi-level", json=sample_request("bulk")), 422, "out-of-range")
