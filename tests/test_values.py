"""Values by name: what an inner scope recomputes, and what it takes from the outer one."""

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np
import pytest

from reglint.circuit import Circuit
from reglint.errors import FormulaError
from reglint.formula import parse
from reglint.functions import INTERVALS, REAL
from reglint.interval import lift
from reglint.judge import Case
from reglint.kind import Quantity, Root
from reglint.values import Values

Scope = Callable[..., Values[Any]]


def quantity(path: str, text: str, root: Root | None = None, **given: str) -> tuple[str, Quantity]:
    """Return a quantity by its path, from its formula unless a root is given."""
    inner = {name: parse(each) for name, each in given.items()}
    formula = parse(text) if root is None else None
    return path, Quantity(path, "1", "A quantity.", formula, root, inner)


#: The first is half of what the second doubles: the root of 6 - 2x in [0, 10].
EQUATION = Root(parse("6 - double"), parse("0"), parse("10"), parse("0"))
QUANTITIES: Mapping[str, Quantity] = dict(
    [
        quantity("sum", "a + b"),
        quantity("product", "10 * b"),
        quantity("sum_at_five", "sum + product", a="5"),
        quantity("swapped", "sum - 2 * a", a="b", b="a"),
        quantity("double", "2 * x"),
        quantity("x", "", EQUATION),
        quantity("egg", "hen + 1"),
        quantity("hen", "egg + 1"),
    ]
)


@pytest.fixture
def scope(case: Case) -> Scope:
    """Return a maker of values in a circuit of the quantities above."""
    circuit = Circuit(case.circuit.kind, case.circuit.policy, QUANTITIES, {})
    return lambda **given: Values(circuit, REAL, {n: np.float64(v) for n, v in given.items()})


def test_a_quantity_follows_from_what_is_given(scope: Scope) -> None:
    """The sum of 1 and 2 is 3."""
    assert scope(a=1.0, b=2.0)("sum") == 3.0


def test_what_is_given_is_not_computed(scope: Scope) -> None:
    """A condition that fixes a quantity has the last word."""
    assert scope(a=1.0, b=2.0, sum=100.0)("sum") == 100.0


def test_an_inner_scope_recomputes_what_depends_on_its_names(scope: Scope) -> None:
    """With a at 5 the sum is 7 inside, and still 3 outside."""
    outer = scope(a=1.0, b=2.0)
    assert outer("sum") == 3.0
    assert outer.within({"a": np.float64(5.0)})("sum") == 7.0
    assert outer("sum") == 3.0


def test_a_quantity_under_other_values_sees_the_rest_as_it_is(scope: Scope) -> None:
    """With a at 5: the sum is 7, and ten times b stays 20."""
    assert scope(a=1.0, b=2.0)("sum_at_five") == 27.0


def test_other_values_are_taken_from_outside_all_at_once(scope: Scope) -> None:
    """Of 1 and 2, swapped, the sum less twice the first is 3 - 2 * 2."""
    assert scope(a=1.0, b=2.0)("swapped") == -1.0


def test_a_root_is_found_through_the_quantities_that_depend_on_it(scope: Scope) -> None:
    """2x is 6 at 3, though it is x that is asked for."""
    assert scope()("x") == pytest.approx(3.0, rel=1e-14)


def test_the_same_root_is_enclosed_by_intervals(scope: Scope) -> None:
    """Another kind of number, the same formulas."""
    found = scope().mapped(INTERVALS, lift)("x")
    assert found.low <= 3.0 <= found.high
    assert float(found.width) < 1e-9


def test_what_is_fixed_stays_fixed_in_another_kind_of_number(scope: Scope) -> None:
    """The inner and the outer scope's given values are converted."""
    inner = scope(a=1.0, b=2.0).within({"a": np.float64(5.0)})
    found = inner.mapped(INTERVALS, lift)("sum")
    assert (float(found.low), float(found.high)) == pytest.approx((7.0, 7.0), rel=1e-15)


def test_a_quantity_defined_by_itself_is_refused(scope: Scope) -> None:
    """The egg needs the hen and the hen the egg."""
    with pytest.raises(FormulaError) as caught:
        scope()("egg")
    assert str(caught.value) == "egg is defined in terms of itself"


def test_a_difference_is_told_as_a_fraction_of_a_magnitude(scope: Scope) -> None:
    """Of 3 and 5 by -4: the difference -2 is -1/2 of the magnitude 4."""
    texts = map(parse, ("a + 2", "5", "-4"))
    assert scope(a=1.0).fraction(*texts) == -0.5


def test_given_values_are_told_from_computed_ones(scope: Scope) -> None:
    """Through an inner scope, too; a computed value is not given."""
    outer = scope(a=1.0, b=2.0)
    inner = outer.within({"b": np.float64(3.0)})
    assert inner("sum") == 4.0
    assert [inner.gives(name) for name in ("a", "b", "sum")] == [True, True, False]
