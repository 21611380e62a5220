"""Elements of SVG as text: every attribute and every word escaped, no style sheet needed."""

from html import escape

from reglint.printable import printable

#: The colours of a drawing; nothing in it is told by colour alone.
INK, PALE, PAPER = "#1b1b1b", "#c9c9c4", "#ffffff"

#: The width of every drawing, in its own units.
WIDTH = 660.0


def number(value: float) -> str:
    """Return a coordinate to a tenth of a unit, without a needless zero."""
    rounded = round(value, 1) + 0.0  # minus zero plus zero is zero
    return f"{rounded:.1f}".removesuffix(".0")


def element(name: str, *inside: str, **attributes: str | float) -> str:
    """Return an element around markup that is already safe; ``_`` in a name stands for ``-``."""
    listed = "".join(
        f' {key.strip("_").replace("_", "-")}="{_value(value)}"'
        for key, value in attributes.items()
    )
    return f"<{name}{listed}>{''.join(inside)}</{name}>" if inside else f"<{name}{listed}/>"


def _value(value: str | float) -> str:
    return words(value) if isinstance(value, str) else number(value)


def words(text: str) -> str:
    """Return text from anywhere as markup that shows exactly it."""
    return escape(printable(text))


def label(x: float, y: float, text: str, **attributes: str | float) -> str:
    """Return words at a place, with a rim of paper that keeps them readable on lines."""
    rim = {"stroke": PAPER, "stroke_width": "3", "paint_order": "stroke"}
    return element("text", words(text), x=x, y=y, fill=INK, **{**rim, **attributes})


def line(x1: float, y1: float, x2: float, y2: float, **attributes: str | float) -> str:
    """Return a straight line."""
    return element("line", x1=x1, y1=y1, x2=x2, y2=y2, **{"stroke": INK, **attributes})


def drawing(name: str, title: str, says: str, height: float, *inside: str) -> str:
    """Return a whole drawing that screen readers know by its title and description."""
    return element(
        "svg",
        element("title", words(title), id=f"{name}-title"),
        element("desc", words(says), id=f"{name}-says"),
        *inside,
        role="img",
        aria_labelledby=f"{name}-title {name}-says",
        viewBox=f"0 0 {number(WIDTH)} {number(height)}",
        width=WIDTH,
        height=height,
        font_family="sans-serif",
        font_size="12",
    )
