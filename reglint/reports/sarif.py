"""The SARIF 2.1.0 report (OASIS), for code hosts and viewers: every result with its places."""

import hashlib
import json
from collections import Counter
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Any, TypeAlias
from urllib.parse import quote

from reglint import __version__, waiver
from reglint.finding import Finding, Outcome, Run, Share, Verdict
from reglint.plaintext import short
from reglint.printable import printable
from reglint.reports import Options
from reglint.rule import Rule
from reglint.source import Problem, Span
from reglint.spec import Waiver
from reglint.wording import CAUTION, acceptance, corner, waiver_of, windows

Node: TypeAlias = dict[str, Any]

_SCHEMA = (
    "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
)
_LEVELS = {Outcome.FAIL: "error", Outcome.WARN: "warning", Outcome.PASS: "none"}
_FINGERPRINT = "ruleSpecOccurrence/v1"
_UNREADABLE, _INCOMPLETE = "unreadable", "incomplete"
#: A full description may have 1024 characters, and escaping doubles a character at most.
_MOST = 512


@dataclass(frozen=True, slots=True)
class _Told:
    """A finding that becomes a result."""

    verdict: Verdict
    finding: Finding
    #: Which of the run's specs of this name it is about, from 1.
    number: int

    @property
    def rule(self) -> Rule | None:
        """Return the rule; trouble with a waiver comes from none."""
        return self.verdict.rules.get(self.finding.rule)


