"""What every report says of a run in words: counts, corners, shares, waivers, the caution."""

from collections import Counter
from collections.abc import Iterator, Sequence

from reglint.finding import Finding, Outcome, Run, Verdict, Yield
from reglint.quantity import render
from reglint.spec import Waiver

#: Said in every report that a person reads.
CAUTION = (
    "This is a screening aid: a pass is no proof of safety or compliance."
    " Local codes and licensed practice decide."
)


def outcome_word(finding: Finding) -> str:
    """Return the word for a finding's outcome, or that it is waived."""
    return "waived" if finding.waived else finding.outcome.value


def shown(verdict: Verdict, *, everything: bool) -> list[Finding]:
    """Return the findings a report lists, the worst first; passes only if everything is wanted."""
    listed = (f for f in verdict.findings if everything or f.outcome is not Outcome.PASS)
    return sorted(listed, key=lambda each: -each.outcome.rank)


def tally(verdict: Verdict) -> str:
    """Return how many rules of a spec came to what."""
    counts = {outcome.value: 0 for outcome in reversed(Outcome)} | {"waived": 0}
    for finding in verdict.findings:
        counts[outcome_word(finding)] += 1
    counts["pass"] = verdict.passed
    listed = [f"{count} {word}" for word, count in counts.items() if count]
    skipped = [f"{len(verdict.skipped)} without a limit"] if verdict.skipped else []
    return ", ".join(listed + skipped)


def corner(verdict: Verdict, finding: Finding) -> str:
    """Return the worst point of a finding, every name with its value."""
    kind = verdict.spec.kind
    units = {path: field.unit for path, field in kind.fields.items()}
    units |= {path: total.unit for path, total in kind.totals.items()}
    point = finding.corner or {}
    return ", ".join(f"{name} {render(value, units[name])}" for name, value in point.items())


def shares(finding: Finding) -> str:
    """Return who ate a finding's margin, each with its line."""
    return ", ".join(
        f"{each.path} {100.0 * each.share:.0f} % (line {each.span.line})" for each in finding.shares
    )


def waiver_of(verdict: Verdict, finding: Finding) -> Waiver | None:
    """Return the waiver that accepts a finding, if one does."""
    waivers = (each for each in verdict.spec.waivers if each.rule == finding.rule)
    return next(waivers, None) if finding.waived else None


def acceptance(accepted: Waiver) -> str:
    """Return why a finding is accepted, by whom and until when."""
    return f"{accepted.reason}; by {accepted.approved_by} until {accepted.until}"


def details(verdict: Verdict, finding: Finding) -> Iterator[str]:
    """Yield all there is to tell of a finding below its heading, a line each."""
    yield finding.message
    yield from (f"note       {note}" for note in finding.notes)
    if rule := verdict.rules.get(finding.rule):
        yield f"reason     {rule.reason}"
    if finding.corner:
        yield f"worst at   {corner(verdict, finding)}"
    if finding.shares:
        yield f"eaten by   {shares(finding)}"
    if accepted := waiver_of(verdict, finding):
        yield f"waived     {acceptance(accepted)}"
    elif finding.remedy:
        yield f"remedy     {finding.remedy}"


def windows(verdict: Verdict, finding: Finding) -> Iterator[str]:
    """Yield the values that would hold, for each field a failing finding's rule adjusts."""
    rule = verdict.rules.get(finding.rule)
    for field, values in verdict.windows.items():
        if finding.outcome is Outcome.FAIL and rule and field in rule.adjust:
            yield window(verdict, field, values)


def window(verdict: Verdict, field: str, values: Sequence[float]) -> str:
    """Return the values of a field at which a failing spec would hold."""
    if not values:
        return f"no standard value of {field}: reglint window {verdict.spec.file} tells why"
    unit = verdict.spec.kind.fields[field].unit
    return f"{field} at {', '.join(render(value, unit) for value in values)}"


def builds(drawn: Yield) -> str:
    """Return how many builds break a rule, and what that says of all builds."""
    low, high = (100.0 * end for end in drawn.interval())
    count = f"{drawn.broken} of {drawn.builds} break {drawn.rule or 'any of these rules'}"
    return f"{count} ({low:.3g} % to {high:.3g} % of all builds, at 95 % confidence)"


def drawing(drawn: str) -> Iterator[str]:
    """Yield how builds were drawn, if they were."""
    if drawn:
        yield f"Builds were drawn {drawn}; they never change an outcome."
        yield "Where a rule is not named under builds, it is proven to hold or was not checked."


def summary(run: Run) -> Iterator[str]:
    """Yield the sentences that end a report, without the caution."""
    ends = Counter(verdict.outcome for verdict in run.verdicts)
    specs = ", ".join(f"{ends[each]} {each.value}" for each in reversed(Outcome))
    rules = ", ".join(f"{run.count(each)} {each.value}" for each in reversed(Outcome))
    waived = f", {run.waived} waived" if run.waived else ""
    yield f"{plural(len(run.verdicts), 'spec')}: {specs}; rules: {rules}{waived}."
    if any(each.outcome is Outcome.FAIL and not each.windows for each in run.verdicts):
        yield "Standard values at which a failing spec would hold: reglint window FILE."
    if run.problems:
        yield f"{plural(run.unreadable, 'file')} with something that could not be used."


def plural(count: int, noun: str) -> str:
    """Return a count with its noun."""
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"
