"""Hatches: what an outcome looks like as an area, in colour and in black and white."""

from reglint.finding import Outcome
from reglint.pictures.svg import INK, element, label

#: What an area of each outcome says.
_WORDS = {
    Outcome.FAIL: "a rule breaks",
    Outcome.WARN: "a rule warns",
    Outcome.PASS: "the rules hold",
}

#: The darker and the paler colour of each outcome.
DARK = {Outcome.PASS: "#1f5f4a", Outcome.WARN: "#7a4f00", Outcome.FAIL: "#8c1c13"}
LIGHT = {Outcome.PASS: "#e4efe9", Outcome.WARN: "#faeccb", Outcome.FAIL: "#f5dad5"}


def fill(name: str, outcome: Outcome) -> str:
    """Return the fill of an outcome in the drawing of a name: plain, dotted or ruled."""
    return LIGHT[outcome] if outcome is Outcome.PASS else f"url(#{name}-{outcome.value})"


def hatches(name: str) -> str:
    """Return the definitions that `fill` refers to."""
    dark, light = DARK[Outcome.WARN], LIGHT[Outcome.WARN]
    dots = element("circle", cx=4, cy=4, r=1.2, fill=dark)
    warn = _pattern(f"{name}-warn", "8", light, dots)
    dark, light = DARK[Outcome.FAIL], LIGHT[Outcome.FAIL]
    rules = element("path", d="M-1 7L7 -1M-1 1L1 -1M5 7L7 5", stroke=dark, stroke_width="1.3")
    return element("defs", warn, _pattern(f"{name}-fail", "6", light, rules))


def _pattern(name: str, size: str, light: str, drawn: str) -> str:
    ground = element("rect", width=size, height=size, fill=light)
    units = {"patternUnits": "userSpaceOnUse", "width": size, "height": size}
    return element("pattern", ground, drawn, id=name, **units)


def legend(name: str, top: float) -> str:
    """Return a swatch of each outcome with its words, in one row."""
    drawn = []
    for index, (outcome, said) in enumerate(_WORDS.items()):
        x = 92.0 + 150.0 * index
        style = {"fill": fill(name, outcome), "stroke": INK, "stroke_width": "0.8"}
        drawn.append(element("rect", x=x, y=top, width=26, height=14, **style))
        drawn.append(label(x + 33, top + 11.5, said, stroke="none"))
    return "".join(drawn)
