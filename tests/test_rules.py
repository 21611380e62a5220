"""Every shipped rule proves itself: its own examples pass and fail through the real check."""

from collections.abc import Callable

import pytest

from reglint.finding import Finding, Outcome, Run
from reglint.rulebook import Rulebook
from reglint.tree import plain

BOOK = Rulebook()
RULES = {
    (kind, rule.name): rule
    for kind in BOOK.kind_names()
    if (found := BOOK.kind(kind))
    for rule in BOOK.rules(found).values()
}


def finding(run: Run, rule: str) -> Finding:
    """Return the finding of a rule in a run of one sound spec."""
    assert not run.problems
    (verdict,) = run.verdicts
    return next(each for each in verdict.findings if each.rule == rule)


def test_the_rulebook_is_sound() -> None:
    """No shipped file has a problem, whatever is asked of the rulebook."""
    for name in BOOK.policy_names():
        assert BOOK.policy(name) is not None
    assert len(BOOK.parts()) == 37
    assert BOOK.problems == []


@pytest.mark.parametrize("kind", BOOK.kind_names())
def test_the_sample_passes_every_rule(
    kind: str, check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """A kind's sample has no finding that is not a pass, and nothing is left unread."""
    run = check(sample(kind=kind))
    assert not run.problems
    open_ = [each for each in run.verdicts[0].findings if each.outcome is not Outcome.PASS]
    assert open_ == []


@pytest.mark.parametrize(("kind", "name"), RULES)
def test_a_rule_passes_as_it_says(
    kind: str, name: str, check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """Under a rule's ``passes`` changes to the sample it passes, proven."""
    run = check(sample(plain(RULES[kind, name].passes), kind))
    found = finding(run, name)
    assert found.outcome is Outcome.PASS
    assert found.proven


@pytest.mark.parametrize(("kind", "name"), RULES)
def test_a_rule_fails_as_it_says(
    kind: str, name: str, check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """Under a rule's ``fails`` changes it breaks: a failure, or a warning at worst."""
    rule = RULES[kind, name]
    found = finding(check(sample(plain(rule.fails), kind)), name)
    assert found.outcome is (Outcome.WARN if rule.at_worst_warn else Outcome.FAIL)
    assert found.margin is not None
    assert found.margin < 0.0


@pytest.mark.parametrize(("kind", "name"), RULES)
def test_a_rule_gives_its_reason_and_source(kind: str, name: str) -> None:
    """A rule says why it holds, where that is published, and what would mend a break."""
    rule = RULES[kind, name]
    assert rule.reason.endswith(".")
    assert rule.remedy.endswith(".")
    known = ("common practice, no source", "IEC", "data", "Definition", "limit", "policy")
    assert any(word in rule.source for word in known)
