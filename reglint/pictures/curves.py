"""Curves: a characteristic as a band over its tolerances, and the lines that meet it."""

from collections.abc import Iterator

from reglint.account import Picture
from reglint.pictures.meeting import Corner, Meeting, span
from reglint.pictures.plot import TOP, Axis, Plot, across_scale, badge, up_scale
from reglint.pictures.svg import drawing, label
from reglint.quantity import render

_HEIGHT = 330.0
_SAID = (
    "The grey band spans the corners of all tolerances. A (full lines) and B (dashed lines) are"
    " the corners where {free} is least and greatest, each with the curve it has there."
)
#: The dashes of the two corners and of the marks.
_DASHES = {"A": "none", "B": "9 4"}
_MARK = {"stroke_dasharray": "2 3", "stroke_width": "1.4"}


def curves(name: str, found: Meeting) -> Picture:
    """Return the picture of two curves that meet."""
    declared = found.declared
    says = _SAID.format(free=declared.free.text.strip())
    plot = _plot(name, found)
    corners = list(zip("AB", found.corners, strict=True))
    lines = (_both(plot, found, letter, corner) for letter, corner in corners)
    inside = plot.inside(_band(plot, found), *_marks(plot, found), *lines)
    badges = (badge(*plot.place(each.met, each.free), letter) for letter, each in corners)
    words = _mark_words(plot, found)
    svg = drawing(
        name, declared.title, says, TOP + _HEIGHT + 48.0, plot.axes(), inside, *words, *badges
    )
    return Picture(declared.title, svg, f"{declared.says} {says}", tuple(_key(found)))


def _plot(name: str, found: Meeting) -> Plot:
    """Return axes that hold zero, all marks, the start of both lines and where they meet."""
    low, high = span(found)
    declared, free = found.declared, found.free
    up = up_scale(float(free[0]), float(free[-1]), _HEIGHT)
    across = across_scale(1.04 * low, 1.04 * high)
    return Plot(
        name,
        Axis(declared.band.text.strip(), across, lambda value: render(value, found.unit)),
        Axis(declared.free.text.strip(), up, lambda value: render(value, found.free_unit)),
    )


def _band(plot: Plot, found: Meeting) -> str:
    there = zip(found.band_low, found.free, strict=True)
    back = zip(found.band_high[::-1], found.free[::-1], strict=True)
    return plot.path((*there, *back), fill="#d5d8dc", stroke="#8a8f96", stroke_width="0.8")


def _both(plot: Plot, found: Meeting, letter: str, corner: Corner) -> str:
    """Return a corner's line and the curve it meets, in one kind of dash."""
    dash = {"stroke_dasharray": _DASHES[letter]}
    curve = plot.path(zip(corner.curve, found.free, strict=True), stroke_width="1.2", **dash)
    through = zip(corner.line, found.free, strict=True)
    return curve + plot.path(through, stroke="#12507b", stroke_width="2.2", **dash)


def _marks(plot: Plot, found: Meeting) -> Iterator[str]:
    yield from (plot.level(at, **_MARK) for _, at in found.levels)
    yield from (plot.upright(at, **_MARK) for _, at in found.uprights)


def _mark_words(plot: Plot, found: Meeting) -> Iterator[str]:
    """Yield the names of the marks along their lines."""
    across, up = plot.across.scale, plot.up.scale
    for name, at in found.levels:
        if up.holds(at):
            yield label(across.end - 6, up(at) - 5, name, text_anchor="end", font_size="11")
    for name, at in found.uprights:
        if across.holds(at):
            x, y = across(at) - 4, up.end + 8
            turn = {"transform": f"rotate(-90 {x:.1f} {y:.1f})", "font_size": "11"}
            yield label(x, y, name, text_anchor="end", **turn)


def _key(found: Meeting) -> Iterator[tuple[str, str]]:
    free = found.declared.free.text.strip()
    for letter, word, corner in zip("AB", ("least", "greatest"), found.corners, strict=True):
        at = f"{render(corner.free, found.free_unit)}, {render(corner.met, found.unit)}"
        yield letter, f"{word} {free}: {at}, at {corner.named}"
