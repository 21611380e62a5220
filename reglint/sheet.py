"""The calculation sheet: every figure and formula of one spec, with the numbers put in."""

from collections.abc import Iterable, Iterator

from reglint.account import Chapter, Figure, Step
from reglint.box import boxes_of
from reglint.calculation import LEGEND, chapters, figures
from reglint.circuit import Circuit
from reglint.extent import extents
from reglint.rule import Rule
from reglint.spec import Spec


def sheet(spec: Spec, circuit: Circuit, rules: Iterable[Rule]) -> str:
    """Return the sheet as text: what is stated, then each condition's quantities."""
    boxes = boxes_of(circuit, [spec])
    lines = [*_heading(spec, circuit), "Figures"]
    lines += [_figure(each) for each in figures(spec)]
    for chapter in chapters(boxes, rules, extents(boxes)[0]):
        lines += ["", *_chapter(chapter)]
    return "\n".join(lines) + "\n\n"


def _heading(spec: Spec, circuit: Circuit) -> Iterator[str]:
    yield f"Calculation sheet of {spec.name} ({circuit.kind.title}), {spec.file}, line {spec.line}"
    yield f"Derating: {circuit.policy.title} ({circuit.policy.name})"
    yield from LEGEND
    yield ""


def _figure(figure: Figure) -> str:
    notes = "; ".join(filter(None, (figure.symbol, figure.place, figure.says)))
    return f"  {figure.path} = {figure.value}  ({notes})"


def _chapter(chapter: Chapter) -> Iterator[str]:
    yield f"Under {chapter.condition}: {chapter.says}"
    if chapter.note:
        yield f"  ({chapter.note})"
    for step in chapter.steps:
        yield from _step(step)


def _step(step: Step) -> Iterator[str]:
    symbol = f" ({step.symbol})" if step.symbol else ""
    yield f"  {step.path}{symbol}: {step.says}"
    yield from (f"      {line}" for line in step.working)
    yield f"      = {step.nominal}; least {step.least}, most {step.most}"
