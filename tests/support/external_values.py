"""External reference values, each row with its source: see tests/reference/external/README.md.

A check names its source through the row: `row["source"]` and `row["provenance"]` stand in the test's id and message.
"""

import json
from functools import cache
from pathlib import Path
from typing import Any

import pytest

FOLDER = Path(__file__).parents[1] / "reference" / "external"


@cache
def rows(file: str, quantity: str | None = None) -> list[dict[str, Any]]:
    """Return the rows of one file, all or those of one quantity."""
    read = json.loads((FOLDER / f"{file}.json").read_text(encoding="utf-8"))["rows"]
    return [row for row in read if quantity in (None, row["quantity"])]


def parameters(file: str, quantity: str | None = None) -> list[Any]:
    """Return the rows as pytest parameters, each with its own id."""
    return [pytest.param(row, id=row["id"]) for row in rows(file, quantity)]


def value(row: dict[str, Any], name: str) -> float:
    """Return one input of a row as a number in the unit that the row states."""
    return float(row["inputs"][name]["value"])
