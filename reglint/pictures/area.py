"""An operating area: hatched by what the tightest rule comes to at each of its points."""

from collections.abc import Iterator
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.account import Picture
from reglint.finding import Outcome
from reglint.pictures.contour import below_zero
from reglint.pictures.field import Field
from reglint.pictures.hatch import LIGHT, fill, hatches, legend
from reglint.pictures.plot import TOP, Axis, Plot, across_scale, badge, up_scale
from reglint.pictures.sample import SAID
from reglint.pictures.svg import drawing, element
from reglint.quantity import render
from reglint.worstcase import Array

_HEIGHT = 330.0
#: A rule that decides less of the area than this needs no letter.
_LEAST_SHARE = 0.01
#: A letter, the rule it stands for and what that rule comes to there, and its point.
_Letter: TypeAlias = tuple[str, str, tuple[float, float]]


def area(name: str, found: Field) -> Picture:
    """Return the picture of a field of margins, with the spec's own box drawn on it."""
    plot, declared = _plot(name, found), found.declared
    regions = (_holding(plot), *_regions(plot, found))
    letters = list(_letters(found))
    badges = (badge(*plot.place(*point), letter) for letter, _, point in letters)
    says = " ".join((declared.says, _SAID, SAID, *_rules(found)))
    foot = TOP + _HEIGHT + 46.0
    svg = drawing(
        name,
        declared.title,
        says,
        foot + 30.0,
        hatches(name),
        *regions,
        plot.axes(),
        plot.inside(_own(plot, found)),
        *badges,
        legend(name, foot + 6.0),
    )
    return Picture(declared.title, svg, says, tuple((letter, told) for letter, told, _ in letters))


_SAID = (
    "The box is what the spec states; each letter stands in the region where one rule is the"
    " tightest. A load that a rule's condition takes away stays away."
)


def _rules(found: Field) -> Iterator[str]:
    yield f"In it are {', '.join(rule.name for rule in found.rules)}; others depend on neither."


def _plot(name: str, found: Field) -> Plot:
    across = across_scale(float(found.across[0]), float(found.across[-1]))
    up = up_scale(float(found.up[0]), float(found.up[-1]), _HEIGHT)
    declared, (unit, up_unit) = found.declared, found.units
    return Plot(
        name,
        Axis(declared.across.text.strip(), across, lambda value: render(value, unit)),
        Axis(declared.up.text.strip(), up, lambda value: render(value, up_unit)),
    )


def _holding(plot: Plot) -> str:
    across, up = plot.across.scale, plot.up.scale
    size = {"width": across.end - across.start, "height": up.start - up.end}
    return element("rect", x=across.start, y=up.end, fill=LIGHT[Outcome.PASS], **size)


def _regions(plot: Plot, found: Field) -> Iterator[str]:
    """Yield the region that warns, and over it the one that is broken."""
    for outcome, field in (
        (Outcome.WARN, found.reserve().min(axis=0)),
        (Outcome.FAIL, found.broken().min(axis=0)),
    ):
        if path := below_zero(plot, found.across, found.up, field):
            yield element("path", d=path, fill=fill(plot.name, outcome))


def _own(plot: Plot, found: Field) -> str:
    (left, right), (low, high) = found.own
    (x1, y1), (x2, y2) = plot.place(left, high), plot.place(right, low)
    size = {"width": max(x2 - x1, 1.0), "height": max(y2 - y1, 1.0)}
    style = {"fill": "none", "stroke_linejoin": "round"}
    rim = element("rect", x=x1, y=y1, stroke="#ffffff", stroke_width="6", **size, **style)
    return rim + element("rect", x=x1, y=y1, stroke="#1b1b1b", stroke_width="2.6", **size, **style)


def _letters(found: Field) -> Iterator[_Letter]:
    """Yield a letter for each rule that is the tightest somewhere, worst outcomes first."""
    broken, reserve = found.broken(), found.reserve()
    is_broken = broken.min(axis=0) < 0.0
    is_short = ~is_broken & (reserve.min(axis=0) < 0.0)
    letters = iter("ABCDEFGHIJKLMNOPQRSTUVWXYZ")
    for word, region, tightest in (
        ("breaks", is_broken, broken.argmin(axis=0)),
        ("warns", is_short, reserve.argmin(axis=0)),
    ):
        for index, rule in enumerate(found.rules):
            cells = region & (tightest == index)
            if cells.mean() >= _LEAST_SHARE:
                letter = next(letters, "…")
                yield letter, f"{rule.name} {word}: {rule.title}", _middle(found, cells)


def _middle(found: Field, cells: npt.NDArray[np.bool_]) -> tuple[float, float]:
    """Return the point of a region that lies nearest to its middle."""
    up, across = np.nonzero(cells)
    distance: Array = (up - up.mean()) ** 2 + (across - across.mean()) ** 2
    nearest = distance.argmin()
    return float(found.across[across[nearest]]), float(found.up[up[nearest]])
