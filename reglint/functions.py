"""What a formula may call, for each kind of number a formula can be evaluated with.

A kind of number supplies Python's arithmetic operators itself; what operators cannot
say (constants, functions, roots) is its `Arithmetic`.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from typing import Any, Generic, Protocol, TypeAlias, TypeVar

import numpy as np
import numpy.typing as npt

from reglint import dimension, gradient, interval, roots
from reglint.dimension import Dimension
from reglint.gradient import Gradient
from reglint.interval import Interval
from reglint.preferred import off_preferred

#: Any kind of number: it must support ``+ - * / **`` and unary minus.
T = TypeVar("T")
U = TypeVar("U")

Array: TypeAlias = npt.NDArray[np.float64]


class Equation(Protocol[T]):
    """What a kind of number must know of an equation to find its root."""

    def residual(self, trial: T) -> T:
        """Return what falls through zero at the root."""

    def ends(self) -> tuple[T, T, T]:
        """Return the start and end of the search, and the value when the unknown is off."""

    def mapped(self, arithmetic: "Arithmetic[U]", convert: Callable[[T], U]) -> "Equation[U]":
        """Return the equation in another kind of number."""


@dataclass(frozen=True, slots=True)
class Arithmetic(Generic[T]):
    """How one kind of number does what operators cannot say."""

    #: A number of this kind from a value in SI units and its dimension.
    constant: Callable[[float, Dimension], T]
    #: The functions of the formula language by name.
    functions: Mapping[str, Callable[..., T]]
    #: The root of an equation.
    solve: Callable[["Equation[T]"], T]
    #: A margin: slack over the magnitude of what it is relative to.
    margin: Callable[[T, T], T]


def _knee(ratio: Array, exponent: Array) -> Array:
    """Return ``(x**(1-m) - 1)/(1-m)``, the integral of ``u**-m`` from 1; ``ln x`` at m = 1."""
    log, power = np.log(ratio), 1.0 - np.asarray(exponent)
    flat = power == 0.0
    return np.where(flat, log, np.expm1(power * log) / np.where(flat, 1.0, power))


def _falling(value: Array, full_until: Array, zero_at: Array) -> Array:
    """Fall linearly from 1 at ``full_until`` to 0 at ``zero_at``; a step where they coincide."""
    width = np.asarray(zero_at - full_until)
    slope = np.clip((zero_at - value) / np.where(width > 0.0, width, 1.0), 0.0, 1.0)
    share = np.where(width > 0.0, slope, np.where(value <= full_until, 1.0, 0.0))
    return np.where(np.isnan(width + value), np.nan, share)


def _if_positive(test: Array, yes: Array, no: Array) -> Array:
    """Choose ``yes`` where the test is positive, ``no`` where it is not, NaN where it is NaN."""
    return np.where(np.isnan(test), np.nan, np.where(test > 0.0, yes, no))


def _fold(pairwise: Callable[[Any, Any], Any]) -> Callable[..., Array]:
    def folded(first: Array, *rest: Array) -> Array:
        result: Array = first
        for other in rest:
            result = pairwise(result, other)
        return result

    return folded


def _off_preferred(value: Array, tolerance: Array) -> Array:
    """Compare element by element: the series is a table, not a formula."""
    distance: Array = np.vectorize(off_preferred, otypes=[float])(value, tolerance)
    return distance


def _plain_constant(value: float, _dimension: Dimension) -> Array:
    return np.float64(value)  # type: ignore[return-value]  # a scalar broadcasts like an array


def _margin(slack: Array, scale: Array) -> Array:
    """Return slack over scale; no slack is a margin of zero, also on a limit of zero."""
    return np.where(slack == 0.0, 0.0, slack / np.abs(scale))


def _real_root(equation: Equation[Array]) -> Array:
    return roots.falling_root(equation.residual, *equation.ends())


#: Floats and arrays of them: corners, samples, nominal values.
REAL: Arithmetic[Array] = Arithmetic(
    constant=_plain_constant,
    functions={
        "min": _fold(np.minimum),
        "max": _fold(np.maximum),
        "abs": np.abs,
        "sqrt": np.sqrt,
        "exp": np.exp,
        "log": np.log,
        "knee": _knee,
        "falling": _falling,
        "if_positive": _if_positive,
        "agreeing": lambda _test, _other, value: value,
        "off_preferred": _off_preferred,
    },
    solve=_real_root,
    margin=_margin,
)


def _dimension_of_root(equation: Equation[Dimension]) -> Dimension:
    """Check the equation once; its ends must share the unknown's dimension."""
    ends = equation.ends()
    equation.residual(ends[0])
    return dimension.FUNCTIONS["max"](*ends)


#: Dimensions alone: the check of every formula when its file is read.
DIMENSIONS: Arithmetic[Dimension] = Arithmetic(
    constant=lambda _value, of: of,
    functions=dimension.FUNCTIONS,
    solve=_dimension_of_root,
    margin=lambda slack, scale: slack / scale,
)


def _interval_root(equation: Equation[Interval]) -> Interval:
    guess = _real_root(equation.mapped(REAL, lambda number: number.middle))
    return roots.enclosed_root(equation.residual, guess, *equation.ends())


@cache
def _thin(value: float) -> Interval:
    """Return a constant as an interval, made once: formulas are evaluated thousands of times."""
    return interval.lift(value)


@cache
def _still(value: float) -> Gradient:
    """Return a constant as a gradient, made once."""
    return gradient.raised(value)


#: Intervals: everything a value could be in a box.
INTERVALS: Arithmetic[Interval] = Arithmetic(
    constant=lambda value, _dimension: _thin(value),
    functions={**interval.FUNCTIONS, "off_preferred": interval.thin_only(_off_preferred)},
    solve=_interval_root,
    margin=interval.margin,
)


def _gradient_root(equation: Equation[Gradient]) -> Gradient:
    """Return the enclosed root with the partials of the implicit function: -f_p / f_x."""
    plain = equation.mapped(INTERVALS, lambda number: number.value)
    root = _interval_root(plain)
    still = equation.mapped(GRADIENTS, lambda number: Gradient(number.value))
    slope = still.residual(gradient.variable(0, 1, root))
    moved = equation.residual(Gradient(root))
    return gradient.implicit(root, moved, slope, off=plain.residual(plain.ends()[0]))


#: Gradients: what a value could be in a box, and how it changes with each swept name.
GRADIENTS: Arithmetic[Gradient] = Arithmetic(
    constant=lambda value, _dimension: _still(value),
    functions={
        **gradient.FUNCTIONS,
        "off_preferred": gradient.thin_only(INTERVALS.functions["off_preferred"]),
    },
    solve=_gradient_root,
    margin=gradient.margin,
)

#: The words the formula language knows.
NAMES = frozenset(REAL.functions)
