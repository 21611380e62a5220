"""The JSON report, format 1: everything a program may want, in SI units and °C."""

import json
import math
from collections.abc import Mapping
from typing import Any

from reglint import __version__
from reglint.finding import Extent, Finding, Outcome, Run, Share, Verdict, Yield
from reglint.reports import Options
from reglint.source import Problem

_FORMAT = 1
#: The report gives the range of every quantity.
EXTENTS = True


def render(run: Run, _options: Options) -> str:
    """Return the report as JSON with stable field names, one trailing line end."""
    report = {
        "format": _FORMAT,
        "reglint": __version__,
        "counts": {
            **{outcome.value: run.count(outcome) for outcome in Outcome},
            "waived": run.waived,
            "unreadable": run.unreadable,
        },
        "specs": [_spec(verdict) for verdict in run.verdicts],
        "problems": [problem(each) for each in run.problems],
    }
    return written(report)


def written(report: Mapping[str, Any]) -> str:
    """Return data as JSON text with one trailing line end."""
    text = json.dumps(report, indent=2, ensure_ascii=False, allow_nan=False) + "\n"
    # A file name that is not UTF-8 has halves of pairs, which JSON can only escape.
    return text.encode("utf-8", "backslashreplace").decode()


def _spec(verdict: Verdict) -> dict[str, Any]:
    spec = verdict.spec
    return {
        "file": spec.file,
        "line": spec.line,
        "name": spec.name,
        "kind": spec.kind.name,
        "derating": spec.derating,
        "outcome": verdict.outcome.value,
        "assumptions": [{"field": each.path, "says": each.says} for each in spec.assumptions],
        "quantities": {_key(each): _extent(each) for each in verdict.extents},
        "findings": [_finding(each, verdict) for each in verdict.findings],
        "skipped": list(verdict.skipped),
        **({"yield": [_yield(each) for each in verdict.yields]} if verdict.yields else {}),
    }


def _yield(drawn: Yield) -> dict[str, Any]:
    """Return how many builds break a rule; without a rule's name, any of the rules."""
    low, high = drawn.interval()
    return {
        "rule": drawn.rule or None,
        "broken": drawn.broken,
        "builds": drawn.builds,
        "least": number(low),
        "most": number(high),
    }


def _key(extent: Extent) -> str:
    """Name a quantity; its condition is added unless it is the plain one."""
    plain = extent.condition == "loaded"
    return extent.quantity if plain else f"{extent.quantity}@{extent.condition}"


def _extent(extent: Extent) -> dict[str, Any]:
    return {
        "unit": extent.unit,
        "condition": extent.condition,
        "min": number(extent.min),
        "nom": number(extent.nom),
        "max": number(extent.max),
    }


def _finding(finding: Finding, verdict: Verdict) -> dict[str, Any]:
    rule = verdict.rules.get(finding.rule)
    return {
        "rule": finding.rule,
        "outcome": finding.outcome.value,
        "waived": finding.waived,
        "condition": finding.condition,
        "value": number(finding.value),
        "limit": number(finding.limit),
        "unit": finding.unit,
        "margin": number(finding.margin),
        "proven": finding.proven,
        "bound": number(finding.bound),
        "line": finding.span.line,
        "column": finding.span.column,
        "message": finding.message,
        "notes": list(finding.notes),
        "remedy": finding.remedy,
        "corner": {name: number(value) for name, value in (finding.corner or {}).items()},
        "shares": [_share(each) for each in finding.shares],
        "window": {
            field: list(values)
            for field, values in verdict.windows.items()
            if finding.outcome is Outcome.FAIL and rule and field in rule.adjust
        },
    }


def _share(share: Share) -> dict[str, Any]:
    return {
        "field": share.path,
        "share": number(share.share),
        "line": share.span.line,
        "column": share.span.column,
    }


def problem(found: Problem) -> dict[str, Any]:
    """Return a problem with its place."""
    return {
        "file": found.file,
        "line": found.span.line,
        "column": found.span.column,
        "message": found.message,
    }


def number(value: float | None) -> float | None:
    """Return a finite number to twelve digits; JSON has no infinity, so null stands for one."""
    return float(f"{value:.12g}") if value is not None and math.isfinite(value) else None
