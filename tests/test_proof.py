"""The proof of a worst case: bounds that nothing in the box is below, of known functions."""

from collections.abc import Callable

import numpy as np
import pytest

from reglint.box import Box
from reglint.proof import TOLERANCE, Care, look, prove
from reglint.worstcase import Measure

Swept = Callable[..., Box]
Formula = Callable[[str], Measure]

INF = float("inf")
#: Two resistors in parallel. With r1 in [10, 20] and r2 in [20, 40] this form encloses only
#: [10/3, 80/3]; the range is [20/3, 40/3] (mathgroup, September 2003).
PARALLEL = "r1 * r2 / (r1 + r2)"


def test_a_product_is_worst_inside_its_range(swept: Swept, measure: Formula) -> None:
    """On [0.2, 0.9] the product x(1 - x) has its maximum 1/4 at 1/2, at no corner."""
    found = prove(swept(x=(0.2, 0.9)), measure("-(x * (1 - x))"), 0.0, Care.SHOWN)
    assert found.value == pytest.approx([-0.25], abs=1e-12)
    assert found.point == pytest.approx(np.array([[0.5]]), abs=1e-6)
    assert -0.25 - TOLERANCE <= found.bound[0] <= -0.25


@pytest.mark.parametrize(
    ("text", "least", "point"),
    [(PARALLEL, 20.0 / 3.0, [10.0, 20.0]), (f"-({PARALLEL})", -40.0 / 3.0, [20.0, 40.0])],
)
def test_parallel_resistors_are_bounded_by_their_corners(
    text: str, least: float, point: list[float], swept: Swept, measure: Formula
) -> None:
    """The bound comes close to the corner, though each resistor stands in the formula twice."""
    found = prove(swept(r1=(10.0, 20.0), r2=(20.0, 40.0)), measure(text), INF, Care.SHOWN)
    assert found.value == pytest.approx([least], rel=1e-14)
    assert least - TOLERANCE * abs(least) <= found.bound[0] <= least
    assert found.point[0].tolist() == point


def test_a_first_look_fixes_what_has_a_sure_direction(swept: Swept, measure: Formula) -> None:
    """Of x - y + z*z the first name goes to its least, the second to its greatest; z turns."""
    box = swept(x=(1.0, 2.0), y=(3.0, 5.0), z=(-1.0, 1.0))
    (seen,) = look(box, [measure("x - y + z * z")], [0.0])
    assert (seen.box.low.tolist(), seen.box.high.tolist()) == ([[1, 5, -1]], [[1, 5, 1]])
    assert -5.0 - 1e-9 <= seen.bound[0] <= -4.0


def test_what_is_only_searched_has_no_bound(swept: Swept, measure: Formula) -> None:
    """The worst point found proves nothing."""
    found = prove(swept(x=(1.0, 2.0)), measure("x"), 0.0, Care.SEARCHED)
    assert (found.value.tolist(), found.bound.tolist()) == ([1.0], [-INF])


def test_a_proof_goes_no_further_than_is_enough(swept: Swept, measure: Formula) -> None:
    """1/2 - x(1 - x) is at least 1/4: that it is more than 1/10 decides, and no more is shown."""
    found = prove(swept(x=(0.2, 0.9)), measure("0.5 - x * (1 - x)"), 0.1, Care.DECIDED)
    assert found.value == pytest.approx([0.25], abs=1e-12)
    assert 0.1 <= found.bound[0] < 0.25 - TOLERANCE


def test_a_notch_between_the_corners_is_met(swept: Swept, measure: Formula) -> None:
    """The measure is 1 everywhere but within 0.002 of 0.3, where it falls to -1."""
    notch = measure("1 - 2 * falling(abs(x - 0.3), 0.001, 0.002)")
    found = prove(swept(x=(0.0, 1.0)), notch, 0.0)
    assert found.value.tolist() == [-1.0]
    assert found.point == pytest.approx(np.array([[0.3]]), abs=0.001)


def test_a_proof_that_would_not_end_is_given_up(swept: Swept, measure: Formula) -> None:
    """That xy - yx is zero no halving encloses exactly: its bound stays below zero."""
    found = prove(swept(x=(0.0, 1.0), y=(0.0, 1.0)), measure("x * y - y * x"), 0.0)
    assert found.value.tolist() == [0.0]
    assert -0.2 < found.bound[0] < 0.0


def test_a_measure_without_value_at_a_corner_is_not_proven(swept: Swept, measure: Formula) -> None:
    """0/0 has no value: no number is told, and nothing passes by it."""
    found = prove(swept(x=(0.0, 1.0)), measure("x / x"), 0.0)
    assert np.isnan(found.value[0])
    assert not found.bound[0] >= 0.0


def test_specs_of_one_batch_have_bounds_of_their_own(swept: Swept, measure: Formula) -> None:
    """The same product on [0.2, 0.9] and on [0.6, 0.9], where its maximum 0.24 is an end."""
    box = swept(x=[(0.2, 0.9), (0.6, 0.9)])
    found = prove(box, measure("-(x * (1 - x))"), 0.0, Care.SHOWN)
    assert found.value == pytest.approx([-0.25, -0.24], abs=1e-12)
    assert found.bound == pytest.approx([-0.25, -0.24], abs=TOLERANCE)
