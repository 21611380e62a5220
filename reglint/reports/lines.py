"""One line a finding, in the form GNU's coding standards give for error messages."""

from collections.abc import Iterator

from reglint.finding import Outcome, Run, Verdict
from reglint.printable import printable
from reglint.reports import Options
from reglint.wording import outcome_word


def render(run: Run, options: Options) -> str:
    """Return ``file:line:column: outcome: rule: message`` for every finding and problem."""
    lines = [
        f"{problem.file}:{problem.span.line}:{problem.span.column}: unreadable: {problem.message}"
        for problem in run.problems
    ]
    for verdict in run.verdicts:
        lines += _lines(verdict, options)
    return "".join(f"{printable(line)}\n" for line in lines)


def _lines(verdict: Verdict, options: Options) -> Iterator[str]:
    for finding in verdict.findings:
        if options.everything or finding.outcome is not Outcome.PASS:
            place = f"{verdict.spec.file}:{finding.span.line}:{finding.span.column}"
            said = f"{finding.rule}: {verdict.spec.name}: {finding.message}"
            yield f"{place}: {outcome_word(finding)}: {said}"
