"""Scales: places on paper and round values."""

import pytest

from reglint.pictures.scale import Scale


def test_a_linear_scale_lays_its_ends_and_middle() -> None:
    """The ends of the range lie at the ends on paper, the middle in the middle."""
    scale = Scale(10.0, 20.0, 100.0, 300.0)
    assert [scale(10.0), scale(15.0), scale(20.0)] == [100.0, 200.0, 300.0]


def test_a_logarithmic_scale_lays_decades_evenly() -> None:
    """Ten times the value is the same way on paper."""
    scale = Scale(1.0, 100.0, 0.0, 200.0, logarithmic=True)
    assert [scale(1.0), scale(10.0), scale(100.0)] == pytest.approx([0.0, 100.0, 200.0])


@pytest.mark.parametrize(("value", "place"), [(1e9, 20.0), (-1e9, -10.0)])
def test_a_value_far_away_stays_near_the_paper(value: float, place: float) -> None:
    """A curve that leaves the paper gives no enormous coordinates."""
    assert Scale(0.0, 1.0, 0.0, 10.0)(value) == place


def test_nothing_is_no_place_on_a_logarithmic_scale() -> None:
    """Zero lies beyond the low end, as far as is shown."""
    assert Scale(1.0, 10.0, 0.0, 10.0, logarithmic=True)(0.0) == -10.0


@pytest.mark.parametrize(
    ("low", "high", "ticks"),
    [
        (0.0, 13.2, (0.0, 2.0, 4.0, 6.0, 8.0, 10.0, 12.0)),
        (0.0, 0.0291, (0.0, 0.005, 0.01, 0.015, 0.02, 0.025)),
        (-1.0, 1.0, (-1.0, -0.5, 0.0, 0.5, 1.0)),
        (7.6, 16.4, (8.0, 10.0, 12.0, 14.0, 16.0)),
    ],
)
def test_linear_ticks_are_round(low: float, high: float, ticks: tuple[float, ...]) -> None:
    """Steps are 1, 2 or 5 times a power of ten, and free of binary dirt."""
    assert Scale(low, high, 0.0, 1.0).ticks() == ticks


def test_logarithmic_ticks_are_one_two_five() -> None:
    """Each decade has three marks."""
    scale = Scale(47.0, 4700.0, 0.0, 1.0, logarithmic=True)
    assert scale.ticks() == (50.0, 100.0, 200.0, 500.0, 1000.0, 2000.0)
