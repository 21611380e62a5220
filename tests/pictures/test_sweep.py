"""A sweep over the standard values of a field: margins at each, and what they come to."""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from reglint.finding import Outcome
from reglint.pictures.sweep import Sweep, sweep
from reglint.window import trials

RESISTANCE = "series_resistor.resistance"


def swept(found: Any, *others: str) -> Sweep:
    """Return the sweep of a judged spec's checked rules, and others, over the resistance."""
    tried = trials(found.case.spec, RESISTANCE)
    variants = found.project.variants(found.case, [{RESISTANCE: text} for text in tried.values()])
    checked = {each.rule for each in found.verdict.findings if each.margin is not None}
    rules = [each for each in found.case.rules.values() if each.name in {*checked, *others}]
    result = sweep(found.case, RESISTANCE, dict(zip(tried, variants, strict=True)), rules)
    assert isinstance(result, Sweep)
    return result


def test_the_values_are_the_series_over_two_decades(judged: Callable[..., Any]) -> None:
    """5 % means E24 (IEC 60063): from 47 ohm to 4.7 kohm, 49 values."""
    found = swept(judged())
    assert found.series == "E24"
    assert (found.values[0], found.values[-1], len(found.values)) == (47.0, 4700.0, 49)


def test_a_margin_is_the_engine_s_for_that_value(judged: Callable[..., Any]) -> None:
    """By hand: 13 V shorted across R - 5 % - 100 ppm/K * 25 K, against 0.5 W."""
    found = swept(judged())
    row = [rule.name for rule in found.rules].index("resistor-dissipation-when-shorted")
    least = found.values * (1.0 - 0.05 - 100e-6 * 25.0)
    assert found.margins[row] == pytest.approx(1.0 - 169.0 / least / 0.5, rel=1e-9)


def test_outcomes_agree_with_the_verdicts_at_each_value(judged: Callable[..., Any]) -> None:
    """The sample's proven verdict at its own 470 ohm is a pass, and so is the sweep's."""
    found = swept(judged())
    assert found.outcomes()[list(found.values).index(470.0)] is Outcome.PASS
    assert found.outcomes()[0] is Outcome.FAIL
    assert found.outcomes()[-1] is Outcome.FAIL


def test_an_unknown_margin_never_holds(judged: Callable[..., Any]) -> None:
    """Without the resistor's voltage rating its rule has no margin: no value holds."""
    found = swept(judged({"series_resistor.voltage_rating": None}), "resistor-voltage")
    assert set(found.outcomes()) == {Outcome.FAIL}


def test_rules_that_stay_are_told_from_those_that_move(judged: Callable[..., Any]) -> None:
    """The shock caution stays, the short's dissipation moves."""
    found = swept(judged())
    moving = {found.rules[row].name for row in found.moving()}
    assert "shock-caution" not in moving
    assert "resistor-dissipation-when-shorted" in moving


def test_a_margin_that_is_infinite_throughout_stays(judged: Callable[..., Any]) -> None:
    """Infinity less infinity is no change."""
    found = swept(judged())
    endless = np.full((1, len(found.values)), np.inf)
    still = Sweep(found.field, found.unit, "E24", 470.0, found.values, found.rules[:1], endless)
    assert still.moving() == []


def test_a_field_without_a_tolerance_has_no_sweep(judged: Callable[..., Any]) -> None:
    """No series is meant for an exact value."""
    found = judged({RESISTANCE: "470 ohm"})
    said = sweep(found.case, RESISTANCE, {}, list(found.case.rules.values()))
    assert said == (
        "series_resistor.resistance: it is stated without a tolerance, so no series is meant."
    )
