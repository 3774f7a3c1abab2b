"""Functions held as one polynomial a cell: reading the tables, and evaluating each element's own polynomial."""

from functools import cache
from importlib.resources import files

import numpy as np
from numpy.typing import NDArray

from service.physics.values import FloatArray


@cache
def table(file: str, name: str) -> FloatArray:
    """Return one array of a file of tables, read-only, so that forked workers share it."""
    with files("service.physics.tables").joinpath(file).open("rb") as opened, np.load(opened) as arrays:
        loaded = np.ascontiguousarray(arrays[name], dtype=np.float64)
    loaded.flags.writeable = False
    return loaded


@cache
def cells(file: str, name: str) -> list[tuple[float, ...]]:
    """Return a table's polynomials cell by cell, highest power first, as Python floats for the path of one sample."""
    return [tuple(cell) for cell in table(file, name).T.tolist()]


def horner(polynomials: FloatArray, cell: NDArray[np.intp], offset: FloatArray, result: FloatArray) -> None:
    """Fill `result` with each element's own polynomial, the coefficients gathered power by power."""
    np.take(polynomials[0], cell, out=result, mode="clip")
    gathered = np.empty_like(result)
    for row in polynomials[1:]:
        result *= offset
        np.take(row, cell, out=gathered, mode="clip")
        result += gathered
