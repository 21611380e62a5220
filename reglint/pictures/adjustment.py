"""An adjustment: margins over the values of one field, where the design window is seen."""

import math
from collections.abc import Iterator, Sequence
from itertools import groupby
from typing import TypeAlias

import numpy as np

from reglint.account import Picture
from reglint.pictures.hatch import fill, hatches, legend
from reglint.pictures.plot import LEFT, TOP, Axis, Plot, across_scale, badge, up_scale
from reglint.pictures.sample import SAID
from reglint.pictures.svg import INK, drawing, element, label, line
from reglint.pictures.sweep import Sweep
from reglint.quantity import render
from reglint.ruling import percent
from reglint.worstcase import Array

_HEIGHT = 330.0
#: The strip of outcomes above the plot, and the room for its ticks.
_STRIP, _TICK = 18.0, 10.0
#: Margins shown, to either side of the limit.
_MOST = 1.0
#: Curves are told apart by colour, by dashes and by a number on them.
_COLOURS = ("#12507b", "#8c1c13", "#1f5f4a", "#7a4f00", "#5b2a78", "#3a3a3a")
_DASHES = ("none", "9 4", "3 3", "12 3 3 3")

_Point: TypeAlias = tuple[float, float]


def adjustment(name: str, found: Sweep) -> Picture:
    """Return the picture of a sweep."""
    plot, rows = _plot(name, found), found.moving()
    lines = (_curve(plot, found, row, n) for n, row in enumerate(rows))
    limit = plot.level(0.0, stroke_width="1.8")
    inside = plot.inside(limit, _stated(plot, found), *lines)
    title = f"Margins over {found.field}"
    foot = TOP + _STRIP + _TICK + _HEIGHT + 46.0
    says = " ".join((_SAID.format(series=found.series), SAID, *_still(found, rows)))
    svg = drawing(
        name,
        title,
        says,
        foot + 30.0,
        hatches(name),
        *_strip(plot, found),
        plot.axes(),
        inside,
        _stated_word(plot, found),
        *_badges(plot, found, rows),
        legend(name, foot + 6.0),
    )
    return Picture(title, svg, says, tuple(_key(found, rows)))


_SAID = (
    "Each curve is one rule: above the limit it holds. Curves join the values of {series}, which"
    " the short strokes mark; the strip above tells what all rules together come to at each, with"
    " the stated tolerance kept."
)


def _plot(name: str, found: Sweep) -> Plot:
    ends = float(found.values[0]), float(found.values[-1])
    across = across_scale(min(ends[0], found.stated), ends[1], logarithmic=True)
    up = up_scale(-_MOST, _MOST, _HEIGHT, TOP + _STRIP + _TICK)
    unit = found.unit
    return Plot(
        name,
        Axis(f"{found.field}, nominal", across, lambda value: render(value, unit)),
        Axis("margin", up, lambda value: percent(value) if value else "limit"),
    )


def _curve(plot: Plot, found: Sweep, row: int, index: int) -> str:
    """Return one rule's margins, in pieces where some have no value."""
    style = {
        "stroke": _COLOURS[index % len(_COLOURS)],
        "stroke_dasharray": _DASHES[index // len(_COLOURS) % len(_DASHES)],
        "stroke_width": "1.8",
    }
    points = zip(found.values, found.margins[row], strict=True)
    pieces = groupby(points, key=lambda point: math.isnan(point[1]))
    return "".join(plot.path(piece, **style) for unknown, piece in pieces if not unknown)


def _stated(plot: Plot, found: Sweep) -> str:
    return plot.upright(found.stated, stroke_dasharray="2 3", stroke_width="1.4")


def _stated_word(plot: Plot, found: Sweep) -> str:
    x, y = plot.across.scale(found.stated) - 5, plot.up.scale.start - 8
    text = f"stated: {render(found.stated, found.unit)}"
    return label(x, y, text, transform=f"rotate(-90 {x:.1f} {y:.1f})", font_size="11")


def _strip(plot: Plot, found: Sweep) -> Iterator[str]:
    """Yield the outcome at every standard value, from halfway to its neighbours, and its tick."""
    scale = plot.across.scale
    places = np.array([scale(value) for value in found.values])
    ends = [scale.start, *((places[1:] + places[:-1]) / 2.0), scale.end]
    foot = TOP + _STRIP
    spans = zip(found.outcomes(), ends[:-1], ends[1:], strict=True)
    for outcome, same in groupby(spans, key=lambda span: span[0]):
        pieces = list(same)
        left, right = float(pieces[0][1]), float(pieces[-1][2])
        style = {"fill": fill(plot.name, outcome), "stroke": INK, "stroke_width": "0.8"}
        yield element("rect", x=left, y=TOP, width=right - left, height=_STRIP, **style)
    for place in map(float, places):
        yield line(place, foot, place, foot + _TICK)
    yield label(LEFT - 7, TOP + 13, "all rules", text_anchor="end", stroke="none")


def _badges(plot: Plot, found: Sweep, rows: Sequence[int]) -> Iterator[str]:
    """Yield a number on each curve, where it keeps most clear of the numbers before."""
    taken: list[_Point] = []
    for number, row in enumerate(rows, start=1):
        places = list(_places(plot, found, found.margins[row]))
        if places:
            taken.append(max(places, key=lambda place: _clearance(place, taken)))
            yield badge(*taken[-1], str(number))


def _places(plot: Plot, found: Sweep, margins: Array) -> Iterator[_Point]:
    for value, margin in list(zip(found.values, margins, strict=True))[1:-1]:
        if abs(margin) < 0.94 * _MOST:
            yield plot.place(float(value), float(margin))


def _clearance(place: _Point, taken: Sequence[_Point]) -> float:
    return min((math.dist(place, each) for each in taken), default=0.0)


def _still(found: Sweep, rows: Sequence[int]) -> Iterator[str]:
    others = [rule.name for row, rule in enumerate(found.rules) if row not in rows]
    if others:
        yield f"In the strip alone, since it does not move them: {', '.join(others)}."


def _key(found: Sweep, rows: Sequence[int]) -> Iterator[tuple[str, str]]:
    for number, row in enumerate(rows, start=1):
        holding = [each for each in _spans(found, row) if each]
        told = f"holds at {', '.join(holding)}" if holding else "holds at no value tried"
        yield str(number), f"{found.rules[row].name} {told}"


def _spans(found: Sweep, row: int) -> Iterator[str]:
    """Yield the spans of values at which a rule holds."""
    points = zip(found.values, found.margins[row], strict=True)
    for holds, same in groupby(points, key=lambda point: bool(point[1] >= 0.0)):
        if holds:
            values = [float(value) for value, _ in same]
            ends = sorted({values[0], values[-1]})
            yield " to ".join(render(value, found.unit) for value in ends)
