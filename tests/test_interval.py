"""Intervals: outward rounding, cut domains, infinite ends, and what is undefined."""

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from reglint import interval
from reglint.interval import FUNCTIONS, Interval, hull, lift, meet, where

INF = math.inf
NAN = math.nan
#: The largest and the smallest positive double (IEEE 754 binary64).
MOST = 1.7976931348623157e308
LEAST = 5e-324


def between(low: Any, high: Any) -> Interval:
    """Return the intervals with these ends."""
    return Interval(np.asarray(low, dtype=np.float64), np.asarray(high, dtype=np.float64))


def ends(value: Interval) -> tuple[float, float]:
    """Return the ends of one interval."""
    return float(value.low), float(value.high)


def undefined(value: Interval) -> bool:
    """Tell whether both ends are NaN."""
    return bool(np.isnan(value.low).all() and np.isnan(value.high).all())


# Rounding


def test_a_sum_is_rounded_outward_by_one_step() -> None:
    """1 + 2 lies between the neighbours of 3."""
    neighbours = (3.0 - 4.440892098500626e-16, 3.0 + 4.440892098500626e-16)
    assert ends(lift(1.0) + 2.0) == neighbours


def test_a_sum_of_zero_is_exact() -> None:
    """A difference of doubles is zero only where they are equal, so nothing is added."""
    assert ends(lift(0.1) - 0.1) == (0.0, 0.0)


def test_a_root_is_rounded_outward_by_one_step() -> None:
    """IEEE 754 rounds a square root correctly, so one step is enough."""
    assert ends(interval.sqrt(4.0)) == (2.0 - 2.220446049250313e-16, 2.0 + 4.440892098500626e-16)


def test_a_product_too_small_for_a_double_keeps_its_side_of_zero() -> None:
    """1e-200 squared is more than zero and less than two smallest doubles."""
    assert ends(lift(1e-200) * 1e-200) == (0.0, 2 * LEAST)


def test_a_negative_product_too_small_for_a_double_keeps_its_side_of_zero() -> None:
    """It is less than zero, and more than minus two smallest doubles."""
    assert ends(lift(-1e-200) * 1e-200) == (-2 * LEAST, 0.0)


def test_a_power_too_small_for_a_double_is_not_zero() -> None:
    """The cube of -1e-200 is less than zero."""
    cube = lift(-1e-200) ** 3
    assert cube.low < 0.0 <= cube.high


def test_an_exponential_too_small_for_a_double_is_not_zero() -> None:
    """exp(-1000) is more than zero."""
    low, high = ends(interval.exp(-1000.0))
    assert (low, high > 0.0) == (0.0, True)


def test_a_sum_too_large_for_a_double_keeps_a_finite_end() -> None:
    """The exact sum is finite, though it is more than the largest double."""
    assert ends(lift(MOST) + MOST) == (MOST, INF)


def test_an_exponential_too_large_for_a_double_keeps_a_finite_end() -> None:
    """exp(1000) is more than the largest double."""
    assert ends(interval.exp(1000.0)) == (MOST, INF)


def test_a_fall_too_small_for_a_double_is_not_zero() -> None:
    """Just below its end the fall from 1 to 0 has not arrived."""
    low, high = ends(interval.falling(-LEAST, -10.0, 0.0))
    assert (low, high > 0.0) == (0.0, True)


def test_a_fall_wider_than_a_double_can_say_is_enclosed() -> None:
    """Half way between -1e308 and 1e308 the fall is at a half."""
    assert interval.falling(0.0, -1e308, 1e308).contains(0.5)


# Zero and infinity


@pytest.mark.parametrize("other", [between(-INF, INF), between(0.0, INF), between(-INF, -1.0)])
def test_zero_times_infinity_is_zero(other: Interval) -> None:
    """IEEE 1788: what is exactly zero stays so, whatever the other factor."""
    assert ends(lift(0.0) * other) == (0.0, 0.0)


@pytest.mark.parametrize(
    ("divisor", "reciprocal"),
    [
        ((-1.0, 2.0), (-INF, INF)),
        ((0.0, 2.0), (0.5, INF)),
        ((-0.0, 2.0), (0.5, INF)),
        ((-2.0, 0.0), (-INF, -0.5)),
        ((-2.0, -0.0), (-INF, -0.5)),
        ((0.0, 0.0), (MOST, INF)),
        ((-0.0, -0.0), (MOST, INF)),
        ((1.0, INF), (0.0, 1.0)),
        ((-INF, INF), (-INF, INF)),
    ],
)
def test_a_reciprocal_near_zero(
    divisor: tuple[float, float], reciprocal: tuple[float, float]
) -> None:
    """A divisor that straddles zero gives everything, one that touches it one side."""
    assert ends(1.0 / between(*divisor)) == pytest.approx(reciprocal, rel=1e-15)


