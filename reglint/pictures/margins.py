"""The margins of all rules as bars from their limit, as they were proven."""

import math
from collections.abc import Mapping, Sequence

from reglint.account import Picture
from reglint.finding import Finding, Outcome
from reglint.pictures.hatch import DARK, fill, hatches
from reglint.pictures.scale import Scale
from reglint.pictures.svg import INK, PALE, WIDTH, drawing, element, label, line, number
from reglint.rule import Rule
from reglint.ruling import percent

_TITLE = "Margins of all rules"
_SAYS = (
    "Each bar starts at the limit of its rule and reaches to the worst case: to the right it"
    " holds, to the left it is broken. The short stroke is the margin under which a rule warns."
    " A bar that ends in an arrow goes on beyond the paper."
)
#: Where the bars lie between the rules' names and the written margins.
_START, _END = 236.0, WIDTH - 76.0
#: The height of a row, and the room above the first for the scale.
_ROW, _HEAD = 21.0, 34.0
#: The longest name that fits; a longer one is cut, and is whole for screen readers.
_LONGEST = 33


def margins(name: str, findings: Sequence[Finding], rules: Mapping[str, Rule]) -> Picture:
    """Return the picture of a spec's findings, passing ones among them, the tightest first."""
    known = sorted((f for f in findings if f.rule in rules), key=_tightness)
    height = _HEAD + _ROW * len(known) + 6.0
    scale = Scale(-1.0, 1.0, _START, _END)
    rows = (_row(name, rules[f.rule], f, scale, n) for n, f in enumerate(known))
    drawn = drawing(name, _TITLE, _told(known), height, hatches(name), _grid(scale, height), *rows)
    return Picture(_TITLE, drawn, _SAYS)


def _tightness(finding: Finding) -> tuple[float, str]:
    """Order by margin; what was not checked comes first, since nothing is known of it."""
    return (-math.inf if finding.margin is None else finding.margin, finding.rule)


def _told(findings: Sequence[Finding]) -> str:
    return "; ".join(f"{each.rule} {_written(each)}" for each in findings)


def _written(finding: Finding) -> str:
    return "not checked" if finding.margin is None else percent(finding.margin)


def _grid(scale: Scale, height: float) -> str:
    lines = []
    for tick in scale.ticks(5):
        at, limit = scale(tick), tick == 0.0
        stroke = {"stroke": INK, "stroke_width": "1.6"} if limit else {"stroke": PALE}
        lines.append(line(at, _HEAD - 8, at, height - 4, **stroke))
        text = "limit" if limit else percent(tick)
        lines.append(label(at, _HEAD - 14, text, text_anchor="middle"))
    return "".join(lines)


def _row(name: str, rule: Rule, finding: Finding, scale: Scale, index: int) -> str:
    top = _HEAD + _ROW * index
    text = {"text_anchor": "end", "stroke": "none"}
    drawn = [_name(finding, top), label(WIDTH - 8, top + 14, _written(finding), **text)]
    if finding.margin is not None:
        drawn.append(_bar(name, finding, finding.margin, scale, top))
        warn = scale(rule.warn_margin)
        drawn.append(line(warn, top + 1, warn, top + _ROW - 2, stroke_width="2.2"))
    return element("g", *drawn)


def _name(finding: Finding, top: float) -> str:
    mark = outcome_mark(finding.outcome, 12.0, top + 10, hollow=finding.waived)
    rule = finding.rule
    shown = rule if len(rule) <= _LONGEST else f"{rule[: _LONGEST - 1]}…"
    return mark + label(_START - 12, top + 14, shown, text_anchor="end", stroke="none")


def outcome_mark(outcome: Outcome, x: float, y: float, *, hollow: bool = False) -> str:
    """Return the shape of an outcome: a disc, a triangle or a square; hollow where waived."""
    dark = DARK[outcome]
    ground = {"fill": "none" if hollow else dark, "stroke": dark, "stroke_width": "1.6"}
    if outcome is Outcome.PASS:
        return element("circle", cx=x, cy=y, r=5, **ground)
    if outcome is Outcome.WARN:
        corners = (x, y - 6), (x + 6, y + 5), (x - 6, y + 5)
        points = " ".join(f"{number(a)},{number(b)}" for a, b in corners)
        return element("polygon", points=points, **ground)
    return element("rect", x=x - 5, y=y - 5, width=10, height=10, **ground)


def _bar(name: str, finding: Finding, margin: float, scale: Scale, top: float) -> str:
    shown = min(max(margin, scale.low), scale.high)
    low, high = sorted((scale(0.0), scale(shown)))
    style = {"fill": fill(name, finding.outcome), "stroke": DARK[finding.outcome]}
    bar = element("rect", x=low, y=top + 4, width=high - low, height=_ROW - 9, **style)
    return bar if shown == margin else bar + _arrow(scale(shown), top, shown > 0.0, finding)


def _arrow(x: float, top: float, rising: bool, finding: Finding) -> str:  # noqa: FBT001 -- a side
    tip = x + 8.0 if rising else x - 8.0
    corners = (x, top + 4), (tip, top + _ROW / 2 - 0.5), (x, top + _ROW - 5)
    points = " ".join(f"{number(a)},{number(b)}" for a, b in corners)
    return element("polygon", points=points, fill=DARK[finding.outcome])
