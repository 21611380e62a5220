"""The proof of a worst case: what a measure cannot fall below anywhere in a box.

Branch and bound with interval gradients: a box whose measure surely stays above the
target is done; in the others names with a sure direction are fixed at an end, and what
is left is halved, until the bound meets the worst point found or the budget ends.
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from enum import Enum
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.box import Box
from reglint.functions import GRADIENTS, INTERVALS
from reglint.gradient import Gradient, variable
from reglint.interval import Interval, lift
from reglint.values import Values
from reglint.worstcase import Measure, Worst, at, improves, narrowed, search, slices

Array: TypeAlias = npt.NDArray[np.float64]

#: How far the bound may stay below the worst point: a fraction of the limit, for margins.
TOLERANCE = 1e-3
#: Rounds of halving in which that is tried for bounds that are shown; then one that decides
#: will do.
_SHOWN_ROUNDS = 5
#: Rounds, and pieces of one spec's box, before the proof is given up.
_MOST_ROUNDS = 30
_MOST_PIECES = 1024
#: Halvings at once while a round has few pieces: its cost hardly depends on them.
_HALVINGS, _FEW = 3, 256
#: Boxes whose gradients are evaluated at once.
_AT_ONCE = 1 << 12


class Care(Enum):
    """How far a worst case is followed."""

    #: To the worst point found; nothing is proven.
    SEARCHED = "searched"
    #: Until it is decided whether the margin is enough, too little, or broken.
    DECIDED = "decided"
    #: Until a broken margin is known as closely as it is told.
    TOLD = "told"
    #: Until every bound is close to the worst point, so that it can be shown.
    SHOWN = "shown"


#: Least and greatest partials, each of shape (s, n).
Partials: TypeAlias = tuple[Array, Array]


@dataclass(frozen=True, slots=True)
class Look:
    """A first look at one measure over each spec's whole box."""

    #: The box, narrowed where the measure has a sure direction.
    box: Box
    #: What the measure cannot fall below, shape (s,).
    bound: Array


@dataclass(frozen=True, slots=True)
class Proven:
    """The worst point found of one measure for each of ``s`` specs, with its bound."""

    #: Shape (s,); NaN where the measure has no value somewhere.
    value: Array
    #: Shape (s, n), in the box's names.
    point: Array
    #: What the measure cannot fall below, shape (s,); minus infinity where nothing is known.
    bound: Array


def look(box: Box, measures: Sequence[Measure], enough: Sequence[float]) -> list[Look]:
    """Take a first look at each measure over each spec's whole box: its bound, its directions.

    ``enough`` is the value of each measure that its bound need not go beyond.
    """
    with np.errstate(all="ignore"):
        bounds = _lower_bounds(box, measures, enough)
        return [Look(narrowed(box, partials), bound) for bound, partials in bounds]


def prove(box: Box, measure: Measure, enough: float, care: Care = Care.TOLD) -> Proven:
    """Return the worst case of a measure over each spec's narrowed box, searched and proven.

    ``enough`` is the value that a proof need not go beyond.
    """
    with np.errstate(all="ignore"):
        found = search(box, measure)
        if care is Care.SEARCHED:
            return Proven(found.value, found.point, np.full_like(found.value, -np.inf))
        return _proven(box, measure, found, enough, care)


def _gradients(box: Box) -> Values[Gradient]:
    count = len(box.names)
    swept = {
        name: variable(column, count, Interval(box.low[:, column], box.high[:, column]))
        for column, name in enumerate(box.names)
    }
    fixed = {name: Gradient(lift(value[:, 0])) for name, value in box.fixed.items()}
    return box.under_condition(Values(box.circuit, GRADIENTS, {**fixed, **swept}))


def _partials(measured: Gradient, box: Box) -> Partials:
    """Return the ends of the partials in shape (s, n); zero for what depends on nothing."""
    if measured.partials is None:
        return np.zeros_like(box.low), np.zeros_like(box.low)
    shape = (len(box.names), len(box.specs))
    ends = (measured.partials.low, measured.partials.high)
    low, high = (np.broadcast_to(end, shape).T for end in ends)
    return low, high


def _proven(box: Box, measure: Measure, found: Worst, enough: float, care: Care) -> Proven:
    bound = np.full(len(box.specs), np.inf)
    ranges = box.high - box.low
    pieces, owner = box, np.arange(len(box.specs))
    for turn in range(_MOST_ROUNDS):
        shown = care is Care.SHOWN and turn < _SHOWN_ROUNDS
        target = _target(found.value, np.inf if shown else enough, care)
        ((least, partials),) = _lower_bounds(pieces, [measure], [target[owner]])
        points = (pieces.low == pieces.high).all(axis=1)
        found = _with_middles(found, pieces, owner, measure, least < found.value[owner])
        spent = (turn == _MOST_ROUNDS - 1) | _crowded(owner, len(bound))
        settled = points | (least >= target[owner]) | spent
        np.minimum.at(bound, owner[settled], least[settled])
        rows = np.flatnonzero(~settled)
        if not len(rows):
            break
        pieces = narrowed(pieces.take(rows), (partials[0][rows], partials[1][rows]))
        steepness = np.maximum(-partials[0][rows], partials[1][rows])
        owner = owner[rows]
        for _ in range(_HALVINGS if len(rows) < _FEW else 1):
            pieces, source = _halved(pieces, steepness, ranges[owner])
            steepness, owner = steepness[source], owner[source]
    return Proven(found.value, found.point, np.minimum(bound, found.value))


