"""What formulas may call, in each kind of number: closed forms, ends and what has no value."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
import pytest

from reglint import gradient, interval
from reglint.functions import DIMENSIONS, GRADIENTS, INTERVALS, NAMES, REAL, Arithmetic
from reglint.gradient import Gradient, variable
from reglint.interval import hull

NAN, INF = float("nan"), float("inf")


def real(name: str, *arguments: float) -> float:
    """Return what a function comes to for numbers."""
    with np.errstate(all="ignore"):
        return float(REAL.functions[name](*map(np.float64, arguments)))


def test_every_kind_of_number_knows_the_same_words() -> None:
    """A formula that can be read can be checked, evaluated, enclosed and proven."""
    kinds: tuple[Arithmetic[Any], ...] = (REAL, DIMENSIONS, INTERVALS, GRADIENTS)
    assert [each.functions.keys() for each in kinds] == [NAMES] * 4


@pytest.mark.parametrize(
    ("exponent", "wanted"),
    [(0.0, 3.0), (0.5, 2.0), (1.0, math.log(4.0)), (2.0, 0.75), (1.0 + 1e-12, math.log(4.0))],
)
def test_a_knee_is_the_integral_of_a_power(exponent: float, wanted: float) -> None:
    """From 1 to 4 of u**-m: x - 1, 2 (sqrt(x) - 1), ln(x), 1 - 1/x; near m = 1 no digit is lost."""
    assert real("knee", 4.0, exponent) == pytest.approx(wanted, rel=1e-11)


@pytest.mark.parametrize(
    ("value", "share"), [(25.0, 1.0), (50.0, 1.0), (112.5, 0.5), (175.0, 0.0), (200.0, 0.0)]
)
def test_a_rating_falls_linearly(value: float, share: float) -> None:
    """Full to 50 degrees, half in the middle and nothing from 175 on."""
    assert real("falling", value, 50.0, 175.0) == share


@pytest.mark.parametrize(("value", "share"), [(69.0, 1.0), (70.0, 1.0), (70.1, 0.0)])
def test_a_rating_without_a_slope_is_a_step(value: float, share: float) -> None:
    """Where nothing is allowed above 70 degrees, all is allowed at 70."""
    assert real("falling", value, 70.0, 70.0) == share


@pytest.mark.parametrize(
    ("name", "arguments"),
    [
        ("falling", (NAN, 50.0, 175.0)),
        ("falling", (20.0, NAN, 175.0)),
        ("falling", (20.0, 50.0, NAN)),
        ("if_positive", (NAN, 1.0, 2.0)),
        ("min", (1.0, NAN)),
        ("max", (NAN, 1.0)),
    ],
)
def test_what_depends_on_no_number_is_none(name: str, arguments: tuple[float, ...]) -> None:
    """A figure that is not known never turns into one that is."""
    assert np.isnan(real(name, *arguments))


@pytest.mark.parametrize(("test", "wanted"), [(1e-300, 1.0), (0.0, 2.0), (-1.0, 2.0)])
def test_zero_is_not_positive(test: float, wanted: float) -> None:
    """A diode without current is off."""
    assert real("if_positive", test, 1.0, 2.0) == wanted


@pytest.mark.parametrize(
    ("slack", "scale", "margin"),
    [(1.0, 4.0, 0.25), (-1.0, -4.0, -0.25), (0.0, 0.0, 0.0), (-1.0, 0.0, -INF), (1.0, NAN, NAN)],
)
def test_a_margin_is_a_fraction_of_a_magnitude(slack: float, scale: float, margin: float) -> None:
    """A limit of zero is just kept without slack, and broken without bound below it."""
    with np.errstate(all="ignore"):
        found = REAL.margin(np.array(slack), np.array(scale))
    assert float(found) == pytest.approx(margin, nan_ok=True)


def test_only_a_single_number_has_a_distance_to_a_series() -> None:
    """4.7 is a preferred value of IEC 60063; of a range nothing is said."""
    distance: Callable[..., Any] = INTERVALS.functions["off_preferred"]
    assert float(distance(4.7, 0.05).low) == 0.0
    assert np.isnan(distance(hull(4.6, 4.8), 0.05).low)


@dataclass(frozen=True)
class Square:
    """The equation p - x**2 = 0, searched from 0 to 10."""

    p: Any
    start: Any
    end: Any

    def residual(self, trial: Any) -> Any:
        """Return what falls through zero at the root of p."""
        return self.p - trial * trial

    def ends(self) -> tuple[Any, Any, Any]:
        """Return start, end, and the value where the search is off."""
        return self.start, self.end, self.start

    def mapped(self, _arithmetic: Any, convert: Callable[[Any], Any]) -> "Square":
        """Return the equation in another kind of number."""
        return Square(convert(self.p), convert(self.start), convert(self.end))


def square(p: Gradient) -> Square:
    """Return the equation of a square that varies."""
    return Square(p, gradient.raised(0.0), gradient.raised(10.0))


def test_a_root_is_enclosed_with_its_slope() -> None:
    """The root of p - x**2 is sqrt(p) and rises by 1/(2 sqrt(p)): at 9 by 1/6, from 3."""
    root = GRADIENTS.solve(square(variable(0, 1, interval.lift(9.0))))
    assert root.partials is not None
    assert float(root.value.low) <= 3.0 <= float(root.value.high)
    assert float(root.value.width) < 1e-9
    slopes = float(root.partials.low[0]), float(root.partials.high[0])
    assert slopes == pytest.approx((1.0 / 6.0, 1.0 / 6.0), rel=1e-9)


def test_the_slope_of_a_root_over_a_range_holds_those_of_all() -> None:
    """For p from 4 to 9 the root goes from 2 to 3, and its slope from 1/4 down to 1/6."""
    root = GRADIENTS.solve(square(variable(0, 1, hull(4.0, 9.0))))
    assert root.partials is not None
    assert 1.5 < float(root.value.low) <= 2.0
    assert 3.0 <= float(root.value.high) < 4.0
    assert 0.1 < float(root.partials.low[0]) <= 1.0 / 6.0
    assert 0.25 <= float(root.partials.high[0]) < 0.4
