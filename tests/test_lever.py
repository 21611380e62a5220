"""Levers: figures that move in few digits and are stated as a spec states them."""

import pytest

from reglint.lever import Lever
from reglint.spec import Term

LOAD = Lever("loads.probe.current", "A", 0.008, 0.0, Term("loads.probe.current", 0.0, 0.004, 0.008))
RATING = Lever("zener.power_rating", "W", 0.5, 5.0)


@pytest.mark.parametrize(
    ("lever", "value", "rounded"),
    [
        (LOAD, 0.0054321, 0.00543),
        (LOAD, 0.0, 0.0),
        (RATING, 0.54321, 0.544),
        (RATING, 0.544, 0.544),
        (RATING, 4.9999, 5.0),
    ],
)
def test_a_figure_is_rounded_away_from_what_is_stated(
    lever: Lever, value: float, rounded: float
) -> None:
    """Three digits that ask for no less than was found."""
    assert lever.rounded(value) == pytest.approx(rounded, rel=1e-12)


@pytest.mark.parametrize(
    ("lever", "value", "text"),
    [
        (LOAD, 0.006, "0.004 A +0.002/-0.004 A"),
        (LOAD, 0.003, "0.003 A +0.0/-0.003 A"),
        (
            Lever("ambient", "degC", -10.0, 60.0, Term("ambient", -10.0, 25.0, 60.0)),
            0.0,
            "25.0 degC +35.0/-25.0 K",
        ),
        (RATING, 0.6, "0.6 W"),
    ],
)
def test_an_end_moves_and_the_rest_of_a_range_stays(lever: Lever, value: float, text: str) -> None:
    """The nominal value is dragged along only where it would be outside."""
    assert lever.text(value) == text
