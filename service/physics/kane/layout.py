"""Functions of two variables held as one polynomial a cell: where the cells lie, and the evaluation.

A table has one row a coefficient and one column a cell, so that the coefficients of one power lie together. The rows
run from the highest power of x to none, and within one power of x from the highest power of z to none. As the
coefficients fall in both directions, higher powers of x go with fewer powers of z. Both run from -1 to 1 in a cell.
"""

from functools import cache
from typing import Final

import numpy as np
from numpy.typing import NDArray

from service.physics.tabulated import table
from service.physics.values import FloatArray

FILE: Final = "kane.npz"
CHUNK: Final = 1 << 14
"""Elements at a time, so that a chunk's buffers stay in the second-level cache."""

CELLS_PER_UNIT: Final = 4
"""Along the first variable: eta, or the logarithm of a density."""

STRENGTH_CELLS: Final = 8
HIGHEST_BETA: Final = 3.0
"""Along the second variable, which runs from 0 in a parabolic band to the number of cells at the highest beta."""

DENSITY_LOW: Final = -20.0
DENSITY_HIGH: Final = 40.0
DENSITY_CELLS: Final = round((DENSITY_HIGH - DENSITY_LOW) * CELLS_PER_UNIT)
"""Between the ends in eta; the classical and the degenerate series are exact to the last digit beyond."""

DENSITY_TERMS: Final = (1, 2, 3, 4, 4, 6, 7, 9, 10, 11, 12)
"""How many powers of z go with each power of x, the highest first; what is left out is below 1e-16 of the whole."""

INVERSE_LOW: Final = -20.75
INVERSE_HIGH: Final = 5.25
INVERSE_CELLS: Final = round((INVERSE_HIGH - INVERSE_LOW) * CELLS_PER_UNIT)
INVERSE_TERMS: Final = (1, 2, 4, 5, 7, 8, 10, 11, 12, 13)

Cells = NDArray[np.intp]


def place_of_one(variable: float, low: float, cells: int) -> tuple[int, float]:
    """Return the cell along the first variable and the place in it."""
    # Just below the upper end the difference may round up to it.
    cell = min(int((variable - low) * CELLS_PER_UNIT), cells - 1)
    # The centre is formed exactly and then subtracted: the other order costs digits.
    return cell, (variable - ((cell + 0.5) / CELLS_PER_UNIT + low)) * (2.0 * CELLS_PER_UNIT)


def place_of_many(variable: FloatArray, low: float, cells: int) -> tuple[Cells, FloatArray]:
    """Return the cells along the first variable and the places in them."""
    cell = np.minimum(((variable - low) * CELLS_PER_UNIT).astype(np.intp), cells - 1)
    return cell, (variable - ((cell + 0.5) / CELLS_PER_UNIT + low)) * (2.0 * CELLS_PER_UNIT)


def strength_of_one(cell: int, beta: float, scale: float, stretch: float) -> tuple[int, float]:
    """Return the cell of the table and the place along the second variable.

    That is beta scale / (1 + beta scale) over its value at the highest beta, counted in cells.
    """
    position = beta * (scale + 1.0 / HIGHEST_BETA) * STRENGTH_CELLS / stretch
    part = min(int(position), STRENGTH_CELLS - 1)
    return cell * STRENGTH_CELLS + part, 2.0 * (position - part) - 1.0


def strength_of_many(cell: Cells, beta: FloatArray, scale: FloatArray, stretch: FloatArray) -> tuple[Cells, FloatArray]:
    """Return the cells of the table and the places along the second variable."""
    position = beta * (scale + 1.0 / HIGHEST_BETA) * STRENGTH_CELLS / stretch
    part = np.minimum(position.astype(np.intp), STRENGTH_CELLS - 1)
    return cell * STRENGTH_CELLS + part, 2.0 * (position - part) - 1.0


@cache
def scales() -> list[float]:
    """Return the scale of beta by cell of eta, as Python floats for the path of one sample."""
    return [float(scale) for scale in table(FILE, "density_scale")]


def polynomial_of_many(
    coefficients: FloatArray,
    terms: tuple[int, ...],
    cell: Cells,
    x: FloatArray,
    z: FloatArray,
    slope: FloatArray | None = None,
) -> FloatArray:
    """Return each element's own polynomial, and fill `slope` with its derivative by x."""
    value, inner, gathered = np.zeros_like(x), np.empty_like(x), np.empty_like(x)
    if slope is not None:
        slope[:] = 0.0
    row = 0
    for count in terms:
        np.take(coefficients[row], cell, out=inner, mode="clip")
        for lower in coefficients[row + 1 : row + count]:
            inner *= z
            np.take(lower, cell, out=gathered, mode="clip")
            inner += gathered
        if slope is not None:
            slope *= x
            slope += value
        value *= x
        value += inner
        row += count
    return value


def polynomial_of_one(
    coefficients: FloatArray, terms: tuple[int, ...], cell: int, x: float, z: float
) -> tuple[float, float]:
    """Return one polynomial and its derivative by x."""
    each = iter(coefficients[:, cell].tolist())
    value = slope = 0.0
    for count in terms:
        inner = 0.0
        for _ in range(count):
            inner = inner * z + next(each)
        slope = slope * x + value
        value = value * x + inner
    return value, slope
