"""The body: of one type and encoding, and whole, or refused as the sender's."""

import io
import json

import pytest

JSON = "application/json"


class Broken:
    """A stream whose reading fails as a server's does, each in its own way."""

    def __init__(self, error):
        self.error = error

    def read(self, size=-1):
        raise self.error


def send(client, stream, **environ):
    environ = {"wsgi.input": stream, "wsgi.input_terminated": True, **environ}
    return client.post("/v1/fermi-level", content_type=JSON, environ_overrides=environ)


# RFC 8259, section 8.1: JSON between systems is UTF-8.
@pytest.mark.parametrize("charset", ["utf-8", "UTF-8", '"utf-8"'])
def test_utf_8_may_be_stated(charset, client, sample_request):
    body = json.dumps(sample_request("bulk"))
    assert client.post("/v1/fermi-level", data=body, content_type=f"{JSON}; charset={charset}").status_code == 200


@pytest.mark.parametrize("charset", ["latin-1", "utf-16", "x" * 500])
def test_another_charset_is_415_and_not_read_as_if_it_were_utf_8(charset, client, sample_request):
    body = json.dumps(sample_request("bulk"))
    answer = client.post("/v1/fermi-level", data=body, content_type=f"{JSON}; charset={charset}")
    assert (answer.status_code, answer.json["type"]) == (415, "/problems/unsupported-media-type")
    assert answer.headers["Accept-Post"] == JSON


def test_a_body_that_breaks_off_is_400_even_where_what_came_is_whole_json(client, sample_request):
    body = json.dumps(sample_request("bulk")).encode()
    answer = send(client, io.BytesIO(body), CONTENT_LENGTH=str(len(body) + 1))
    assert (answer.status_code, answer.json["type"]) == (400, "/problems/bad-request")
    assert f"after {len(body)} of {len(body) + 1} bytes" in answer.json["detail"]


@pytest.mark.parametrize("length", ["", "20"])
@pytest.mark.parametrize("error", [OSError("reset"), TimeoutError(), ValueError("chunk size")])
def test_a_body_that_the_server_cannot_read_is_400(error, length, client):
    answer = send(client, Broken(error), CONTENT_LENGTH=length)
    assert (answer.status_code, answer.json["type"]) == (400, "/problems/bad-request")


def test_memory_that_runs_out_over_a_body_is_our_failure_and_not_the_senders(client):
    assert send(client, Broken(MemoryError()), CONTENT_LENGTH="").status_code == 500
