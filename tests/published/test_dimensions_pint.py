"""Every shipped formula evaluated with pint's quantities: its units come out as declared.

pint (https://pint.readthedocs.io) is an independent quantity library; here it is one more
kind of number for the one walker.
"""

from collections.abc import Iterator
from typing import Any, TypeAlias

import pint
import pytest

from reglint.circuit import Circuit, without_policy
from reglint.dimension import ONE, Dimension
from reglint.formula import Formula, evaluate, parse
from reglint.functions import Arithmetic
from reglint.kind import Quantity
from reglint.quantity import unit
from reglint.rule import Rule
from reglint.rulebook import Rulebook

UNITS: Any = pint.UnitRegistry()
BOOK = Rulebook()
#: One of pint's quantities; its own type is generic only for type checkers.
Amount: TypeAlias = Any


def of(dimension: Dimension) -> Amount:
    """Return some of a dimension in pint's units: 1.7, lest a difference of two is zero."""
    volt, ampere, second, kelvin = (float(each) for each in dimension.exponents)
    return (
        1.7 * UNITS.volt**volt * UNITS.ampere**ampere * UNITS.second**second * UNITS.kelvin**kelvin
    )


def alike(*values: Amount) -> Amount:
    """Return the first; pint refuses to add what is not alike."""
    sum(values[1:], values[0])
    return values[0]


def plain(*values: Amount) -> Amount:
    """Return one; pint refuses to convert what is no plain number."""
    for value in values:
        (1.0 * value).to("dimensionless")
    return 1.0 * UNITS.dimensionless


PINT: Arithmetic[Amount] = Arithmetic(
    constant=lambda _value, dimension: of(dimension),
    functions={
        "min": alike,
        "max": alike,
        "abs": alike,
        "sqrt": lambda value: value**0.5,
        "exp": plain,
        "log": plain,
        "knee": plain,
        "falling": lambda *values: plain(alike(*values) / values[0]),
        "if_positive": lambda _test, yes, no: alike(yes, no),
        "agreeing": lambda _test, yes, no: alike(yes, no),
        "off_preferred": lambda _value, tolerance: plain(tolerance),
    },
    solve=lambda equation: alike(*equation.ends()),
    margin=lambda slack, scale: slack / scale,
)


def circuits() -> Iterator[Circuit]:
    """Yield every kind under every policy and style."""
    for kind in filter(None, map(BOOK.kind, BOOK.kind_names())):
        for policy in filter(None, map(BOOK.policy, BOOK.policy_names())):
            styles = {s for rows in policy.classes.values() for s in rows.styles} | {""}
            for style in sorted(styles):
                yield BOOK.circuit(kind, policy, dict.fromkeys(kind.components, style))


def named(circuit: Circuit, name: str) -> Amount:
    """Return one of a name's declared unit."""
    if name in circuit.quantities:
        return of(unit(circuit.quantities[name].unit).dimension)
    return of(circuit.kind.stated_names[name])


def checks(formula: Formula, dimension: Dimension, circuit: Circuit) -> bool:
    """Tell whether a formula comes out in a dimension."""
    found = evaluate(formula.root, lambda n: named(circuit, n), PINT)
    return bool((1.0 * found).check(of(dimension).dimensionality))


@pytest.mark.parametrize(
    ("circuit", "quantity"),
    [(c, q) for c in circuits() for q in c.quantities.values()],
    ids=lambda each: f"{each.policy.name}" if isinstance(each, Circuit) else each.path,
)
def test_a_formula_has_its_declared_unit(circuit: Circuit, quantity: Quantity) -> None:
    """Sums join like units, and the result has the unit the file declares."""
    formulas = [quantity.formula] if quantity.formula else []
    if quantity.root:
        evaluate(quantity.root.falling.root, lambda n: named(circuit, n), PINT)
        formulas += [quantity.root.start, quantity.root.end, quantity.root.otherwise]
    for formula in formulas:
        assert checks(formula, unit(quantity.unit).dimension, circuit)


@pytest.mark.parametrize(
    "rule",
    [r for k in filter(None, map(BOOK.kind, BOOK.kind_names())) for r in BOOK.rules(k).values()],
    ids=lambda rule: rule.name,
)
def test_both_sides_of_a_rule_are_alike(rule: Rule) -> None:
    """A rule compares like with like, and takes its margin of something alike."""
    (circuit, *_) = circuits()
    sides = [evaluate(s.root, lambda n: named(circuit, n), PINT) for s in rule.formulas()]
    alike(*(1.0 * side for side in sides))


def substitutes() -> Iterator[tuple[str, Circuit, Formula, Dimension]]:
    """Yield what stands in for an unstated field, for a name under ``given``, for a fixed one."""
    for kind in filter(None, map(BOOK.kind, BOOK.kind_names())):
        circuit = without_policy(kind)
        places = [(f"{q.path} given", q.given) for q in kind.quantities.values()]
        places += [(f"{c.name} fixes", c.fixes) for c in kind.conditions.values()]
        for where, named_formulas in places:
            for name, formula in named_formulas.items():
                yield f"{where} {name}", circuit, formula, declared(circuit, name)
        for field in kind.fields.values():
            for formula in field.otherwise:
                yield f"{field.path} otherwise", circuit, formula, unit(field.unit).dimension


def declared(circuit: Circuit, name: str) -> Dimension:
    """Return the dimension a quantity, total or field is declared with."""
    quantity = circuit.quantities.get(name)
    return unit(quantity.unit).dimension if quantity else circuit.kind.stated_names[name]


@pytest.mark.parametrize(
    ("circuit", "formula", "dimension"),
    [pytest.param(*rest, id=where) for where, *rest in substitutes()],
)
def test_a_substitute_has_the_unit_of_what_it_stands_for(
    circuit: Circuit, formula: Formula, dimension: Dimension
) -> None:
    """Values that stand in for others, in fields, quantities and conditions, are of their unit."""
    assert checks(formula, dimension, circuit)


def test_a_sum_of_unlike_things_is_refused() -> None:
    """The check can fail: volts and amperes do not add, nor is a product of both a voltage."""
    (circuit, *_) = circuits()
    with pytest.raises(pint.DimensionalityError):
        checks(parse("supply.voltage + zener.current"), ONE, circuit)
    assert not checks(parse("supply.voltage * zener.current"), unit("V").dimension, circuit)
