"""The drawings of curves, areas and adjustments: what is on paper is what was measured."""

import re
from collections.abc import Callable
from typing import Any
from xml.etree import ElementTree as ET

import pytest

from reglint.pictures.adjustment import adjustment
from reglint.pictures.area import area
from reglint.pictures.curves import curves
from reglint.pictures.field import Field, field
from reglint.pictures.meeting import Meeting, meeting
from reglint.pictures.sweep import Sweep, sweep
from reglint.window import trials

#: The textbooks' straight line, without heat, drift or spread of the impedance.
STRAIGHT = {
    "zener.impedance": {"min": "7 ohm", "max": "7 ohm"},
    "zener.knee_impedance": "7 ohm",
    "zener.tempco": "0 V/K",
    "series_resistor.tempco": None,
}


def parsed(svg: str) -> ET.Element:
    """Return a drawing as a tree; it must be well-formed by itself."""
    return ET.fromstring(svg)  # noqa: S314 -- our own text


def points(path: ET.Element) -> list[tuple[float, float]]:
    """Return the coordinates of a path of straight lines."""
    numbers = [float(each) for each in re.findall(r"-?[\d.]+", path.get("d") or "")]
    return list(zip(numbers[::2], numbers[1::2], strict=True))


def ticks(tree: ET.Element, anchor: str, unit: float) -> dict[float, float]:
    """Return the values written along an axis with their places."""
    place = "y" if anchor == "end" else "x"
    found = {}
    for text in tree.iter("text"):
        written = re.fullmatch(r"([\d.]+) (mA|A|V)", text.text or "")
        if written and text.get("text-anchor") == anchor:
            number = float(written[1]) * (unit if written[2] == "mA" else 1.0)
            found[number] = float(text.get(place) or 0) - (4.0 if anchor == "end" else 0.0)
    return found


def value_at(ticks_: dict[float, float], place: float) -> float:
    """Return the value at a place, from the first and last tick."""
    (a, at_a), *_, (b, at_b) = sorted(ticks_.items())
    return a + (place - at_a) / (at_b - at_a) * (b - a)


def load_line(found: Any) -> Meeting:
    """Return the measured load line of a judged spec."""
    declared = found.case.circuit.kind.pictures.curves["load-line"]
    result = meeting(declared, found.boxes["any_load"])
    assert isinstance(result, Meeting)
    return result


def test_the_band_s_points_read_off_the_axes_are_the_straight_line(
    judged: Callable[..., Any],
) -> None:
    """Read back through its own ticks, the band's edge is 4.845 V + 7 ohm (I - 49 mA)."""
    tree = parsed(curves("s1p2", load_line(judged(STRAIGHT))).svg)
    across, up = ticks(tree, "middle", 1.0), ticks(tree, "end", 1e-3)
    band = next(p for p in tree.iter("path") if p.get("fill") == "#d5d8dc")
    edge = points(band)[:61]
    for x, y in edge:
        voltage, current = value_at(across, x), value_at(up, y)
        assert voltage == pytest.approx(4.845 + 7.0 * (current - 0.049), abs=0.003)


def test_both_operating_points_carry_their_letters(judged: Callable[..., Any]) -> None:
    """A and B stand where the key says the circuit works."""
    picture = curves("s1p2", load_line(judged(STRAIGHT)))
    tree = parsed(picture.svg)
    assert [mark for mark, _ in picture.key] == ["A", "B"]
    across, up = ticks(tree, "middle", 1.0), ticks(tree, "end", 1e-3)
    (first, *_) = (text for text in tree.iter("text") if text.text == "A")
    assert value_at(across, float(first.get("x") or 0)) == pytest.approx(5.082, abs=0.01)
    assert value_at(up, float(first.get("y") or 0) - 4.0) == pytest.approx(9.99e-3, abs=3e-5)
    assert picture.key[0][1].startswith("least zener.current: 9.992 mA, 5.082 V, at ")


