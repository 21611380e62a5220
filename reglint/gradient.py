"""Gradients: a kind of number that encloses a value and how it changes with each variable.

Forward differentiation over intervals: for any two points of the box the function's
difference is enclosed by the partials times the steps between them. At a kink the
partials hold those of both sides (Clarke's generalised gradient); at a jump they hold
everything. A partial of exactly zero belongs to a variable that does not matter, so it
stays zero whatever it is multiplied with, an infinite slope included.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import reduce
from typing import Any, TypeAlias, Union

import numpy as np
import numpy.typing as npt

from reglint import interval
from reglint.interval import Interval, hull, lift, meet, where

Array: TypeAlias = npt.NDArray[np.float64]
Mask: TypeAlias = npt.NDArray[np.bool_]
Like: TypeAlias = Union["Gradient", Interval, Array, float]
#: Partials of one operand, and the slope of the result with that operand.
Term: TypeAlias = tuple[Interval | None, Interval]

#: Below this, doubles that differ by one differ.
_WHOLE = 2.0**53
_ZERO = lift(0.0)
_EVERYTHING = hull(-np.inf, np.inf)
_FALLING = hull(-np.inf, 0.0)


@dataclass(frozen=True, slots=True, eq=False)
class Gradient:
    """A value of shape S with its partials of shape (n, *S), or without any: a constant."""

    value: Interval
    #: ``None`` for what depends on no variable.
    partials: Interval | None = None

    #: Arrays leave mixed operations to us.
    __array_ufunc__ = None

    def __bool__(self) -> bool:
        """Refuse: a range of values may hold both."""
        raise TypeError("a gradient is neither true nor false; compare the ends of its value")

    def __neg__(self) -> "Gradient":
        """Return the negative."""
        return Gradient(-self.value, None if self.partials is None else -self.partials)

    def __add__(self, other: Like) -> "Gradient":
        """Return the sum."""
        other = raised(other)
        value = self.value + other.value
        return Gradient(value, _sum(value, self.partials, other.partials))

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
        value = self.value * other.value
        return _chain(value, (self.partials, other.value), (other.partials, self.value))

    __rmul__ = __mul__

    def __truediv__(self, other: Like) -> "Gradient":
        """Return the quotient."""
        other = raised(other)
        quotient, inverse = self.value / other.value, 1.0 / other.value
        return _chain(quotient, (self.partials, inverse), (other.partials, -(quotient * inverse)))

    def __rtruediv__(self, other: Like) -> "Gradient":
        """Return the quotient."""
        return raised(other) / self

    def __pow__(self, exponent: Like) -> "Gradient":
        """Return the power."""
        exponent = raised(exponent)
        power = self.value**exponent.value
        slope = _power_slope(self.value, exponent.value)
        bend = power * interval.log(self.value) if exponent.partials is not None else _ZERO
        return _chain(power, (self.partials, slope), (exponent.partials, bend))

    def __rpow__(self, other: Like) -> "Gradient":
        """Return the power."""
        return raised(other) ** self


def _power_slope(base: Interval, exponent: Interval) -> Interval:
    """Enclose the slope of a power with its base; across a pole anything is possible."""
    slope = exponent * base ** _less_one(exponent)
    return where((exponent.low < 0.0) & (base.low < 0.0) & (base.high > 0.0), _EVERYTHING, slope)


def _less_one(exponent: Interval) -> Interval:
    """Subtract one; a whole exponent stays whole, as rounding outward would not leave it."""
    whole = (exponent.low == exponent.high) & (exponent.low == np.rint(exponent.low))
    return where(whole & (np.abs(exponent.low) < _WHOLE), exponent.low - 1.0, exponent - 1.0)


def variable(index: int, count: int, value: Interval) -> Gradient:
    """Return the variable number ``index`` of ``count``: its partial with itself is one."""
    unit = np.zeros((count, *np.shape(value.low)))
    unit[index] = 1.0
    return Gradient(value, Interval(unit, unit))


def raised(value: Like) -> Gradient:
    """Return a gradient as it is, and anything else as a constant."""
    return value if isinstance(value, Gradient) else Gradient(lift(value))


def _fitted(partials: Interval, value: Interval) -> Interval:
    """Return partials with new axes behind their first, so that they broadcast with a value."""
    missing = np.ndim(value.low) + 1 - np.ndim(partials.low)
    if missing <= 0:
        return partials
    axes = (slice(None), *[None] * missing)
    return Interval(partials.low[axes], partials.high[axes])


def _sum(value: Interval, *terms: Interval | None) -> Interval | None:
    """Return the sum of what partials there are."""
    fitted = [_fitted(each, value) for each in terms if each is not None]
    return reduce(Interval.__add__, fitted) if fitted else None


def _chain(value: Interval, *terms: Term) -> Gradient:
    """Return a value whose partials are the sum of inner partials times outer slopes."""
    products = [_fitted(inner, value) * slope for inner, slope in terms if inner is not None]
    return Gradient(value, _sum(value, *products))


def exp(value: Like) -> Gradient:
    """Return the exponential."""
    value = raised(value)
    result = interval.exp(value.value)
    return _chain(result, (value.partials, result))


def log(value: Like) -> Gradient:
    """Return the logarithm."""
    value = raised(value)
    result = interval.log(value.value)
    return _chain(result, (value.partials, 1.0 / interval.maximum(value.value, 0.0)))


def sqrt(value: Like) -> Gradient:
    """Return the square root."""
    value = raised(value)
    result = interval.sqrt(value.value)
    return _chain(result, (value.partials, 0.5 / result))


def absolute(value: Like) -> Gradient:
    """Return the magnitude."""
    value = raised(value)
    negative, positive = value.value.low < 0.0, value.value.high > 0.0
    slope = where(negative, where(positive, hull(-1.0, 1.0), -1.0), 1.0)
    return _chain(interval.absolute(value.value), (value.partials, slope))


def _choice(value: Interval, surely: tuple[Mask, Mask], one: Gradient, other: Gradient) -> Gradient:
    """Return a value with the partials of what is surely chosen; of both where nothing is."""
    if one.partials is None and other.partials is None:
        return Gradient(value)
    first, second = (
        _ZERO if each.partials is None else _fitted(each.partials, value) for each in (one, other)
    )
    chosen = where(surely[0], first, where(surely[1], second, hull(first, second)))
    return Gradient(value, chosen)


def _lesser(one: Gradient, other: Gradient) -> Gradient:
    surely = one.value.high <= other.value.low, other.value.high <= one.value.low
    return _choice(interval.minimum(one.value, other.value), surely, one, other)


def minimum(*values: Like) -> Gradient:
    """Return the least."""
    return reduce(_lesser, map(raised, values))


def maximum(*values: Like) -> Gradient:
    """Return the greatest."""
    return -minimum(*(-raised(each) for each in values))


def knee(ratio: Like, exponent: Like) -> Gradient:
    """Return the knee function."""
    ratio, exponent = raised(ratio), raised(exponent)
    logs = interval.log(ratio.value)
    slope = interval.exp(-exponent.value * logs)
    bend = _ZERO if exponent.partials is None else _knee_bend(logs, exponent.value)
    value = interval.knee(ratio.value, exponent.value)
    return _chain(value, (ratio.partials, slope), (exponent.partials, bend))


def _knee_bend(logs: Interval, exponent: Interval) -> Interval:
    """Enclose the slope of the knee with its exponent.

    It is minus the integral of ``v exp((1-m) v)`` from 0 to ln x, and the exponential in it
    lies between those of both ends, 1 and ``x**(1-m)``.
    """
    return -0.5 * logs**2.0 * hull(1.0, interval.exp((1.0 - exponent) * logs))


def falling(value: Like, full_until: Like, zero_at: Like) -> Gradient:
    """Return the fall from 1 to 0: its slope with x is -1/width inside and 0 outside.

    Those with the two ends lie between 0 and 1/width. A fall without width is a jump.
    """
    value, full_until, zero_at = raised(value), raised(full_until), raised(zero_at)
    x, start, end = value.value, full_until.value, zero_at.value
    width = end - start
    steep = where(width.low > 0.0, -1.0 / width, _FALLING)
    # At x = start the fall is still full, also when it is a jump: a box may begin there.
    outside = (x.high <= start.low) | ((x.low >= end.high) & (x.low > start.high))
    inside = (x.low >= start.high) & (x.high <= end.low) & (width.low > 0.0)
    gentle = where(outside, 0.0, hull(steep, 0.0))
    return _chain(
        interval.falling(x, start, end),
        (value.partials, where(inside, steep, gentle)),
        (full_until.partials, -gentle),
        (zero_at.partials, -gentle),
    )


def if_positive(test: Like, yes: Like, no: Like) -> Gradient:
    """Return one of two; where the test is undecided, what moves it may make the result jump."""
    test, yes, no = raised(test), raised(yes), raised(no)
    value = interval.if_positive(test.value, yes.value, no.value)
    surely = test.value.low > 0.0, test.value.high <= 0.0
    jump = where(surely[0] | surely[1], 0.0, _EVERYTHING)
    chosen = _choice(value, surely, yes, no)
    return Gradient(
        value, _sum(value, chosen.partials, _chain(value, (test.partials, jump)).partials)
    )


def agreeing(test: Like, other: Like, value: Like) -> Gradient:
    """Return a value that is never above another, and equal to it where the test is positive.

    Where it is equal both forms enclose the same function, so its partials lie in both's.
    """
    test, other, value = raised(test), raised(other), raised(value)
    closer = interval.agreeing(test.value, other.value, value.value)
    if value.partials is None or other.partials is None:
        return Gradient(closer, value.partials)
    both, own = _fitted(other.partials, closer), _fitted(value.partials, closer)
    return Gradient(closer, where(test.value.low > 0.0, meet(own, both), own))


def margin(slack: Like, scale: Like) -> Gradient:
    """Return slack over the magnitude of scale."""
    return raised(slack) / absolute(scale)


def implicit(root: Interval, moved: Gradient, slope: Gradient, off: Interval) -> Gradient:
    """Return a root of f(x, p) = 0 as a function of p, by the implicit function theorem.

    ``moved`` is f over the root's enclosure and the box, with its partials by p; ``slope``
    the same by x alone. Where f is not positive at the start (``off``) the root stays put;
    where that is undecided it may do either. Where f may stand still in x all is possible.
    """
    if moved.partials is None:
        return Gradient(root)
    by_p = _fitted(moved.partials, root)
    along = slope.partials
    by_x = _ZERO if along is None else Interval(along.low[0], along.high[0])
    sure = (by_x.high < 0.0) | (by_x.low > 0.0)
    free = where(sure, -(by_p / by_x), by_p * _EVERYTHING)
    held = where(off.high <= 0.0, 0.0, hull(free, 0.0))
    return Gradient(root, where(off.low > 0.0, free, held))


def thin_only(function: Callable[..., Interval]) -> Callable[..., Gradient]:
    """Return a function of constants; with what varies it may jump anywhere."""

    def constant(*arguments: Like) -> Gradient:
        gradients = [raised(each) for each in arguments]
        value = function(*(each.value for each in gradients))
        return _chain(value, *((each.partials, _EVERYTHING) for each in gradients))

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
