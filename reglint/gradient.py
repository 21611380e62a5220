"""Gradients: a kind of number that encloses a value and how it changes with each variable.

Forward differentiation over intervals: for any two points of the box the function's
difference is enclosed by the partials times the steps between them. At a kink the
partials hold those of both sides; at a jump they hold everything.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, TypeAlias, Union

import numpy as np
import numpy.typing as npt

from reglint import interval
from reglint.interval import Interval, hull, lift, where

Array: TypeAlias = npt.NDArray[np.float64]
Like: TypeAlias = Union["Gradient", Interval, Array, float]

_ZERO = lift(0.0)
_EVERYTHING = Interval(np.float64(-np.inf), np.float64(np.inf))  # type: ignore[arg-type]


@dataclass(frozen=True, slots=True, eq=False)
class Gradient:
    """A value of shape S with its partials of shape (n, *S), or without any: a constant."""

    value: Interval
    #: ``None`` for what depends on no variable.
    partials: Interval | None = None

    #: Arrays leave mixed operations to us.
    __array_ufunc__ = None

    def __neg__(self) -> "Gradient":
        """Return the negative."""
        partials = None if self.partials is None else -self.partials
        return Gradient(-self.value, partials)

    def __add__(self, other: Like) -> "Gradient":
        """Return the sum."""
        other = raised(other)
        return Gradient(self.value + other.value, _sum(self.partials, other.partials))

    __radd__ = __add__

    def __sub__(self, other: Like) -> "Gradient":
        """Return the difference."""
        return self + -raised(other)

    def __rsub__(self, other: Like) -> "Gradient":
        """Return the difference."""
        return -self + other

    def __mul__(self, other: Like) -> "Gradient":
        """Return the product."""
        other = raised(other)
        return _chain(
            self.value * other.value, (self.partials, other.value), (other.partials, self.value)
        )

    __rmul__ = __mul__

    def __truediv__(self, other: Like) -> "Gradient":
        """Return the quotient."""
        other = raised(other)
        quotient = self.value / other.value
        inverse = 1.0 / other.value
        return _chain(quotient, (self.partials, inverse), (other.partials, -(quotient * inverse)))

    def __rtruediv__(self, other: Like) -> "Gradient":
        """Return the quotient."""
        return raised(other) / self

    def __pow__(self, exponent: Like) -> "Gradient":
        """Return the power; through the logarithm where the exponent is no constant."""
        if isinstance(exponent, Gradient) and exponent.partials is not None:
            return exp(exponent * log(self))
        power = exponent.value if isinstance(exponent, Gradient) else exponent
        slope = lift(power) * self.value ** (power - 1.0)
        return _chain(self.value**power, (self.partials, slope))


def variable(index: int, count: int, value: Interval) -> Gradient:
    """Return the variable number ``index`` of ``count``: its partial with itself is one."""
    unit = np.zeros((count, *np.shape(value.low)))
    unit[index] = 1.0
    return Gradient(value, Interval(unit, unit))


def raised(value: Like) -> Gradient:
    """Return a gradient as it is, and anything else as a constant."""
    return value if isinstance(value, Gradient) else Gradient(lift(value))


def _sum(one: Interval | None, other: Interval | None) -> Interval | None:
    if one is None or other is None:
        return other if one is None else one
    return one + other


def _chain(value: Interval, *terms: tuple[Interval | None, Interval | float]) -> Gradient:
    """Return a value whose partials are the sum of inner partials times outer slopes."""
    partials = None
    for inner, slope in terms:
        if inner is not None:
            partials = _sum(partials, inner * slope)
    return Gradient(value, partials)


def exp(value: Like) -> Gradient:
    """Return the exponential."""
    value = raised(value)
    result = interval.exp(value.value)
    return _chain(result, (value.partials, result))


def log(value: Like) -> Gradient:
    """Return the logarithm."""
    value = raised(value)
    inner = interval.maximum(value.value, _ZERO)
    return _chain(interval.log(inner), (value.partials, 1.0 / inner))


def sqrt(value: Like) -> Gradient:
    """Return the square root."""
    value = raised(value)
    result = interval.sqrt(value.value)
    return _chain(result, (value.partials, 0.5 / result))


def absolute(value: Like) -> Gradient:
    """Return the magnitude."""
    value = raised(value)
    inner = value.value
    slope = Interval(np.where(inner.low >= 0.0, 1.0, -1.0), np.where(inner.high <= 0.0, -1.0, 1.0))
    return _chain(interval.absolute(inner), (value.partials, slope))


def _choice(
    take_one: npt.NDArray[np.bool_],
    take_other: npt.NDArray[np.bool_],
    one: Gradient,
    other: Gradient,
) -> Interval | None:
    """Return the partials of whichever is surely taken, or of both where it is not sure."""
    if one.partials is None and other.partials is None:
        return None
    first = one.partials if one.partials is not None else _ZERO
    second = other.partials if other.partials is not None else _ZERO
    return where(take_one, first, where(take_other, second, hull(first, second)))


def _pick(lower: bool) -> Callable[..., Gradient]:  # noqa: FBT001 -- private
    def two(one: Gradient, other: Gradient) -> Gradient:
        pick = interval.minimum if lower else interval.maximum
        below = one.value.high < other.value.low
        above = one.value.low > other.value.high
        sure = (below, above) if lower else (above, below)
        return Gradient(pick(one.value, other.value), _choice(*sure, one, other))

    def folded(first: Like, *rest: Like) -> Gradient:
        result = raised(first)
        for each in rest:
            result = two(result, raised(each))
        return result

    return folded


minimum = _pick(lower=True)
maximum = _pick(lower=False)


def knee(ratio: Like, exponent: Like) -> Gradient:
    """Return the knee function; its slope with x is ``x**-m``."""
    ratio, exponent = raised(ratio), raised(exponent)
    x = interval.maximum(ratio.value, _ZERO)
    slope = interval.exp(-exponent.value * interval.log(x))
    return _chain(
        interval.knee(x, exponent.value),
        (ratio.partials, slope),
        (exponent.partials, Interval(np.float64(-np.inf), np.float64(0.0))),  # type: ignore[arg-type]
    )


def falling(value: Like, full_until: Like, zero_at: Like) -> Gradient:
    """Return the fall from 1 to 0; its slope with x is -1/width inside and 0 outside."""
    value, full_until, zero_at = raised(value), raised(full_until), raised(zero_at)
    x, start, end = value.value, full_until.value, zero_at.value
    width = end - start
    steep = -1.0 / interval.maximum(width, _ZERO)
    slope = where(width.low > 0.0, steep, Interval(np.float64(-np.inf), np.float64(0.0)))  # type: ignore[arg-type]
    outside = (x.high <= start.low) | (x.low >= interval.maximum(start, end).high)
    inside = (x.low >= start.high) & (x.high <= end.low) & (width.low > 0.0)
    sloped = where(outside, _ZERO, where(inside, slope, hull(slope, _ZERO)))
    shift = Interval(np.float64(0.0), np.float64(np.inf))  # type: ignore[arg-type]
    moved = where(outside, _ZERO, shift)
    return _chain(
        interval.falling(x, start, end),
        (value.partials, sloped),
        (full_until.partials, moved),
        (zero_at.partials, moved),
    )


def agreeing(test: Like, other: Like, value: Like) -> Gradient:
    """Return a value, drawn closer by a form of it that agrees where the test is positive.

    There both forms enclose the same function, so its partials lie in both forms' partials.
    """
    test, other, value = raised(test), raised(other), raised(value)
    closer = interval.agreeing(test.value, other.value, value.value)
    if value.partials is None or other.partials is None:
        return Gradient(closer, value.partials)
    both = interval.meet(value.partials, other.partials)
    return Gradient(closer, where(test.value.low > 0.0, both, value.partials))


def if_positive(test: Like, yes: Like, no: Like) -> Gradient:
    """Return one of two; where the test is undecided the result may jump."""
    test, yes, no = raised(test), raised(yes), raised(no)
    value = interval.if_positive(test.value, yes.value, no.value)
    sure_yes, sure_no = test.value.low > 0.0, test.value.high <= 0.0
    partials = _choice(sure_yes, sure_no, yes, no)
    if test.partials is not None:
        nothing = test.partials * 0.0
        jump = where(sure_yes | sure_no, nothing, nothing + _EVERYTHING)
        partials = _sum(partials, jump)
    return Gradient(value, partials)


def margin(slack: Like, scale: Like) -> Gradient:
    """Return slack over the magnitude of scale."""
    return raised(slack) / absolute(scale)


def implicit(root: Interval, moved: Gradient, slope: Gradient, off: Interval) -> Gradient:
    """Return a root of f(x, p) = 0 as a function of p, by the implicit function theorem.

    ``moved`` is f over the root's enclosure and the box, with its partials by p; ``slope``
    the same by x alone. Where f is not positive at the start (``off``) the root stays put;
    where that is undecided it may do either.
    """
    if moved.partials is None or slope.partials is None:
        return Gradient(root)
    by_x = Interval(slope.partials.low[0], slope.partials.high[0])
    free = -(moved.partials / by_x)
    held = where(off.high <= 0.0, _ZERO, where(off.low > 0.0, free, hull(free, _ZERO)))
    return Gradient(root, held)


def thin_only(function: Callable[..., Interval]) -> Callable[..., Gradient]:
    """Return a function of constants; of variables nothing is known."""

    def constant(*arguments: Like) -> Gradient:
        raised_all = [raised(each) for each in arguments]
        value = function(*(each.value for each in raised_all))
        if any(each.partials is not None for each in raised_all):
            return Gradient(value * _EVERYTHING, _EVERYTHING)
        return Gradient(value)

    return constant


#: The functions of the formula language.
FUNCTIONS: Mapping[str, Callable[..., Any]] = {
    "min": minimum,
    "max": maximum,
    "abs": absolute,
    "sqrt": sqrt,
    "exp": exp,
    "log": log,
    "knee": knee,
    "falling": falling,
    "if_positive": if_positive,
    "agreeing": agreeing,
}