def spanned(found: Any) -> Field:
    """Return the measured operating area of a judged spec."""
    declared = found.case.circuit.kind.pictures.areas["operating-area"]
    checked = {each.rule for each in found.verdict.findings if each.margin is not None}
    rules = [rule for rule in found.case.rules.values() if rule.name in checked]
    result = field(declared, found.boxes, rules)
    assert isinstance(result, Field)
    return result


def test_an_area_says_that_it_is_sampled(judged: Callable[..., Any]) -> None:
    """Nobody takes a sampled picture for the proof."""
    says = area("s1p3", spanned(judged())).says
    assert (
        "Sampled: at each point the worst of the corners of all other tolerances is shown;"
        " the verdict comes from the proof." in says
    )


def test_an_area_has_both_hatches_and_its_own_box(judged: Callable[..., Any]) -> None:
    """Ruled where a rule breaks, dotted where one warns; the box reads 11 V to 13 V, 0 to 2 mA."""
    tree = parsed(area("s1p3", spanned(judged())).svg)
    fills = {path.get("fill") for path in tree.iter("path")}
    assert {"url(#s1p3-fail)", "url(#s1p3-warn)"} <= fills
    box = next(r for r in tree.iter("rect") if r.get("stroke-width") == "2.6")
    across, up = ticks(tree, "middle", 1.0), ticks(tree, "end", 1e-3)
    x, y, width, height = (float(box.get(n) or 0) for n in ("x", "y", "width", "height"))
    assert value_at(across, x) == pytest.approx(11.0, abs=0.01)
    assert value_at(across, x + width) == pytest.approx(13.0, abs=0.01)
    assert value_at(up, y) == pytest.approx(2e-3, abs=1e-5)
    assert value_at(up, y + height) == pytest.approx(0.0, abs=1e-5)


def test_each_letter_of_an_area_is_explained(judged: Callable[..., Any]) -> None:
    """The marks on paper and those of the key are the same."""
    picture = area("s1p3", spanned(judged()))
    marks = [mark for mark, _ in picture.key]
    written = [t.text for t in parsed(picture.svg).iter("text") if t.get("font-weight") == "bold"]
    assert written == marks
    assert "minimum-zener-current breaks" in "".join(said for _, said in picture.key)


def swept(found: Any) -> Sweep:
    """Return the measured sweep of a judged spec over its resistance."""
    name = "series_resistor.resistance"
    tried = trials(found.case.spec, name)
    variants = found.project.variants(found.case, [{name: text} for text in tried.values()])
    checked = {each.rule for each in found.verdict.findings if each.margin is not None}
    rules = [rule for rule in found.case.rules.values() if rule.name in checked]
    result = sweep(found.case, name, dict(zip(tried, variants, strict=True)), rules)
    assert isinstance(result, Sweep)
    return result


def test_an_adjustment_ticks_every_standard_value(judged: Callable[..., Any]) -> None:
    """Two decades of E24 are 49 strokes below the strip."""
    tree = parsed(adjustment("s1p4", swept(judged())).svg)
    strokes = [each for each in tree.iter("line") if each.get("y1") == "32"]
    assert len(strokes) == 49


def test_the_strip_of_an_adjustment_shows_the_window(judged: Callable[..., Any]) -> None:
    """From low to high resistance: broken, warning, holding, and back."""
    tree = parsed(adjustment("s1p4", swept(judged())).svg)
    strip = [r.get("fill") for r in tree.iter("rect") if r.get("height") == "18"]
    fail, warn, hold = "url(#s1p4-fail)", "url(#s1p4-warn)", "#e4efe9"
    assert strip == [fail, warn, hold, warn, fail]


def test_the_key_of_an_adjustment_tells_where_each_rule_holds(judged: Callable[..., Any]) -> None:
    """The short's 169 V² / R stays under 0.5 W from 360 ohm (less 5.25 %) on."""
    key = [said for _, said in adjustment("s1p4", swept(judged())).key]
    assert "resistor-dissipation-when-shorted holds at 360 ohm to 4.7 kohm" in key
