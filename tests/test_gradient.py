"""Gradients: slopes of every operation, kinks, jumps, unbounded slopes, implicit functions."""

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from reglint import gradient, interval
from reglint.gradient import FUNCTIONS, Gradient, implicit, raised, variable
from reglint.interval import Interval, hull, lift

INF = math.inf
#: The largest double (IEEE 754 binary64).
MOST = 1.7976931348623157e308

Ends = tuple[float, float]


def over(low: float, high: float) -> Gradient:
    """Return the only variable, over a range."""
    return variable(0, 1, hull(low, high))


def ranges(lows: list[float], highs: list[float]) -> Interval:
    """Return several intervals."""
    return Interval(np.array(lows), np.array(highs))


def slope(result: Gradient, index: int = 0) -> Ends:
    """Return the ends of one partial."""
    assert result.partials is not None
    return float(result.partials.low[index]), float(result.partials.high[index])


def value(result: Gradient) -> Ends:
    """Return the ends of the value."""
    return float(result.value.low), float(result.value.high)


def close(wanted: Ends) -> Any:
    """Compare up to the outward roundings."""
    return pytest.approx(wanted, rel=1e-13, abs=1e-13)


@pytest.mark.parametrize(
    ("function", "wanted"),
    [
        (lambda x: x + 3.0, (1.0, 1.0)),
        (lambda x: 3.0 + x, (1.0, 1.0)),
        (lambda x: x - 3.0, (1.0, 1.0)),
        (lambda x: 3.0 - x, (-1.0, -1.0)),
        (lambda x: -x, (-1.0, -1.0)),
        (lambda x: x * 3.0, (3.0, 3.0)),
        (lambda x: 3.0 * x, (3.0, 3.0)),
        (lambda x: x * x, (4.0, 8.0)),
        (lambda x: x / 4.0, (0.25, 0.25)),
        (lambda x: 4.0 / x, (-1.0, -0.25)),
        (lambda x: x**2, (4.0, 8.0)),
        (lambda x: x**1, (1.0, 1.0)),
        (lambda x: x**0, (0.0, 0.0)),
        (lambda x: x**-1, (-0.25, -0.0625)),
        (lambda x: x**0.5, (0.25, 0.5 / math.sqrt(2.0))),
        (lambda x: 2.0**x, (4.0 * math.log(2.0), 16.0 * math.log(2.0))),
        (gradient.exp, (math.exp(2.0), math.exp(4.0))),
        (gradient.log, (0.25, 0.5)),
        (gradient.sqrt, (0.25, 0.5 / math.sqrt(2.0))),
        (gradient.absolute, (1.0, 1.0)),
        (lambda x: gradient.absolute(-x), (1.0, 1.0)),
        (lambda x: gradient.knee(x, 0.0), (1.0, 1.0)),
        (lambda x: gradient.knee(x, 1.0), (0.25, 0.5)),
        (lambda x: gradient.knee(x, 2.0), (0.0625, 0.25)),
        (lambda x: gradient.falling(x, 1.0, 6.0), (-0.2, -0.2)),
        (lambda x: gradient.margin(x - 4.0, -4.0), (0.25, 0.25)),
    ],
)
def test_a_slope_over_2_to_4(function: Callable[[Gradient], Gradient], wanted: Ends) -> None:
    """As a table of derivatives has it, at both ends of the range."""
    assert slope(function(over(2.0, 4.0))) == close(wanted)


@pytest.mark.parametrize(
    ("function", "wanted"),
    [
        (lambda x: x * x, (4.0, 16.0)),
        (lambda x: x**2, (4.0, 16.0)),
        (lambda x: 4.0 / x, (1.0, 2.0)),
        (gradient.log, (math.log(2.0), math.log(4.0))),
        (gradient.absolute, (2.0, 4.0)),
        (lambda x: gradient.maximum(x, 3.0), (3.0, 4.0)),
        (lambda x: gradient.minimum(x, 3.0, 2.5), (2.0, 2.5)),
        (lambda x: gradient.knee(x, 2.0), (0.5, 0.75)),
        (lambda x: gradient.falling(x, 1.0, 6.0), (0.4, 0.8)),
        (lambda x: gradient.if_positive(x, 1.0, 2.0), (1.0, 1.0)),
    ],
)
def test_a_value_over_2_to_4(function: Callable[[Gradient], Gradient], wanted: Ends) -> None:
    """It is the one intervals give."""
    assert value(function(over(2.0, 4.0))) == close(wanted)


