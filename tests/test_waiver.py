"""Waivers: what they accept, and when they stop working."""

from datetime import date

import pytest

from reglint.finding import Finding, Outcome
from reglint.source import TOP
from reglint.spec import Waiver
from reglint.waiver import apply

RULES = ("a-rule", "b-rule")
UNCHECKED = "the waiver of a-rule does not hold: the rule was not checked"


def finding(margin: float | None = -0.04, rule: str = "a-rule") -> Finding:
    """Return a failure with a margin."""
    return Finding(rule, Outcome.FAIL, "broken", TOP, margin=margin)


def waiver(until: str = "2027-01-01", no_worse_than: float | None = None) -> Waiver:
    """Return a waiver of the rule."""
    return Waiver("a-rule", "why", "who", date.fromisoformat(until), no_worse_than, TOP)


def applied(found: Finding, accepted: Waiver, today: str = "2026-12-01") -> list[Finding]:
    """Return the findings after a waiver."""
    return list(apply([found], [accepted], RULES, date.fromisoformat(today)))


def test_a_working_waiver_marks_the_finding() -> None:
    """The finding stays visible, as waived."""
    (found,) = applied(finding(), waiver())
    assert (found.waived, found.outcome) == (True, Outcome.FAIL)


def test_a_waiver_holds_through_its_last_day() -> None:
    """On the day it names a waiver still works; on the next it does not."""
    assert applied(finding(), waiver("2026-12-01"))[0].waived
    assert not applied(finding(), waiver("2026-12-01"), "2026-12-02")[0].waived


@pytest.mark.parametrize(
    ("margin", "message"),
    [
        (-0.06, "the waiver of a-rule is exceeded: the margin is −6 %, it accepts −5 %"),
        (
            None,
            f"{UNCHECKED}, so nothing shows how bad it is",
        ),
    ],
)
def test_a_waiver_stops_beyond_what_it_accepts(margin: float | None, message: str) -> None:
    """A worse margin, or none, leaves the finding open and is told."""
    found, trouble = applied(finding(margin), waiver(no_worse_than=-0.05))
    assert not found.waived
    assert (trouble.rule, trouble.outcome, trouble.message) == ("waiver", Outcome.WARN, message)


def test_a_waiver_within_what_it_accepts_works() -> None:
    """At −4 % a waiver that accepts −5 % works."""
    assert applied(finding(-0.04), waiver(no_worse_than=-0.05))[0].waived


def test_an_outcome_is_neither_true_nor_false() -> None:
    """An outcome must be compared, never taken for a truth."""
    with pytest.raises(TypeError, match="compare it with"):
        assert Outcome.FAIL