def _target(value: Array, enough: float, care: Care) -> Array:
    """Return where a bound is good enough: near the worst found, and on its side of zero.

    Less will do where it decides, or where the value is broken and only that matters.
    """
    close = value - TOLERANCE * np.fmax(1.0, np.abs(value))
    near = np.where((value >= 0.0) & (value < TOLERANCE), 0.0, close)
    decides = np.minimum(near, np.where(value >= enough, enough, 0.0))
    broken = np.full_like(near, -np.inf) if care is Care.DECIDED else near
    return np.where(value < 0.0, broken, near if enough == np.inf else decides)


def _lower_bounds(
    box: Box, measures: Sequence[Measure], enough: Sequence[Array | float]
) -> Iterator[tuple[Array, Partials]]:
    """Yield what each measure cannot fall below in each box, and its partials there.

    Beyond ``enough``, of each measure in each box, no closer bound is looked for. A few
    thousand boxes at once: many pieces of many specs must not fill the memory.
    """
    wanted = [np.broadcast_to(each, len(box.specs)) for each in enough]
    parts = [
        list(_bounds_at_once(box.take(rows), measures, [each[rows] for each in wanted]))
        for rows in slices(np.arange(len(box.specs)), _AT_ONCE)
    ]
    for each in zip(*parts, strict=True):
        low = np.concatenate([partials[0] for _, partials in each])
        high = np.concatenate([partials[1] for _, partials in each])
        yield np.concatenate([bound for bound, _ in each]), (low, high)


def _bounds_at_once(
    box: Box, measures: Sequence[Measure], enough: Sequence[Array]
) -> Iterator[tuple[Array, Partials]]:
    """Yield the bounds and partials of few enough boxes.

    The measure's own enclosure; where that is not enough, the better of it and the mean
    value form around the middle.
    """
    values = _gradients(box)
    middle = Interval(box.low, box.high).middle
    at_middle = _intervals_at(box, middle)
    for measure, wanted in zip(measures, enough, strict=True):
        measured = measure(values)
        partials = _partials(measured, box)
        least = np.broadcast_to(measured.value.low, len(box.specs))
        if not (least >= wanted).all():
            reach = Interval(*partials) * (Interval(box.low, box.high) - middle)
            least = np.fmax(least, (lift(measure(at_middle)) + _summed(reach)).low)
        yield np.nan_to_num(least, nan=-np.inf), partials


def _summed(parts: Interval) -> Interval:
    """Return the sum over the columns."""
    total = lift(0.0)
    for column in range(parts.low.shape[1]):
        total = total + Interval(parts.low[:, column], parts.high[:, column])
    return total


def _intervals_at(box: Box, points: Array) -> Values[Interval]:
    """Return the values at one point of each box, every rounding enclosed."""
    swept = {name: lift(points[:, column]) for column, name in enumerate(box.names)}
    fixed = {name: lift(value[:, 0]) for name, value in box.fixed.items()}
    return box.under_condition(Values(box.circuit, INTERVALS, {**fixed, **swept}))


def _with_middles(
    found: Worst,
    pieces: Box,
    owner: npt.NDArray[np.intp],
    measure: Measure,
    rows: npt.NDArray[np.bool_],
) -> Worst:
    """Return the worst points found, or the middles of some pieces where those are worse.

    A measure that jumps is worst next to the jump, which no line from a corner may meet.
    """
    some = pieces.take(np.flatnonzero(rows))
    middles = Interval(some.low, some.high).middle
    measured = at(some, measure, middles[:, None, :])[:, 0]
    worse = np.flatnonzero(improves(measured, found.value[owner[rows]]) | np.isnan(measured))
    # The last of a spec's middles stays: the least, or one without a value, which sorts last.
    last = worse[np.argsort(-measured[worse])]
    value, point = found.value.copy(), found.point.copy()
    value[owner[rows][last]], point[owner[rows][last]] = measured[last], middles[last]
    return Worst(value, point)


def _crowded(owner: npt.NDArray[np.intp], count: int) -> npt.NDArray[np.bool_]:
    """Tell which pieces belong to a spec that has too many of them: its proof is given up."""
    return (np.bincount(owner, minlength=count) > _MOST_PIECES)[owner]


def _halved(pieces: Box, steepness: Array, ranges: Array) -> tuple[Box, npt.NDArray[np.intp]]:
    """Return every piece in two halves, along the name that matters most; points stay whole.

    With them, for each half, the row of the piece it is of.
    """
    width = pieces.high - pieces.low
    relative = np.divide(width, ranges, out=np.zeros_like(width), where=width > 0.0)
    matters = np.where(width > 0.0, steepness * width, 0.0)
    # Where a slope is unbounded, or none matters, the range least divided yet is halved.
    clear = np.isfinite(matters).all(axis=1) & (matters.max(axis=1) > 0.0)
    column = np.where(clear[:, None], matters, relative).argmax(axis=1)
    rows = np.arange(len(width))
    middle = 0.5 * (pieces.low + pieces.high)[rows, column]
    upper = np.flatnonzero((width > 0.0).any(axis=1))
    lower_high, upper_low = pieces.high.copy(), pieces.low[upper]
    lower_high[upper, column[upper]] = middle[upper]
    upper_low[np.arange(len(upper)), column[upper]] = middle[upper]
    source = np.concatenate((rows, upper))
    low = np.concatenate((pieces.low, upper_low))
    high = np.concatenate((lower_high, pieces.high[upper]))
    return replace(pieces.take(source), low=low, high=high), source
