"""The calculation sheet: every figure and formula of one spec, with the numbers put in."""

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import replace
from typing import TypeAlias

import numpy as np

from reglint.box import Box, box_of, numbers_of
from reglint.circuit import Circuit, unit_of
from reglint.extent import extents
from reglint.finding import Extent
from reglint.formula import with_numbers
from reglint.kind import Condition, Field, Quantity
from reglint.quantity import render
from reglint.rule import Rule
from reglint.spec import Spec

#: Gives a name's number as text.
_Number: TypeAlias = Callable[[str], str]

#: Digits enough to follow the calculation with a pocket calculator.
_DIGITS = 6


def sheet(spec: Spec, circuit: Circuit, rules: Iterable[Rule]) -> str:
    """Return the sheet as text: what is stated, then each condition's quantities."""
    numbers = numbers_of(circuit, [spec])
    conditions = circuit.kind.conditions
    boxes = {name: box_of(circuit, each, [spec], numbers) for name, each in conditions.items()}
    ranges = {(each.condition, each.quantity): each for each in extents(boxes)[0]}
    lines = [*_heading(spec, circuit), *_stated(spec)]
    for name, box in boxes.items():
        lines += _condition(conditions[name], box, rules, ranges)
    return "\n".join(lines) + "\n"


def _heading(spec: Spec, circuit: Circuit) -> Iterator[str]:
    yield f"Calculation sheet of {spec.name} ({circuit.kind.title}), {spec.file}, line {spec.line}"
    yield f"Derating: {circuit.policy.title} ({circuit.policy.name})"
    yield "Under each formula stand the nominal values; least and most are over the box."
    yield "knee(x, m) = (x ** (1 - m) - 1) / (1 - m), log(x) at m = 1; falling(x, a, b) falls"
    yield "from 1 at a to 0 at b; if_positive(x, a, b) is a where x > 0, else b;"
    yield "agreeing(x, a, b) is b: never above a, and equal to it where x > 0; log is natural."
    yield ""


def _stated(spec: Spec) -> Iterator[str]:
    """Yield every figure, its range and where it comes from."""
    yield "Figures"
    said = {each.path: each.says for each in spec.assumptions}
    for field in spec.kind.fields.values():
        for path in _paths(spec, field):
            place = spec.origins.get(path) or (
                f"line {spec.place(path).line}" if spec.states(path) else "not in the spec"
            )
            notes = [field.symbol, place, *([said[path]] if path in said else [])]
            yield f"  {path} = {_figure(spec, path, field)}  ({'; '.join(filter(None, notes))})"
    yield ""


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


def _numbers(quantity: Quantity, box: Box) -> _Number:
    """Return the nominal numbers as a quantity's formula sees them."""
    scope = box.values(box.nominal[:, None, :])
    if quantity.given:
        scope = scope.within({name: scope.of(to) for name, to in quantity.given.items()})

    def number(name: str) -> str:
        value = float(np.asarray(scope(name)).flat[0])
        return render(value, unit_of(box.circuit, name), _DIGITS)

    return number


def _condition(
    condition: Condition,
    box: Box,
    rules: Iterable[Rule],
    ranges: Mapping[tuple[str, str], Extent],
) -> Iterator[str]:
    """Yield the quantities that rules under one condition need, but those that stand above."""
    first = next(iter(box.circuit.kind.conditions))
    judged = [rule for rule in rules if rule.condition == condition.name]
    asked = [formula for rule in judged for formula in rule.formulas()]
    needed = box.circuit.needed(asked, condition.fixes)
    lines: list[str] = []
    for name, quantity in box.circuit.quantities.items():
        extent, before = ranges.get((condition.name, name)), ranges.get((first, name))
        repeated = before is not None and extent is not None and _same(extent, before)
        told = condition.name == first or (name in needed and not repeated)
        if extent is not None and told:
            lines += _quantity(_as_fixed(quantity, condition), extent, box)
    if lines:
        yield f"Under {condition.name}: {condition.says}"
        if condition.name != first:
            yield f"  (What is the same as under {first}, or bears on no rule here, is left out.)"
        yield from lines
        yield ""


def _as_fixed(quantity: Quantity, condition: Condition) -> Quantity:
    """Return a quantity with the formula that the condition fixes it by, where it does."""
    formula = condition.fixes.get(quantity.path)
    return quantity if formula is None else replace(quantity, formula=formula, root=None, given={})


def _same(one: Extent, other: Extent) -> bool:
    return (one.min, one.nom, one.max) == (other.min, other.nom, other.max)


def _quantity(quantity: Quantity, extent: Extent, box: Box) -> Iterator[str]:
    symbol = f" ({quantity.symbol})" if quantity.symbol else ""
    yield f"  {quantity.path}{symbol}: {quantity.says}"
    with np.errstate(all="ignore"):
        yield from _working(quantity, box)
    least, nominal, most = (
        render(value, extent.unit, _DIGITS) for value in (extent.min, extent.nom, extent.max)
    )
    yield f"      = {nominal}; least {least}, most {most}"


def _working(quantity: Quantity, box: Box) -> Iterator[str]:
    """Yield the formula and the formula with numbers; an equation shows both sides meet."""
    if quantity.given:
        given = ", ".join(f"{name} = {to.text}" for name, to in quantity.given.items())
        yield f"      with {given}:"
    if quantity.formula is not None:
        yield f"      {quantity.formula.text.strip()}"
        yield f"      {with_numbers(quantity.formula, _numbers(quantity, box))}"
    elif quantity.root is not None:
        yield f"      where this passes through zero: {quantity.root.falling.text}"
        yield f"      {with_numbers(quantity.root.falling, _numbers(quantity, box))}"
