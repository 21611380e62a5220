"""Judgement: specs against the rules of their kind, everything alike at once."""

from collections import defaultdict
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from datetime import date
from typing import TypeAlias

from reglint import ruling, waiver
from reglint.account import Account
from reglint.box import Box, boxes_of, ends_of
from reglint.circuit import Circuit
from reglint.extent import extents
from reglint.finding import Extent, Finding, Outcome, Verdict
from reglint.formula import Formula
from reglint.kind import Condition
from reglint.margin import Margin
from reglint.proof import Care, Look, Proven, look, prove
from reglint.rule import Rule
from reglint.shares import shares
from reglint.spec import Spec
from reglint.worstcase import Array, at
from reglint.yield_ import Draw, yields

#: For each adjustable field, the case once for each standard value in its place.
Trials: TypeAlias = Mapping[str, Mapping[float, "Case"]]
#: Makes the account of a case from its whole verdict; the number tells it from others.
Accountant: TypeAlias = Callable[["Case", Verdict, Trials, int], Account]


@dataclass(frozen=True, slots=True)
class Wanted:
    """What a report needs beside the findings that are no pass."""

    today: date
    #: Passing rules as findings too.
    everything: bool = False
    #: The range of every quantity under every condition.
    extents: bool = False
    #: How builds are drawn for the yield, if at all.
    draw: Draw | None = None
    #: How far worst cases are followed; nothing leaves it to what is wanted beside.
    care: Care | None = None
    #: What makes an account of a spec, where one is wanted.
    account: Accountant | None = None


@dataclass(frozen=True, slots=True)
class Case:
    """A spec with what it is judged by."""

    spec: Spec
    circuit: Circuit
    rules: Mapping[str, Rule]


def judge(cases: Sequence[Case], wanted: Wanted) -> list[Verdict]:
    """Return a verdict for each case, in their order."""
    verdicts: dict[int, Verdict] = {}
    for rows in _batches(cases):
        batch = [cases[row] for row in rows]
        verdicts |= zip(rows, _judge_batch(batch, wanted), strict=True)
    return [verdicts[row] for row in range(len(cases))]


def _batches(cases: Sequence[Case]) -> Iterable[list[int]]:
    """Group cases of one circuit, rules and set of swept names: they become one array."""
    batches = defaultdict(list)
    for row, case in enumerate(cases):
        swept = case.circuit.kind.stated_names.keys() & case.spec.swept.keys()
        batches[id(case.circuit), id(case.rules), frozenset(swept)].append(row)
    return batches.values()


def _judge_batch(batch: Sequence[Case], wanted: Wanted) -> Iterator[Verdict]:
    circuit, rules = batch[0].circuit, batch[0].rules
    specs = [case.spec for case in batch]
    boxes = boxes_of(circuit, specs)
    ranges = extents(boxes) if wanted.extents else [()] * len(specs)
    findings = _findings(boxes, rules, wanted)
    for row, (spec, found, range_) in enumerate(zip(specs, findings, ranges, strict=True)):
        listed = [each for each in found.values() if each is not None]
        drawn = yields(boxes, row, rules, listed, wanted.draw) if wanted.draw else ()
        yield replace(_verdict(spec, rules, found, range_, wanted), yields=drawn)


def _verdict(
    spec: Spec,
    rules: Mapping[str, Rule],
    found: Mapping[str, Finding | None],
    ranges: tuple[Extent, ...],
    wanted: Wanted,
) -> Verdict:
    """Put a spec's findings in order, its waivers applied; ``None`` marks a skipped rule."""
    listed = [each for each in found.values() if each is not None]
    skipped = tuple(name for name, each in found.items() if each is None)
    applied = list(waiver.apply(listed, spec.waivers, rules.keys(), wanted.today))
    passed = sum(each.outcome is Outcome.PASS for each in applied)
    shown = [e for e in applied if wanted.everything or e.outcome is not Outcome.PASS]
    return Verdict(spec, rules, tuple(shown), passed, skipped, ranges)