# Several variables


def pair(one: Ends, other: Ends) -> tuple[Gradient, Gradient]:
    """Return two variables over their ranges."""
    return variable(0, 2, hull(*one)), variable(1, 2, hull(*other))


@pytest.mark.parametrize(
    ("join", "wanted"),
    [
        (lambda x, y: x + y, ((1.0, 1.0), (1.0, 1.0))),
        (lambda x, y: x - y, ((1.0, 1.0), (-1.0, -1.0))),
        (lambda x, y: x * y, ((4.0, 5.0), (1.0, 2.0))),
        (lambda x, y: x / y, ((0.2, 0.25), (-0.125, -0.04))),
        (lambda x, y: y**x, ((4.0 * math.log(4.0), 25.0 * math.log(5.0)), (1.0, 10.0))),
        (gradient.minimum, ((1.0, 1.0), (0.0, 0.0))),
        (gradient.maximum, ((0.0, 0.0), (1.0, 1.0))),
    ],
)
def test_partials_of_1_to_2_and_4_to_5(
    join: Callable[[Gradient, Gradient], Gradient], wanted: tuple[Ends, Ends]
) -> None:
    """Each variable has its own partial."""
    result = join(*pair((1.0, 2.0), (4.0, 5.0)))
    assert (slope(result, 0), slope(result, 1)) == (close(wanted[0]), close(wanted[1]))


def test_a_constant_has_no_partials() -> None:
    """What depends on no variable says so."""
    assert (raised(2.0) * lift(3.0) + 1.0).partials is None


def test_a_variable_that_does_not_matter_keeps_a_partial_of_zero() -> None:
    """Zero times an unbounded slope is zero: y does not occur in the root of x."""
    x, y = pair((0.0, 4.0), (4.0, 5.0))
    assert slope(gradient.sqrt(x + 0.0 * y), 1) == (0.0, 0.0)


# Kinks and jumps


@pytest.mark.parametrize(
    ("function", "wanted"),
    [
        (gradient.absolute, (-1.0, 1.0)),
        (lambda x: gradient.minimum(x, 0.0), (0.0, 1.0)),
        (lambda x: gradient.maximum(x, 0.0), (0.0, 1.0)),
        (lambda x: gradient.maximum(x, -2.0 * x), (-2.0, 1.0)),
        (lambda x: gradient.falling(x, 0.0, 4.0), (-0.25, 0.0)),
        (lambda x: gradient.falling(x, -8.0, 0.0), (-0.125, 0.0)),
        (lambda x: gradient.falling(x, 0.0, 0.0), (-INF, 0.0)),
    ],
)
def test_a_kink_holds_the_slopes_of_both_sides(
    function: Callable[[Gradient], Gradient], wanted: Ends
) -> None:
    """Over [-1, 1] both sides are in the box."""
    assert slope(function(over(-1.0, 1.0))) == close(wanted)


@pytest.mark.parametrize(
    ("function", "wanted"),
    [
        (gradient.absolute, (1.0, 1.0)),
        (lambda x: gradient.minimum(x, 0.0), (0.0, 0.0)),
        (lambda x: gradient.maximum(x, 0.0), (1.0, 1.0)),
        (lambda x: gradient.falling(x, -2.0, 0.0), (0.0, 0.0)),
        (lambda x: gradient.falling(x, 0.0, 2.0), (-0.5, -0.5)),
        (lambda x: gradient.falling(x, 1.0, 3.0), (0.0, 0.0)),
    ],
)
def test_a_kink_at_the_edge_holds_one_slope(
    function: Callable[[Gradient], Gradient], wanted: Ends
) -> None:
    """Over [0, 1] only one side is in the box."""
    assert slope(function(over(0.0, 1.0))) == close(wanted)


