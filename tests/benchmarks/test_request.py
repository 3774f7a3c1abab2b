"""One request through the whole service, against a route that only parses and writes the same JSON.

In process, and over a real server by the CPU time of its workers; both routes alternate within one run, since the
machines are noisy. Run with `pytest tests/benchmarks/test_request.py -s`.
"""

import http.client
import json
import multiprocessing
import socket
import time
from pathlib import Path

import numpy as np
import orjson
import pytest
from flask import Flask, Response, request
from gunicorn.app.base import BaseApplication

from service.server import Server, configuration
from service.settings import Settings
from service.web.app import create_app

REQUESTS = {
    "bulk": {
        "carrier_density": {"value": 8.49e22, "unit": "cm^-3"},
        "geometry": {"kind": "bulk"},
        "temperature": {"value": 300, "unit": "K"},
        "band": {"effective_mass": {"value": 1.0, "unit": "1"}, "relative_permittivity": {"value": 1.0, "unit": "1"}},
    },
    "film": {
        "carrier_density": {"value": 5e20, "unit": "cm^-3"},
        "geometry": {"kind": "film", "thickness": {"value": 20, "unit": "nm"}},
        "temperature": {"value": 300, "unit": "K"},
        "band": {"effective_mass": {"value": 0.3, "unit": "1"}, "relative_permittivity": {"value": 9.0, "unit": "1"}},
    },
}
ROUNDS = 7
SHORT_ROUNDS, SHORT_ROUND = 25, 300


def floor_app(answers):
    """Return a Flask application that parses each body and writes the answer that the service gives."""
    app = Flask("floor")
    for kind, answer in answers.items():

        def view(answer=answer):
            orjson.loads(request.get_data())
            return Response(orjson.dumps(answer), content_type="application/json")

        app.add_url_rule(f"/{kind}", kind, view, methods=["POST"])
    return app


@pytest.fixture(scope="module")
def answers():
    client = create_app().test_client()
    return {kind: client.post("/v1/fermi-level", json=body).json for kind, body in REQUESTS.items()}


@pytest.mark.parametrize("kind", REQUESTS)
def test_one_request_in_process(benchmark, answers, kind):
    body = json.dumps(REQUESTS[kind])
    clients = {
        "ours": (create_app().test_client(), "/v1/fermi-level"),
        "floor": (floor_app(answers).test_client(), f"/{kind}"),
    }

    def send(which):
        client, path = clients[which]
        return client.post(path, data=body, content_type="application/json")

    assert orjson.loads(send("ours").data) == orjson.loads(send("floor").data)
    times = {"ours": [], "floor": []}
    for _ in range(ROUNDS):
        for which, taken in times.items():
            began = time.process_time()
            for _ in range(400):
                send(which)
            taken.append((time.process_time() - began) / 400)
    benchmark(lambda: send("ours"))
    ratio = np.median(times["ours"]) / np.median(times["floor"])
    print(f"\n{kind}: {np.median(times['ours']) * 1e6:.0f} us in process, test client included; floor x {ratio:.2f}")


class Floor(BaseApplication):
    """The bare route under the same kind of server."""

    def __init__(self, app, port):
        self._app, self._port = app, port
        super().__init__()

    def load_config(self):
        for name, setting in configuration(Settings(port=self._port, workers=1)).items():
            self.cfg.set(name, setting)

    def load(self):
        return self._app


def run_floor(app, port):
    Floor(app, port).run()


def run_ours(port):
    Server(Settings(port=port, workers=1)).run()


def free_port():
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        return probe.getsockname()[1]


def workers_of(pid):
    return [int(child) for child in Path(f"/proc/{pid}/task/{pid}/children").read_text().split()]


def cpu_seconds(pid):
    """Return the time that all threads of a process have spent on a processor."""
    tasks = Path(f"/proc/{pid}/task").glob("*/schedstat")
    return sum(int(task.read_text().split()[0]) for task in tasks) / 1e9


def test_one_request_over_a_real_server_by_the_workers_cpu(answers):
    context = multiprocessing.get_context("fork")
    ports = {which: free_port() for which in ("ours", "floor")}
    servers = {
        "ours": context.Process(target=run_ours, args=(ports["ours"],)),
        "floor": context.Process(target=run_floor, args=(floor_app(answers), ports["floor"])),
    }
    try:
        for server in servers.values():
            server.start()
        for port in ports.values():
            wait_for(port)
        for kind, body in REQUESTS.items():
            text = json.dumps(body)
            paths = {"ours": "/v1/fermi-level", "floor": f"/{kind}"}
            used = {"ours": [], "floor": []}
            for which in used:
                ask(ports[which], paths[which], text, 50)
            for _ in range(SHORT_ROUNDS):
                for which, taken in used.items():
                    (worker,) = workers_of(servers[which].pid)
                    before = cpu_seconds(worker)
                    ask(ports[which], paths[which], text, SHORT_ROUND)
                    taken.append((cpu_seconds(worker) - before) / SHORT_ROUND)
            ours, floor = np.median(used["ours"]), np.median(used["floor"])
            # Pair by pair, since the machine's speed drifts between rounds.
            ratio = float(np.median(np.array(used["ours"]) / np.array(used["floor"])))
            used_us = f"{ours * 1e6:.0f} us of a worker's CPU a request, floor {floor * 1e6:.0f}"
            print(f"\n{kind}: {used_us}: x {ratio:.2f}")
            # The goal; the machine's noise on a median of alternating rounds is a few per cent.
            assert ratio < 1.5
    finally:
        for server in servers.values():
            server.terminate()
        for server in servers.values():
            server.join(10)


def wait_for(port):
    for _ in range(100):
        try:
            socket.create_connection(("127.0.0.1", port), timeout=1).close()
            return
        except OSError:
            time.sleep(0.1)
    raise TimeoutError("the server did not start")


def ask(port, path, text, count):
    connection = http.client.HTTPConnection("127.0.0.1", port)
    for _ in range(count):
        connection.request("POST", path, text, {"Content-Type": "application/json"})
        answer = connection.getresponse()
        answer.read()
        assert answer.status == 200
    connection.close()
