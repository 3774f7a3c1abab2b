"""The base of the request schemas."""

import pytest
from marshmallow import ValidationError

from schemas.problems import faults
from schemas.strict import LATER, LISTED, Object, StrictSchema, Word, hint, shortened


class Inner(StrictSchema):
    shape = Word("round", "square", later=["oval"])


class Outer(StrictSchema):
    later = {"colour": f"colour {LATER}"}  # noqa: RUF012 - as short as a declaration gets
    size = Word("small", "large", required=True)
    inner = Object(Inner())


OUTER = Outer()


def test_members_load():
    assert OUTER.load({"size": "small", "inner": {"shape": "round"}}) == {"size": "small", "inner": {"shape": "round"}}


def test_all_faults_come_at_once(refused):
    assert refused(OUTER, {"inner": {"shape": "rond", "shap": 1}, "colour": 1, "sise": "small"}) == {
        "#/size": "is missing",
        "#/inner/shape": "'rond' is none of round, square; did you mean round?",
        "#/inner/shap": "is not a member here; did you mean shape?",
        "#/colour": "colour comes with a later version of this service",
        "#/sise": "is not a member here; did you mean size?",
    }


def test_what_loaded_beside_a_fault_is_kept():
    with pytest.raises(ValidationError) as raised:
        OUTER.load({"size": "small", "inner": {"shape": "round", "x": 1}})
    assert raised.value.valid_data == {"size": "small", "inner": {"shape": "round"}}


@pytest.mark.parametrize(
    ("data", "named"), [([], "an array"), (None, "null"), (3, "a number"), ("x" * 99, repr("x" * 40 + "..."))]
)
def test_what_is_no_object_is_refused(refused, data, named):
    assert refused(OUTER, data) == {"#": f"must be an object, not {named}"}


def test_null_is_no_value(refused):
    assert refused(OUTER, {"size": None}) == {"#/size": "must not be null"}


def test_a_word_of_a_later_version_is_named_as_such(refused):
    detail = refused(Inner(), {"shape": "oval"})["#/shape"]
    assert detail == "oval comes with a later version of this service; this one takes round, square"


def test_a_word_is_a_string(refused):
    assert refused(Inner(), {"shape": True}) == {"#/shape": "must be a word, not a boolean"}


def test_a_flood_of_unknown_members_is_counted():
    with pytest.raises(ValidationError) as raised:
        OUTER.load({"size": "small", **{f"member {number}": 1 for number in range(10_000)}})
    told = faults(raised.value.messages)
    assert len(told) == LISTED + 1
    assert told[-1] == {"pointer": "#", "detail": f"{10_000 - LISTED} more members are not known here"}


def test_a_long_word_is_neither_quoted_whole_nor_compared():
    assert hint("s" * 1000, ["s" * 999]) == ""
    assert shortened("s" * 1000) == repr("s" * 40 + "...")