def test_a_step_at_the_edge_of_the_box_is_seen() -> None:
    """At 70 it is 1 and beside it 0: a box that begins at 70 holds the whole step."""
    assert slope(gradient.falling(over(70.0, 80.0), 70.0, 70.0)) == (-INF, 0.0)


def test_a_step_beyond_the_edge_of_the_box_is_not_seen() -> None:
    """At 70 it still is 1, as everywhere below."""
    assert slope(gradient.falling(over(60.0, 70.0), 70.0, 70.0)) == (0.0, 0.0)


@pytest.mark.parametrize(
    ("function", "wanted"),
    [
        (lambda end: gradient.falling(3.0, end, 6.0), (0.0, 0.25)),
        (lambda end: gradient.falling(1.5, 0.0, end), (0.0, 1.0)),
        (lambda end: gradient.falling(1.0, end, 6.0), (0.0, 0.0)),
        (lambda end: gradient.falling(7.0, 1.0, end), (0.0, 0.0)),
        (lambda end: gradient.falling(2.0, end, 2.0), (0.0, INF)),
    ],
)
def test_a_fall_rises_with_both_its_ends(
    function: Callable[[Gradient], Gradient], wanted: Ends
) -> None:
    """By at most one over its width, of an end in [1, 2]; where it has none, it may jump."""
    assert slope(function(over(1.0, 2.0))) == close(wanted)


def test_an_undecided_choice_may_jump() -> None:
    """Even between equal slopes: 0 and 1 differ at the boundary."""
    assert slope(gradient.if_positive(over(-1.0, 1.0), 1.0, 0.0)) == (-INF, INF)


def test_a_decided_choice_has_the_slope_of_its_branch() -> None:
    """The test does not matter then."""
    x = over(1.0, 2.0)
    surely = gradient.if_positive(x, 3.0 * x, 5.0 * x), gradient.if_positive(-x, 3.0 * x, 5.0 * x)
    assert [slope(each) for each in surely] == [close((3.0, 3.0)), close((5.0, 5.0))]


def test_a_choice_jumps_only_with_what_moves_its_test() -> None:
    """The other variable has the slopes of both branches."""
    x, y = pair((-1.0, 1.0), (1.0, 2.0))
    chosen = gradient.if_positive(x, 3.0 * y, 5.0 * y)
    assert (slope(chosen, 0), slope(chosen, 1)) == ((-INF, INF), close((3.0, 5.0)))


def test_an_undecided_test_that_does_not_move_makes_no_jump() -> None:
    """It is the one or the other branch in the whole box."""
    x = over(1.0, 2.0)
    assert slope(gradient.if_positive(hull(-1.0, 1.0), 3.0 * x, 5.0 * x)) == close((3.0, 5.0))


# Slopes without bound


@pytest.mark.parametrize(
    ("function", "wanted"),
    [
        (gradient.sqrt, (0.25, INF)),
        (gradient.log, (0.25, INF)),
        (lambda x: x**0.5, (0.25, INF)),
        (lambda x: 1.0 / x, (-INF, -0.0625)),
        (lambda x: gradient.knee(x, 2.0), (0.0625, INF)),
    ],
)
def test_a_slope_at_zero_has_no_bound(
    function: Callable[[Gradient], Gradient], wanted: Ends
) -> None:
    """Over [0, 4]."""
    assert slope(function(over(0.0, 4.0))) == close(wanted)


@pytest.mark.parametrize(
    "function", [gradient.sqrt, gradient.log, lambda x: x**0.5, lambda x: gradient.knee(x, 1.0)]
)
def test_a_cut_domain_has_the_slopes_of_what_is_left(
    function: Callable[[Gradient], Gradient],
) -> None:
    """Over [-1, 4] it has those over [0, 4]."""
    assert slope(function(over(-1.0, 4.0))) == slope(function(over(0.0, 4.0)))


