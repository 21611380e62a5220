"""Laws of interval arithmetic: inclusion, isotonicity, subdistributivity."""

from collections.abc import Callable

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from reglint import interval
from reglint.interval import Interval

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
    assert holds(outer, interval.lift(inner.middle)) or not np.isfinite(inner.middle)


@given(spans(), spans(), spans())
def test_products_are_subdistributive(a: Interval, b: Interval, c: Interval) -> None:
    """The product a (b + c) lies in a b + a c, to a few roundings."""
    left, right = a * (b + c), a * b + a * c
    room = 1e-15 * (abs(right.low) + abs(right.high)) + 1e-9
    assert right.low - room <= left.low
    assert left.high <= right.high + room
