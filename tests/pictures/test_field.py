"""A field of margins: what the engine gives at its points, worst of the other corners."""

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np
import pytest

from reglint.pictures.field import Field, field


def spanned(found: Any) -> Field:
    """Return the operating area of a judged spec."""
    declared = found.case.circuit.kind.pictures.areas["operating-area"]
    result = field(declared, found.boxes, list(found.case.rules.values()))
    assert isinstance(result, Field)
    return result


def margins(found: Field, rule: str) -> Any:
    """Return one rule's margins over the grid."""
    return found.margins[[each.name for each in found.rules].index(rule)]


def test_each_rule_has_its_own_margins(judged: Callable[..., Any]) -> None:
    """By hand: a short's V_S**2/R at 446.5 ohm less 0.4 % drift, against 0.5 W, whatever loads.

    R is least at 470 ohm less 5 % and less 100 ppm/K times 25 K of distance from 25 °C.
    """
    found = spanned(judged())
    least = 470.0 * (1.0 - 0.05 - 100e-6 * 25.0)
    expected = 1.0 - found.across**2 / least / 0.5
    shorted = margins(found, "resistor-dissipation-when-shorted")
    assert shorted == pytest.approx(np.tile(expected, (len(found.up), 1)), rel=1e-9, abs=1e-9)


def test_the_headroom_s_margin_follows_supply_and_load(judged: Callable[..., Any]) -> None:
    """A volt more supply is a volt more headroom; load takes the greatest R times its current."""
    found = spanned(judged())
    headroom = margins(found, "supply-headroom") * found.across
    most = 470.0 * (1.0 + 0.05 + 100e-6 * 25.0)
    assert np.diff(headroom, axis=1) == pytest.approx(np.diff(found.across)[0], rel=1e-6)
    assert np.diff(headroom, axis=0) == pytest.approx(-most * np.diff(found.up)[0], rel=1e-6)


def test_a_load_that_the_condition_takes_away_stays_away(judged: Callable[..., Any]) -> None:
    """At no load the diode's dissipation does not depend on the load's current."""
    found = margins(spanned(judged()), "no-load-dissipation")
    assert (found == found[:1]).all()


def test_a_load_that_cannot_be_taken_away_counts(judged: Callable[..., Any]) -> None:
    """With a load soldered in, more of it leaves the diode less."""
    found = margins(spanned(judged({"loads.gauge.removable": "false"})), "no-load-dissipation")
    assert (np.diff(found, axis=0) > 0.0).all()


def test_the_spec_s_own_box_is_kept(judged: Callable[..., Any]) -> None:
    """11 V to 13 V, and from no load to 2 mA."""
    assert spanned(judged()).own == ((11.0, 13.0), (0.0, 0.002))


def test_a_rule_that_depends_on_neither_is_left_out(judged: Callable[..., Any]) -> None:
    """The preferred value has nothing to do with supply and load."""
    assert "preferred-value" not in {rule.name for rule in spanned(judged()).rules}


def test_what_has_no_value_is_a_break(judged: Callable[..., Any]) -> None:
    """A rule without its figure gives no margin: it is drawn as broken, never as holding."""
    found = judged({"series_resistor.voltage_rating": None})
    assert (margins(spanned(found), "resistor-voltage") == -1.0).all()


def test_a_spec_without_load_has_no_area(judged: Callable[..., Any]) -> None:
    """There is a sentence instead of a picture of nothing."""
    found = judged({"loads": {}})
    declared = found.case.circuit.kind.pictures.areas["operating-area"]
    said = field(declared, found.boxes, list(found.case.rules.values()))
    assert said == "Operating area: this spec gives load.current no range."


def test_a_break_that_is_a_warning_at_worst_breaks_nothing(judged: Callable[..., Any]) -> None:
    """Shock caution far above 60 V is no failure, but leaves no reserve."""
    found = spanned(judged())
    only = [each for each in found.rules if each.at_worst_warn][:1]
    part = replace(found, rules=tuple(only), margins=np.full((1, 2, 2), -0.5))
    assert (part.broken() > 0.0).all()
    assert (part.reserve() < 0.0).all()
