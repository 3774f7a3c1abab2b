"""Make units.json from units.toml: exact sizes from pint, every spelling of every unit. Run as a module; needs pint.

A size is the exact quotient of two integers. The file keeps its nearest double and, where that serves better, the
double to divide by instead: 1e9 is exact, 1e-9 is not.
"""

import json
import tomllib
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from decimal import Decimal
from fractions import Fraction
from itertools import permutations, product
from pathlib import Path
from typing import Any

import pint

FOLDER = Path(__file__).parent
SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")

Factors = list[tuple[str, int]]
"""Names of atoms and their powers."""


@dataclass(frozen=True, slots=True)
class Style:
    """A way of writing a power, with the signs that stand between factors there."""

    mark: str
    joints: tuple[str, ...]
    raised: bool = False

    def write(self, parts: Sequence[tuple[str, int]]) -> list[str]:
        """Return the factors as text."""
        powers = [(name, "" if power == 1 else f"{self.mark}{power}") for name, power in parts]
        return [name + (power.translate(SUPERSCRIPTS) if self.raised else power) for name, power in powers]


STYLES = (
    Style("^", (" ", "*", "·")),
    Style("**", ("*", " * ")),
    Style(" ** ", (" * ",)),  # as pint writes
    Style("", (".", " ")),  # as UCUM and astropy write
    Style("", (" ", "·"), raised=True),
)


@dataclass(frozen=True, slots=True)
class Atom:
    """A unit that stands alone or in a product.

    Attributes
    ----------
    names : list of str
        Its symbol first.
    alone : list of str
        Names that it has only outside products.
    expression : str
        What pint calls it.
    ucum : str or None
        Its UCUM code.
    source : str
        Where its size is from.
    """

    names: list[str]
    alone: list[str]
    expression: str
    ucum: str | None
    source: str


def read_atoms(listed: dict[str, Any]) -> dict[str, Atom]:
    """Return the atoms of the list by symbol."""
    atoms = {}
    for row in listed["atoms"]:
        ucum = row.get("ucum")
        names = list(dict.fromkeys([row["symbol"], *([ucum] if ucum else []), *row.get("also", [])]))
        atoms[row["symbol"]] = Atom(
            names, row.get("alone", []), row["pint"], ucum, listed["sources"][row.get("source", "SI")]
        )
    return atoms


def factors(symbol: str) -> Factors:
    """Return the atoms of a symbol such as ``cm^2/(V s)``, with their powers."""
    if symbol == "1":
        return []
    numerator, _, denominator = symbol.partition("/")
    found = []
    for part, sign in ((numerator, 1), (denominator.strip("()"), -1)):
        for token in part.split():
            name, _, power = token.partition("^")
            found.append((name, sign * int(power or 1)))
    return found


def exact_size(symbol: str, si: str, atoms: dict[str, Atom], registry: Any) -> Fraction:
    """Return how many SI units the unit is, exactly.

    Raises
    ------
    pint.DimensionalityError
        Where the unit and its SI unit differ in dimension.
    """
    units = {part: registry.Quantity(Decimal(1), "") for part in (symbol, si)}
    size = Fraction(1)
    for part, sign in ((symbol, 1), (si, -1)):
        for name, power in factors(part):
            atom = registry.Quantity(Decimal(1), "") * registry.parse_expression(atoms[name].expression)
            units[part] = units[part] * atom**power
            size *= Fraction(atom.to_base_units().magnitude) ** (sign * power)
    units[symbol].to(units[si].units)
    return size


def divisor(size: Fraction) -> float | None:
    """Return the double to divide by where that is nearer to the exact size than the one to multiply by."""
    factor, inverse = float(size), float(1 / size)
    if abs(Fraction(factor) / size - 1) <= abs(Fraction(inverse) * size - 1):
        return None
    return inverse


def ucum_code(symbol: str, atoms: dict[str, Atom]) -> str | None:
    """Return the UCUM code of a unit, or None where an atom has none."""
    parts = [(atoms[name].ucum, power) for name, power in factors(symbol)]
    if any(code is None for code, _ in parts):
        return None
    return ".".join(f"{code}{power if power != 1 else ''}" for code, power in parts) or "1"


