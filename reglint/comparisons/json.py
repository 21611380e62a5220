"""A comparison as JSON, format 1: what a program may want, in SI units and °C."""

from typing import Any

from reglint import __version__
from reglint.comparison import Cause, Compared, Comparison, Movement
from reglint.finding import Finding
from reglint.reports.json import number, problem, written
from reglint.spec import Spec, Waiver

_FORMAT = 1


def render(comparison: Comparison) -> str:
    """Return the comparison as JSON with stable field names, one trailing line end."""
    report = {
        "format": _FORMAT,
        "reglint": __version__,
        "against": comparison.against,
        "worse": comparison.worse,
        "same": comparison.same,
        "specs": [_spec(each) for each in comparison.specs],
        "waivers_ending": [_ending(*each) for each in comparison.ending],
        "problems": [problem(each) for each in comparison.problems],
        "problems_before": [problem(each) for each in comparison.earlier_problems],
    }
    return written(report)


def _spec(compared: Compared) -> dict[str, Any]:
    spec = compared.verdict.spec
    return {
        "file": spec.file,
        "line": spec.line,
        "name": spec.name,
        "kind": spec.kind.name,
        "word": compared.word,
        "causes": [_cause(each) for each in compared.causes],
        "rules": [_movement(each) for each in compared.movements],
        "waivers": [{"word": word, **_waiver(waiver)} for word, waiver in compared.waivers()],
    }


def _cause(cause: Cause) -> dict[str, Any]:
    return {
        "what": cause.what,
        "before": cause.before or None,
        "after": cause.after or None,
        "file": cause.file,
        "line": cause.line or None,
    }


def _movement(movement: Movement) -> dict[str, Any]:
    return {
        "rule": movement.rule,
        "worse": movement.worse,
        "before": _finding(movement.before),
        "after": _finding(movement.after),
        "change": number(movement.change),
    }


def _finding(finding: Finding | None) -> dict[str, Any] | None:
    if finding is None:
        return None
    return {
        "outcome": finding.outcome.value,
        "waived": finding.waived,
        "value": number(finding.value),
        "limit": number(finding.limit),
        "unit": finding.unit,
        "margin": number(finding.margin),
        "proven": finding.proven,
    }


def _waiver(waiver: Waiver) -> dict[str, Any]:
    return {
        "rule": waiver.rule,
        "reason": waiver.reason,
        "approved_by": waiver.approved_by,
        "until": waiver.until.isoformat(),
        "line": waiver.span.line,
    }


def _ending(spec: Spec, waiver: Waiver) -> dict[str, Any]:
    return {"file": spec.file, "name": spec.name, **_waiver(waiver)}
