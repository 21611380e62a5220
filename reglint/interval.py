"""Intervals: a kind of number that encloses every value it could be.

Arrays of closed intervals with outward rounding: the exact result of an operation on any
values inside its operands lies inside its result. An operation that no value satisfies
gives NaN ends, which prove nothing. Rules for infinite ends follow IEEE 1788: a zero end
times an infinite end is zero.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, TypeAlias, Union

import numpy as np
import numpy.typing as npt

Array: TypeAlias = npt.NDArray[np.float64]
Like: TypeAlias = Union["Interval", Array, float]

#: Relative error, with reserve, of a library function such as exp: some units in the last place.
_LIBRARY = 8.0 * np.finfo(np.float64).eps


@dataclass(frozen=True, slots=True, eq=False)
class Interval:
    """Intervals ``[low, high]``, element by element of two arrays of one shape."""

    low: Array
    high: Array

    #: Arrays leave mixed operations to us.
    __array_ufunc__ = None

    def __bool__(self) -> bool:
        """Refuse: an interval may hold both."""
        raise TypeError("an interval is neither true nor false; compare its ends")

    def __neg__(self) -> "Interval":
        """Return the intervals with their sign turned."""
        return Interval(-self.high, -self.low)

    def __add__(self, other: Like) -> "Interval":
        """Return an enclosure of the sums."""
        other = lift(other)
        return Interval(_down(self.low + other.low), _up(self.high + other.high))

    __radd__ = __add__

    def __sub__(self, other: Like) -> "Interval":
        """Return an enclosure of the differences."""
        return self + -lift(other)

    def __rsub__(self, other: Like) -> "Interval":
        """Return an enclosure of the differences."""
        return -self + other

    def __mul__(self, other: Like) -> "Interval":
        """Return an enclosure of the products."""
        other = lift(other)
        ends = [
            _product(one, two) for one in (self.low, self.high) for two in (other.low, other.high)
        ]
        low = np.minimum(np.minimum(ends[0], ends[1]), np.minimum(ends[2], ends[3]))
        high = np.maximum(np.maximum(ends[0], ends[1]), np.maximum(ends[2], ends[3]))
        return Interval(_down(low), _up(high))

    __rmul__ = __mul__

    def __truediv__(self, other: Like) -> "Interval":
        """Return an enclosure of the quotients; everything where the divisor straddles zero.

        A divisor that touches zero from above is zero from above: 1/[0, 0] is infinite.
        """
        return self * _reciprocal(lift(other))

    def __rtruediv__(self, other: Like) -> "Interval":
        """Return an enclosure of the quotients."""
        return lift(other) / self

    def __pow__(self, exponent: Like) -> "Interval":
        """Return an enclosure of the powers; a base is cut at zero unless the power is whole."""
        if isinstance(exponent, float | int) and float(exponent).is_integer():
            return _whole_power(self, int(exponent))
        return exp(lift(exponent) * log(self))

    @property
    def middle(self) -> Array:
        """Return a point inside: the midpoint, as far as doubles go."""
        return np.clip(0.5 * self.low + 0.5 * self.high, self.low, self.high)

    @property
    def width(self) -> Array:
        """Return the widths, rounded up."""
        return _up(self.high - self.low)


def lift(value: Like) -> Interval:
    """Return an interval as it is, and a number or array as thin intervals."""
    if isinstance(value, Interval):
        return value
    ends = np.asarray(value, dtype=np.float64)
    return Interval(ends, ends)


def hull(one: Like, other: Like) -> Interval:
    """Return the smallest intervals that hold both."""
    one, other = lift(one), lift(other)
    return Interval(np.minimum(one.low, other.low), np.maximum(one.high, other.high))


def where(choose: npt.NDArray[np.bool_], one: Like, other: Like) -> Interval:
    """Return ``one`` where chosen, else ``other``."""
    one, other = lift(one), lift(other)
    return Interval(np.where(choose, one.low, other.low), np.where(choose, one.high, other.high))


def _down(value: Array) -> Array:
    """Round down; a sum that is zero is exactly zero, and a product is looked after."""
    return np.where(value == 0.0, value, np.nextafter(value, -np.inf))


def _up(value: Array) -> Array:
    return np.where(value == 0.0, value, np.nextafter(value, np.inf))


def _product(one: Array, other: Array) -> Array:
    """Return products of ends: zero times infinity is zero, and nothing else becomes zero."""
    product = one * other
    suspect = (product == 0.0) | np.isnan(product)
    if not suspect.any():
        return product
    zero = (one == 0.0) | (other == 0.0)
    known = ~np.isnan(one) & ~np.isnan(other)
    tiny = np.copysign(np.finfo(np.float64).tiny, np.sign(one) * np.sign(other))
    product = np.where((product == 0.0) & ~zero, tiny, product)
    return np.where(zero & known, 0.0, product)


def _reciprocal(value: Interval) -> Interval:
    low, high = value.low, value.high
    straddles = (low < 0.0) & (high > 0.0)
    from_below = high == 0.0
    top = np.where(low == 0.0, np.inf, 1.0 / np.where(low == 0.0, 1.0, low))
    bottom = np.where(
        from_below, np.where(low == 0.0, np.inf, -np.inf), 1.0 / np.where(from_below, 1.0, high)
    )
    return Interval(
        np.where(straddles, -np.inf, _down(bottom)), np.where(straddles, np.inf, _up(top))
    )


def _whole_power(base: Interval, exponent: int) -> Interval:
    if exponent < 0:
        return 1.0 / _whole_power(base, -exponent)
    low, high = base.low**exponent, base.high**exponent
    if exponent % 2 == 0:
        straddles = (base.low < 0.0) & (base.high > 0.0)
        low, high = np.where(straddles, 0.0, np.minimum(low, high)), np.maximum(low, high)
    return _loose(low, high)


def _loose(low: Array, high: Array) -> Interval:
    """Return ends moved outward by what a library function may err."""
    return Interval(_down(low - _LIBRARY * np.abs(low)), _up(high + _LIBRARY * np.abs(high)))


def exp(value: Like) -> Interval:
    """Return an enclosure of the exponentials."""
    value = lift(value)
    return _loose(np.exp(value.low), np.exp(value.high))


def log(value: Like) -> Interval:
    """Return an enclosure of the logarithms of what is positive."""
    value = lift(value)
    positive = Interval(np.maximum(value.low, 0.0), value.high)
    return _loose(np.log(positive.low), np.log(positive.high))


def sqrt(value: Like) -> Interval:
    """Return an enclosure of the square roots of what is not negative."""
    value = lift(value)
    return _loose(np.sqrt(np.maximum(value.low, 0.0)), np.sqrt(value.high))


def absolute(value: Like) -> Interval:
    """Return the magnitudes."""
    value = lift(value)
    straddles = (value.low < 0.0) & (value.high > 0.0)
    ends = np.abs(value.low), np.abs(value.high)
    return Interval(np.where(straddles, 0.0, np.minimum(*ends)), np.maximum(*ends))


def _pairwise(pick: Callable[[Array, Array], Array]) -> Callable[..., Interval]:
    def folded(first: Like, *rest: Like) -> Interval:
        result = lift(first)
        for each in map(lift, rest):
            result = Interval(pick(result.low, each.low), pick(result.high, each.high))
        return result

    return folded


minimum = _pairwise(np.minimum)
maximum = _pairwise(np.maximum)


def knee(ratio: Like, exponent: Like) -> Interval:
    """Return an enclosure of ``(x**(1-m) - 1)/(1-m)``: it rises with x and falls with m."""
    ratio, exponent = lift(ratio), lift(exponent)
    x = Interval(np.maximum(ratio.low, 0.0), ratio.high)
    return _loose(_knee(x.low, exponent.high), _knee(x.high, exponent.low))


def _knee(ratio: Array, exponent: Array) -> Array:
    power = 1.0 - exponent
    flat = power == 0.0
    logs = np.log(ratio)
    return np.where(flat, logs, np.expm1(power * logs) / np.where(flat, 1.0, power))


def falling(value: Like, full_until: Like, zero_at: Like) -> Interval:
    """Return an enclosure of the fall from 1 to 0: it falls with x and rises with both ends."""
    value, full_until, zero_at = lift(value), lift(full_until), lift(zero_at)
    loose = _loose(
        _falling(value.high, full_until.low, zero_at.low),
        _falling(value.low, full_until.high, zero_at.high),
    )
    return Interval(np.clip(loose.low, 0.0, 1.0), np.clip(loose.high, 0.0, 1.0))


def _falling(value: Array, full_until: Array, zero_at: Array) -> Array:
    width = zero_at - full_until
    slope = np.clip((zero_at - value) / np.where(width > 0.0, width, 1.0), 0.0, 1.0)
    share = np.where(width > 0.0, slope, np.where(value <= full_until, 1.0, 0.0))
    return np.where(np.isnan(width + value), np.nan, share)


def if_positive(test: Like, yes: Like, no: Like) -> Interval:
    """Return ``yes`` where the test is surely positive, ``no`` where surely not, else both."""
    test = lift(test)
    undecided = where(test.high <= 0.0, no, hull(yes, no))
    chosen = where(test.low > 0.0, yes, undecided)
    return where(np.isnan(test.low + test.high), np.float64(np.nan), chosen)


def meet(one: Interval, other: Interval) -> Interval:
    """Return what lies in both enclosures of the same values; NaN in one leaves the other."""
    return Interval(np.fmax(one.low, other.low), np.fmin(one.high, other.high))


def agreeing(test: Like, other: Like, value: Like) -> Interval:
    """Return a value, drawn closer by a form of it that agrees where the test is positive."""
    value = lift(value)
    return where(lift(test).low > 0.0, meet(value, lift(other)), value)


def margin(slack: Like, scale: Like) -> Interval:
    """Return an enclosure of slack over scale."""
    return lift(slack) / absolute(scale)


def thin_only(function: Callable[..., Array]) -> Callable[..., Interval]:
    """Return a function of numbers as one of thin intervals; wide ones have no value."""

    def thin(*arguments: Like) -> Interval:
        lifted = [lift(each) for each in arguments]
        thick = np.any(np.broadcast_arrays(*(each.low != each.high for each in lifted)), axis=0)
        value = np.where(thick, np.nan, function(*(each.low for each in lifted)))
        return Interval(value, value)

    return thin


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
