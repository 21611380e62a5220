"""The worst case of a measure over a box: its corners, then the inside.

A corner is not always the worst: a product such as V·(S - V) is largest inside. So the
worst corner is only where the search starts.
"""

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.box import POINTS_AT_ONCE, Box
from reglint.values import Values

Array: TypeAlias = npt.NDArray[np.float64]

#: What is to be as small as possible: a margin, a quantity, or a quantity's negative.
Measure: TypeAlias = Callable[[Values[Array]], Array]

#: Where along a line from its better end a screening looks: close by, for a slope that
#: rises inward at once, and at quarters, for what rises later.
_SCREEN = np.array([1e-4, 0.25, 0.5, 0.75])
#: Points of one zoom along a line, and zooms: the last cell is 4**-13 of the range.
_GRID = np.linspace(0.0, 1.0, 9)
_ZOOMS = 13
#: Rounds over all lines before a climb ends.
_ROUNDS = 8
#: A gain smaller than this, relative to the measure, is rounding.
_GAIN = 1e-12


@dataclass(frozen=True, slots=True)
class Worst:
    """The least value found of one measure for each of ``s`` specs, and where."""

    #: Shape (s,); NaN where the measure has no value somewhere in the box.
    value: Array
    #: Shape (s, n), in the box's names.
    point: Array


def worst(box: Box, measures: Sequence[Measure]) -> list[Worst]:
    """Return the worst case of each measure over each spec's box."""
    with np.errstate(all="ignore"):  # infinities and NaN are values here: their owner decides
        found = [_joined(parts) for parts in zip(*_by_chunk(box, measures), strict=True)]
        return [
            _search(box, measure, start) for measure, start in zip(measures, found, strict=True)
        ]


def at(box: Box, measure: Measure, points: Array) -> Array:
    """Return a measure at points of shape (s, p, n), as shape (s, p)."""
    with np.errstate(all="ignore"):
        return np.broadcast_to(measure(box.values(points)), points.shape[:2])


def _by_chunk(box: Box, measures: Sequence[Measure]) -> Iterator[list[Worst]]:
    """Yield the worst corners of the measures for as many specs as fit at once."""
    rows = max(1, POINTS_AT_ONCE >> len(box.names))
    for start in range(0, len(box.specs), rows):
        part = box.take(np.arange(start, min(start + rows, len(box.specs))))
        corners = part.corners()
        values = part.values(corners)
        yield [_least(corners, measure(values)) for measure in measures]


def _least(points: Array, measured: Array) -> Worst:
    """Return the least of the measured points of each row; NaN wins, so that it is seen."""
    measured = np.broadcast_to(measured, points.shape[:2])
    index = measured.argmin(axis=1)
    rows = np.arange(len(points))
    return Worst(measured[rows, index], points[rows, index])


def _joined(parts: Sequence[Worst]) -> Worst:
    return Worst(
        np.concatenate([part.value for part in parts]),
        np.concatenate([part.point for part in parts]),
    )


def _search(box: Box, measure: Measure, start: Worst) -> Worst:
    """Look inside from the worst corners; climb on where anything better shows."""
    if not box.names:
        return start
    seen = _screened(box, measure, start)
    better = np.flatnonzero(_improves(seen.value, start.value) | np.isnan(seen.value))
    value, point = start.value.copy(), start.point.copy()
    for rows in _slices(better, POINTS_AT_ONCE // len(_GRID)):
        climbed = _climb(box.take(rows), measure, Worst(seen.value[rows], seen.point[rows]))
        value[rows], point[rows] = climbed.value, climbed.point
    return Worst(value, point)


def _slices(rows: npt.NDArray[np.intp], size: int) -> Iterator[npt.NDArray[np.intp]]:
    for start in range(0, len(rows), size):
        yield rows[start : start + size]


def _improves(new: Array, old: Array) -> npt.NDArray[np.bool_]:
    return new < old - _GAIN * np.abs(old)


def _screened(box: Box, measure: Measure, start: Worst) -> Worst:
    """Look at a few points along every line through the worst corners."""
    count = len(box.names)
    ends = box.low + box.high - start.point
    parts = []
    for rows in _slices(np.arange(len(box.specs)), POINTS_AT_ONCE // (count * len(_SCREEN)) or 1):
        here = start.point[rows][:, None, None, :]
        step = (ends - start.point)[rows][:, None, None, :] * np.eye(count)[None, :, None, :]
        points = (here + step * _SCREEN[None, None, :, None]).reshape(len(rows), -1, count)
        parts.append(_least(points, measure(box.take(rows).values(points))))
    return _joined(parts)


def _climb(box: Box, measure: Measure, start: Worst) -> Worst:
    """Search line by line, round after round, until no line is better."""
    best = start
    for _ in range(_ROUNDS):
        before = best.value
        for index in range(len(box.names)):
            best = _along(box, measure, best, index)
        if not _improves(best.value, before).any():
            break
    return best


def _along(box: Box, measure: Measure, start: Worst, index: int) -> Worst:
    """Zoom in on the least value along one name's range."""
    low, high = box.low[:, index], box.high[:, index]
    best = start
    for _ in range(_ZOOMS):
        points = np.repeat(best.point[:, None, :], len(_GRID), axis=1)
        points[:, :, index] = low[:, None] + (high - low)[:, None] * _GRID
        found = _least(points, measure(box.values(points)))
        better = found.value < best.value
        best = Worst(
            np.where(better, found.value, best.value),
            np.where(better[:, None], found.point, best.point),
        )
        cell = (high - low) / (len(_GRID) - 1)
        middle = best.point[:, index]
        low = np.maximum(low, middle - cell)
        high = np.minimum(high, middle + cell)
    return best