def test_a_power_too_large_to_subtract_one_has_no_known_slope() -> None:
    """There is no double one below 2**54: that it is odd, and the slope negative, would be lost."""
    assert np.isnan(slope(over(-1.0, -1.0) ** 2.0**54)).all()


@pytest.mark.parametrize("function", [lambda x: 1.0 / x, lambda x: x**-1, lambda x: x**-3])
def test_across_a_pole_any_slope_is_possible(function: Callable[[Gradient], Gradient]) -> None:
    """From -1 to 1 the reciprocal rises by 2, though it falls on both sides."""
    assert slope(function(over(-1.0, 1.0))) == (-INF, INF)


@pytest.mark.parametrize(
    "function", [gradient.sqrt, gradient.log, lambda x: x**0.5, lambda x: gradient.knee(x, 1.0)]
)
def test_what_is_surely_negative_is_undefined(
    function: Callable[[Gradient], Gradient],
) -> None:
    """As for intervals: a value that proves nothing."""
    assert np.isnan(value(function(over(-2.0, -1.0)))).all()


@pytest.mark.parametrize(
    ("ratio", "exponent", "wanted"),
    [
        # By hand: -ln(x)**2/2 at m = 1; 1 - x + x ln x (m = 0), negative; both at x = 2.
        (2.0, (1.0, 1.0), (-0.5 * math.log(2.0) ** 2, -0.5 * math.log(2.0) ** 2)),
        (2.0, (0.0, 1.0), (-(math.log(2.0) ** 2), -0.5 * math.log(2.0) ** 2)),
        (0.5, (0.0, 1.0), (-0.5 * math.log(2.0) ** 2, -0.25 * math.log(2.0) ** 2)),
    ],
)
def test_a_knee_falls_with_its_exponent(ratio: float, exponent: Ends, wanted: Ends) -> None:
    """Its slope lies between -(ln x)**2/2 and that times x**(1-m)."""
    assert slope(gradient.knee(ratio, over(*exponent))) == close(wanted)


def test_a_table_may_jump_with_what_varies() -> None:
    """A function that knows only single numbers has no slope to speak of."""
    rounded = gradient.thin_only(interval.thin_only(np.rint))
    x, y = pair((1.0, 1.0), (1.0, 2.0))
    result = rounded(x) + 0.0 * y
    assert (slope(result, 0), slope(result, 1)) == ((-INF, INF), (0.0, 0.0))


# Two forms of one value


def test_an_agreeing_form_draws_value_and_slope_closer() -> None:
    """Both x - x*x and x*(1 - x) enclose the same, with the slope 1 - 2x."""
    x = over(1.0, 2.0)
    closer = gradient.agreeing(1.0, x * (1.0 - x), x - x * x)
    assert (value(closer), slope(closer)) == (close((-2.0, 0.0)), close((-3.0, -1.0)))


def test_a_form_that_may_not_agree_is_left_out() -> None:
    """Where the test is undecided the value keeps its own partials."""
    x = over(1.0, 2.0)
    assert slope(gradient.agreeing(over(-1.0, 1.0), 5.0 * x, 3.0 * x)) == close((3.0, 3.0))


# Implicit functions


def rooted(by_x: Ends, off: Ends = (1.0, 1.0)) -> Gradient:
    """Return the root in [1, 2] of an f that changes by 2 to 4 with p, and so with x."""
    moved = Gradient(hull(-1.0, 1.0), ranges([2.0], [4.0]))
    along = Gradient(hull(-1.0, 1.0), ranges([by_x[0]], [by_x[1]]))
    return implicit(hull(1.0, 2.0), moved, along, off=hull(*off))


def test_a_root_moves_by_minus_the_slopes_quotient() -> None:
    """dx/dp = -f_p/f_x, of f_p in [2, 4] and f_x in [-2, -1]."""
    result = rooted((-2.0, -1.0))
    assert (value(result), slope(result)) == ((1.0, 2.0), close((1.0, 4.0)))


