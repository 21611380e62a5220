"""The margin of a rule: which side is safe, and what it is a fraction of."""

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from reglint.formula import parse, parse_inequality
from reglint.functions import INTERVALS, REAL
from reglint.interval import hull
from reglint.judge import Case
from reglint.margin import Margin
from reglint.rule import Rule
from reglint.values import Values

INF = float("inf")


@pytest.fixture
def rule(case: Case) -> Rule:
    """Return a rule whose margin is a fraction of its limit."""
    return replace(case.rules["minimum-zener-current"], relative_to=None)


@pytest.fixture
def margin(rule: Rule, case: Case) -> Callable[..., float]:
    """Return what tells the margin of a demand where its names have some values."""

    def told(demand: str, of: str = "", **given: float) -> float:
        asked = replace(rule, holds=parse_inequality(demand), relative_to=parse(of) if of else None)
        numbers: dict[str, Any] = {name: np.float64(value) for name, value in given.items()}
        with np.errstate(all="ignore"):
            return float(Margin(asked)(Values(case.circuit, REAL, numbers)))

    return told


@pytest.mark.parametrize(
    ("demand", "value", "limit", "wanted"),
    [
        ("value >= limit", 6.0, 4.0, 0.5),
        ("value >= limit", 3.0, 4.0, -0.25),
        ("value <= limit", 3.0, 4.0, 0.25),
        ("value <= limit", 6.0, 4.0, -0.5),
        ("value <= limit", -6.0, -4.0, 0.5),
        ("value >= limit", 4.0, 4.0, 0.0),
        ("value <= limit", 0.0, 0.0, 0.0),
        ("value <= limit", 1e-9, 0.0, -INF),
        ("value >= limit", 1e-9, 0.0, INF),
    ],
)
def test_a_margin_is_positive_on_the_safe_side(
    demand: str, value: float, limit: float, wanted: float, margin: Callable[..., float]
) -> None:
    """As a fraction of the limit's magnitude; of a limit of zero nothing is a fraction."""
    assert margin(demand, value=value, limit=limit) == wanted


def test_a_margin_can_be_a_fraction_of_something_else(margin: Callable[..., float]) -> None:
    """Of 150 K between ambient and limit 30 K are left: a fifth."""
    found = margin("value <= limit", "scale", value=145.0, limit=175.0, scale=150.0)
    assert found == pytest.approx(0.2, rel=1e-15)


def test_a_limit_that_is_no_number_gives_no_margin(margin: Callable[..., float]) -> None:
    """What cannot be evaluated is no pass."""
    assert np.isnan(margin("value <= limit", value=1.0, limit=float("nan")))


def test_a_margin_of_ranges_encloses_that_of_every_value(rule: Rule, case: Case) -> None:
    """Of values from 2 to 3 below 4 the margin is 1/4 to 1/2."""
    asked = replace(rule, holds=parse_inequality("value <= limit"))
    given = {"value": hull(2.0, 3.0), "limit": hull(4.0, 4.0)}
    found = Margin(asked)(Values(case.circuit, INTERVALS, given))
    assert (float(found.low), float(found.high)) == pytest.approx((0.25, 0.5), rel=1e-14)
    assert found.low <= 0.25
    assert found.high >= 0.5
