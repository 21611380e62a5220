"""The values of a circuit's names at one set of points, with any kind of number."""

from collections.abc import Mapping
from typing import Generic, TypeVar

from reglint.circuit import Circuit
from reglint.errors import FormulaError
from reglint.formula import Formula, evaluate
from reglint.functions import Arithmetic
from reglint.kind import Quantity, Root

T = TypeVar("T")


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
        if self._outer and self._given.isdisjoint(self._circuit.reach(name)):
            return self._outer(name)
        if name in self._pending:
            raise FormulaError(f"{name} is defined in terms of itself")
        self._pending.add(name)
        value = self._known[name] = self._compute(self._circuit.quantities[name])
        self._pending.discard(name)
        return value

    def of(self, formula: Formula) -> T:
        """Return the value of a formula in these names."""
        return evaluate(formula.root, self, self._arithmetic)

    def within(self, given: Mapping[str, T]) -> "Values[T]":
        """Return an inner scope where some names have other values."""
        return Values(self._circuit, self._arithmetic, given, self)

    def _compute(self, quantity: Quantity) -> T:
        scope = self
        if quantity.given:
            scope = self.within({name: self.of(to) for name, to in quantity.given.items()})
        if quantity.root is not None:
            return scope._root(quantity.path, quantity.root)  # noqa: SLF001 -- a Values too
        assert quantity.formula is not None  # noqa: S101 -- one of the two, by the schema
        return scope.of(quantity.formula)

    def _root(self, unknown: str, root: Root) -> T:
        def residual(trial: T) -> T:
            return self.within({unknown: trial}).of(root.falling)

        ends = (self.of(each) for each in (root.start, root.end, root.off))
        return self._arithmetic.solve(residual, *ends)
