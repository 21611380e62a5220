"""Every shipped formula evaluated with pint's quantities: its units come out as declared.

pint (https://pint.readthedocs.io) is an independent quantity library; here it is one more
kind of number for the one walker.
"""

from collections.abc import Iterator

import pint
import pytest

from reglint.circuit import Circuit
from reglint.dimension import Dimension
from reglint.formula import evaluate
from reglint.functions import Arithmetic
from reglint.kind import Quantity
from reglint.quantity import unit
from reglint.rulebook import Rulebook

UNITS = pint.UnitRegistry()
BOOK = Rulebook()


def of(dimension: Dimension) -> pint.Quantity:
    """Return some of a dimension in pint's units: 1.7, lest a difference of two is zero."""
    volt, ampere, second, kelvin = (float(each) for each in dimension.exponents)
    return (
        1.7 * UNITS.volt**volt * UNITS.ampere**ampere * UNITS.second**second * UNITS.kelvin**kelvin
    )


def alike(*values: pint.Quantity) -> pint.Quantity:
    """Return the first; pint refuses to add what is not alike."""
    sum(values[1:], values[0])
    return values[0]


def plain(*values: pint.Quantity) -> pint.Quantity:
    """Return one; pint refuses to convert what is no plain number."""
    for value in values:
        (1.0 * value).to("dimensionless")
    return 1.0 * UNITS.dimensionless


PINT: Arithmetic[pint.Quantity] = Arithmetic(
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


def named(circuit: Circuit, name: str) -> pint.Quantity:
    """Return one of a name's declared unit."""
    if name in circuit.quantities:
        return of(unit(circuit.quantities[name].unit).dimension)
    return of(circuit.kind.stated_names[name])


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
        found = evaluate(formula.root, lambda n: named(circuit, n), PINT)
        assert (1.0 * found).check(of(unit(quantity.unit).dimension).dimensionality)


@pytest.mark.parametrize(
    "rule",
    [r for k in filter(None, map(BOOK.kind, BOOK.kind_names())) for r in BOOK.rules(k).values()],
    ids=lambda rule: rule.name,
)
def test_both_sides_of_a_rule_are_alike(rule: object) -> None:
    """A rule compares like with like."""
    (circuit, *_) = circuits()
    holds = rule.holds  # type: ignore[attr-defined]
    sides = [
        evaluate(s.root, lambda n: named(circuit, n), PINT) for s in (holds.value, holds.limit)
    ]
    alike(*(1.0 * side for side in sides))
