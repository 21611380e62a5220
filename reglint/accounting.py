"""The account of a spec, made from its verdict: figures, calculation and pictures."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace
from itertools import count

from reglint.account import Account, Picture
from reglint.box import Box, boxes_of
from reglint.calculation import chapters, figures
from reglint.finding import Verdict
from reglint.judge import Case, Trials
from reglint.pictures.adjustment import adjustment
from reglint.pictures.area import area
from reglint.pictures.curves import curves
from reglint.pictures.field import field
from reglint.pictures.margins import margins
from reglint.pictures.meeting import meeting
from reglint.pictures.sweep import sweep
from reglint.rule import Rule
from reglint.spec import Spec


def account(case: Case, verdict: Verdict, trials: Trials, number: int) -> Account:
    """Return the account of a spec judged with everything wanted.

    ``trials`` holds for each adjustable field the spec once for each standard value;
    ``number`` tells the spec from all others of the run.
    """
    circuit, spec = case.circuit, case.spec
    boxes = boxes_of(circuit, [spec])
    drawn = list(_pictures(case, verdict, trials, boxes, f"s{number}"))
    policy = circuit.policy
    return Account(
        derating=f"{policy.title} ({policy.name})",
        figures=tuple(figures(spec)),
        calculation=tuple(chapters(boxes, case.rules.values(), verdict.extents)),
        pictures=tuple(_honest(each, spec) for each in drawn if isinstance(each, Picture)),
        missing=tuple(each for each in drawn if isinstance(each, str)),
    )


def _honest(picture: Picture, spec: Spec) -> Picture:
    """Return a picture that says what is neglected in it."""
    neglected = "".join(f" In this picture {said}." for said in spec.neglected.values())
    return replace(picture, says=picture.says + neglected)


def _pictures(
    case: Case, verdict: Verdict, trials: Trials, boxes: Mapping[str, Box], name: str
) -> Iterator[Picture | str]:
    """Yield each picture, or the sentence that says why there is none."""
    checked = _checked(case, verdict)
    declared = case.circuit.kind.pictures
    # A picture's own name is a number: names from files may not fit where markup wants one.
    names = (f"{name}p{number}" for number in count(1))
    yield margins(next(names), verdict.findings, case.rules)
    for each in declared.curves.values():
        met = meeting(each, boxes[each.condition])
        yield met if isinstance(met, str) else curves(next(names), met)
    for spanned in declared.areas.values():
        found = field(spanned, boxes, checked)
        yield found if isinstance(found, str) else area(next(names), found)
    for adjusted, variants in trials.items():
        swept = sweep(case, adjusted, variants, checked)
        yield swept if isinstance(swept, str) else adjustment(next(names), swept)


def _checked(case: Case, verdict: Verdict) -> Sequence[Rule]:
    """Return the rules that have a margin: only they can be drawn."""
    known = {each.rule for each in verdict.findings if each.margin is not None}
    return [rule for rule in case.rules.values() if rule.name in known]
