"""From quantities as stated to samples: arrays paired or crossed, rows refused or left out."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from schemas.limits import Limits
from schemas.quantity import Stated, faults_of
from schemas.strict import WHOLE
from schemas.units import FloatArray

Path = tuple[str | int, ...]
Values = float | FloatArray


@dataclass(slots=True)
class Column:
    """One parameter of the samples.

    Attributes
    ----------
    path : tuple of str or int
        Where the request states it.
    axis : str
        Its name as an axis of a grid.
    stated : Stated or float
        The quantity, or the default where the request states none.
    """

    path: Path
    axis: str
    stated: Stated | float

    @property
    def si(self) -> Values:
        """Its value or values in SI."""
        return self.stated.si if isinstance(self.stated, Stated) else self.stated


@dataclass(slots=True)
class Axis:
    """A column that is an array, and the axis of the samples' grid along which it runs."""

    column: Column
    number: int
    values: FloatArray
    bad: NDArray[np.intp] | None
    reason: str


@dataclass(slots=True)
class Samples:
    """The samples of a request.

    Attributes
    ----------
    count : int or None
        How many are to be computed; None for one sample stated as numbers.
    values : list of float or ndarray, shape (count,)
        Each column's values, in SI; one number for all samples is an array without memory of its own.
    grid : dict or None
        Axes and shape, where the arrays are crossed.
    rows : ndarray of int or None
        The rows kept, where invalid ones are left out.
    omitted : list of dict or None
        The rows left out: row, pointer and detail.
    """

    count: int | None
    values: list[Values]
    grid: dict[str, Any] | None = None
    rows: NDArray[np.intp] | None = None
    omitted: list[dict[str, Any]] | None = None


def put(errors: dict[Any, Any], path: Path, messages: Any) -> None:
    """Put messages under a path, beside those that are there; a fault of the whole hides faults of its parts."""
    for name in path[:-1]:
        errors = errors.setdefault(name, {})
        if not isinstance(errors, dict):
            return
    there = errors.setdefault(path[-1], messages)
    if there is not messages and isinstance(there, dict) and isinstance(messages, dict):
        for name, message in messages.items():
            put(there, (name,), message)


def arrange(
    columns: Sequence[Column], crossed: bool, omit: bool, limits: Limits, errors: dict[Any, Any]
) -> Samples | None:
    """Return the samples that columns make, or None with what is wrong added to the faults.

    Parameters
    ----------
    columns : sequence of Column
        The parameters.
    crossed : bool
        Whether arrays are crossed rather than paired.
    omit : bool
        Whether rows with a value out of range are left out rather than refused.
    limits : Limits
        The most samples.
    errors : dict
        The faults so far.
    """
    axes = _axes(columns)
    if not axes:
        return Samples(None, [column.si for column in columns], {"axes": [], "shape": []} if crossed else None)
    fit = _sizes_fit(axes, crossed, limits, errors)
    if not omit:
        _refuse_rows(axes, errors)
    if not fit or (not omit and any(axis.bad is not None for axis in axes)):
        return None
    shape = tuple(len(axis.values) for axis in axes) if crossed else (len(axes[0].values),)
    if not crossed:
        for axis in axes:
            axis.number = 0
    rows, omitted = _rows(axes, shape) if omit else (None, None)
    if rows is not None and rows.size == 0:
        _refuse_rows(axes, errors)
        return None
    names = [axis.column.axis for axis in axes]
    return Samples(
        count=math.prod(shape) if rows is None else len(rows),
        values=_values(columns, {id(axis.column): axis for axis in axes}, shape, rows),
        grid={"axes": names, "shape": list(shape)} if crossed else None,
        rows=rows,
        omitted=omitted,
    )


def _axes(columns: Sequence[Column]) -> list[Axis]:
    """Return the columns that are arrays, each along an axis of its own."""
    axes: list[Axis] = []
    for column in columns:
        stated = column.stated
        if isinstance(stated, Stated) and isinstance(stated.si, np.ndarray):
            axes.append(Axis(column, len(axes), stated.si, stated.bad, stated.reason))
    return axes


def _values(
    columns: Sequence[Column], axes: dict[int, Axis], shape: tuple[int, ...], rows: NDArray[np.intp] | None
) -> list[Values]:
    """Return each column's values over all samples, or over the rows kept."""
    total = math.prod(shape)
    count = total if rows is None else len(rows)
    values: list[Values] = []
    for column in columns:
        axis = axes.get(id(column))
        if axis is None:
            values.append(np.broadcast_to(np.float64(column.si), (count,)))
            continue
        along = axis.values
        if len(shape) > 1:
            aside = [1] * len(shape)
            aside[axis.number] = len(along)
            along = np.broadcast_to(along.reshape(aside), shape).reshape(total)
        values.append(along if rows is None or count == total else along[rows])
    return values


def _sizes_fit(axes: list[Axis], crossed: bool, limits: Limits, errors: dict[Any, Any]) -> bool:
    """Tell whether the arrays pair, or their grid is within the limit; add what is wrong to the faults."""
    lengths = [len(axis.values) for axis in axes]
    total = math.prod(lengths) if crossed else max(lengths)
    if total > limits.samples:
        product = " x ".join(map(str, lengths)) + f" = {total}" if crossed and len(lengths) > 1 else str(total)
        longest = axes[lengths.index(max(lengths))]
        path = ("combine",) if crossed else (*longest.column.path, "value", WHOLE)
        put(errors, path, [f"{product} samples; the limit is {limits.samples}"])
        return False
    if crossed or len(set(lengths)) == 1:
        return True
    stated = ", ".join(f"{axis.column.axis} has {length}" for axis, length in zip(axes, lengths, strict=True))
    for axis in axes:
        detail = f'arrays must have one length, or be crossed with "combine": "grid"; {stated}'
        put(errors, (*axis.column.path, "value", WHOLE), [detail])
    return False


def _refuse_rows(axes: list[Axis], errors: dict[Any, Any]) -> None:
    for axis in axes:
        if axis.bad is not None:
            put(errors, axis.column.path, {"value": faults_of(axis.bad, axis.reason)})


def _rows(axes: list[Axis], shape: tuple[int, ...]) -> tuple[NDArray[np.intp], list[dict[str, Any]]]:
    """Return the rows without a fault, and for each of the others its first fault."""
    first = np.full(shape, -1)
    for number, axis in reversed(list(enumerate(axes))):
        if axis.bad is not None:
            index: list[Any] = [slice(None)] * len(shape)
            index[axis.number] = axis.bad
            first[tuple(index)] = number
    faulty = np.flatnonzero(first >= 0)
    places = [place.tolist() for place in np.unravel_index(faulty, shape)]
    pointers = ["#/" + "/".join(map(str, (*axis.column.path, "value/"))) for axis in axes]
    omitted = [
        {"row": row, "pointer": f"{pointers[number]}{places[axes[number].number][i]}", "detail": axes[number].reason}
        for i, (row, number) in enumerate(zip(faulty.tolist(), first.reshape(-1)[faulty].tolist(), strict=True))
    ]
    return np.flatnonzero(first < 0), omitted