def render(run: Run, options: Options) -> str:
    """Return the log: one run, its results worst first."""
    log = {"$schema": _SCHEMA, "version": "2.1.0", "runs": [_run(run, options)]}
    return json.dumps(log, indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def _run(run: Run, options: Options) -> Node:
    rules = _rules(run.verdicts)
    places = {key: place for place, key in enumerate(rules)}
    results = [*_unreadable(run.problems, places), *_findings(run, options, places)]
    if options.complete:
        # By the standard every result of a run has the list, or none has.
        results = [{**each, "suppressions": each.get("suppressions", [])} for each in results]
    return {
        "tool": {"driver": _driver(rules.values())},
        "invocations": [_invocation(run)],
        "columnKind": "unicodeCodePoints",
        "results": results,
    }


def _driver(rules: Iterable[Node]) -> Node:
    said = "A file could not be used, so the results are not complete."
    return {
        "name": "reglint",
        "version": __version__,
        "fullDescription": _text(CAUTION),
        "rules": list(rules),
        "notifications": [{"id": _INCOMPLETE, "shortDescription": _text(said)}],
    }


def _invocation(run: Run) -> Node:
    """Tell whether all was read: a host must not take a missing result for a mended one."""
    files = sorted({problem.file for problem in run.problems})
    return {
        "executionSuccessful": not files,
        "toolExecutionNotifications": [_notification(file) for file in files],
    }


def _notification(file: str) -> Node:
    return {
        "descriptor": {"id": _INCOMPLETE},
        "level": "error",
        "message": _text(f"{file} could not be used: what depends on it was not checked."),
        "locations": [{"physicalLocation": {"artifactLocation": _artifact(file)}}],
    }


#: A rule's name with its kind, and its file: two repositories may have a rule of one name.
_Key: TypeAlias = tuple[str, str]


def _rules(verdicts: Iterable[Verdict]) -> dict[_Key, Node]:
    """Return every rule of every kind met, and our own pseudo rules, by key."""
    found = {
        (waiver.NAME, ""): _pseudo_rule(
            waiver.NAME,
            "A waiver works",
            "A waiver that is expired, exceeded or unmatched accepts nothing.",
            "Renew or remove the waiver.",
            "warning",
        ),
        (_UNREADABLE, ""): _pseudo_rule(
            _UNREADABLE,
            "A file can be used",
            "What cannot be read is not checked: its regulators may hold or not.",
            "Correct the file at the place that is told.",
            "error",
        ),
    }
    named = {_key(rule, v): rule for v in verdicts for rule in v.rules.values()}
    return found | {key: _rule(key[0], named[key]) for key in sorted(named)}


def _key(rule: Rule, verdict: Verdict) -> _Key:
    return f"{verdict.kind.name}/{rule.name}", rule.file


def _pseudo_rule(name: str, title: str, reason: str, remedy: str, level: str) -> Node:
    return {
        "id": name,
        "shortDescription": _text(_sentence(title)),
        "fullDescription": _text(short(reason, _MOST)),
        "help": _text(f"{_sentence(reason)} Remedy: {_sentence(remedy)}"),
        "defaultConfiguration": {"level": level},
    }


def _rule(name: str, rule: Rule) -> Node:
    holds = rule.holds
    demand = f"{holds.value.text.strip()} {holds.sign} {holds.limit.text.strip()}"
    reason = f"{_sentence(rule.reason)} Holds, under {rule.condition}: {demand}."
    level = "warning" if rule.at_worst_warn else "error"
    plain = _pseudo_rule(name, rule.title, rule.reason, rule.remedy, level)
    told = f"{reason} Source: {_sentence(rule.source)} Remedy: {_sentence(rule.remedy)}"
    return {**plain, "help": _text(told)}


def _unreadable(problems: Iterable[Problem], places: Mapping[_Key, int]) -> Iterator[Node]:
    seen: Counter[str] = Counter()
    for problem in problems:
        seen[problem.file] += 1
        yield {
            "ruleId": _UNREADABLE,
            "ruleIndex": places[_UNREADABLE, ""],
            "kind": "fail",
            "level": "error",
            "message": _text(_sentence(problem.message)),
            "locations": [_location(problem.file, problem.span)],
            "partialFingerprints": _fingerprint(_UNREADABLE, problem.file, seen[problem.file]),
        }


def _findings(run: Run, options: Options, places: Mapping[_Key, int]) -> Iterator[Node]:
    """Yield the results worst first, as a host may keep only so many; waived ones come last."""
    told = sorted(_told(run, options), key=lambda each: _rank(each.finding))
    return (_result(each, places) for each in told)


def _told(run: Run, options: Options) -> Iterator[_Told]:
    named: Counter[str] = Counter()
    for verdict in run.verdicts:
        named[verdict.spec.name] += 1
        for finding in verdict.findings:
            if _is_wanted(finding, options):
                yield _Told(verdict, finding, named[verdict.spec.name])


def _is_wanted(finding: Finding, options: Options) -> bool:
    # Hosts that ignore suppressions would show an accepted finding as an open one.
    if finding.waived:
        return options.complete
    return options.everything or finding.outcome is not Outcome.PASS


def _rank(finding: Finding) -> tuple[bool, int]:
    return finding.waived, -finding.outcome.rank


def _result(told: _Told, places: Mapping[_Key, int]) -> Node:
    verdict, finding = told.verdict, told.finding
    key = (finding.rule, "") if told.rule is None else _key(told.rule, verdict)
    node = {
        "ruleId": key[0],
        "ruleIndex": places[key],
        "kind": "pass" if finding.outcome is Outcome.PASS else "fail",
        "level": _LEVELS[finding.outcome],
        "message": {"text": " ".join(_message(told))},
        "locations": [_named_location(verdict, finding.span)],
        "relatedLocations": _shares(verdict, finding),
        "partialFingerprints": _fingerprint(key[0], *_occurrence(told)),
    }
    accepted = waiver_of(verdict, finding)
    return {**node, "suppressions": [_suppression(verdict, accepted)]} if accepted else node


def _message(told: _Told) -> Iterator[str]:
    """Yield the sentences of a message; the first has the numbers, as some show no more."""
    verdict, finding = told.verdict, told.finding
    yield _plain(_sentence(f"{short(verdict.spec.name)}: {finding.message}"))
    yield from (_plain(_sentence(f"Note: {note}")) for note in finding.notes)
    if told.rule and finding.outcome is not Outcome.PASS:
        yield _plain(_sentence(told.rule.reason))
    if finding.corner:
        yield _plain(f"Worst at {corner(verdict, finding)}.")
    if finding.shares:
        links = (f"[{_plain(e.path)}]({n}) {_percent(e)}" for n, e in _numbered(finding))
        yield f"Eaten by {', '.join(links)}."
    if finding.remedy:
        yield _plain(_sentence(finding.remedy))
    for each in windows(verdict, finding):
        yield _plain(f"Would hold: {each}.")


def _numbered(finding: Finding) -> Iterator[tuple[int, Share]]:
    yield from enumerate(finding.shares, start=1)


def _percent(share: Share) -> str:
    return f"{100.0 * share.share:.0f} %"


def _shares(verdict: Verdict, finding: Finding) -> list[Node]:
    """Return the places of the figures that ate the margin, as the message links to them."""
    return [
        {
            "id": number,
            **_location(verdict.spec.file, share.span),
            "message": _text(f"{share.path} ate {_percent(share)} of the margin."),
        }
        for number, share in _numbered(finding)
    ]


def _occurrence(told: _Told) -> tuple[str, int, str]:
    """Return what tells a finding from others of its rule, and no line or value ever changes."""
    waivers = (w for w in told.verdict.spec.waivers if w.span == told.finding.span)
    waived = next(waivers, None) if told.rule is None else None
    return told.verdict.spec.name, told.number, waived.rule if waived else ""


def _fingerprint(*parts: str | int) -> Node:
    return {_FINGERPRINT: hashlib.sha256(json.dumps(parts).encode()).hexdigest()}


def _suppression(verdict: Verdict, accepted: Waiver) -> Node:
    return {
        "kind": "external",
        "status": "accepted",
        "justification": printable(acceptance(accepted)),
        "location": _location(verdict.spec.file, accepted.span),
    }


def _named_location(verdict: Verdict, span: Span) -> Node:
    named = {"logicalLocations": [{"name": printable(verdict.spec.name)}]}
    return {**_location(verdict.spec.file, span), **named}


def _location(file: str, span: Span) -> Node:
    return {"physicalLocation": {"artifactLocation": _artifact(file), "region": _region(span)}}


def _artifact(file: str) -> Node:
    # A name that is not UTF-8 has its bytes in place of characters; they are encoded as they are.
    return {"uri": quote(file.encode("utf-8", "surrogateescape"))}


def _region(span: Span) -> Node:
    """Return a region on one line, which is all that hosts show."""
    # Of a text over several lines the first one's length is not known any more.
    whole = span.end_line == span.line
    return {
        "startLine": span.line,
        "startColumn": span.column,
        "endLine": span.line,
        "endColumn": span.end_column if whole else span.column + 1,
    }


def _text(text: str) -> Node:
    return {"text": _plain(text)}


#: A bracket would begin a link, a brace a placeholder (SARIF 2.1.0, 3.11.5 and 3.11.6).
_ESCAPES = str.maketrans({"\\": "\\\\", "[": "\\[", "]": "\\]", "{": "{{", "}": "}}"})


def _plain(text: str) -> str:
    """Return a text on one line that means nothing but itself."""
    return printable(" ".join(text.split())).translate(_ESCAPES)


def _sentence(text: str) -> str:
    stripped = text.strip()
    return stripped if stripped.endswith((".", "!", "?")) else f"{stripped}."
