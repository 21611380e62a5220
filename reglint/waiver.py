"""Waivers at work: which findings they accept, and which waivers no longer work."""

from collections.abc import Collection, Iterable, Iterator
from dataclasses import replace
from datetime import date

from reglint.finding import Finding, Outcome
from reglint.nearest import hint
from reglint.ruling import percent
from reglint.spec import Waiver

#: The name under which trouble with a waiver is reported.
NAME = "waiver"


def apply(
    findings: Iterable[Finding], waivers: Iterable[Waiver], rules: Collection[str], today: date
) -> Iterator[Finding]:
    """Yield the findings, those with a working waiver marked; then what is wrong with waivers."""
    by_rule = {waiver.rule: waiver for waiver in waivers}
    open_findings = {each.rule: each for each in findings if each.outcome is not Outcome.PASS}
    trouble = {
        rule: said
        for rule, waiver in by_rule.items()
        if (said := _trouble(waiver, open_findings.get(rule), rules, today))
    }
    for each in findings:
        works = each.rule in by_rule and each.rule not in trouble
        yield replace(each, waived=True) if works and each.outcome is not Outcome.PASS else each
    for rule, said in trouble.items():
        message = f"the waiver of {rule} {said}"
        yield Finding(
            NAME, Outcome.WARN, message, by_rule[rule].span, "Renew or remove the waiver."
        )


def _trouble(
    waiver: Waiver, finding: Finding | None, rules: Collection[str], today: date
) -> str | None:
    """Return why a waiver does not work, or nothing."""
    if waiver.rule not in rules:
        return f"matches nothing: there is no such rule{hint(waiver.rule, rules)}"
    if waiver.until < today:
        return f"expired on {waiver.until}"
    if finding is None:
        return "matches nothing: the rule passes"
    return _exceeded(finding.margin, waiver.no_worse_than)


def _exceeded(margin: float | None, accepted: float | None) -> str | None:
    if accepted is None:
        return None
    if margin is None:
        return "does not hold: the rule was not checked, so nothing shows how bad it is"
    if margin < accepted:
        return f"is exceeded: the margin is {percent(margin)}, it accepts {percent(accepted)}"
    return None
