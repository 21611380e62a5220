"""A plot: two scales with their axes, and what is drawn between them."""

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass

from reglint.pictures.scale import Scale
from reglint.pictures.svg import INK, PALE, WIDTH, element, label, line, number, words

#: Room on the left for the words of the upright axis, on the other sides for theirs.
LEFT, RIGHT, TOP, BOTTOM = 92.0, 22.0, 14.0, 46.0


@dataclass(frozen=True, slots=True)
class Axis:
    """A scale with what is written along it."""

    title: str
    scale: Scale
    #: Writes a value beside its tick.
    written: Callable[[float], str]


@dataclass(frozen=True, slots=True)
class Plot:
    """The area between an axis across and an axis upwards."""

    name: str
    across: Axis
    up: Axis

    def axes(self) -> str:
        """Return the grid, the frame, the ticks with their values, and the titles."""
        return "".join((*self._across(), *self._up(), self._frame()))

    def inside(self, *drawn: str) -> str:
        """Return what is drawn, cut off at the frame."""
        cut = element("clipPath", self._frame(), id=f"{self.name}-frame")
        return cut + element("g", *drawn, clip_path=f"url(#{self.name}-frame)")

    def path(self, points: Iterable[tuple[float, float]], **attributes: str | float) -> str:
        """Return a line through points given in the axes' own values."""
        places = (self.place(*point) for point in points)
        along = "L".join(f"{number(x)} {number(y)}" for x, y in places)
        style = {"fill": "none", "stroke": INK, **attributes}
        return element("path", d=f"M{along}", **style)

    def place(self, x: float, y: float) -> tuple[float, float]:
        """Return where a point is on paper."""
        return self.across.scale(x), self.up.scale(y)

    def upright(self, x: float, **attributes: str | float) -> str:
        """Return a line from bottom to top at a value across."""
        at, up = self.across.scale(x), self.up.scale
        return line(at, up.start, at, up.end, **attributes)

    def level(self, y: float, **attributes: str | float) -> str:
        """Return a line from left to right at a value upwards."""
        at, across = self.up.scale(y), self.across.scale
        return line(across.start, at, across.end, at, **attributes)

    def _frame(self) -> str:
        across, up = self.across.scale, self.up.scale
        return element(
            "rect",
            x=across.start,
            y=up.end,
            width=across.end - across.start,
            height=up.start - up.end,
            fill="none",
            stroke=INK,
        )

    def _across(self) -> Iterator[str]:
        scale, foot = self.across.scale, self.up.scale.start
        for tick in scale.ticks():
            yield self.upright(tick, stroke=PALE)
            yield _written(scale(tick), foot + 17, self.across.written(tick), "middle")
        middle = (scale.start + scale.end) / 2
        yield _written(middle, foot + 37, self.across.title, "middle")

    def _up(self) -> Iterator[str]:
        scale, edge = self.up.scale, self.across.scale.start
        for tick in scale.ticks():
            yield self.level(tick, stroke=PALE)
            yield _written(edge - 7, scale(tick) + 4, self.up.written(tick), "end")
        x, y = 14.0, (scale.start + scale.end) / 2
        turned = f"rotate(-90 {number(x)} {number(y)})"
        yield _written(x, y, self.up.title, "middle", transform=turned)


def _written(x: float, y: float, text: str, anchor: str, **attributes: str) -> str:
    return element("text", words(text), x=x, y=y, fill=INK, text_anchor=anchor, **attributes)


def across_scale(low: float, high: float, *, logarithmic: bool = False) -> Scale:
    """Return a scale over the width of a drawing."""
    return Scale(low, high, LEFT, WIDTH - RIGHT, logarithmic)


def up_scale(low: float, high: float, height: float, top: float = TOP) -> Scale:
    """Return a scale over the height of a plot, rising."""
    return Scale(low, high, top + height, top)


def badge(x: float, y: float, text: str) -> str:
    """Return a mark that the key of a picture explains."""
    disc = element("circle", cx=x, cy=y, r=8.5, fill="#ffffff", stroke=INK)
    bold = {"text_anchor": "middle", "font_weight": "bold", "font_size": "11", "stroke": "none"}
    return disc + label(x, y + 4, text, **bold)
