"""Laws of interval arithmetic: inclusion, isotonicity, subdistributivity.

First between intervals; then for numbers inside them, which are exact fractions, or
mpmath's to 60 digits where there are no fractions, so that not even a rounding may leave
an enclosure.
"""

import operator
from collections.abc import Callable
from fractions import Fraction
from typing import Any

import mpmath
import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from reglint import interval
from reglint.interval import Interval, hull, lift

NUMBERS = st.floats(-1e6, 1e6, allow_nan=False)
SHARES = st.floats(0.0, 1.0)
OPERATIONS: dict[str, Callable[[Interval, Interval], Interval]] = {
    "sum": lambda a, b: a + b,
    "difference": lambda a, b: a - b,
    "product": lambda a, b: a * b,
    "quotient": lambda a, b: a / b,
    "least": interval.minimum,
    "greatest": interval.maximum,
    "knee": lambda a, b: interval.knee(interval.absolute(a) + 1e-6, interval.absolute(b) / 1e6),
    "falling": lambda a, b: interval.falling(a, b, b + 10.0),
    "choice": lambda a, b: interval.if_positive(a, b, a - b),
}


@st.composite
def spans(draw: st.DrawFn) -> Interval:
    """Draw one interval."""
    low, high = sorted((draw(NUMBERS), draw(NUMBERS)))
    return Interval(np.float64(low), np.float64(high))  # type: ignore[arg-type]


def within(value: Interval, share: float) -> Interval:
    """Return a point of an interval as a thin one."""
    point = np.clip(value.low + share * (value.high - value.low), value.low, value.high)
    return interval.lift(point)


def holds(outer: Interval, inner: Interval) -> bool:
    """Tell whether one interval lies in another; an undefined one lies anywhere."""
    undefined = np.isnan(inner.low) or np.isnan(outer.low)
    return bool(undefined or (outer.low <= inner.low and inner.high <= outer.high))


@given(st.sampled_from(sorted(OPERATIONS)), spans(), spans(), SHARES, SHARES)
def test_the_result_at_any_points_lies_in_the_result(
    name: str, a: Interval, b: Interval, s: float, t: float
) -> None:
    """Inclusion: f(x, y) in F(X, Y); and isotonicity, as points are intervals too."""
    operation = OPERATIONS[name]
    with np.errstate(all="ignore"):
        outer, inner = operation(a, b), operation(within(a, s), within(b, t))
    # The inner one is rounded outward as well: its middle is what must be enclosed.
    assert holds(outer, interval.lift(inner.middle)) or not np.isfinite(inner.width)


@given(spans(), spans(), spans())
def test_products_are_subdistributive(a: Interval, b: Interval, c: Interval) -> None:
    """The product a (b + c) lies in a b + a c, to a few roundings."""
    left, right = a * (b + c), a * b + a * c
    room = 1e-15 * (abs(right.low) + abs(right.high)) + 1e-9
    assert right.low - room <= left.low
    assert left.high <= right.high + room


# Numbers inside intervals, without rounding

CONTEXT = mpmath.MPContext()
CONTEXT.dps = 60

#: All sizes, and many that share digits, signs, and zero.
ANY_SIZE = st.one_of(
    st.floats(-1e3, 1e3),
    st.integers(-9, 9).map(float),
    st.floats(allow_nan=False, allow_infinity=False),
)
SMALL = st.one_of(st.floats(-300.0, 300.0), st.integers(-9, 9).map(float))
POSITIVE = st.one_of(st.floats(1e-12, 1e6), st.sampled_from([0.5, 1.0, 2.0]))
EXPONENTS = st.one_of(st.floats(-3.0, 3.0), st.sampled_from([0.0, 0.5, 1.0, 1.0 - 2**-53, 2.0]))

Inside = tuple[Interval, float]


def around(numbers: st.SearchStrategy[float]) -> st.SearchStrategy[Inside]:
    """Draw an interval and a number inside it."""
    return st.tuples(numbers, numbers, numbers).map(
        lambda three: (hull(min(three), max(three)), sorted(three)[1])
    )


def nested(numbers: st.SearchStrategy[float]) -> st.SearchStrategy[tuple[Interval, Interval]]:
    """Draw an interval and another one inside it."""
    return (
        st.tuples(numbers, numbers, numbers, numbers)
        .map(sorted)
        .map(lambda four: (hull(four[0], four[3]), hull(four[1], four[2])))
    )


