"""Bars of margins: their ends, their shapes, and what goes beyond the paper."""

import re
from collections.abc import Callable
from typing import Any
from xml.etree import ElementTree as ET

import pytest

from reglint.pictures.margins import margins


def drawn(found: Any) -> ET.Element:
    """Return the picture of a judged spec's findings as a tree."""
    svg = margins("s1p1", found.verdict.findings, found.case.rules).svg
    return ET.fromstring(svg)  # noqa: S314 -- our own text


def row(tree: ET.Element, rule: str) -> ET.Element:
    """Return the row of one rule."""
    return next(g for g in tree.iter("g") if any(t.text == rule for t in g.iter("text")))


def test_a_bar_is_as_long_as_its_margin(judged: Callable[..., Any]) -> None:
    """One half of the width between the limit and +100 % is +50 %."""
    found = judged()
    finding = next(
        f for f in found.verdict.findings if f.rule == "resistor-dissipation-when-shorted"
    )
    bar = next(row(drawn(found), finding.rule).iter("rect"))
    per_unit = (660.0 - 76.0 - 236.0) / 2.0
    assert float(bar.get("width") or 0) == pytest.approx(finding.margin * per_unit, abs=0.06)
    assert float(bar.get("x") or 0) == 236.0 + per_unit


def test_a_broken_rule_reaches_to_the_left_and_is_a_square(judged: Callable[..., Any]) -> None:
    """Its mark is a square, its bar ends at the limit."""
    found = judged({"loads.gauge.current.max": "12 mA"})
    mark, bar = list(row(drawn(found), "minimum-zener-current").iter("rect"))
    assert (mark.get("width"), mark.get("height")) == ("10", "10")
    assert float(bar.get("x") or 0) + float(bar.get("width") or 0) == pytest.approx(410.0, abs=0.1)
    assert bar.get("fill") == "url(#s1p1-fail)"


def test_what_was_not_checked_is_said_and_has_no_bar(judged: Callable[..., Any]) -> None:
    """A rule without its figure stands first, without a bar."""
    found = judged({"series_resistor.power_rating": None})
    words = [text.text for text in row(drawn(found), "resistor-dissipation").iter("text")]
    assert words == ["resistor-dissipation", "not checked"]
    assert not list(row(drawn(found), "resistor-dissipation").iter("rect"))


def test_a_bar_beyond_the_paper_ends_in_an_arrow(judged: Callable[..., Any]) -> None:
    """A margin above +100 % is written out; its bar stops."""
    found = judged()
    large = [f for f in found.verdict.findings if f.margin is not None and f.margin > 1.0]
    assert large
    for finding in large:
        shapes = row(drawn(found), finding.rule)
        assert list(shapes.iter("polygon"))
        bar = next(shapes.iter("rect"))
        assert float(bar.get("x") or 0) + float(bar.get("width") or 0) == pytest.approx(584.0)


def test_the_description_tells_every_margin(judged: Callable[..., Any]) -> None:
    """A reader who hears the page has the same numbers."""
    found = judged()
    said = next(drawn(found).iter("desc")).text or ""
    assert len(re.findall(r"[+−][\d.]+ %", said)) == len(found.verdict.findings)
