"""Contours: the region of a grid where a field is below zero, as a path."""

from collections.abc import Iterator
from itertools import groupby
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.pictures.plot import Plot
from reglint.pictures.svg import number
from reglint.worstcase import Array

#: A corner of a cell: across, upwards, and the field's value there.
_Corner: TypeAlias = tuple[float, float, float]


def below_zero(plot: Plot, across: Array, up: Array, field: Array) -> str:
    """Return the path data of the region where the field, of shape (up, across), is negative.

    Between the points of the grid the field is taken as straight along each cell's edges.
    """
    pieces = []
    for row in range(len(up) - 1):
        for start, end in _runs(field[row : row + 2] < 0.0):
            steps = ((start, row), (end, row), (end, row + 1), (start, row + 1))
            cell = [(float(across[a]), float(up[b]), float(field[b, a])) for a, b in steps]
            piece = [_point(plot, *each) for each in _negative_part(cell)]
            pieces.append(f"M{'L'.join(piece)}Z")
    return "".join(pieces)


def _runs(negative: npt.NDArray[np.bool_]) -> Iterator[tuple[int, int]]:
    """Yield the ends of cells between two rows that are partly negative, whole ones joined."""
    count = negative.shape[1] - 1
    whole = [bool(negative[:, at : at + 2].all()) for at in range(count)]
    for is_whole, same in groupby(range(count), key=whole.__getitem__):
        cells = list(same)
        if is_whole:
            yield cells[0], cells[-1] + 1
        else:
            yield from ((at, at + 1) for at in cells if negative[:, at : at + 2].any())


def _negative_part(cell: list[_Corner]) -> Iterator[tuple[float, float]]:
    """Yield the corners of the part of a cell where the field is negative."""
    for corner, following in zip(cell, (*cell[1:], cell[0]), strict=True):
        if corner[2] < 0.0:
            yield corner[:2]
        if (corner[2] < 0.0) != (following[2] < 0.0):
            share = corner[2] / (corner[2] - following[2])
            yield (
                corner[0] + share * (following[0] - corner[0]),
                corner[1] + share * (following[1] - corner[1]),
            )


def _point(plot: Plot, x: float, y: float) -> str:
    across, up = plot.place(x, y)
    return f"{number(across)} {number(up)}"
