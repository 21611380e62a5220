"""Intervals: a kind of number that encloses every value it could be.

Arrays of closed intervals with outward rounding: the exact result of an operation on any
real numbers inside its operands lies inside its result. What has no value for any of them
is *undefined*: both ends NaN, which prove nothing; what has a value for some of them only
(the square root of ``[-1, 4]``) encloses those values. Infinite ends follow IEEE 1788:
a zero end times an infinite end is zero, and no interval holds infinity alone.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import reduce, wraps
from typing import Any, TypeAlias, Union

import numpy as np
import numpy.typing as npt

Array: TypeAlias = npt.NDArray[np.float64]
Mask: TypeAlias = npt.NDArray[np.bool_]
Like: TypeAlias = Union["Interval", Array, float]

_MOST = np.finfo(np.float64).max
_LEAST = np.finfo(np.float64).smallest_subnormal
#: What NumPy's exp, expm1, log and power may err, relative: they promise 4 units in the last
#: place (numpy/numpy pull request 19478), of which each is at most one eps; doubled.
_LIBRARY = 8.0 * np.finfo(np.float64).eps


def _operator(
    join: Callable[["Interval", "Interval"], "Interval"],
) -> Callable[["Interval", Like], "Interval"]:
    """Make an operator that lifts its right operand and leaves other kinds of number to theirs."""

    @wraps(join)
    def joined(one: "Interval", other: Like) -> "Interval":
        if not isinstance(other, _NUMBERS):
            return NotImplemented
        with np.errstate(all="ignore"):  # infinities and NaN are values here
            return join(one, lift(other))

    return joined


def _reflected(
    join: Callable[["Interval", Like], "Interval"],
) -> Callable[["Interval", Like], "Interval"]:
    return _operator(lambda right, left: join(left, right))


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

    @_operator
    def __add__(self, other: "Interval") -> "Interval":
        """Return an enclosure of the sums."""
        return Interval(_down(self.low + other.low), _up(self.high + other.high))

    @_operator
    def __sub__(self, other: "Interval") -> "Interval":
        """Return an enclosure of the differences."""
        return Interval(_down(self.low - other.high), _up(self.high - other.low))

    @_operator
    def __mul__(self, other: "Interval") -> "Interval":
        """Return an enclosure of the products."""
        products = _products(self, other)
        low, high = (pick.reduce(products, axis=(0, 1)) for pick in (np.minimum, np.maximum))
        return Interval(_down(low), _up(high))

    @_operator
    def __truediv__(self, other: "Interval") -> "Interval":
        """Return an enclosure of the quotients; everything where the divisor straddles zero.

        A divisor that touches zero has one side only, and ``[0, 0]`` is zero from above:
        1/[0, 2] is [1/2, inf], and 1/[0, 0] is too large for a double.
        """
        return self * _reciprocal(other)

    @_operator
    def __pow__(self, exponent: "Interval") -> "Interval":
        """Return an enclosure of the powers.

        A base is cut at zero where no whole power could give its negative part a value; an
        exponent that may be whole by chance leaves the power of a negative base undefined.
        """
        if exponent.low.ndim == 0 and exponent.low == exponent.high == np.rint(exponent.low):
            return _whole_power(self, float(exponent.low))
        doubtful = (self.low < 0.0) & (np.ceil(exponent.low) <= exponent.high)
        return exp(exponent * log(where(doubtful, np.nan, self)))

    __radd__ = __add__
    __rsub__ = _reflected(__sub__)
    __rmul__ = __mul__
    __rtruediv__ = _reflected(__truediv__)
    __rpow__ = _reflected(__pow__)

    @property
    def middle(self) -> Array:
        """Return a point inside: the midpoint, as far as doubles go."""
        low, high = np.maximum(self.low, -_MOST), np.minimum(self.high, _MOST)
        return np.clip(0.5 * low + 0.5 * high, low, high)

    @property
    def width(self) -> Array:
        """Return the widths, rounded up."""
        return (self - self.low).high

    def contains(self, value: Array | float) -> Mask:
        """Tell where a number lies inside; nothing lies inside what is undefined."""
        return np.asarray((self.low <= value) & (value <= self.high))


#: What an operator takes on its right; a tuple, as a union is built anew in every call.
_NUMBERS = (Interval, np.ndarray, np.generic, float, int)


def lift(value: Like) -> Interval:
    """Return an interval as it is, and a number or array as thin intervals."""
    if isinstance(value, Interval):
        return value
    ends = np.asarray(value, dtype=np.float64)
    return Interval(np.minimum(ends, _MOST), np.maximum(ends, -_MOST))


def hull(one: Like, other: Like) -> Interval:
    """Return the smallest intervals that hold both."""
    one, other = lift(one), lift(other)
    return Interval(np.minimum(one.low, other.low), np.maximum(one.high, other.high))


def meet(one: Like, other: Like) -> Interval:
    """Return what lies in both of two enclosures of the same values.

    Where one is undefined the other stays; two that do not meet enclose nothing.
    """
    one, other = lift(one), lift(other)
    low, high = np.fmax(one.low, other.low), np.fmin(one.high, other.high)
    return where(low > high, np.nan, Interval(low, high))


def where(choose: Mask, one: Like, other: Like) -> Interval:
    """Return ``one`` where chosen, else ``other``."""
    one, other = lift(one), lift(other)
    return Interval(np.where(choose, one.low, other.low), np.where(choose, one.high, other.high))


def _down(value: Array) -> Array:
    """Round down. A sum that gives zero is exactly zero, and nothing else may come here as zero."""
    below = np.nextafter(value, -np.inf)
    return below if _no_zero(value) else np.where(value == 0.0, 0.0, below)


def _up(value: Array) -> Array:
    above = np.nextafter(value, np.inf)
    return above if _no_zero(value) else np.where(value == 0.0, 0.0, above)


def _no_zero(value: Array) -> bool:
    """Tell whether no element is zero: counting costs least on the few elements of one spec."""
    return bool(np.count_nonzero(value) == np.size(value))


def _kept(result: Array, zero: Mask) -> Array:
    """Return a result with the smallest double for what is not zero but too small for doubles."""
    vanished = (result == 0.0) & ~zero
    return np.where(vanished, np.copysign(_LEAST, result), result)


def _products(one: Interval, other: Interval) -> Array:
    """Return the products of both ends with both ends, in one array of shape (2, 2, *S).

    Zero times infinity is zero, and nothing else becomes zero.
    """
    dimensions = max(np.ndim(one.low), np.ndim(other.low))
    first, second = _stacked(one, dimensions)[:, None], _stacked(other, dimensions)[None]
    products: Array = first * second
    if np.count_nonzero(np.abs(products) > 0.0) == products.size:
        return products
    zero = (first == 0.0) | (second == 0.0)
    return _kept(np.where(zero & ~_undefined(first, second), 0.0, products), zero)


def _stacked(value: Interval, dimensions: int) -> Array:
    """Return both ends in one array, with axes of length one to make up the dimensions."""
    shape = np.shape(value.low)
    ends = np.empty((2, *(1,) * (dimensions - len(shape)), *shape))
    ends[0], ends[1] = value.low, value.high
    return ends


def _reciprocal(value: Interval) -> Interval:
    low, high = value.low, value.high
    # Adding zero turns the zero that IEEE 754 calls negative: its reciprocal would be, too.
    bottom, top = _down(1.0 / (high + 0.0)), _up(1.0 / (low + 0.0))
    return Interval(
        np.where((low < 0.0) & (high >= 0.0), -np.inf, bottom),
        np.where((low < 0.0) & (high > 0.0), np.inf, top),
    )


def _whole_power(base: Interval, exponent: float) -> Interval:
    if exponent < 0.0:
        return 1.0 / _whole_power(base, -exponent)
    base = absolute(base) if exponent % 2.0 == 0.0 else base
    powers = (_kept(np.power(end, exponent), end == 0.0) for end in (base.low, base.high))
    return _loose(*powers)


def _undefined(*ends: Array) -> Mask:
    """Tell where any of the ends is NaN."""
    return reduce(np.logical_or, map(np.isnan, ends))


def _outward(low: Array, high: Array) -> Interval:
    """Round outward; one undefined end makes both undefined."""
    return where(_undefined(low, high), np.nan, Interval(_down(low), _up(high)))


def _loose(low: Array, high: Array, times: Array | float = 1.0) -> Interval:
    """Return ends moved outward by so many times what a library function may err.

    Its results lie on the right side of zero, and its zero is exact: whoever calls sees to that.
    """

    def error(end: Array) -> Array:
        return times * (_LIBRARY * np.minimum(np.abs(end), _MOST) + 8.0 * _LEAST)

    below, above = low - error(low), high + error(high)
    return _outward(
        np.where(low >= 0.0, np.maximum(below, 0.0), below),
        np.where(high <= 0.0, np.minimum(above, 0.0), above),
    )


@np.errstate(all="ignore")
def exp(value: Like) -> Interval:
    """Return an enclosure of the exponentials."""
    value = lift(value)
    return _loose(np.exp(value.low), np.maximum(np.exp(value.high), _LEAST))


@np.errstate(all="ignore")
def log(value: Like) -> Interval:
    """Return an enclosure of the logarithms of what is positive."""
    value = lift(value)
    return _loose(np.log(np.maximum(value.low, 0.0)), np.log(value.high))


@np.errstate(all="ignore")
def sqrt(value: Like) -> Interval:
    """Return an enclosure of the square roots of what is not negative."""
    value = lift(value)
    return _outward(np.sqrt(np.maximum(value.low, 0.0)), np.sqrt(value.high))


def _pairwise(pick: Callable[[Array, Array], Array]) -> Callable[..., Interval]:
    def folded(*values: Like) -> Interval:
        lifted = [lift(each) for each in values]
        low, high = (each.low for each in lifted), (each.high for each in lifted)
        return Interval(reduce(pick, low), reduce(pick, high))

    return folded


minimum = _pairwise(np.minimum)
maximum = _pairwise(np.maximum)


def absolute(value: Like) -> Interval:
    """Return the magnitudes."""
    value = lift(value)
    return maximum(value, -value, 0.0)


@np.errstate(all="ignore")
def knee(ratio: Like, exponent: Like) -> Interval:
    """Return an enclosure of ``(x**(1-m) - 1)/(1-m)`` of what is positive.

    It is the integral of ``u**-m`` from 1 to x, so it rises with x and falls with m.
    """
    ratio, exponent = lift(ratio), lift(exponent)
    low, below = _knee(np.maximum(ratio.low, 0.0), exponent.high)
    high, above = _knee(ratio.high, exponent.low)
    return _loose(low, high, np.maximum(below, above))


def _knee(ratio: Array, exponent: Array) -> tuple[Array, Array]:
    """Return the knee at points, and how many times a library function's error it may err.

    expm1 magnifies the relative error of its argument t by t/(1 - exp(-t)) <= 1 + max(t, 0).
    """
    power, logs = 1.0 - exponent, np.log(ratio)
    flat = power == 0.0
    growth = np.where(flat, 0.0, power * logs)
    value = np.where(flat, logs, np.expm1(growth) / np.where(flat, 1.0, power))
    return value, 2.0 + 2.0 * np.clip(growth, 0.0, 1000.0)


@np.errstate(all="ignore")
def falling(value: Like, full_until: Like, zero_at: Like) -> Interval:
    """Return an enclosure of the fall from 1 to 0: it falls with x and rises with both ends."""
    value, full_until, zero_at = lift(value), lift(full_until), lift(zero_at)
    least = _falling(value.high, full_until.low, zero_at.low)
    most = _falling(value.low, full_until.high, zero_at.high)
    return Interval(np.maximum(least.low, 0.0), np.minimum(most.high, 1.0))


def _falling(value: Array, full_until: Array, zero_at: Array) -> Interval:
    """Enclose the fall at points."""
    slope = (lift(zero_at) - value) / (lift(zero_at) - full_until)
    share = where(value <= full_until, 1.0, where(value >= zero_at, 0.0, slope))
    return where(_undefined(value, full_until, zero_at), np.nan, share)


def if_positive(test: Like, yes: Like, no: Like) -> Interval:
    """Return ``yes`` where the test is surely positive, ``no`` where surely not, else both."""
    test = lift(test)
    undecided = where(test.high <= 0.0, no, hull(yes, no))
    chosen = where(test.low > 0.0, yes, undecided)
    return where(_undefined(test.low, test.high), np.nan, chosen)


def agreeing(test: Like, other: Like, value: Like) -> Interval:
    """Return a value that is never above another, and equal to it where the test is positive."""
    other = lift(other)
    below = Interval(np.where(lift(test).low > 0.0, other.low, -np.inf), other.high)
    return meet(value, below)


def margin(slack: Like, scale: Like) -> Interval:
    """Return an enclosure of slack over the magnitude of scale."""
    return lift(slack) / absolute(scale)


def thin_only(function: Callable[..., Array]) -> Callable[..., Interval]:
    """Return a function of numbers as one of thin intervals; of wide ones it is undefined."""

    def thin(*arguments: Like) -> Interval:
        lifted = [lift(each) for each in arguments]
        thick = np.any(np.broadcast_arrays(*(each.low != each.high for each in lifted)), axis=0)
        return where(thick, np.nan, function(*(each.low for each in lifted)))

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
