"""What a rule comes to for one spec: the outcome, and the sentence that says why."""

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from reglint import quantity
from reglint.check import names_of
from reglint.circuit import Circuit
from reglint.finding import Finding, Outcome, Share
from reglint.formula import Name, evaluate
from reglint.functions import DIMENSIONS
from reglint.kind import Kind
from reglint.proof import TOLERANCE
from reglint.rule import Rule
from reglint.source import TOP
from reglint.spec import Spec

#: A margin this little below zero is rounding, not a break.
ROUNDING = 1e-12


@dataclass(frozen=True, slots=True)
class WorstPoint:
    """Where a rule is closest to breaking, or most broken."""

    value: float
    limit: float
    margin: float
    #: What the margin provably cannot fall below.
    bound: float
    corner: Mapping[str, float]
    shares: tuple[Share, ...]


def outcome(rule: Rule, spec: Spec, margin: float, bound: float) -> Outcome:
    """Return what a worst-case margin comes to: a failure needs a witness, a pass a proof.

    A margin that is not a number never passes.
    """
    if margin < -ROUNDING:
        return Outcome.WARN if rule.at_worst_warn else Outcome.FAIL
    if not margin >= rule.warn_margin - ROUNDING or neglects(rule, spec):
        return Outcome.WARN
    return Outcome.PASS if bound >= _assured(rule) else Outcome.WARN


def _assured(rule: Rule) -> float:
    """Return the bound a pass needs: the reserve is proven as near as proofs go."""
    return max(rule.warn_margin - TOLERANCE, 0.0) - ROUNDING


def neglects(rule: Rule, spec: Spec) -> tuple[str, ...]:
    """Return what was left out of account that the rule counts on."""
    return tuple(spec.neglected[path] for path in rule.counts_on if path in spec.neglected)


def bare_pass(rule: Rule) -> Finding:
    """Return a pass that nobody wants to read."""
    return Finding(rule.name, Outcome.PASS, "", TOP)


def finding(rule: Rule, spec: Spec, worst: WorstPoint) -> Finding:
    """Return the finding of a rule that was evaluated."""
    result = outcome(rule, spec, worst.margin, worst.bound)
    unit = _unit(spec.kind, rule)
    checked = not math.isnan(worst.margin)
    return Finding(
        rule=rule.name,
        outcome=result,
        message=_sentence(rule, worst, unit) if checked else _no_value(rule, worst),
        span=spec.place(rule.point_at),
        remedy=rule.remedy if result is not Outcome.PASS else "",
        condition=rule.condition,
        value=worst.value if checked else None,
        limit=worst.limit if checked else None,
        unit=unit,
        margin=worst.margin if checked else None,
        proven=_proven(worst),
        bound=_bound(rule, worst),
        corner=worst.corner,
        shares=worst.shares,
        notes=(*neglects(rule, spec), *_gap(rule, worst)),
    )


def _proven(worst: WorstPoint) -> bool:
    """Tell whether the verdict is certain: broken by a witness, or held by the bound."""
    return worst.margin < -ROUNDING or worst.bound >= -ROUNDING


def _gap(rule: Rule, worst: WorstPoint) -> Iterator[str]:
    """Yield what is to be said of a worst case that the proof did not come close to."""
    known = f"the margin is known only to be at least {percent(worst.bound)}"
    if worst.margin < -ROUNDING:
        if worst.bound < worst.margin - 2.0 * TOLERANCE * max(1.0, abs(worst.margin)):
            yield f"worse may be found: {known}"
    elif worst.bound < -ROUNDING and not math.isnan(worst.margin):
        yield f"not proven: {known}"
    elif worst.margin >= rule.warn_margin and worst.bound < _assured(rule):
        yield f"reserve not proven: {known}"


def _bound(rule: Rule, worst: WorstPoint) -> float | None:
    """Return what the value provably does not exceed, where the limit scales the margin."""
    if rule.relative_to is not None or not math.isfinite(worst.bound):
        return None
    slack = worst.bound * abs(worst.limit)
    return worst.limit + (slack if rule.holds.sign == ">=" else -slack)


def not_checked(
    circuit: Circuit, rule: Rule, spec: Spec, missing: Sequence[str], uncovered: Sequence[str]
) -> Finding:
    """Return the warning of a rule that lacks figures, or that the policy has none for."""
    if missing:
        listed = ", ".join(missing)
        why = f"{listed} {'is' if len(missing) == 1 else 'are'} not stated"
        place, remedy = missing[0], f"State {listed}."
    else:
        why = "; ".join(circuit.not_covered[name] for name in uncovered)
        place, remedy = rule.point_at, "Choose a derating policy that covers the part, or waive."
    return Finding(
        rule=rule.name,
        outcome=Outcome.WARN,
        message=f"not checked: {why}",
        span=spec.place(place),
        remedy=remedy,
        condition=rule.condition,
    )


def _sentence(rule: Rule, worst: WorstPoint, unit: str) -> str:
    value, limit = quantity.render(worst.value, unit), quantity.render(worst.limit, unit)
    demand = "at least" if rule.holds.sign == ">=" else "at most"
    what = rule.holds.value
    named = isinstance(what.root, Name)
    subject = f"{what.text.strip()} is" if named else f"wanted: {rule.title}; found"
    margin = percent(worst.margin)
    return f"{subject} {value} at worst, {demand} {limit} is wanted (margin {margin})"


def _no_value(rule: Rule, worst: WorstPoint) -> str:
    corner = ", ".join(f"{name} = {value:.6g}" for name, value in worst.corner.items())
    return f"not checked: {rule.holds.value.text.strip()} has no value at {corner} (SI units)"


def percent(fraction: float) -> str:
    """Return a margin as a signed percentage with three significant digits."""
    if math.isinf(fraction):
        return "−∞ %" if fraction < 0 else "∞ %"
    digits = "+.3g" if abs(fraction) < 1.0 else "+.0f"
    return f"{100.0 * fraction:{digits}} %".replace("-", "−")


def _unit(kind: Kind, rule: Rule) -> str:
    """Return the unit a rule's value is shown in: its quantity's own, or its dimension's."""
    name = rule.holds.value.text.strip()
    if name in kind.quantities:
        return kind.quantities[name].unit
    if name in kind.fields:
        return kind.fields[name].unit
    return str(evaluate(rule.holds.value.root, names_of(kind).__getitem__, DIMENSIONS))
