"""The values of a circuit's names at one set of points, with any kind of number."""

import operator
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Generic, TypeVar

from reglint.circuit import Circuit
from reglint.errors import FormulaError
from reglint.formula import Formula, evaluate
from reglint.functions import Arithmetic
from reglint.kind import Quantity, Root

T = TypeVar("T")
U = TypeVar("U")


class Values(Generic[T]):
    """Gives each name its value, computed when first asked for.

    ``given`` holds the fields' values and whatever an operating condition fixes. An
    inner scope (a trial point of an equation, a quantity's ``given``) recomputes only
    what depends on the names it changes and takes the rest from the outer one.
    """

    __slots__ = ("_arithmetic", "_circuit", "_given", "_known", "_outer", "_pending")

    def __init__(
        self,
        circuit: Circuit,
        arithmetic: Arithmetic[T],
        given: Mapping[str, T],
        outer: "Values[T] | None" = None,
    ) -> None:
        """Start with the given values only."""
        self._circuit = circuit
        self._arithmetic = arithmetic
        self._given = frozenset(given)
        self._known = dict(given)
        self._outer = outer
        self._pending: set[str] = set()

    def __call__(self, name: str) -> T:
        """Return the value of a field or quantity.

        Raises `FormulaError` for a quantity defined in terms of itself, and whatever
        the arithmetic raises.
        """
        if name in self._known:
            return self._known[name]
        if self._outer and self._is_outer(name):
            value = self._known[name] = self._outer(name)
            return value
        if name in self._pending:
            raise FormulaError(f"{name} is defined in terms of itself")
        self._pending.add(name)
        value = self._known[name] = self._compute(self._circuit.quantities[name])
        self._pending.discard(name)
        return value

    def _is_outer(self, name: str) -> bool:
        """Tell whether the outer scope's value holds here: given there, or untouched here."""
        assert self._outer is not None  # noqa: S101 -- the caller's question
        return self._outer.gives(name) or self._given.isdisjoint(self._circuit.reach(name))

    def gives(self, name: str) -> bool:
        """Tell whether a name's value was given, here or further out, and not computed."""
        return name in self._given or (self._outer is not None and self._outer.gives(name))

    def of(self, formula: Formula) -> T:
        """Return the value of a formula in these names."""
        return evaluate(formula.root, self, self._arithmetic)

    def fraction(self, minuend: Formula, subtrahend: Formula, of: Formula) -> T:
        """Return the difference of two formulas as a fraction of a third's magnitude."""
        difference = operator.sub(self.of(minuend), self.of(subtrahend))
        return self._arithmetic.margin(difference, self.of(of))

    def within(self, given: Mapping[str, T]) -> "Values[T]":
        """Return an inner scope where some names have other values."""
        return Values(self._circuit, self._arithmetic, given, self)

    def mapped(self, arithmetic: Arithmetic[U], convert: Callable[[T], U]) -> "Values[U]":
        """Return the same scope in another kind of number; what was computed is not kept."""
        given = {name: convert(self._known[name]) for name in self._given}
        outer = self._outer.mapped(arithmetic, convert) if self._outer else None
        return Values(self._circuit, arithmetic, given, outer)

    def _compute(self, quantity: Quantity) -> T:
        scope = self
        if quantity.given:
            scope = self.within({name: self.of(to) for name, to in quantity.given.items()})
        if quantity.root is not None:
            equation = Equation(scope, quantity.path, quantity.root)
            return self._arithmetic.solve(equation)  # type: ignore[arg-type]  # generic `mapped`
        assert quantity.formula is not None  # noqa: S101 -- one of the two, by the schema
        return scope.of(quantity.formula)


@dataclass(frozen=True, slots=True)
class Equation(Generic[T]):
    """A quantity that is the root of an equation, in one scope of values."""

    scope: Values[T]
    unknown: str
    root: Root

    def residual(self, trial: T) -> T:
        """Return what falls through zero at the root, with the unknown at a trial value."""
        return self.scope.within({self.unknown: trial}).of(self.root.falling)

    def ends(self) -> tuple[T, T, T]:
        """Return the start and end of the search, and the value when the unknown is off."""
        scope, root = self.scope, self.root
        return scope.of(root.start), scope.of(root.end), scope.of(root.otherwise)

    def mapped(self, arithmetic: Arithmetic[U], convert: Callable[[T], U]) -> "Equation[U]":
        """Return the equation in another kind of number."""
        return Equation(self.scope.mapped(arithmetic, convert), self.unknown, self.root)
