"""Extents: the range of every quantity over the box of each operating condition."""

from collections.abc import Iterator, Mapping

import numpy as np

from reglint.box import Box
from reglint.finding import Extent
from reglint.proof import look
from reglint.values import Values
from reglint.worstcase import Array, Measure, at, search


def extents(boxes: Mapping[str, Box]) -> list[tuple[Extent, ...]]:
    """Return each spec's extents, by quantity, then by condition, as the kind lists them."""
    count = len(next(iter(boxes.values())).specs)
    listed: list[list[Extent]] = [[] for _ in range(count)]
    for condition, box in boxes.items():
        for row, extent in _under(condition, box):
            listed[row].append(extent)
    return [tuple(each) for each in listed]


def _under(condition: str, box: Box) -> Iterator[tuple[int, Extent]]:
    names = list(box.circuit.quantities)
    measures = [_measure(name, sign) for name in names for sign in (1.0, -1.0)]
    looks = look(box, measures)
    ends = [search(each.box, measure) for each, measure in zip(looks, measures, strict=True)]
    for index, name in enumerate(names):
        unit = box.circuit.quantities[name].unit
        nominal = at(box, _measure(name, 1.0), box.nominal[:, None, :])[:, 0]
        low, high = ends[2 * index].value, -ends[2 * index + 1].value
        for row in range(len(box.specs)):
            if not np.isnan(low[row]):
                range_ = (float(low[row]), float(nominal[row]), float(high[row]))
                yield row, Extent(name, condition, unit, *range_)


def _measure(name: str, sign: float) -> Measure:
    def measure(values: Values[Array]) -> Array:
        return sign * values(name)

    return measure