def test_infinity_alone_is_no_interval() -> None:
    """Lifted infinity is what is too large for a double, so that it can be subtracted."""
    assert ends(lift(INF) - lift(INF)) == (-INF, INF)


def test_a_logarithm_of_zero_is_below_all_doubles() -> None:
    """The logarithm falls without end towards zero."""
    assert ends(interval.log(0.0)) == (-INF, -MOST)


# Powers


@pytest.mark.parametrize(
    ("exponent", "power"),
    [(2, (0.0, 9.0)), (3, (-8.0, 27.0)), (0, (1.0, 1.0)), (-1, (-INF, INF)), (-2, (1 / 9, INF))],
)
def test_a_whole_power_of_what_straddles_zero(exponent: int, power: tuple[float, float]) -> None:
    """[-2, 3] squared starts at zero, unlike [-2, 3] times [-2, 3]."""
    assert ends(between(-2.0, 3.0) ** exponent) == pytest.approx(power, rel=1e-14)


def test_a_whole_exponent_may_be_a_thin_interval() -> None:
    """A constant of a formula is lifted, and its power is still tight."""
    assert ends(between(-2.0, 3.0) ** lift(2.0)) == pytest.approx((0.0, 9.0), rel=1e-14)


def test_a_broken_power_cuts_the_base_at_zero() -> None:
    """Negative numbers have no power of one half; the others are enclosed."""
    assert ends(between(-1.0, 4.0) ** 0.5) == pytest.approx((0.0, 2.0), rel=1e-14)


def test_an_exponent_that_may_be_whole_leaves_a_negative_base_undefined() -> None:
    """(-3)**2 is 9, which a cut at zero would leave out."""
    assert undefined(between(-3.0, 1.0) ** between(1.5, 2.5))


def test_a_positive_base_may_have_a_range_of_exponents() -> None:
    """[1/2, 2] to the [-1, 2] lies between 1/4 and 4."""
    assert ends(between(0.5, 2.0) ** between(-1.0, 2.0)) == pytest.approx((0.25, 4.0), rel=1e-14)


def test_a_number_may_have_a_range_of_exponents() -> None:
    """2 to the [-1, 3] lies between 1/2 and 8."""
    assert ends(2.0 ** between(-1.0, 3.0)) == pytest.approx((0.5, 8.0), rel=1e-14)


# Domains


@pytest.mark.parametrize(
    ("function", "cut"),
    [
        (interval.sqrt, (0.0, 2.0)),
        (interval.log, (-INF, math.log(4.0))),
        (lambda x: interval.knee(x, 0.0), (-1.0, 3.0)),
        (lambda x: interval.knee(x, 1.0), (-INF, math.log(4.0))),
    ],
    ids=["sqrt", "log", "knee at 0", "knee at 1"],
)
def test_what_is_partly_negative_is_cut_at_zero(
    function: Callable[[Interval], Interval], cut: tuple[float, float]
) -> None:
    """[-1, 4] counts as [0, 4]."""
    assert ends(function(between(-1.0, 4.0))) == pytest.approx(cut, rel=1e-14)


@pytest.mark.parametrize(
    "function",
    [interval.sqrt, interval.log, lambda x: interval.knee(x, 0.5), lambda x: x**0.5],
    ids=["sqrt", "log", "knee", "power"],
)
def test_what_is_surely_negative_is_undefined(function: Callable[[Interval], Interval]) -> None:
    """Both ends are NaN, so that no comparison with either can hold."""
    assert undefined(function(between(-2.0, -1.0)))


@pytest.mark.parametrize(
    "function",
    [
        lambda x: x + 1.0,
        lambda x: 0.0 * x,
        lambda x: 1.0 / x,
        interval.absolute,
        lambda x: interval.minimum(x, 1.0),
        lambda x: interval.maximum(2.0, x, 1.0),
        lambda x: interval.falling(x, 1.0, 2.0),
        lambda x: interval.falling(0.0, x, 2.0),
        lambda x: interval.falling(0.0, 1.0, x),
        lambda x: interval.if_positive(x, 1.0, 2.0),
        lambda x: hull(x, 1.0),
    ],
)
def test_undefined_stays_undefined(function: Callable[[Interval], Interval]) -> None:
    """Nothing known comes of what has no value."""
    assert undefined(function(lift(NAN)))


