"""The text report: for each spec a heading with counts, then what is not a pass."""

from collections.abc import Iterator
from typing import TypeAlias

from reglint import wording
from reglint.finding import Finding, Run, Verdict
from reglint.printable import printable
from reglint.reports import Options

#: Colours of the outcome words; the word itself always says the same.
_COLOURS = {"fail": "31", "warn": "33", "pass": "32", "waived": "36", "unreadable": "35"}

#: The outcome word a line begins with, if it does, indented; and the rest of the line.
_Line: TypeAlias = tuple[str, str]


def render(run: Run, options: Options) -> str:
    """Return the report; its last line counts everything that was looked at."""
    lines: list[_Line] = []
    for verdict in run.verdicts:
        lines += _spec(verdict, options)
    for problem in run.problems:
        place = f"{problem.file}, line {problem.span.line}, column {problem.span.column}"
        lines += [("unreadable", f"  {place}"), ("", f"    {problem.message}"), ("", "")]
    ending = (*wording.summary(run), *wording.drawing(options.drawn), wording.CAUTION)
    lines += (("", line) for line in ending)
    # Only our own word is coloured: an escape in a name would reach the terminal otherwise.
    return "".join(f"{_painted(word, options)}{printable(rest)}\n" for word, rest in lines)


def _spec(verdict: Verdict, options: Options) -> Iterator[_Line]:
    spec = verdict.spec
    place = f"{spec.file}, line {spec.line}"
    yield (
        verdict.outcome.value,
        f"  {spec.name} ({spec.kind.name})  {place}: {wording.tally(verdict)}",
    )
    shown = wording.shown(verdict, everything=options.everything)
    for finding in shown:
        yield from _finding(verdict, finding)
    for field, values in verdict.windows.items():
        yield "", f"    would hold {wording.window(verdict, field, values)}"
    yield from (("", f"    builds     {wording.builds(each)}") for each in verdict.yields)
    if shown:
        yield from (("", f"    assumed    {each.path}: {each.says}") for each in spec.assumptions)
    yield "", ""


def _finding(verdict: Verdict, finding: Finding) -> Iterator[_Line]:
    under = f" ({finding.condition})" if finding.condition else ""
    yield f"  {wording.outcome_word(finding)}", f"  {finding.rule}{under}, line {finding.span.line}"
    yield from (("", f"    {line}") for line in wording.details(verdict, finding))


def _painted(word: str, options: Options) -> str:
    if not (word and options.colour):
        return word
    bare = word.lstrip()
    return f"{word[: -len(bare)]}\x1b[{_COLOURS[bare]}m{bare}\x1b[0m"
