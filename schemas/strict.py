"""The base of every request schema: one pass over the declared members, all faults at once, nothing unknown passes.

It replaces marshmallow's own `load`, whose hooks and error store cost a third of a small request; fields, declarations
and `ValidationError` are marshmallow's. Messages nest by member name and index; those of an object as a whole stand
under ``_schema``. `schemas.problems` turns them into pointers.
"""

import difflib
from collections.abc import Iterable, Mapping
from typing import Any, ClassVar, Final

from marshmallow import Schema, ValidationError, fields, missing

LISTED: Final = 20
"""Faults listed for one array or one object; the rest are counted."""

LATER: Final = "comes with a later version of this service"

WHOLE: Final = "_schema"
"""The key under which marshmallow keeps the messages of an object as a whole."""

_COMPARED: Final = 40


def shortened(value: object) -> str:
    """Return a value as an error quotes it, cut where it is long.

    Examples
    --------
    >>> shortened("furlong")
    "'furlong'"
    """
    if not isinstance(value, str):
        return {bool: "a boolean", dict: "an object", list: "an array", type(None): "null"}.get(type(value), "a number")
    return repr(value if len(value) <= _COMPARED else value[:_COMPARED] + "...")


def hint(word: str, known: Iterable[str]) -> str:
    """Return a did-you-mean for a misspelt word, or nothing where no known word is near.

    Examples
    --------
    >>> hint("temprature", ["temperature", "geometry"])
    '; did you mean temperature?'
    """
    near = difflib.get_close_matches(word, known, n=1) if len(word) <= _COMPARED else []
    return f"; did you mean {near[0]}?" if near else ""


class StrictSchema(Schema):
    """A schema of a request's object."""

    later: ClassVar[Mapping[str, str]] = {}
    """Members of the contract that this version refuses, and the sentence for each."""

    def load(self, data: Any, *, many: bool | None = None, partial: Any = None, unknown: Any = None) -> Any:
        """Return the members of an object, each loaded by its field.

        Raises
        ------
        ValidationError
            With every fault; `valid_data` holds the members that loaded.
        """
        if not isinstance(data, dict):
            raise ValidationError(f"must be an object, not {shortened(data)}")
        loaded, errors = {}, {}
        for name, field in self.load_fields.items():
            if name not in data and not field.required:
                continue
            try:
                value = field.deserialize(data.get(name, missing), name, data)
            except ValidationError as error:
                errors[name] = error.messages
                value = error.valid_data or missing
            if value is not missing:
                loaded[name] = value
        if not data.keys() <= self.load_fields.keys():
            self._refuse_unknown(data, errors)
        if errors:
            raise ValidationError(errors, valid_data=loaded)
        return loaded

    def _refuse_unknown(self, data: Mapping[str, Any], errors: dict[str, Any]) -> None:
        unknown = [name for name in data if name not in self.load_fields]
        for name in unknown[:LISTED]:
            if name in self.later:
                errors[name] = [self.later[name]]
            else:
                errors[name] = [f"is not a member here{hint(name, self.load_fields)}"]
        if len(unknown) > LISTED:
            errors[WHOLE] = [f"{len(unknown) - LISTED} more members are not known here"]


class Member(fields.Field[Any]):
    """A field of a request: missing and null are named in this service's words, and nothing is done that it has not.

    marshmallow's own `deserialize` walks through validators, hooks and defaults, of which no field here has any: that
    is a third of the time of a small request.
    """

    def __init__(self, **options: Any) -> None:
        super().__init__(error_messages={"required": "is missing", "null": "must not be null"}, **options)

    def deserialize(
        self, value: Any, attr: str | None = None, data: Mapping[str, Any] | None = None, **options: Any
    ) -> Any:
        """Return the value as loaded, or `missing`."""
        if value is missing:
            if self.required:
                raise self.make_error("required")
            return missing
        if value is None:
            raise self.make_error("null")
        return self._deserialize(value, attr, data, **options)


class Word(Member):
    """One word out of a few.

    Parameters
    ----------
    *words : str
        The words.
    later : iterable of str
        Words of the contract that this version refuses.
    """

    def __init__(self, *words: str, later: Iterable[str] = (), **options: Any) -> None:
        super().__init__(**options)
        self.words = words
        self.later = frozenset(later)

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> str:
        if not isinstance(value, str):
            raise ValidationError(f"must be a word, not {shortened(value)}")
        if value in self.words:
            return value
        if value in self.later:
            raise ValidationError(f"{value} {LATER}; this one takes {', '.join(self.words)}")
        raise ValidationError(f"{shortened(value)} is none of {', '.join(self.words)}{hint(value, self.words)}")


class Object(Member):
    """An object with a schema of its own, made once."""

    def __init__(self, schema: StrictSchema, **options: Any) -> None:
        super().__init__(**options)
        self.schema = schema

    def _deserialize(self, value: Any, attr: str | None, data: Mapping[str, Any] | None, **options: Any) -> Any:
        return self.schema.load(value)
