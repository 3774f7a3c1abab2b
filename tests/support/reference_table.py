"""Tables under tests/reference that a script beside them made: lines of "#" that say how, then CSV."""

import csv
from pathlib import Path

FOLDER = Path(__file__).parents[1] / "reference"


def rows(name: str) -> list[dict[str, str]]:
    """Return the rows of a table, as text: it has more digits than a double."""
    with FOLDER.joinpath(name).open(encoding="ascii", newline="") as opened:
        return list(csv.DictReader(line for line in opened if not line.startswith("#")))