def encloses(outer: Interval, value: Any) -> bool:
    """Compare exactly: Python and mpmath compare a double with their numbers without rounding."""
    low, high = float(outer.low), float(outer.high)
    return bool(low <= value <= high)


def lies_inside(outer: Interval, inner: Interval) -> bool:
    """Tell whether one interval lies inside the other."""
    return bool(outer.low <= inner.low and inner.high <= outer.high)


ARITHMETIC = pytest.mark.parametrize(
    "join", [operator.add, operator.sub, operator.mul, operator.truediv]
)


@ARITHMETIC
@given(one=around(ANY_SIZE), other=around(ANY_SIZE))
def test_arithmetic_encloses_the_exact_result(
    join: Callable[[Any, Any], Any], one: Inside, other: Inside
) -> None:
    """Of any two numbers inside the operands."""
    assume(join is not operator.truediv or other[1] != 0.0)
    assert encloses(join(one[0], other[0]), join(Fraction(one[1]), Fraction(other[1])))


@given(base=around(ANY_SIZE), exponent=st.integers(-4, 7))
def test_a_whole_power_encloses_the_exact_result(base: Inside, exponent: int) -> None:
    """Of any number inside the base."""
    assume(exponent >= 0 or base[1] != 0.0)
    assert encloses(base[0] ** exponent, Fraction(base[1]) ** exponent)


@given(value=around(ANY_SIZE))
def test_a_magnitude_encloses_the_exact_result(value: Inside) -> None:
    """Of any number inside."""
    assert encloses(interval.absolute(value[0]), abs(value[1]))


@pytest.mark.parametrize(
    ("enclosure", "function", "numbers"),
    [
        (interval.exp, CONTEXT.exp, SMALL),
        (interval.exp, CONTEXT.exp, st.floats(-760.0, -700.0)),
        (interval.log, CONTEXT.log, st.floats(5e-324, 1e308)),
        (interval.log, CONTEXT.log, st.floats(0.99, 1.01)),
        (interval.sqrt, CONTEXT.sqrt, st.floats(0.0, 1e308)),
    ],
)
@given(data=st.data())
def test_a_function_encloses_the_value(
    enclosure: Callable[[Interval], Interval],
    function: Callable[[Any], Any],
    numbers: st.SearchStrategy[float],
    data: st.DataObject,
) -> None:
    """Of any number inside its argument, to 60 digits."""
    argument, number = data.draw(around(numbers))
    assert encloses(enclosure(argument), function(CONTEXT.mpf(number)))


@given(base=around(POSITIVE), exponent=around(EXPONENTS))
def test_a_power_encloses_the_value(base: Inside, exponent: Inside) -> None:
    """Of any positive base and any exponent inside."""
    exact = CONTEXT.mpf(base[1]) ** CONTEXT.mpf(exponent[1])
    assert encloses(base[0] ** exponent[0], exact)


@given(ratio=around(POSITIVE), exponent=around(EXPONENTS))
def test_a_knee_encloses_the_value(ratio: Inside, exponent: Inside) -> None:
    """Of any ratio and any exponent inside; the value is the textbook's quotient."""
    x, power = CONTEXT.mpf(ratio[1]), 1 - CONTEXT.mpf(exponent[1])
    exact = CONTEXT.log(x) if power == 0 else (x**power - 1) / power
    assert encloses(interval.knee(ratio[0], exponent[0]), exact)


@given(ratio=st.floats(1e3, 1e12), exponent=st.floats(-20.0, 0.0))
def test_a_steep_knee_encloses_the_value(ratio: float, exponent: float) -> None:
    """Where expm1 magnifies the rounding of its argument."""
    x, power = CONTEXT.mpf(ratio), 1 - CONTEXT.mpf(exponent)
    assert encloses(interval.knee(ratio, exponent), (x**power - 1) / power)


@given(value=around(ANY_SIZE), full_until=around(ANY_SIZE), zero_at=around(ANY_SIZE))
def test_a_fall_encloses_the_exact_result(
    value: Inside, full_until: Inside, zero_at: Inside
) -> None:
    """Of any three numbers inside its arguments."""
    x, start, end = (Fraction(each[1]) for each in (value, full_until, zero_at))
    exact = Fraction(1) if x <= start else Fraction(0) if x >= end else (end - x) / (end - start)
    assert encloses(interval.falling(value[0], full_until[0], zero_at[0]), exact)


