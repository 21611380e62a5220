"""The box of values a circuit can take: all specs of a batch under one operating condition."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TypeAlias, TypeVar

import numpy as np
import numpy.typing as npt

from reglint.circuit import Circuit
from reglint.functions import REAL
from reglint.kind import Condition
from reglint.spec import Spec, Term
from reglint.values import Values

T = TypeVar("T")
Array: TypeAlias = npt.NDArray[np.float64]

#: Points evaluated at once: arrays of this size stay in a processor's cache.
POINTS_AT_ONCE = 1 << 16


@dataclass(frozen=True, slots=True)
class Box:
    """For each of ``s`` specs, the ranges of ``n`` swept names under one condition."""

    circuit: Circuit
    condition: Condition
    specs: Sequence[Spec]
    #: The names that vary in any of the specs.
    names: tuple[str, ...]
    #: Ends and nominal values, each of shape (s, n), in SI units and °C.
    low: Array
    nominal: Array
    high: Array
    #: All other names, each of shape (s, 1); NaN where a spec does not state one.
    fixed: Mapping[str, Array]

    def take(self, rows: Sequence[int] | npt.NDArray[np.intp]) -> "Box":
        """Return the box of some of the specs."""
        return Box(
            self.circuit,
            self.condition,
            [self.specs[row] for row in rows],
            self.names,
            self.low[rows],
            self.nominal[rows],
            self.high[rows],
            {name: value[rows] for name, value in self.fixed.items()},
        )

    def values(self, points: Array) -> Values[Array]:
        """Return the circuit's values at ``points``, of shape (s, p, n)."""
        swept = {name: points[:, :, index] for index, name in enumerate(self.names)}
        return self.under_condition(Values(self.circuit, REAL, {**self.fixed, **swept}))

    def under_condition(self, values: Values[T]) -> Values[T]:
        """Return values with what the operating condition fixes, each in sight of those before."""
        for name, formula in self.condition.fixes.items():
            values = values.within({name: values.of(formula)})
        return values

    def corners(self) -> Array:
        """Return all corners, of shape (s, 2**m, n) for the ``m`` names that move anywhere."""
        moving = np.flatnonzero((self.low != self.high).any(axis=0))
        upper = np.zeros((1 << len(moving), len(self.names)), dtype=bool)
        upper[:, moving] = (np.arange(1 << len(moving))[:, None] >> np.arange(len(moving))) & 1
        return np.where(upper, self.high[:, None, :], self.low[:, None, :])


def box_of(
    circuit: Circuit,
    condition: Condition,
    specs: Sequence[Spec],
    numbers: Mapping[str, Array],
) -> Box:
    """Build the box of specs of one circuit; ``numbers`` come from `numbers_of`."""
    known = circuit.kind.stated_names
    swept = sorted({name for spec in specs for name in spec.swept if name in known})
    ends = np.array(
        [[ends_of(spec.swept.get(name), condition) for name in swept] for spec in specs]
    )
    low, nominal, high = ends.reshape(len(specs), len(swept), 3).transpose(2, 0, 1)
    varies = (low != high).any(axis=0)
    still = {name: low[:, [i]] for i, name in enumerate(swept) if not varies[i]}
    names = tuple(name for name, moves in zip(swept, varies, strict=True) if moves)
    return Box(
        circuit,
        condition,
        specs,
        names,
        low[:, varies],
        nominal[:, varies],
        high[:, varies],
        {**numbers, **still},
    )


def boxes_of(circuit: Circuit, specs: Sequence[Spec]) -> dict[str, Box]:
    """Return the boxes of specs of one circuit under every operating condition, by its name."""
    numbers = numbers_of(circuit, specs)
    conditions = circuit.kind.conditions
    return {name: box_of(circuit, each, specs, numbers) for name, each in conditions.items()}


def numbers_of(circuit: Circuit, specs: Sequence[Spec]) -> dict[str, Array]:
    """Return what a batch does not sweep, each of shape (s, 1); NaN where a spec states none."""
    swept = {name for spec in specs for name in spec.swept}
    names = (circuit.kind.stated_names.keys() | circuit.not_covered.keys()) - swept
    return {name: np.array([[spec.numbers.get(name, np.nan)] for spec in specs]) for name in names}


def ends_of(terms: Sequence[Term] | None, condition: Condition) -> tuple[float, float, float]:
    """Return the least, nominal and greatest value of a sum of terms under a condition."""
    if terms is None:
        return (np.nan, np.nan, np.nan)
    low = nominal = high = 0.0
    for term in terms:
        ends = term_ends(term, condition)
        low, nominal, high = low + ends[0], nominal + ends[1], high + ends[2]
    return low, nominal, high


def term_ends(term: Term, condition: Condition) -> tuple[float, float, float]:
    """Return the least, nominal and greatest value of one term under a condition."""
    if condition.nominal:
        return (term.nominal, term.nominal, term.nominal)
    if term.removable and condition.removable_loads == "absent":
        return (0.0, 0.0, 0.0)
    if term.removable and condition.removable_loads == "either":
        return (min(term.low, 0.0), term.nominal, term.high)
    return (term.low, term.nominal, term.high)