def _findings(
    boxes: Mapping[str, Box], rules: Mapping[str, Rule], wanted: Wanted
) -> list[dict[str, Finding | None]]:
    """Return every spec's findings by rule; passes are bare unless they are wanted."""
    count = len(next(iter(boxes.values())).specs)
    found: list[dict[str, Finding | None]] = [dict.fromkeys(rules) for _ in range(count)]
    by_condition = defaultdict(list)
    for rule in rules.values():
        by_condition[rule.condition].append(rule)
    for condition, group in by_condition.items():
        box = boxes[condition]
        looks = look(box, [Margin(rule) for rule in group], [rule.warn_margin for rule in group])
        for rule, seen in zip(group, looks, strict=True):
            rows = _checkable(box, rule, found)
            for row, finding in _judged(seen, rule, rows, wanted):
                found[row][rule.name] = finding
    return found


def _checkable(box: Box, rule: Rule, found: list[dict[str, Finding | None]]) -> list[int]:
    """Return the specs a rule can be evaluated for; the others get their finding at once."""
    asked = sorted(_asked(box, rule))
    uncovered = [name for name in asked if name in box.circuit.not_covered]
    rows = []
    for row, spec in enumerate(box.specs):
        missing = [name for name in asked if name not in spec.numbers and name not in spec.swept]
        stated = [name for name in missing if name not in uncovered]
        assumed = [name for name in rule.needs if name in spec.neglected]
        if not missing and not assumed:
            rows.append(row)
        elif not (stated and rule.optional):
            found[row][rule.name] = ruling.not_checked(
                box.circuit, rule, spec, stated + assumed, uncovered
            )
    return rows


def _asked(box: Box, rule: Rule) -> frozenset[str]:
    """Return the stated names a rule's formulas depend on."""
    reach = frozenset[str]().union(*(box.circuit.reach_of(each) for each in rule.formulas()))
    return reach - box.circuit.quantities.keys() - box.condition.fixes.keys()


def _judged(
    seen: Look, rule: Rule, rows: Sequence[int], wanted: Wanted
) -> Iterator[tuple[int, Finding]]:
    """Yield the findings of one rule for the specs it could be evaluated for.

    Most pass on the first look; only the others are searched for their worst point.
    """
    box = seen.box
    passes = [
        seen.bound[row] >= rule.warn_margin and not ruling.neglects(rule, box.specs[row])
        for row in rows
    ]
    unclear = [row for row, sure in zip(rows, passes, strict=True) if wanted.everything or not sure]
    passed = ruling.bare_pass(rule)
    yield from ((row, passed) for row in set(rows).difference(unclear))
    if unclear:
        part = box.take(unclear)
        usual = Care.SHOWN if wanted.everything or wanted.extents else Care.TOLD
        proven = prove(part, Margin(rule), rule.warn_margin, wanted.care or usual)
        points = _worst_points(part, rule, proven)
        yield from zip(
            unclear,
            (ruling.finding(rule, *each) for each in zip(part.specs, points, strict=True)),
            strict=True,
        )


def _varies(spec: Spec, name: str, condition: Condition) -> bool:
    """Tell whether a name has a range in this spec, whatever others of the batch have."""
    low, _, high = ends_of(spec.swept[name], condition)
    return low < high


def _side(box: Box, side: Formula, proven: Proven) -> Array:
    """Return one side of a rule at each spec's worst point."""
    return at(box, lambda scope: scope.of(side), proven.point[:, None, :])[:, 0]


def _worst_points(box: Box, rule: Rule, proven: Proven) -> Iterator[ruling.WorstPoint]:
    """Yield each spec's worst point with both sides of the rule and the shares there."""
    values, limits = (_side(box, side, proven) for side in (rule.holds.value, rule.holds.limit))
    eaten = shares(box, Margin(rule), proven.point)
    asked = _asked(box, rule)
    for row, point in enumerate(proven.point):
        yield ruling.WorstPoint(
            value=float(values[row]),
            limit=float(limits[row]),
            margin=float(proven.value[row]),
            bound=float(proven.bound[row]),
            corner={
                name: float(value)
                for name, value in zip(box.names, point, strict=True)
                if name in asked and _varies(box.specs[row], name, box.condition)
            },
            shares=eaten[row],
        )
