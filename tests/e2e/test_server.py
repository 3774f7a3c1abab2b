"""The real server on a port of this machine: how it starts, what it answers by wire, how it stops."""

import http.client
import json
import os
import re
import signal
import socket
import subprocess
import sys
import time
from concurrent.futures import ThreadPoolExecutor

import pytest

REQUEST = json.dumps(
    {
        "carrier_density": {"value": 5e20, "unit": "cm^-3"},
        "geometry": {"kind": "film", "thickness": {"value": 20, "unit": "nm"}},
        "temperature": {"value": 300, "unit": "K"},
    }
).encode()


POST_JSON = b"POST /v1/fermi-level HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\n"


def start(**environ):
    """Start the service on a port of the system's choice and return it with the port that it says."""
    server = subprocess.Popen(
        [sys.executable, "-m", "service", "serve", "--port", "0"],
        stdout=subprocess.PIPE,
        stderr=subprocess.STDOUT,
        text=True,
        env={**os.environ, **environ},
    )
    line = server.stdout.readline()
    found = re.fullmatch(r"fillmark listens on http://127\.0\.0\.1:(\d+)\n", line)
    assert found, line + server.stdout.read()
    return server, int(found.group(1))


def stop(server, seconds=20):
    """Tell the service to stop and return its exit status."""
    server.send_signal(signal.SIGTERM)
    server.communicate(timeout=seconds)
    return server.returncode


@pytest.fixture(scope="module")
def port():
    server, chosen = start(FILLMARK_MAX_BODY_BYTES="100000")
    yield chosen
    assert stop(server) == 0


def send(port, method="POST", path="/v1/fermi-level", body=REQUEST, headers=None, **options):
    connection = http.client.HTTPConnection("127.0.0.1", port, timeout=20)
    connection.request(method, path, body, {"Content-Type": "application/json", **(headers or {})}, **options)
    try:
        answer = connection.getresponse()
        return answer.status, answer.headers, answer.read()
    finally:
        connection.close()


def test_every_method_is_answered_by_wire(port):
    posted = send(port)
    queried = send(port, "QUERY")
    assert posted[0] == queried[0] == 200
    assert posted[2] == queried[2]
    tag = posted[1]["ETag"]
    assert send(port, "QUERY", headers={"If-None-Match": tag})[0] == 304


def test_the_same_request_has_the_same_bytes_on_every_worker(port):
    with ThreadPoolExecutor(8) as threads:
        bodies = set(threads.map(lambda _: send(port)[2], range(64)))
    assert len(bodies) == 1


def test_a_body_in_chunks_is_read_whole_or_refused_and_never_cut_short(port):
    pieces = [REQUEST[at : at + 7] for at in range(0, len(REQUEST), 7)]
    assert send(port, body=iter(pieces), encode_chunked=True)[2] == send(port)[2]
    status, headers, body = send(port, body=iter([REQUEST, b" " * 100_000]), encode_chunked=True)
    assert status == 413
    assert headers["Content-Type"] == "application/problem+json"
    assert json.loads(body)["status"] == 413


@pytest.mark.parametrize(
    ("raw", "status"),
    [
        (b"GET /" + b"x" * 10_000 + b" HTTP/1.1\r\nHost: x\r\n\r\n", 414),
        (b"GET / HTTP/1.1\r\nHost: x\r\nX: " + b"x" * 20_000 + b"\r\n\r\n", 431),
        (b"nonsense\r\n\r\n", 400),
        (b"G@T / HTTP/1.1\r\nHost: x\r\n\r\n", 400),
        (b"POST /v1/fermi-level HTTP/1.1\r\nHost: x\r\nContent-Length: -1\r\n\r\n", 400),
        (b"POST /v1/fermi-level HTTP/1.1\r\nHost: x\r\nContent-Length: 5\r\nTransfer-Encoding: chunked\r\n\r\n", 400),
        (POST_JSON + b"Transfer-Encoding: chunked\r\n\r\nzz\r\n", 400),
        (POST_JSON + b"Transfer-Encoding: chunked\r\n\r\n2\r\n{}\r\n-1\r\n", 400),
    ],
)
def test_what_the_server_itself_refuses_is_a_problem_too(port, raw, status):
    with socket.create_connection(("127.0.0.1", port), timeout=20) as connection:
        connection.sendall(raw)
        answer = b""
        while piece := connection.recv(65536):
            answer += piece
    head, _, body = answer.partition(b"\r\n\r\n")
    assert head.startswith(b"HTTP/1.1 %d " % status)
    assert b"application/problem+json" in head
    assert b"<html" not in body.lower()
    assert json.loads(body)["status"] == status


def test_a_body_that_its_sender_breaks_off_is_refused(port):
    with socket.create_connection(("127.0.0.1", port), timeout=20) as connection:
        connection.sendall(POST_JSON + b"Content-Length: %d\r\n\r\n" % (len(REQUEST) + 1) + REQUEST)
        connection.shutdown(socket.SHUT_WR)
        assert connection.recv(65536).startswith(b"HTTP/1.1 400 ")


def test_it_starts_and_answers_within_its_goal_and_stops_when_told():
    began = time.perf_counter()
    server, port = start()
    assert send(port)[0] == 200
    taken = time.perf_counter() - began
    print(f"start to first answer: {taken:.2f} s (goal 1.5 s on a quiet machine)")
    assert stop(server) == 0
    # Ten times the goal is no speed test: past it, it does not start.
    assert taken < 15


def test_requests_in_flight_finish_when_it_is_told_to_stop():
    server, port = start(FILLMARK_THREADS="4")
    count = 60_000
    slow = json.dumps(
        {
            "carrier_density": {"value": [1e19] * count, "unit": "cm^-3"},
            "geometry": {"kind": "film", "thickness": {"value": [20.0] * count, "unit": "nm"}},
            "temperature": {"value": [300.0] * count, "unit": "K"},
        }
    ).encode()
    with ThreadPoolExecutor(4) as threads:
        answers = [threads.submit(send, port, body=slow) for _ in range(4)]
        time.sleep(0.3)
        server.send_signal(signal.SIGTERM)
        assert [answer.result()[0] for answer in answers] == [200] * 4
    assert stop(server) == 0