def test_undefined_contains_nothing() -> None:
    """Not even NaN lies inside."""
    assert not lift(NAN).contains(np.array([0.0, NAN])).any()


# Functions


@pytest.mark.parametrize(
    ("value", "magnitude"),
    [((-3.0, 2.0), (0.0, 3.0)), ((1.0, 2.0), (1.0, 2.0)), ((-2.0, -1.0), (1.0, 2.0))],
)
def test_a_magnitude(value: tuple[float, float], magnitude: tuple[float, float]) -> None:
    """The magnitude of what straddles zero starts at zero."""
    assert ends(interval.absolute(between(*value))) == magnitude


def test_the_least_of_three() -> None:
    """Both ends are the least of the ends."""
    assert ends(interval.minimum(between(1.0, 5.0), 4.0, between(0.0, 9.0))) == (0.0, 4.0)


def test_the_greatest_of_three() -> None:
    """Both ends are the greatest of the ends."""
    assert ends(interval.maximum(between(1.0, 5.0), 4.0, between(0.0, 9.0))) == (4.0, 9.0)


@pytest.mark.parametrize(
    ("exponent", "knee"),
    [(0.0, (-0.5, 1.0)), (1.0, (math.log(0.5), math.log(2.0))), (2.0, (-1.0, 0.5))],
)
def test_a_knee(exponent: float, knee: tuple[float, float]) -> None:
    """It is x - 1 at m = 0, ln x at m = 1, 1 - 1/x at m = 2."""
    assert ends(interval.knee(between(0.5, 2.0), exponent)) == pytest.approx(knee, rel=1e-14)


def test_a_knee_close_to_a_logarithm_is_as_sharp() -> None:
    """Written with expm1 it loses no digits beside m = 1."""
    near = interval.knee(2.0, 1.0 + 2**-52)
    assert ends(near) == pytest.approx((math.log(2.0), math.log(2.0)), rel=1e-14)


def test_a_knee_falls_with_its_exponent() -> None:
    """Of m in [0, 1] the knee at 2 is between ln 2 and 1."""
    ranged = interval.knee(2.0, between(0.0, 1.0))
    assert ends(ranged) == pytest.approx((math.log(2.0), 1.0), rel=1e-14)


@pytest.mark.parametrize(
    ("value", "share"),
    [((20.0, 70.0), (1.0, 1.0)), ((155.0, 200.0), (0.0, 0.0)), ((60.0, 160.0), (0.0, 1.0))],
)
def test_a_fall_is_exact_outside(value: tuple[float, float], share: tuple[float, float]) -> None:
    """It is 1 until 70 and 0 from 155, without rounding."""
    assert ends(interval.falling(between(*value), 70.0, 155.0)) == share


def test_a_fall_is_a_line_inside() -> None:
    """Half way between 70 and 155 a half is left."""
    share = interval.falling(between(70.0, 112.5), 70.0, 155.0)
    assert ends(share) == pytest.approx((0.5, 1.0), rel=1e-14)


def test_a_fall_without_width_is_a_step() -> None:
    """At 70 it is still full, above 70 nothing is left."""
    values = between([60.0, 70.0, 70.1], [70.0, 70.1, 80.0])
    share = interval.falling(values, 70.0, 70.0)
    assert (share.low.tolist(), share.high.tolist()) == ([1.0, 0.0, 0.0], [1.0, 1.0, 0.0])


def test_a_choice() -> None:
    """Surely positive takes the first, surely not the second, undecided both."""
    test = between([1.0, -1.0, -1.0, -INF], [2.0, 0.0, 1.0, INF])
    chosen = interval.if_positive(test, between(1.0, 2.0), 5.0)
    assert (chosen.low.tolist(), chosen.high.tolist()) == (
        [1.0, 5.0, 1.0, 1.0],
        [2.0, 5.0, 5.0, 5.0],
    )


def test_an_agreeing_form_draws_closer_where_it_holds() -> None:
    """Where the test is undecided the other form only caps the value."""
    test = between([1.0, -1.0], [2.0, 2.0])
    closer = interval.agreeing(test, between(1.0, 2.0), between(0.0, 3.0))
    assert (closer.low.tolist(), closer.high.tolist()) == ([1.0, 0.0], [2.0, 2.0])


