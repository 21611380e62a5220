"""The report as Markdown, for a pull request: the verdict first, then what is no pass."""

from collections.abc import Iterator

from reglint import wording
from reglint.commonmark import document, escaped, folded, table
from reglint.finding import Finding, Outcome, Run, Verdict
from reglint.plaintext import short
from reglint.reports import Options

#: A step that posts the report finds its own comment again by this.
_MARKER = "reglint check"
_COLUMNS = ("outcome", "spec", "rule", "finding", "place")


def render(run: Run, options: Options) -> str:
    """Return the report; it is cut at a line where a host would refuse it."""
    worst = max((each.outcome for each in run.verdicts), key=lambda o: o.rank, default=Outcome.PASS)
    word = "unreadable" if run.problems else worst.value
    head = [f"**Regulators: {word}.** {escaped(' '.join(wording.summary(run)))}"]
    body = [*_problems(run), *_findings(run, options), *_details(run, options)]
    foot = [*map(escaped, wording.drawing(options.drawn)), "", f"*{escaped(wording.CAUTION)}*"]
    return document(_MARKER, head, body, foot)


def _problems(run: Run) -> Iterator[str]:
    if run.problems:
        places = ((f"{e.file}, line {e.span.line}", e.message) for e in run.problems)
        yield from table(("unreadable", "what is wrong"), places)


def _shown(run: Run, options: Options) -> Iterator[tuple[Verdict, Finding]]:
    """Yield the findings wanted, the worst first, waived ones last."""
    listed = [
        (verdict, finding)
        for verdict in run.verdicts
        for finding in wording.shown(verdict, everything=options.everything)
    ]
    yield from sorted(listed, key=lambda each: (each[1].waived, -each[1].outcome.rank))


def _findings(run: Run, options: Options) -> Iterator[str]:
    rows = [_row(*each) for each in _shown(run, options)]
    yield from table(_COLUMNS, rows) if rows else ()


def _row(verdict: Verdict, finding: Finding) -> tuple[str, ...]:
    place = f"{verdict.spec.file}, line {finding.span.line}"
    word, name = wording.outcome_word(finding), short(verdict.spec.name)
    return (word, name, finding.rule, finding.message, place)


def _details(run: Run, options: Options) -> Iterator[str]:
    """Yield the folded rest: every finding's reason, corner, shares and remedy; assumptions."""
    for verdict in run.verdicts:
        shown = wording.shown(verdict, everything=options.everything)
        if shown:
            title = f"{short(verdict.spec.name)}: {wording.tally(verdict)}"
            yield from folded(title, _told(verdict, shown))


def _told(verdict: Verdict, shown: list[Finding]) -> Iterator[str]:
    for finding in shown:
        yield f"- **{escaped(finding.rule)}**"
        yield from (f"  - {escaped(line)}" for line in wording.details(verdict, finding))
        held = wording.windows(verdict, finding)
        yield from (f"  - {escaped(f'would hold {each}')}" for each in held)
    yield from (f"- {escaped(wording.builds(each))}" for each in verdict.yields)
    assumed = verdict.spec.assumptions
    yield from (f"- assumed {escaped(f'{each.path}: {each.says}')}" for each in assumed)
