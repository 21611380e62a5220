"""What a rule comes to: the outcome, and what is said of a proof that did not come close."""

from collections.abc import Callable
from dataclasses import replace

import pytest

from reglint import ruling
from reglint.finding import Outcome, Run
from reglint.rule import Rule
from reglint.rulebook import Rulebook
from reglint.ruling import WorstPoint
from reglint.spec import Spec


def worst(margin: float, bound: float) -> WorstPoint:
    """Return a worst point whose value does not matter."""
    return WorstPoint(0.005, 0.005, margin, bound, {}, ())


@pytest.fixture
def spec(check: Callable[..., Run], sample: Callable[..., str]) -> Spec:
    """Return the kind's sample."""
    return check(sample(), everything=False).verdicts[0].spec


@pytest.fixture
def rule(rulebook: Rulebook) -> Rule:
    """Return a rule with a reserve of 20 %."""
    kind = rulebook.kind("zener-shunt")
    assert kind is not None
    found = rulebook.rules(kind)["minimum-zener-current"]
    assert found.warn_margin == 0.2
    return found


@pytest.mark.parametrize(
    ("point", "outcome", "note"),
    [
        (worst(0.3, 0.2), Outcome.PASS, ()),
        (worst(0.2, 0.1995), Outcome.PASS, ()),
        (
            worst(0.3, 0.1),
            Outcome.WARN,
            ("reserve not proven: the margin is known only to be at least +10 %",),
        ),
        (
            worst(0.3, -0.1),
            Outcome.WARN,
            ("not proven: the margin is known only to be at least −10 %",),
        ),
        (worst(0.1, 0.05), Outcome.WARN, ()),
        (worst(-0.5, -0.501), Outcome.FAIL, ()),
        (
            worst(-0.5, -0.6),
            Outcome.FAIL,
            ("worse may be found: the margin is known only to be at least −60 %",),
        ),
        (worst(float("nan"), float("-inf")), Outcome.WARN, ()),
    ],
)
def test_a_pass_needs_a_proof_and_a_failure_a_witness(
    point: WorstPoint, outcome: Outcome, note: tuple[str, ...], rule: Rule, spec: Spec
) -> None:
    """Outcome and note follow from the worst point found and the bound that is proven."""
    found = ruling.finding(rule, spec, point)
    assert (found.outcome, found.notes) == (outcome, note)


def test_a_rule_that_only_warns_never_fails(rule: Rule, spec: Spec) -> None:
    """A rule that is never worse than a warning warns of a break."""
    mild = replace(rule, at_worst_warn=True)
    assert ruling.finding(mild, spec, worst(-0.5, -0.5)).outcome is Outcome.WARN