def spellings(symbol: str, atoms: dict[str, Atom]) -> Iterator[str]:
    """Yield every way in which this service reads a unit, its symbol first; some come twice."""
    yield symbol
    parts = factors(symbol)
    if len(parts) == 1 and parts[0][1] == 1:
        yield from atoms[symbol].alone
    for names in product(*(atoms[name].names for name, _ in parts)):
        named = [(name, power) for name, (_, power) in zip(names, parts, strict=True)]
        above = [(name, power) for name, power in named if power > 0]
        below = [(name, power) for name, power in named if power < 0]
        for top, bottom in product(permutations(above), permutations(below)):
            yield from _products([*top, *bottom])
            if bottom:
                yield from _quotients(top, [(name, -power) for name, power in bottom])


def _products(parts: Sequence[tuple[str, int]]) -> Iterator[str]:
    """Yield products with signed powers, in the four ways of writing a power."""
    for style in STYLES:
        for joint in style.joints:
            yield joint.join(style.write(parts))


def _quotients(above: Sequence[tuple[str, int]], below: Sequence[tuple[str, int]]) -> Iterator[str]:
    """Yield quotients: the denominator in parentheses, or a slash before each of its factors."""
    for style in STYLES:
        numerator, denominator = style.write(above), style.write(below)
        for joint in style.joints:
            top, bottom = joint.join(numerator) or "1", joint.join(denominator)
            yield f"{top}/({bottom})" if len(below) > 1 else f"{top}/{bottom}"
            yield f"{top}/{'/'.join(denominator)}"
            yield f"{top} / {' / '.join(denominator)}"
        if not above and not style.mark:
            yield f"/{'/'.join(denominator)}"


def table() -> dict[str, Any]:
    """Return the whole table.

    Raises
    ------
    ValueError
        Where two units share a spelling.
    """
    listed = tomllib.loads((FOLDER / "units.toml").read_text(encoding="utf-8"))
    atoms = read_atoms(listed)
    registry: Any = pint.UnitRegistry(non_int_type=Decimal)
    owner: dict[str, str] = {}
    dimensions = []
    for dimension in listed["dimension"]:
        units = []
        for symbol, qudt, *extra in dimension["units"]:
            size = exact_size(symbol, dimension["si"], atoms, registry)
            others = [text for text in dict.fromkeys([*spellings(symbol, atoms), *extra]) if text != symbol]
            for text in (symbol, *others):
                if owner.setdefault(text, symbol) != symbol:
                    raise ValueError(f"{text!r} is a spelling of {owner[text]!r} and of {symbol!r}")
            sources = dict.fromkeys(atoms[name].source for name, _ in factors(symbol)) or [listed["sources"]["SI"]]
            units.append(
                {
                    "symbol": symbol,
                    "factor": float(size),
                    "divisor": divisor(size),
                    "ucum": ucum_code(symbol, atoms),
                    "qudt": qudt or None,
                    "source": "; ".join(sources),
                    "also": others,
                }
            )
        dimensions.append({**{key: dimension[key] for key in ("name", "phrase", "si")}, "units": units})
    return {"dimensions": dimensions}


def written(made: dict[str, Any]) -> str:
    """Return the file's text: one unit a line, so that a change shows as what it is."""
    blocks = []
    for dimension in made["dimensions"]:
        head = json.dumps({key: dimension[key] for key in ("name", "phrase", "si")}, ensure_ascii=False)
        units = ",\n".join(json.dumps(unit, ensure_ascii=False) for unit in dimension["units"])
        blocks.append(f'{head[:-1]}, "units": [\n{units}\n]}}')
    return '{"dimensions": [\n' + ",\n".join(blocks) + "\n]}\n"


if __name__ == "__main__":  # pragma: no cover - the test compares without writing
    (FOLDER / "units.json").write_text(written(table()), encoding="utf-8")
