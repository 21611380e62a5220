"""The search for the worst point of functions whose least value is known."""

from collections.abc import Callable

import numpy as np
import pytest

from reglint.box import Box
from reglint.worstcase import Measure, Worst, at, better_of, improves, least, narrowed, search

Swept = Callable[..., Box]
Formula = Callable[[str], Measure]

NAN = float("nan")


def test_the_worst_corner_is_found(swept: Swept, measure: Formula) -> None:
    """Of xy on [-1, 2] x [-3, 5] the least is -6, at (2, -3)."""
    found = search(swept(x=(-1.0, 2.0), y=(-3.0, 5.0)), measure("x * y"))
    assert (found.value.tolist(), found.point.tolist()) == ([-6.0], [[2.0, -3.0]])


def test_the_worst_point_inside_is_climbed_to(swept: Swept, measure: Formula) -> None:
    """The least of (x - 0.3)^2 + (y - 0.6)^2 is 0; every corner has more."""
    bowl = measure("(x - 0.3) ** 2 + (y - 0.6) ** 2")
    found = search(swept(x=(0.0, 1.0), y=(0.0, 1.0)), bowl)
    assert found.value == pytest.approx([0.0], abs=1e-12)
    assert found.point == pytest.approx(np.array([[0.3, 0.6]]), abs=1e-6)


def test_a_slanted_valley_is_followed_round_by_round(swept: Swept, measure: Formula) -> None:
    """Along neither axis alone is the least of (x + y - 1)^2 + (x - y)^2/4 reached, at 1/2."""
    valley = measure("(x + y - 1) ** 2 + (x - y) ** 2 / 4")
    found = search(swept(x=(-1.0, 2.0), y=(-1.0, 2.0)), valley)
    assert found.value == pytest.approx([0.0], abs=1e-3)


def test_a_box_of_one_point_is_measured_there(swept: Swept, measure: Formula) -> None:
    """A spec without ranges has one value, beside one that has ranges."""
    found = search(swept(x=[(2.0, 2.0), (1.0, 3.0)]), measure("x * x"))
    assert (found.value.tolist(), found.point.tolist()) == ([4.0, 1.0], [[2.0], [1.0]])


def test_a_corner_without_a_value_is_the_worst(swept: Swept, measure: Formula) -> None:
    """The root of x has no value below 0: that is told, not the 0 that is the least number."""
    found = search(swept(x=(-1.0, 4.0)), measure("sqrt(x)"))
    assert np.isnan(found.value[0])
    assert -1.0 <= found.point[0, 0] < 0.0


def test_of_points_one_without_value_comes_before_the_least() -> None:
    """Of 3, NaN and 1 it is NaN, with its point; of 3, 2 and 1 it is 1."""
    points = np.array([[[10.0], [20.0], [30.0]], [[40.0], [50.0], [60.0]]])
    found = least(points, np.array([[3.0, NAN, 1.0], [3.0, 2.0, 1.0]]))
    assert np.isnan(found.value[0])
    assert (found.value[1], found.point.tolist()) == (1.0, [[20.0], [60.0]])


def test_the_lesser_of_two_findings_is_chosen_spec_by_spec() -> None:
    """Each with its own point; of equals the first."""
    one = Worst(np.array([1.0, 5.0, 2.0]), np.array([[0.0], [0.0], [0.0]]))
    other = Worst(np.array([3.0, 4.0, 2.0]), np.array([[9.0], [9.0], [9.0]]))
    found = better_of(one, other)
    assert (found.value.tolist(), found.point.tolist()) == ([1.0, 4.0, 2.0], [[0.0], [9.0], [0.0]])


@pytest.mark.parametrize(
    ("new", "old", "better"),
    [
        (0.9, 1.0, True),
        (1.0, 1.0, False),
        (1.0 - 1e-11, 1.0, False),
        (1.0 - 1e-9, 1.0, True),
        (1e9 - 1e-9, 1e9, False),
        (-1e-9, 0.0, True),
        (NAN, 1.0, False),
    ],
)
def test_a_gain_is_more_than_rounding(new: float, old: float, *, better: bool) -> None:
    """A ten-thousand-millionth of a number up to 1, and as much of 1 above it."""
    assert bool(improves(np.array(new), np.array(old))) is better


def test_a_sure_direction_fixes_a_name_at_its_better_end(swept: Swept) -> None:
    """What rises or is flat goes to its low end, what falls to its high end; the rest stays."""
    box = swept(rises=(1.0, 2.0), falls=(1.0, 2.0), flat=(1.0, 2.0), turns=(1.0, 2.0))
    low, high = np.array([[0.0, -2.0, 0.0, -1.0]]), np.array([[3.0, 0.0, 0.0, 1.0]])
    found = narrowed(box, (low, high))
    assert found.low.tolist() == [[1.0, 2.0, 1.0, 1.0]]
    assert found.high.tolist() == [[1.0, 2.0, 1.0, 2.0]]


def test_a_direction_that_is_not_known_fixes_nothing(swept: Swept) -> None:
    """Partials that are not numbers leave the range as it is."""
    found = narrowed(swept(x=(1.0, 2.0)), (np.array([[NAN]]), np.array([[NAN]])))
    assert (found.low.tolist(), found.high.tolist()) == ([[1.0]], [[2.0]])


def test_a_constant_measure_has_its_value_at_every_point(swept: Swept, measure: Formula) -> None:
    """A scalar fills the shape of specs and points."""
    points = np.zeros((1, 3, 1))
    assert at(swept(x=(0.0, 1.0)), measure("7"), points).tolist() == [[7.0, 7.0, 7.0]]