def test_no_slack_is_no_margin_even_on_a_limit_of_zero() -> None:
    """Nothing over nothing is nothing here, as in the margins of numbers."""
    assert ends(interval.margin(0.0, 0.0)) == (0.0, 0.0)


def test_a_function_of_thin_intervals_is_undefined_for_wide_ones() -> None:
    """A table says nothing about what lies between its rows."""
    rounded = interval.thin_only(np.rint)
    result = rounded(between([1.4, 1.4], [1.4, 1.6]))
    assert (result.low[0], result.high[0], np.isnan(result.low[1])) == (1.0, 1.0, True)


# Sets


def test_a_hull_holds_both() -> None:
    """It spans the gap between them."""
    assert ends(hull(between(1.0, 2.0), 5.0)) == (1.0, 5.0)


def test_a_meeting_holds_what_lies_in_both() -> None:
    """It is the overlap."""
    assert ends(meet(between(1.0, 3.0), between(2.0, 5.0))) == (2.0, 3.0)


def test_what_does_not_meet_is_undefined() -> None:
    """Two enclosures of one value that have nothing in common enclose nothing."""
    assert undefined(meet(between(1.0, 2.0), between(3.0, 4.0)))


def test_an_undefined_enclosure_leaves_the_other() -> None:
    """It says nothing about the value, so the other one stands."""
    assert ends(meet(NAN, between(3.0, 4.0))) == (3.0, 4.0)


def test_where_takes_element_by_element() -> None:
    """The first where chosen, else the second."""
    taken = where(np.array([True, False]), between(1.0, 2.0), 5.0)
    assert (taken.low.tolist(), taken.high.tolist()) == ([1.0, 5.0], [2.0, 5.0])


# Points and widths


@pytest.mark.parametrize(
    ("value", "middle"),
    [((1.0, 4.0), 2.5), ((-INF, INF), 0.0), ((MOST, MOST), MOST), ((LEAST, LEAST), LEAST)],
)
def test_a_middle(value: tuple[float, float], middle: float) -> None:
    """It lies inside and is finite."""
    assert float(between(*value).middle) == middle


def test_a_width_is_rounded_up() -> None:
    """1 - 1e-20 is less than 1 and rounds to it."""
    assert float(between(1e-20, 1.0).width) == 1.0 + 2**-52


def test_both_ends_are_contained() -> None:
    """Intervals are closed."""
    inside = between(1.0, 2.0).contains(np.array([0.9, 1.0, 2.0, 2.1]))
    assert inside.tolist() == [False, True, True, False]


# Python and NumPy


def test_an_interval_is_neither_true_nor_false() -> None:
    """A comparison with an interval has to be written out."""
    with pytest.raises(TypeError) as caught:
        bool(lift(1.0))
    assert str(caught.value) == "an interval is neither true nor false; compare its ends"


@pytest.mark.parametrize(
    ("combine", "wanted"),
    [
        (lambda array, ranged: array + ranged, ([2.0, 3.0], [3.0, 4.0])),
        (lambda array, ranged: array - ranged, ([-1.0, 0.0], [0.0, 1.0])),
        (lambda array, ranged: array * ranged, ([1.0, 2.0], [2.0, 4.0])),
        (lambda array, ranged: array / ranged, ([0.5, 1.0], [1.0, 2.0])),
        (lambda array, ranged: array**ranged, ([1.0, 2.0], [1.0, 4.0])),
    ],
    ids=["+", "-", "*", "/", "**"],
)
def test_an_array_leaves_the_operation_to_the_interval(
    combine: Callable[[Any, Interval], Interval], wanted: tuple[list[float], list[float]]
) -> None:
    """[1, 2] combined with 1 to 2 is an interval of two elements."""
    combined = combine(np.array([1.0, 2.0]), between(1.0, 2.0))
    assert combined.low == pytest.approx(np.array(wanted[0]), rel=1e-14, abs=1e-14)
    assert combined.high == pytest.approx(np.array(wanted[1]), rel=1e-14)


def test_what_is_no_number_is_refused() -> None:
    """Python says so, since neither side knows the other."""
    with pytest.raises(TypeError) as caught:
        lift(1.0) + "1 V"  # type: ignore[operator]
    assert str(caught.value) == "unsupported operand type(s) for +: 'Interval' and 'str'"


def test_the_words_of_the_formula_language() -> None:
    """Every function a formula may call on intervals stands in the table."""
    assert sorted(FUNCTIONS) == [
        "abs",
        "agreeing",
        "exp",
        "falling",
        "if_positive",
        "knee",
        "log",
        "max",
        "min",
        "sqrt",
    ]
