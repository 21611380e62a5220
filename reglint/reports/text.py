"""The text report: for each spec a heading with counts, then what is not a pass."""

from collections.abc import Iterator

from reglint import wording
from reglint.finding import Finding, Run, Verdict
from reglint.printable import printable
from reglint.reports import Options

#: Colours of the outcome words; the word itself always says the same.
_COLOURS = {"fail": "31", "warn": "33", "pass": "32", "waived": "36", "unreadable": "35"}


def render(run: Run, options: Options) -> str:
    """Return the report; its last line counts everything that was looked at."""
    lines: list[str] = []
    for verdict in run.verdicts:
        lines += _spec(verdict, options)
    for problem in run.problems:
        place = f"{problem.file}, line {problem.span.line}, column {problem.span.column}"
        lines += [f"{_word('unreadable', options)}  {place}", f"    {problem.message}", ""]
    lines += [*wording.summary(run), *wording.drawing(options.drawn), wording.CAUTION]
    return "".join(f"{_safe(line, options)}\n" for line in lines)


def _safe(line: str, options: Options) -> str:
    if not options.colour:
        return printable(line)
    return "\x1b".join(printable(piece) for piece in line.split("\x1b"))


def _spec(verdict: Verdict, options: Options) -> Iterator[str]:
    spec = verdict.spec
    tally = wording.tally(verdict)
    word = _word(verdict.outcome.value, options)
    yield f"{word}  {spec.name} ({spec.kind.name})  {spec.file}, line {spec.line}: {tally}"
    shown = wording.shown(verdict, everything=options.everything)
    for finding in shown:
        yield from _finding(verdict, finding, options)
    for field, values in verdict.windows.items():
        yield f"    would hold {wording.window(verdict, field, values)}"
    yield from (f"    builds     {wording.builds(each)}" for each in verdict.yields)
    if shown:
        yield from (f"    assumed    {each.path}: {each.says}" for each in spec.assumptions)
    yield ""


def _finding(verdict: Verdict, finding: Finding, options: Options) -> Iterator[str]:
    word = _word(wording.outcome_word(finding), options)
    under = f" ({finding.condition})" if finding.condition else ""
    yield f"  {word}  {finding.rule}{under}, line {finding.span.line}"
    yield f"    {finding.message}"
    for note in finding.notes:
        yield f"    note       {note}"
    if rule := verdict.rules.get(finding.rule):
        yield f"    reason     {rule.reason}"
    if finding.corner:
        yield f"    worst at   {wording.corner(verdict, finding)}"
    if finding.shares:
        yield f"    eaten by   {wording.shares(finding)}"
    if finding.waived:
        yield f"    waived     {wording.waiver(verdict, finding)}"
    elif finding.remedy:
        yield f"    remedy     {finding.remedy}"


def _word(word: str, options: Options) -> str:
    return f"\x1b[{_COLOURS[word]}m{word}\x1b[0m" if options.colour else word
