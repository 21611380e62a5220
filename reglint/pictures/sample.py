"""Margins sampled at the corners of boxes: what pictures show between proven points.

The worst of the corners is not always the worst of the box; a picture made of samples
says so, and the verdict never comes from here.
"""

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from reglint.box import POINTS_AT_ONCE, Box
from reglint.margin import Margin
from reglint.rule import Rule
from reglint.worstcase import Array, slices

#: Said under every picture that is sampled.
SAID = (
    "Sampled: at each point the worst of the corners of all other tolerances is shown;"
    " the verdict comes from the proof."
)


def corner_margins(box: Box, rules: Sequence[Rule]) -> dict[str, Array]:
    """Return each rule's least margin over the corners of each spec's box, shape (s,).

    NaN where a margin has no value at some corner.
    """
    count = len(box.specs)
    found = {rule.name: np.empty(count) for rule in rules}
    moving = int((box.low != box.high).any(axis=0).sum())
    for rows in slices(np.arange(count), max(1, POINTS_AT_ONCE >> moving)):
        part = box.take(rows)
        corners = part.corners()
        values = part.values(corners)
        with np.errstate(all="ignore"):
            for rule in rules:
                measured = np.broadcast_to(Margin(rule)(values), corners.shape[:2])
                found[rule.name][rows] = measured.min(axis=1)
    return found


def pinned(box: Box, pins: Mapping[str, Array]) -> Box:
    """Return the box of one spec once for each value, of shape (s,), its pinned names take."""
    count = len(next(iter(pins.values())))
    rows = box.take(np.zeros(count, dtype=np.intp))
    low, high, fixed = rows.low.copy(), rows.high.copy(), dict(rows.fixed)
    for name, values in pins.items():
        if name in box.names:
            column = box.names.index(name)
            low[:, column] = high[:, column] = values
        else:
            fixed[name] = values[:, None]
    return replace(rows, low=low, high=high, fixed=fixed)