@pytest.mark.parametrize("by_x", [(-1.0, 1.0), (-1.0, 0.0), (0.0, 0.0), (0.0, 1.0)])
def test_a_root_may_go_anywhere_where_f_may_stand_still(by_x: Ends) -> None:
    """The theorem needs a slope that is not zero."""
    assert slope(rooted(by_x)) == (-INF, INF)


def test_a_root_of_what_x_does_not_move_may_go_anywhere() -> None:
    """Without any slope by x there is no implicit function."""
    moved = Gradient(hull(-1.0, 1.0), ranges([2.0, 0.0], [4.0, 0.0]))
    free = implicit(hull(1.0, 2.0), moved, raised(0.0), off=lift(1.0))
    assert (slope(free, 0), slope(free, 1)) == ((-INF, INF), (0.0, 0.0))


def test_a_root_stays_put_where_the_search_is_off() -> None:
    """Where f is not positive at the start there is no root to move."""
    assert slope(rooted((-2.0, -1.0), off=(-1.0, 0.0))) == (0.0, 0.0)


def test_a_root_may_do_either_where_that_is_undecided() -> None:
    """It stays put or moves by 1 to 4."""
    assert slope(rooted((-2.0, -1.0), off=(-1.0, 1.0))) == close((0.0, 4.0))


def test_a_root_of_constants_is_constant() -> None:
    """No variable moves it."""
    along = Gradient(lift(0.0), ranges([-2.0], [-1.0]))
    assert implicit(hull(1.0, 2.0), raised(0.0), along, off=lift(1.0)).partials is None


# Shapes


def test_a_batch_gives_each_box_its_own_slopes() -> None:
    """Three boxes, one variable: partials of shape (1, 3)."""
    squared = variable(0, 1, ranges([0.0, 1.0, 2.0], [1.0, 2.0, 3.0])) ** 2
    assert squared.partials is not None
    assert squared.partials.low == pytest.approx(np.array([[0.0, 2.0, 4.0]]), abs=1e-13)
    assert squared.partials.high == pytest.approx(np.array([[2.0, 4.0, 6.0]]), abs=1e-13)


def test_a_single_variable_broadcasts_over_a_batch() -> None:
    """Two variables without shape and two boxes: no partial is taken for a box."""
    x, y = pair((2.0, 2.0), (3.0, 3.0))
    product = (x + 10.0 * y) * np.array([1.0, 100.0])
    assert product.partials is not None
    assert product.partials.low == pytest.approx(
        np.array([[1.0, 100.0], [10.0, 1000.0]]), rel=1e-13
    )


def test_a_choice_broadcasts_over_a_batch() -> None:
    """The same for what is chosen element by element."""
    x, y = pair((2.0, 2.0), (3.0, 3.0))
    least = gradient.minimum(x + 10.0 * y, np.array([0.0, 100.0]))
    assert least.partials is not None
    assert least.partials.low == pytest.approx(np.array([[0.0, 1.0], [0.0, 10.0]]), rel=1e-13)


# Python


def test_a_gradient_is_neither_true_nor_false() -> None:
    """A comparison with a gradient has to be written out."""
    with pytest.raises(TypeError) as caught:
        bool(raised(1.0))
    assert (
        str(caught.value) == "a gradient is neither true nor false; compare the ends of its value"
    )


@pytest.mark.parametrize("left", [hull(3.0, 4.0), np.array(3.5)], ids=["interval", "array"])
def test_other_numbers_leave_the_operation_to_the_gradient(left: Interval | Any) -> None:
    """An interval or array on the left has no partials of its own."""
    moved = (
        left - over(1.0, 2.0),
        left / over(1.0, 1.0),
        left * over(1.0, 2.0),
        left + over(1.0, 2.0),
    )
    assert slope(moved[0]) == (-1.0, -1.0)
    assert [slope(each)[0] < 0.0 for each in moved] == [True, True, False, False]


def test_the_words_are_those_of_intervals() -> None:
    """A formula that intervals can evaluate, gradients can."""
    assert sorted(FUNCTIONS) == sorted(interval.FUNCTIONS)
