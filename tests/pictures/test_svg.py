"""Elements of SVG: escaped, and readable by any XML parser."""

from xml.etree import ElementTree as ET

from reglint.pictures.svg import drawing, element, label, number


def test_coordinates_are_short() -> None:
    """A tenth of a unit is fine enough, and there is no minus zero."""
    assert [number(1.0), number(2.34), number(-0.01), number(100.0)] == ["1", "2.3", "0", "100"]


def test_hostile_words_come_out_as_words() -> None:
    """Markup and quotes in a name stay text, in content and in attributes."""
    hostile = "</text><script>\"'&"
    tree = ET.fromstring(label(1.0, 2.0, hostile, id=hostile))  # noqa: S314 -- our own text
    assert tree.text == hostile
    assert tree.get("id") == hostile


def test_control_and_direction_characters_are_replaced() -> None:
    """What XML forbids, or would turn the line around, never gets in."""
    assert element("t", label(0.0, 0.0, "a\x00b\u202ec")).count("�") == 2


def test_a_drawing_has_a_name() -> None:
    """A screen reader finds the title and the description by their ids."""
    tree = ET.fromstring(drawing("s1p1", "Load line", "two lines", 10.0))  # noqa: S314 -- same
    named = {each.get("id"): each.text for each in tree}
    assert tree.get("role") == "img"
    assert [named[each] for each in (tree.get("aria-labelledby") or "").split()] == [
        "Load line",
        "two lines",
    ]
