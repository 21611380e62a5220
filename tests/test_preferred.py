"""Preferred values: which series is meant, and how far a value is off."""

import math

import pytest

from reglint.preferred import nearest, off_preferred, series_for, values


@pytest.mark.parametrize(
    ("tolerance", "series"),
    [
        (0.2, "E6"),
        (0.1, "E12"),
        (0.05, "E24"),
        (0.02, "E48"),
        (0.01, "E96"),
        (0.001, "E192"),
        (0.03, "E48"),
        (0.5, "E6"),
    ],
)
def test_a_tolerance_has_its_series(tolerance: float, series: str) -> None:
    """Between two tolerances the finer series is meant."""
    assert series_for(tolerance) == series


def test_values_are_free_of_binary_dirt() -> None:
    """Values over a decade end are the decimal numbers of the standard."""
    assert values("E6", 100.0, 1500.0) == (100.0, 150.0, 220.0, 330.0, 470.0, 680.0, 1000.0, 1500.0)


def test_the_nearest_value_may_lie_in_the_next_decade() -> None:
    """990 is nearest to 1000, not to 910."""
    assert nearest(990.0, "E24") == 1000.0


def test_a_distance_is_relative_to_the_preferred_value() -> None:
    """480 ohm at 5 % is 10/470 off; without a tolerance there is no answer."""
    assert off_preferred(480.0, 0.05) == pytest.approx(10.0 / 470.0)
    assert math.isnan(off_preferred(480.0, 0.0))