@given(test=around(SMALL), yes=around(SMALL), no=around(SMALL))
def test_a_choice_encloses_what_is_chosen(test: Inside, yes: Inside, no: Inside) -> None:
    """For any test inside."""
    chosen = yes[1] if test[1] > 0.0 else no[1]
    assert encloses(interval.if_positive(test[0], yes[0], no[0]), chosen)


@given(values=st.lists(around(ANY_SIZE), min_size=1, max_size=4))
def test_the_least_and_greatest_enclose_theirs(values: list[Inside]) -> None:
    """Of any numbers inside."""
    ranges, numbers = zip(*values, strict=True)
    assert encloses(interval.minimum(*ranges), min(numbers))
    assert encloses(interval.maximum(*ranges), max(numbers))


@ARITHMETIC
@given(one=nested(ANY_SIZE), other=nested(ANY_SIZE))
def test_arithmetic_is_isotone(
    join: Callable[[Interval, Interval], Interval],
    one: tuple[Interval, Interval],
    other: tuple[Interval, Interval],
) -> None:
    """Operands inside others give a result inside theirs."""
    # 1/[0, 0] is infinite and not undefined, which 1/[-1, 0] does not hold.
    assume(join is not operator.truediv or other[1].low != 0.0 or other[1].high != 0.0)
    assert lies_inside(join(one[0], other[0]), join(one[1], other[1]))


@pytest.mark.parametrize(
    "function",
    [
        lambda x: x**2,
        lambda x: x**3,
        interval.absolute,
        lambda x: interval.if_positive(x, 1.0, 2.0),
        lambda x: interval.falling(x, -2.0, 5.0),
        lambda x: interval.falling(0.0, x, 5.0),
        lambda x: interval.falling(0.0, -2.0, x),
    ],
)
@given(pair=nested(SMALL))
def test_functions_are_isotone(
    function: Callable[[Interval], Interval], pair: tuple[Interval, Interval]
) -> None:
    """An argument inside another gives a value inside its."""
    assert lies_inside(function(pair[0]), function(pair[1]))


@pytest.mark.parametrize(
    "function",
    [
        interval.sqrt,
        interval.log,
        interval.exp,
        lambda x: x**0.5,
        lambda x: x**-1.5,
        lambda x: interval.knee(x, 0.7),
    ],
)
@given(pair=nested(st.floats(0.001, 100.0)))
def test_functions_of_positive_numbers_are_isotone(
    function: Callable[[Interval], Interval], pair: tuple[Interval, Interval]
) -> None:
    """An argument inside another gives a value inside its."""
    assert lies_inside(function(pair[0]), function(pair[1]))


@given(one=around(SMALL), other=around(SMALL), third=around(SMALL))
def test_multiplication_is_subdistributive(one: Inside, other: Inside, third: Inside) -> None:
    """The exact a(b + c) lies inside the computed ab + ac."""
    a, b, c = one[0], other[0], third[0]
    factors = [Fraction(float(end)) for end in (a.low, a.high)]
    sums = [
        Fraction(float(one)) + Fraction(float(two))
        for one, two in ((b.low, c.low), (b.high, c.high))
    ]
    products = [factor * total for factor in factors for total in sums]
    apart = a * b + a * c
    assert encloses(apart, min(products))
    assert encloses(apart, max(products))


@given(value=around(ANY_SIZE), half=st.integers(0, 3))
def test_an_even_power_is_never_negative(value: Inside, half: int) -> None:
    """Not even by rounding outward, unlike the product of an interval with itself."""
    assert (value[0] ** (2 * half)).low >= 0.0


@given(one=around(ANY_SIZE), other=around(ANY_SIZE))
def test_elements_do_not_mix(one: Inside, other: Inside) -> None:
    """Arrays give element by element what their elements give alone."""
    both = Interval(np.array([one[0].low, other[0].low]), np.array([one[0].high, other[0].high]))
    scaled = both * lift(np.array([3.0, -7.0]))
    alone = one[0] * 3.0, other[0] * -7.0
    assert scaled.low.tolist() == [float(each.low) for each in alone]
    assert scaled.high.tolist() == [float(each.high) for each in alone]
