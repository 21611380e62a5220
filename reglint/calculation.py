"""The calculation behind a verdict: every figure and formula of one spec, with its numbers."""

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import replace
from typing import TypeAlias

import numpy as np

from reglint.account import Chapter, Figure, Step
from reglint.box import Box
from reglint.circuit import unit_of
from reglint.finding import Extent
from reglint.formula import with_numbers
from reglint.kind import Condition, Field, Quantity
from reglint.quantity import render
from reglint.rule import Rule
from reglint.spec import Spec

#: Gives a name's number as text.
_Number: TypeAlias = Callable[[str], str]
#: Extents by condition and quantity.
_Ranges: TypeAlias = Mapping[tuple[str, str], Extent]

#: Digits enough to follow the calculation with a pocket calculator.
_DIGITS = 6

#: How to read the working, and the functions in it that no pocket calculator has.
LEGEND = (
    "Under each formula stand the nominal values; least and most are over the box.",
    "knee(x, m) = (x ** (1 - m) - 1) / (1 - m), log(x) at m = 1; falling(x, a, b) falls",
    "from 1 at a to 0 at b; if_positive(x, a, b) is a where x > 0, else b;",
    "agreeing(x, a, b) is b: never above a, and equal to it where x > 0; log is natural.",
)


def figures(spec: Spec) -> Iterator[Figure]:
    """Yield every figure, its range and where it comes from."""
    said = {each.path: each.says for each in spec.assumptions}
    for field in spec.kind.fields.values():
        for path in _paths(spec, field):
            place = spec.origins.get(path) or (
                f"line {spec.place(path).line}" if spec.states(path) else "not in the spec"
            )
            value = _figure(spec, path, field)
            yield Figure(path, value, field.symbol, place, said.get(path, ""))


def _paths(spec: Spec, field: Field) -> Iterator[str]:
    """Yield the names a field goes by in this spec, where it has a value."""
    if "*" in field.path:
        group, _, name = field.path.split(".")
        stated = (*spec.swept, *spec.numbers)
        yield from (p for p in stated if p.startswith(f"{group}.") and p.endswith(f".{name}"))
    elif field.role == "limits":
        yield from (p for end in ("min", "max") if spec.has(p := f"{field.path}.{end}"))
    elif spec.has(field.path) or field.path in spec.texts:
        yield field.path


def _figure(spec: Spec, path: str, field: Field) -> str:
    if path in spec.texts:
        return spec.texts[path]
    if field.choices:
        return field.default
    if path in spec.numbers:
        return render(spec.numbers[path], field.unit, _DIGITS)
    terms = spec.swept[path]
    sums = (sum(t.low for t in terms), sum(t.nominal for t in terms), sum(t.high for t in terms))
    least, nominal, most = (render(value, field.unit, _DIGITS) for value in sums)
    return nominal if least == most else f"{nominal}, from {least} to {most}"


def chapters(
    boxes: Mapping[str, Box], rules: Iterable[Rule], extents: Iterable[Extent]
) -> Iterator[Chapter]:
    """Yield the calculation under each condition; ``boxes`` are of one spec.

    Under the first condition every quantity; under the others those that a rule there needs
    and that have another range.
    """
    ranges = {(each.condition, each.quantity): each for each in extents}
    judged = list(rules)
    for box in boxes.values():
        chapter = _chapter(box, [r for r in judged if r.condition == box.condition.name], ranges)
        if chapter.steps:
            yield chapter


def _chapter(box: Box, judged: Iterable[Rule], ranges: _Ranges) -> Chapter:
    condition = box.condition
    first = next(iter(box.circuit.kind.conditions))
    needed = box.circuit.needed([f for rule in judged for f in rule.formulas()], condition.fixes)
    steps = []
    for name, quantity in box.circuit.quantities.items():
        extent, before = ranges.get((condition.name, name)), ranges.get((first, name))
        repeated = before is not None and extent is not None and _same(extent, before)
        told = condition.name == first or (name in needed and not repeated)
        if extent is not None and told:
            steps.append(_step(_as_fixed(quantity, condition), extent, box))
    note = f"What is the same as under {first}, or bears on no rule here, is left out."
    return Chapter(
        condition.name, condition.says, "" if condition.name == first else note, tuple(steps)
    )


def _as_fixed(quantity: Quantity, condition: Condition) -> Quantity:
    """Return a quantity with the formula that the condition fixes it by, where it does."""
    formula = condition.fixes.get(quantity.path)
    return quantity if formula is None else replace(quantity, formula=formula, root=None, given={})


def _same(one: Extent, other: Extent) -> bool:
    return (one.min, one.nom, one.max) == (other.min, other.nom, other.max)


def _step(quantity: Quantity, extent: Extent, box: Box) -> Step:
    with np.errstate(all="ignore"):
        working = tuple(_working(quantity, box))
    least, nominal, most = (
        render(value, extent.unit, _DIGITS) for value in (extent.min, extent.nom, extent.max)
    )
    return Step(quantity.path, quantity.symbol, quantity.says, working, nominal, least, most)


def _working(quantity: Quantity, box: Box) -> Iterator[str]:
    """Yield the formula and the formula with numbers; an equation shows both sides meet."""
    if quantity.given:
        given = ", ".join(f"{name} = {to.text}" for name, to in quantity.given.items())
        yield f"with {given}:"
    if quantity.formula is not None:
        yield quantity.formula.text.strip()
        yield with_numbers(quantity.formula, _numbers(quantity, box))
    elif quantity.root is not None:
        yield f"where this passes through zero: {quantity.root.falling.text}"
        yield with_numbers(quantity.root.falling, _numbers(quantity, box))


def _numbers(quantity: Quantity, box: Box) -> _Number:
    """Return the nominal numbers as a quantity's formula sees them."""
    scope = box.values(box.nominal[:, None, :])
    if quantity.given:
        scope = scope.within({name: scope.of(to) for name, to in quantity.given.items()})

    def number(name: str) -> str:
        value = float(np.asarray(scope(name)).flat[0])
        return render(value, unit_of(box.circuit, name), _DIGITS)

    return number
