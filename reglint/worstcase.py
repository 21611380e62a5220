"""The worst case of a measure over a box: the search for its worst point.

First the measure's partials over the whole box: where one has a sure sign, the worst lies
at an end of that name's range. What remains is searched, corners first and then inside
(a product such as V·(S - V) is largest inside), and then proven (`proof`).
"""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import Any, TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.box import POINTS_AT_ONCE, Box
from reglint.values import Values

Array: TypeAlias = npt.NDArray[np.float64]

#: What is to be as small as possible: a margin, a quantity, or a quantity's negative.
Measure: TypeAlias = Callable[[Values[Any]], Any]

#: Where along a line from its better end a screening looks: close by, for a slope that
#: rises inward at once, and at quarters, for what rises later.
_SCREEN = np.array([1e-4, 0.25, 0.5, 0.75])
#: Points of one zoom along a line, and zooms: the last cell is 4**-13 of the range.
_GRID = np.linspace(0.0, 1.0, 9)
_ZOOMS = 13
#: Rounds over all lines before a climb ends.
_ROUNDS = 8
#: A smaller gain than this is rounding: in a margin, or relative to a quantity.
_GAIN = 1e-10


@dataclass(frozen=True, slots=True)
class Worst:
    """The least value found of one measure for each of ``s`` specs, and where."""

    #: Shape (s,); NaN where the measure has no value somewhere in the box.
    value: Array
    #: Shape (s, n), in the box's names.
    point: Array


def at(box: Box, measure: Measure, points: Array) -> Array:
    """Return a measure at points of shape (s, p, n), as shape (s, p)."""
    with np.errstate(all="ignore"):  # infinities and NaN are values here: their owner decides
        return np.broadcast_to(measure(box.values(points)), points.shape[:2])


def narrowed(box: Box, partials: tuple[Array, Array]) -> Box:
    """Return the box with every name fixed at the end where a sure sign puts the least.

    ``partials`` are the least and greatest partials over the box, of shape (s, n).
    """
    rises, falls = partials[0] >= 0.0, partials[1] <= 0.0
    high = np.where(rises, box.low, box.high)
    low = np.where(falls & ~rises, box.high, box.low)
    return replace(box, low=low, high=high)


def search(box: Box, measure: Measure) -> Worst:
    """Return the worst point found of a narrowed box, for each of its specs."""
    value = np.empty(len(box.specs))
    point = box.low.copy()
    free = (box.low != box.high).any(axis=1)
    for rows, find in ((~free, _only_point), (free, _searched)):
        for some in slices(np.flatnonzero(rows), _rows_at_once(box, rows)):
            found = find(box.take(some), measure)
            value[some], point[some] = found.value, found.point
    return Worst(value, point)


def _rows_at_once(box: Box, rows: npt.NDArray[np.bool_]) -> int:
    moving = (box.low[rows] != box.high[rows]).any(axis=0).sum()
    return max(1, POINTS_AT_ONCE >> int(moving))


def _only_point(box: Box, measure: Measure) -> Worst:
    return Worst(at(box, measure, box.low[:, None, :])[:, 0], box.low)


def _searched(box: Box, measure: Measure) -> Worst:
    """Look at the corners, then inside from the worst of them; climb where it gets worse."""
    corners = box.corners()
    start = least(corners, at(box, measure, corners))
    seen = screened(box, measure, start)
    better = np.flatnonzero(improves(seen.value, start.value) | np.isnan(seen.value))
    value, point = start.value.copy(), start.point.copy()
    for rows in slices(better, POINTS_AT_ONCE // len(_GRID)):
        climbed = climb(box.take(rows), measure, Worst(seen.value[rows], seen.point[rows]))
        value[rows], point[rows] = climbed.value, climbed.point
    return Worst(value, point)


def least(points: Array, measured: Array) -> Worst:
    """Return the least of the measured points of each row; NaN wins, so that it is seen."""
    index = measured.argmin(axis=1)
    rows = np.arange(len(points))
    return Worst(measured[rows, index], points[rows, index])


def slices(rows: npt.NDArray[np.intp], size: int) -> Iterator[npt.NDArray[np.intp]]:
    """Yield the rows in pieces of at most ``size``."""
    for start in range(0, len(rows), size):
        yield rows[start : start + size]


def improves(new: Array, old: Array) -> npt.NDArray[np.bool_]:
    """Tell where a value is less than another by more than rounding."""
    return new < old - _GAIN * np.minimum(np.abs(old), 1.0)


def _moving(box: Box) -> npt.NDArray[np.intp]:
    """Return the columns that move in any of the specs."""
    return np.flatnonzero((box.low != box.high).any(axis=0))


def screened(box: Box, measure: Measure, start: Worst) -> Worst:
    """Look at a few points along every line through the worst corners."""
    points = lines_through(box, start.point)
    return least(points, at(box, measure, points))


def lines_through(box: Box, corner: Array) -> Array:
    """Return points inside along every line from a corner of each spec, as shape (s, p, n)."""
    step = box.low + box.high - 2.0 * corner
    lines = np.eye(len(box.names))[_moving(box)]
    shape = len(lines) * len(_SCREEN), len(box.names)
    moves = (lines[:, None, :] * _SCREEN[None, :, None]).reshape(shape)
    points: Array = corner[:, None, :] + step[:, None, :] * moves[None, :, :]
    return points


def climb(box: Box, measure: Measure, start: Worst) -> Worst:
    """Search line by line, round after round, until no line is better."""
    best = start
    for _ in range(_ROUNDS):
        before = best.value
        for column in _promising(box, measure, best):
            best = _along(box, measure, best, column)
        if not improves(best.value, before).any():
            break
    return best


def _promising(box: Box, measure: Measure, best: Worst) -> npt.NDArray[np.intp]:
    """Return the columns along which some spec gets worse, or lies inside its range."""
    measured = at(box, measure, lines_through(box, best.point))
    better = np.any(improves(measured, best.value[:, None]), axis=0)
    moving = _moving(box)
    inside = np.any((best.point > box.low) & (best.point < box.high), axis=0)[moving]
    lines = better.reshape(len(moving), len(_SCREEN))
    chosen: npt.NDArray[np.intp] = moving[np.any(lines, axis=1) | inside]
    return chosen


def _along(box: Box, measure: Measure, start: Worst, column: int) -> Worst:
    """Zoom in on the least value along one name's range."""
    low, high = box.low[:, column], box.high[:, column]
    best = start
    for _ in range(_ZOOMS):
        points = np.repeat(best.point[:, None, :], len(_GRID), axis=1)
        points[:, :, column] = low[:, None] + (high - low)[:, None] * _GRID
        found = least(points, at(box, measure, points))
        best = better_of(best, found)
        cell = (high - low) / (len(_GRID) - 1)
        middle = best.point[:, column]
        low, high = np.maximum(low, middle - cell), np.minimum(high, middle + cell)
    return best


def better_of(one: Worst, other: Worst) -> Worst:
    """Return the lesser of two findings for each spec."""
    less = other.value < one.value
    return Worst(
        np.where(less, other.value, one.value), np.where(less[:, None], other.point, one.point)
    )
