"""The rule for docstrings of physics, as a function of a module's text that returns what breaks it.

- Everything public has a docstring; a method that overrides a described one needs none of its own.
- A function that other rooms (folders) use is documented in full: `Parameters` names each parameter, `Returns` says
  what comes back. A function that serves its own room alone may do with a sentence.
- Where a number is described, in `Parameters`, `Returns` or `Attributes`, its SI unit stands in brackets: ``[J]``.
- A method that returns numbers names their unit in its sentence.
"""

import ast
import re
from collections.abc import Collection, Iterator
from dataclasses import dataclass

UNITS = frozenset(("1", "J", "J^-1", "J m^-D", "J^-1 m^-D", "K", "kg", "m", "m^-D", "V/m"))
"""The SI units that physics speaks in; one more is one more line here."""

NUMBER = re.compile(r"\b(float|int|ndarray)\b")
SECTION = re.compile(r"^(\w[\w ]*)\n-{3,}\n", re.MULTILINE)
BRACKET = re.compile(r"\[([^\[\]]+)\]")
ENTRY = re.compile(r"^\S.*$", re.MULTILINE)

Function = ast.FunctionDef | ast.AsyncFunctionDef


@dataclass(frozen=True)
class Entry:
    """One entry of a section: the names and type on its first line, and the text below."""

    head: str
    text: str

    @property
    def names(self) -> list[str]:
        """The parameters that it describes."""
        return [name.strip(" *`") for name in self.head.partition(" : ")[0].split(",")]

    @property
    def is_number(self) -> bool:
        """Whether it describes numbers."""
        return NUMBER.search(self.head.partition(" : ")[2] or self.head) is not None

    @property
    def unit(self) -> str | None:
        """The unit in its last brackets."""
        brackets = BRACKET.findall(self.text)
        return brackets[-1] if brackets else None


def sections(docstring: str) -> dict[str, list[Entry]]:
    """Return the entries of each section of a numpydoc docstring."""
    parts = SECTION.split(docstring)
    return {title: list(_entries(body)) for title, body in zip(parts[1::2], parts[2::2], strict=True)}


def _entries(body: str) -> Iterator[Entry]:
    heads = list(ENTRY.finditer(body))
    ends = [head.start() for head in heads[1:]] + [len(body)]
    for head, end in zip(heads, ends, strict=True):
        yield Entry(head[0], body[head.end() : end])


def faults(source: str, used_elsewhere: Collection[str], described: Collection[str]) -> list[str]:
    """Return the faults of one module.

    `used_elsewhere` are its functions that other rooms use, `described` the methods that a base class describes.
    """
    found: list[str] = []
    for node in ast.parse(source).body:
        if isinstance(node, Function) and not node.name.startswith("_"):
            found += _function_faults(node, node.name, in_full=node.name in used_elsewhere)
        if isinstance(node, ast.ClassDef) and not node.name.startswith("_"):
            found += _class_faults(node, described)
    return found


def _class_faults(node: ast.ClassDef, described: Collection[str]) -> Iterator[str]:
    docstring = ast.get_docstring(node)
    if docstring is None:
        yield f"{node.name}: no docstring"
        return
    yield from _unit_faults(node.name, docstring)
    overrides = described if node.bases else ()
    for method in node.body:
        if not isinstance(method, Function) or method.name.startswith("_") or method.name in overrides:
            continue
        name = f"{node.name}.{method.name}"
        yield from _function_faults(method, name, in_full=False)
        sentence = ast.get_docstring(method) or ""
        if method.returns and "Values" in ast.unparse(method.returns) and not UNITS & set(BRACKET.findall(sentence)):
            yield f"{name}: returns numbers, and names no SI unit"


def _function_faults(node: Function, name: str, in_full: bool) -> Iterator[str]:
    docstring = ast.get_docstring(node)
    if docstring is None:
        yield f"{name}: no docstring"
        return
    given = sections(docstring)
    parameters = [argument.arg for argument in ast.walk(node.args) if isinstance(argument, ast.arg)]
    parameters = [parameter for parameter in parameters if parameter not in ("self", "cls")]
    if in_full or "Parameters" in given:
        documented = [documented for entry in given.get("Parameters", []) for documented in entry.names]
        yield from (
            f"{name}: parameter {missing} is not described" for missing in parameters if missing not in documented
        )
        yield from (f"{name}: {extra} is no parameter" for extra in documented if extra not in parameters)
        returns = node.returns is not None and ast.unparse(node.returns) != "None"
        if returns and not given.get("Returns"):
            yield f"{name}: no section Returns"
    yield from _unit_faults(name, docstring)


def _unit_faults(name: str, docstring: str) -> Iterator[str]:
    given = sections(docstring)
    for title in ("Parameters", "Returns", "Attributes"):
        for entry in given.get(title, []):
            if entry.is_number and entry.unit is None:
                yield f"{name}: {title}: {entry.head}: no unit in brackets"
            elif entry.is_number and entry.unit not in UNITS:
                yield f"{name}: {title}: {entry.head}: [{entry.unit}] is not in the list of SI units"
