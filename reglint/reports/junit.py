"""The JUnit XML report: a suite for each spec, a case for each rule, for build servers."""

from collections import Counter
from collections.abc import Iterable
from itertools import groupby
from xml.etree import ElementTree as ET

from reglint.finding import Finding, Outcome, Run, Verdict
from reglint.printable import printable
from reglint.reports import Options
from reglint.source import Problem
from reglint.wording import CAUTION, details, outcome_word, windows

#: A build server counts what passes too.
EVERYTHING = True


def render(run: Run, _options: Options) -> str:
    """Return the report; a warning passes and says so in its case's output."""
    root = ET.Element("testsuites", name="reglint")
    names = _Names()
    for verdict in run.verdicts:
        root.append(_spec(verdict, names))
    for file, problems in groupby(run.problems, key=lambda each: each.file):
        root.append(_file(file, problems, names))
    for suite in root:
        _count(suite)
    for counted in ("tests", "failures", "errors"):
        root.set(counted, str(sum(int(suite.get(counted, "0")) for suite in root)))
    ET.indent(root)
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{ET.tostring(root, encoding="unicode")}\n'


class _Names:
    """Names for print, each given once: two texts may differ in what cannot be printed."""

    def __init__(self) -> None:
        self._given: Counter[str] = Counter()

    def unique(self, name: str) -> str:
        shown = printable(name)
        while shown in self._given:
            self._given[shown] += 1
            shown = f"{shown} ({self._given[shown]})"
        self._given[shown] = 1
        return shown


def _spec(verdict: Verdict, names: _Names) -> ET.Element:
    suite = ET.Element("testsuite", name=names.unique(f"{verdict.spec.file}: {verdict.spec.name}"))
    cases = _Names()
    for finding in verdict.findings:
        case = _case(suite, cases.unique(_name(verdict, finding)))
        _tell(case, verdict, finding)
    for rule in verdict.skipped:
        _say(_case(suite, cases.unique(rule)), "skipped", ["The spec states no limit for it."])
    assumed = (f"assumed {each.path}: {each.says}" for each in verdict.spec.assumptions)
    _say(suite, "system-out", [*assumed, CAUTION])
    return suite


def _case(suite: ET.Element, name: str) -> ET.Element:
    return ET.SubElement(suite, "testcase", classname=suite.get("name", ""), name=name)


def _name(verdict: Verdict, finding: Finding) -> str:
    """Return the rule; trouble with a waiver is named by the rule that is waived."""
    waivers = (w.rule for w in verdict.spec.waivers if w.span == finding.span)
    waived = None if finding.rule in verdict.rules else next(waivers, None)
    return f"{finding.rule} of {waived}" if waived else finding.rule


def _tell(case: ET.Element, verdict: Verdict, finding: Finding) -> None:
    """Say what a rule comes to: a failure, a skip where it was not checked, output else."""
    heading = f"{outcome_word(finding)}, {verdict.spec.file}, line {finding.span.line}"
    lines = [heading, finding.message]
    if finding.outcome is not Outcome.PASS:
        held = (f"would hold {each}" for each in windows(verdict, finding))
        lines = [heading, *details(verdict, finding), *held]
    if finding.waived:
        _say(case, "system-out", lines)
    elif finding.outcome is Outcome.FAIL:
        _say(case, "failure", lines, finding.message)
    else:
        _say(case, "skipped" if _is_unchecked(verdict, finding) else "system-out", lines)


def _is_unchecked(verdict: Verdict, finding: Finding) -> bool:
    return finding.rule in verdict.rules and finding.margin is None


def _file(file: str, problems: Iterable[Problem], names: _Names) -> ET.Element:
    suite, cases = ET.Element("testsuite", name=names.unique(file)), _Names()
    for problem in problems:
        case = _case(suite, cases.unique("unreadable"))
        place = f"{file}, line {problem.span.line}, column {problem.span.column}"
        _say(case, "error", [place, problem.message], problem.message)
    return suite


def _say(element: ET.Element, tag: str, lines: Iterable[str], message: str = "") -> None:
    said = ET.SubElement(element, tag)
    if message:
        said.set("message", printable(message))
        said.set("type", "fail" if tag == "failure" else "unreadable")
    said.text = "\n".join(map(printable, lines))


def _count(suite: ET.Element) -> None:
    """Set how many cases a suite has, and how many of them failed, erred and were skipped."""
    cases = list(suite.iter("testcase"))
    suite.set("tests", str(len(cases)))
    for counted, tag in (("failures", "failure"), ("errors", "error"), ("skipped", "skipped")):
        suite.set(counted, str(sum(case.find(tag) is not None for case in cases)))
