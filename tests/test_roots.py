"""Roots of falling functions: as numbers, by the closed form, and enclosed."""

from collections.abc import Callable
from typing import Any, TypeAlias

import numpy as np
import pytest
from scipy.special import lambertw

from reglint import interval
from reglint.interval import Interval, hull, lift
from reglint.roots import enclosed_root, falling_root

Array: TypeAlias = np.ndarray[Any, np.dtype[np.float64]]

NAN = float("nan")


def number(*values: float) -> Array:
    """Return an array of numbers."""
    return np.array(values)


def found(residual: Callable[[Array], Array], low: float, high: float) -> list[float]:
    """Return the root between two numbers, or -1 where the search is off."""
    with np.errstate(all="ignore"):
        root = falling_root(residual, number(low), number(high), number(-1.0))
    return [float(each) for each in root]


def enclosed(
    residual: Callable[[Interval], Interval],
    guess: float,
    low: float = 0.0,
    high: float = 10.0,
    below: float = -1.0,
) -> tuple[float, float]:
    """Return the ends of an enclosed root."""
    with np.errstate(all="ignore"):
        root = enclosed_root(
            residual, number(guess), *(lift(number(e)) for e in (low, high, below))
        )
    return float(root.low[0]), float(root.high[0])


@pytest.mark.parametrize("wanted", [1e-12, 1e-3, 1.0, 9.99])
def test_a_root_of_any_size_is_found_to_the_last_digits(wanted: float) -> None:
    """The cube root of a cube, in [0, 10]."""
    assert found(lambda x: wanted**3 - x**3, 0.0, 10.0) == pytest.approx([wanted], rel=1e-13)


def test_the_current_of_a_resistor_and_a_junction_is_lamberts() -> None:
    """Where 5 - 100 i = ln(1000 i), i = W(100000 exp(5) / 1000) / 100, by scipy's function W."""
    with np.errstate(all="ignore"):
        (root,) = found(lambda i: 5.0 - 100.0 * i - np.log(1e3 * i), 1e-12, 0.05)
    assert root == pytest.approx(float(lambertw(0.1 * np.exp(5.0)).real) / 100.0, rel=1e-13)


@pytest.mark.parametrize(
    ("at_low", "root"),
    [(-1.0, -1.0), (0.0, -1.0), (2.0, 2.0), (10.0, 10.0), (11.0, NAN), (NAN, NAN)],
)
def test_a_root_lies_between_the_ends_or_is_none(at_low: float, root: float) -> None:
    """Not positive at the start it is off; still positive at the end, or no number, it is none."""
    assert found(lambda x: at_low - x, 0.0, 10.0) == pytest.approx([root], nan_ok=True)


def test_equations_side_by_side_do_not_disturb_each_other() -> None:
    """One that is off, one that has no root and one of 4, of one array."""
    tops, zero = number(-1.0, 99.0, 4.0), number(0.0, 0.0, 0.0)
    root = falling_root(lambda x: tops - x, zero, zero + 10.0, zero)
    assert root == pytest.approx([0.0, NAN, 4.0], nan_ok=True)


def test_a_root_at_a_point_is_enclosed_closely() -> None:
    """A guess good to eleven digits gives an enclosure as close."""
    low, high = enclosed(lambda x: 2.0 - x, 2.0)
    assert 2.0 * (1.0 - 2e-11) < low <= 2.0 <= high < 2.0 * (1.0 + 2e-11)


def test_all_roots_of_a_family_are_enclosed() -> None:
    """Of a - x with a in [2, 3] the roots are [2, 3]; the points tried lie some per cent apart."""
    low, high = enclosed(lambda x: hull(2.0, 3.0) - x, 2.5)
    assert 1.8 < low <= 2.0
    assert 3.0 <= high < 3.2


def test_a_wrong_guess_costs_width_but_no_root() -> None:
    """From 9 the root 2 is enclosed still."""
    low, high = enclosed(lambda x: 2.0 - x, 9.0)
    assert low <= 2.0 <= high


@pytest.mark.parametrize("guess", [-2.0, 0.0, NAN])
def test_a_root_that_is_not_positive_is_enclosed_by_the_whole_search(guess: float) -> None:
    """Points are tried as multiples of the guess, which close to a root below zero do nothing."""
    low, high = enclosed(lambda x: -2.0 - x, guess, low=-4.0, high=0.0)
    assert -4.0 <= low <= -2.0 <= high <= 0.0


@pytest.mark.parametrize(("least", "most"), [(-3.0, -2.0), (-2.0, 0.0)])
def test_a_family_that_is_off_has_the_value_for_it(least: float, most: float) -> None:
    """Not positive at the start there is nothing to search."""
    assert enclosed(lambda x: hull(least, most) - x, 5.0) == (-1.0, -1.0)


def test_a_family_that_may_be_off_keeps_both() -> None:
    """Of a - x with a in [-1, 2] some are off, at -1, and some have a root up to 2."""
    low, high = enclosed(lambda x: hull(-1.0, 2.0) - x, 0.5)
    assert low == -1.0
    assert 2.0 <= high < 3.0


def test_what_never_falls_to_zero_proves_nothing() -> None:
    """1/(1 + x) is positive for every x."""
    assert np.isnan(enclosed(lambda x: 1.0 / (1.0 + x), 5.0)).all()


def test_a_logarithm_of_the_whole_search_is_no_obstacle() -> None:
    """1 - ln(x) is unbounded at 0, and its root is e."""
    low, high = enclosed(lambda x: 1.0 - interval.log(x), np.e, low=0.0)
    assert low <= np.e <= high
    assert high - low < 1e-9
