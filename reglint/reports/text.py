"""The text report: for each spec a heading with counts, then what is not a pass."""

from collections import Counter
from collections.abc import Iterator, Mapping, Sequence

from reglint.finding import Finding, Outcome, Run, Verdict, Yield
from reglint.printable import printable
from reglint.quantity import render as quantity
from reglint.reports import Options

#: Colours of the outcome words; the word itself always says the same.
_COLOURS = {"fail": "31", "warn": "33", "pass": "32", "waived": "36", "unreadable": "35"}
_SAFETY = (
    "This is a screening aid: a pass is no proof of safety or compliance."
    " Local codes and licensed practice decide."
)


def render(run: Run, options: Options) -> str:
    """Return the report; its last line counts everything that was looked at."""
    lines: list[str] = []
    for verdict in run.verdicts:
        lines += _spec(verdict, options)
    for problem in run.problems:
        place = f"{problem.file}, line {problem.span.line}, column {problem.span.column}"
        lines += [f"{_word('unreadable', options)}  {place}", f"    {problem.message}", ""]
    lines += _summary(run, options)
    return "".join(f"{_safe(line, options)}\n" for line in lines)


def _safe(line: str, options: Options) -> str:
    if not options.colour:
        return printable(line)
    return "\x1b".join(printable(piece) for piece in line.split("\x1b"))


def _spec(verdict: Verdict, options: Options) -> Iterator[str]:
    spec = verdict.spec
    tally = _tally(verdict)
    word = _word(verdict.outcome.value, options)
    yield f"{word}  {spec.name} ({spec.kind.name})  {spec.file}, line {spec.line}: {tally}"
    shown = [f for f in verdict.findings if options.everything or f.outcome is not Outcome.PASS]
    for finding in sorted(shown, key=lambda each: -each.outcome.rank):
        yield from _finding(verdict, finding, options)
    for field, values in verdict.windows.items():
        yield f"    would hold {_window(verdict, field, values)}"
    yield from (f"    builds     {_yield(each)}" for each in verdict.yields)
    if shown:
        yield from (f"    assumed    {each.path}: {each.says}" for each in spec.assumptions)
    yield ""


def _tally(verdict: Verdict) -> str:
    counts = {outcome.value: 0 for outcome in reversed(Outcome)} | {"waived": 0}
    for finding in verdict.findings:
        counts[_outcome_word(finding)] += 1
    counts["pass"] = verdict.passed
    listed = [f"{count} {word}" for word, count in counts.items() if count]
    skipped = [f"{len(verdict.skipped)} without a limit"] if verdict.skipped else []
    return ", ".join(listed + skipped)


def _outcome_word(finding: Finding) -> str:
    return "waived" if finding.waived else finding.outcome.value


def _finding(verdict: Verdict, finding: Finding, options: Options) -> Iterator[str]:
    word = _word(_outcome_word(finding), options)
    under = f" ({finding.condition})" if finding.condition else ""
    yield f"  {word}  {finding.rule}{under}, line {finding.span.line}"
    yield f"    {finding.message}"
    for note in finding.notes:
        yield f"    note       {note}"
    if rule := verdict.rules.get(finding.rule):
        yield f"    reason     {rule.reason}"
    if finding.corner:
        yield f"    worst at   {_corner(verdict, finding.corner)}"
    if finding.shares:
        yield f"    eaten by   {_shares(finding)}"
    if finding.waived:
        yield f"    waived     {_waiver(verdict, finding)}"
    elif finding.remedy:
        yield f"    remedy     {finding.remedy}"


def _corner(verdict: Verdict, corner: Mapping[str, float]) -> str:
    kind = verdict.spec.kind
    units = {path: field.unit for path, field in kind.fields.items()}
    units |= {path: total.unit for path, total in kind.totals.items()}
    return ", ".join(f"{name} {quantity(value, units[name])}" for name, value in corner.items())


def _window(verdict: Verdict, field: str, values: Sequence[float]) -> str:
    if not values:
        return f"no standard value of {field}: reglint window {verdict.spec.file} tells why"
    unit = verdict.spec.kind.fields[field].unit
    return f"{field} at {', '.join(quantity(value, unit) for value in values)}"


def _yield(drawn: Yield) -> str:
    low, high = (100.0 * end for end in drawn.interval())
    count = f"{drawn.broken} of {drawn.builds} break {drawn.rule or 'any of these rules'}"
    return f"{count} ({low:.3g} % to {high:.3g} % of all builds, at 95 % confidence)"


def _shares(finding: Finding) -> str:
    return ", ".join(
        f"{each.path} {100.0 * each.share:.0f} % (line {each.span.line})" for each in finding.shares
    )


def _waiver(verdict: Verdict, finding: Finding) -> str:
    waiver = next(each for each in verdict.spec.waivers if each.rule == finding.rule)
    return f"{waiver.reason}; by {waiver.approved_by} until {waiver.until}"


def _word(word: str, options: Options) -> str:
    return f"\x1b[{_COLOURS[word]}m{word}\x1b[0m" if options.colour else word


def _summary(run: Run, options: Options) -> Iterator[str]:
    ends = Counter(verdict.outcome for verdict in run.verdicts)
    specs = ", ".join(f"{ends[each]} {each.value}" for each in reversed(Outcome))
    rules = ", ".join(f"{run.count(each)} {each.value}" for each in reversed(Outcome))
    waived = f", {run.waived} waived" if run.waived else ""
    yield f"{_plural(len(run.verdicts), 'spec')}: {specs}; rules: {rules}{waived}."
    if any(each.outcome is Outcome.FAIL and not each.windows for each in run.verdicts):
        yield "Standard values at which a failing spec would hold: reglint window FILE."
    if run.problems:
        yield f"{_plural(run.unreadable, 'file')} with something that could not be used."
    if options.drawn:
        yield f"Builds were drawn {options.drawn}; they never change an outcome."
    yield _SAFETY


def _plural(count: int, noun: str) -> str:
    return f"{count} {noun}" if count == 1 else f"{count} {noun}s"
