"""Interval arithmetic against mpmath's interval context and exact fractions.

mpmath (https://mpmath.org) computes its intervals at any precision; 53 bits here.
"""

import operator
from collections.abc import Callable
from fractions import Fraction
from typing import Any

import mpmath
import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from reglint import interval
from reglint.interval import Interval

COUNT = 300
RANDOM = np.random.default_rng(7)


def drawn(low: float = -10.0, high: float = 10.0) -> Interval:
    """Return random intervals, some thin, some with an end at zero."""
    ends = np.sort(RANDOM.uniform(low, high, (2, COUNT)), axis=0)
    ends[1, ::7] = ends[0, ::7]
    ends[0, 3::11] = np.where(ends[1, 3::11] >= 0.0, 0.0, ends[0, 3::11])
    return Interval(np.maximum(ends[0], low), ends[1])


def rows(value: Interval) -> list[tuple[float, float]]:
    """Return the intervals one by one."""
    return list(zip(value.low.tolist(), value.high.tolist(), strict=True))


@pytest.mark.parametrize("sign", ["+", "-", "*", "/"])
def test_exact_results_lie_inside_and_close(sign: str) -> None:
    """The exact rational ends lie inside ours, and ours within a few units of them."""
    one, other = drawn(), drawn(0.1, 10.0) if sign == "/" else drawn()
    operations: dict[str, Callable[[object, object], object]] = {
        "+": lambda a, b: a + b,  # type: ignore[operator]
        "-": lambda a, b: a - b,  # type: ignore[operator]
        "*": lambda a, b: a * b,  # type: ignore[operator]
        "/": lambda a, b: a / b,  # type: ignore[operator]
    }
    found = operations[sign](one, other)
    assert isinstance(found, Interval)
    for (a, b), (c, d), (low, high) in zip(rows(one), rows(other), rows(found), strict=True):
        exact = [operations[sign](Fraction(x), Fraction(y)) for x in (a, b) for y in (c, d)]
        least, most = min(exact), max(exact)  # type: ignore[type-var]
        assert Fraction(low) <= least  # type: ignore[operator]
        assert Fraction(high) >= most  # type: ignore[operator]
        slack = 1e-15 * max(abs(low), abs(high), 1e-300) + 1e-15 * max(
            abs(a), abs(b), abs(c), abs(d)
        )
        assert least - Fraction(low) <= slack  # type: ignore[operator]
        assert Fraction(high) - most <= slack  # type: ignore[operator]


@pytest.mark.parametrize(
    ("name", "low", "high"), [("exp", -10.0, 10.0), ("log", 0.01, 10.0), ("sqrt", 0.0, 10.0)]
)
def test_functions_enclose_what_mpmath_does(name: str, low: float, high: float) -> None:
    """Evaluated by mpmath with 100 bits, the ends lie inside ours, and ours are close."""
    given = drawn(low, high)
    found = getattr(interval, name)(given)
    with mpmath.workprec(100):
        for (a, b), (least, most) in zip(rows(given), rows(found), strict=True):
            exact = getattr(mpmath, name)(mpmath.mpf(a)), getattr(mpmath, name)(mpmath.mpf(b))
            assert mpmath.mpf(least) <= exact[0] <= exact[1] <= mpmath.mpf(most)
            assert most - float(exact[1]) <= 1e-14 * max(abs(most), 1.0)


@pytest.mark.parametrize("exponent", [2, 3, -1, 0.5, -1.7])
def test_powers_enclose_what_mpmath_s_intervals_do(exponent: float) -> None:
    """Whole powers of any interval, real powers of positive ones."""
    given = drawn(0.1, 10.0) if exponent in (-1, 0.5, -1.7) else drawn()
    found = given**exponent
    for (a, b), (low, high) in zip(rows(given), rows(found), strict=True):
        exact = mpmath.iv.mpf([a, b]) ** mpmath.iv.mpf(exponent) if exponent != 2 else None
        if exact is None:
            squares = sorted((Fraction(a) ** 2, Fraction(b) ** 2))
            least = Fraction(0) if a < 0.0 < b else squares[0]
            assert Fraction(low) <= least <= squares[1] <= Fraction(high)
        else:
            assert low <= float(exact.a) + 1e-13 * abs(float(exact.a))
            assert high >= float(exact.b) - 1e-13 * abs(float(exact.b))


@pytest.mark.parametrize("exponent", [0.0, 0.5, 1.0, 1.12, 2.0])
def test_the_knee_function_is_an_integral(exponent: float) -> None:
    """The enclosure holds mpmath's quadrature of u**-m from 1 to x."""
    for x in (1e-3, 0.2, 0.999, 1.0, 1.5, 40.0):
        found = interval.knee(np.array([x]), np.array([exponent]))
        exact = float(mpmath.quad(lambda u: u ** (-exponent), [1.0, x]))
        assert found.low[0] - 1e-9 * abs(exact) <= exact <= found.high[0] + 1e-9 * abs(exact)


SIGNS = st.sampled_from([-1.0, 0.0, 1.0])
SIZES = st.one_of(st.floats(1e-3, 1e3), st.integers(1, 9).map(float))
SIGNED = st.tuples(SIGNS, SIZES).map(lambda pair: pair[0] * pair[1])
PAIRS = st.tuples(SIGNED, SIGNED).map(sorted)


@pytest.mark.parametrize(
    "join", [operator.add, operator.sub, operator.mul, operator.truediv], ids="+-*/"
)
@settings(deadline=None, max_examples=500)
@given(one=PAIRS, other=PAIRS)
def test_all_cases_of_signs_agree_with_mpmath_s_intervals(
    join: Callable[[Any, Any], Any], one: list[float], other: list[float]
) -> None:
    """Our ends lie at most four units in the last place outside those of mpmath."""
    assume(join is not operator.truediv or other[0] > 0.0 or other[1] < 0.0)
    found = join(interval.hull(*one), interval.hull(*other))
    theirs = join(mpmath.iv.mpf(one), mpmath.iv.mpf(other))
    low, high = float(theirs.a), float(theirs.b)
    assert low - 4.0 * np.spacing(abs(low)) <= found.low <= low
    assert high <= found.high <= high + 4.0 * np.spacing(abs(high))
