"""Extents: the range of every quantity over the box of each operating condition."""

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np

from reglint.box import POINTS_AT_ONCE, Box
from reglint.finding import Extent
from reglint.values import Values
from reglint.worstcase import Array, Worst, climb, improves, least, lines_through, slices


def extents(boxes: Mapping[str, Box]) -> list[tuple[Extent, ...]]:
    """Return each spec's extents, by condition, then by quantity, as the kind lists them."""
    count = len(next(iter(boxes.values())).specs)
    listed: list[list[Extent]] = [[] for _ in range(count)]
    for condition, box in boxes.items():
        most = max(1, POINTS_AT_ONCE // (32 * len(box.circuit.quantities)))
        for rows in slices(np.arange(count), most):
            for row, extent in _under(condition, box.take(rows)):
                listed[rows[row]].append(extent)
    return [tuple(each) for each in listed]


def _under(condition: str, box: Box) -> Iterator[tuple[int, Extent]]:
    """Yield the extents under one condition, each with its row."""
    quantities = box.circuit.quantities
    signed = [Signed(name, sign) for name in quantities for sign in (1.0, -1.0)]
    with np.errstate(all="ignore"):
        ends = dict(zip(signed, _least_of_all(box, signed), strict=True))
        nominal = box.values(box.nominal[:, None, :])
        for name, quantity in quantities.items():
            middle = np.broadcast_to(nominal(name), (len(box.specs), 1))[:, 0]
            low, high = ends[Signed(name, 1.0)].value, -ends[Signed(name, -1.0)].value
            for row in np.flatnonzero(~np.isnan(low + high)):
                range_ = _clean(float(low[row]), float(middle[row]), float(high[row]))
                yield int(row), Extent(name, condition, quantity.unit, *range_)


def _clean(low: float, middle: float, high: float) -> tuple[float, float, float]:
    """Return ends with what is only rounding, against the largest of them, as zero."""
    finite = (abs(end) for end in (low, middle, high) if math.isfinite(end))
    least = 1e-12 * max(finite, default=0.0)
    low, middle, high = (0.0 if abs(end) < least else end for end in (low, middle, high))
    return low, middle, high


@dataclass(frozen=True, slots=True)
class Signed:
    """A quantity, or its negative, as a measure."""

    name: str
    #: 1 or -1.
    sign: float

    def __call__(self, values: Values[Array]) -> Array:
        """Return the quantity times the sign."""
        return self.sign * values(self.name)


def _least_of_all(box: Box, measures: list[Signed]) -> Iterator[Worst]:
    """Yield the least of each measure: corners and lines of all at once, climbs one by one."""
    corners = box.corners()
    values = box.values(corners)
    starts = [least(corners, _full(measure(values), corners)) for measure in measures]
    lines = [lines_through(box, start.point) for start in starts]
    values = box.values(np.concatenate(lines, axis=1))
    size = lines[0].shape[1]
    for index, (measure, start, points) in enumerate(zip(measures, starts, lines, strict=True)):
        measured = np.broadcast_to(measure(values), (len(box.specs), size * len(lines)))
        seen = least(points, measured[:, index * size : (index + 1) * size]) if size else start
        rows = np.flatnonzero(improves(seen.value, start.value))
        value = start.value.copy()
        if len(rows):
            part = Worst(seen.value[rows], seen.point[rows])
            value[rows] = climb(box.take(rows), measure, part).value
        yield Worst(value, start.point)


def _full(measured: Array, points: Array) -> Array:
    return np.broadcast_to(measured, points.shape[:2])
