"""Problems: pointers, floods and the shape of the body."""

import orjson
import pytest

from schemas.problems import MOST, Problem, faults, pointer


@pytest.mark.parametrize(
    ("path", "text"),
    [
        # RFC 6901, section 6: the URI fragments of its own example
        ((), "#"),
        (("foo", 0), "#/foo/0"),
        (("",), "#/"),
        (("a/b",), "#/a~1b"),
        (("c%d",), "#/c%25d"),
        (("e^f",), "#/e%5Ef"),
        (("g|h",), "#/g%7Ch"),
        (("i\\j",), "#/i%5Cj"),
        (('k"l',), "#/k%22l"),
        ((" ",), "#/%20"),
        (("m~n",), "#/m~0n"),
    ],
)
def test_a_path_is_a_json_pointer_in_a_uri_fragment(path, text):
    assert pointer(path) == text


def test_a_long_pointer_is_cut():
    assert len(pointer(("x" * 1_000_000,))) < 250


def test_messages_of_an_object_as_a_whole_point_at_it():
    messages = {"a": {"_schema": ["whole"], 3: ["element"]}, "_schema": ["root"]}
    assert faults(messages) == [
        {"pointer": "#/a", "detail": "whole"},
        {"pointer": "#/a/3", "detail": "element"},
        {"pointer": "#", "detail": "root"},
    ]
    assert faults(["no object"]) == [{"pointer": "#", "detail": "no object"}]


def test_a_flood_is_counted_and_stays_small():
    told = faults({f"member {number} {'x' * 300}": ["y" * 350] for number in range(1000)})
    assert len(told) == MOST
    assert told[-1] == {"pointer": "#", "detail": "901 more faults"}
    assert len(orjson.dumps(told)) < 64_000


def test_a_problem_writes_what_it_is_given():
    stated = {
        "type": "/problems/invalid-request",
        "title": "The request cannot be answered as stated",
        "status": 422,
        "detail": "one fault",
        "instance": "/v1/fermi-level",
        "errors": [{"pointer": "#/temperature", "detail": "is missing"}],
    }
    assert Problem().dump(stated) == stated
    assert Problem().load(stated) == stated
