"""Published cases of dependency: what naive intervals lose, and gradients keep.

Two resistors in parallel: the interval thread of the mathgroup list, Sep-Oct 2003.
Shared tolerance: the Maxima manual's resistors with 1 % of their own and 2 % shared.
"""

import numpy as np
import pytest

from reglint.gradient import Gradient, variable
from reglint.interval import Interval


def span(low: float, high: float) -> Interval:
    """Return one interval."""
    return Interval(np.array([low]), np.array([high]))


def test_naive_parallel_resistors_are_too_wide() -> None:
    """r1 r2 / (r1 + r2) over [10, 20] and [20, 40] is [10/3, 80/3] by intervals alone."""
    one, two = span(10.0, 20.0), span(20.0, 40.0)
    found = one * two / (one + two)
    assert (found.low[0], found.high[0]) == pytest.approx((10.0 / 3.0, 80.0 / 3.0))


def test_partials_of_parallel_resistors_show_their_directions() -> None:
    """Both partials are positive, so the ends are at corners: the true [20/3, 40/3]."""
    one, two = variable(0, 2, span(10.0, 20.0)), variable(1, 2, span(20.0, 40.0))
    once = 1.0 / (1.0 / one + 1.0 / two)
    assert once.partials is not None
    assert (once.partials.low > 0.0).all()
    ends = [10.0 * 20.0 / 30.0, 20.0 * 40.0 / 60.0]
    assert (once.value.low[0], once.value.high[0]) == pytest.approx((20.0 / 3.0, 40.0 / 3.0))
    assert ends == pytest.approx([20.0 / 3.0, 40.0 / 3.0])


def test_a_shared_tolerance_is_one_variable() -> None:
    """R1 + R2 is 2910.6 to 3090.6 ohm, R1 / R2 0.490099 to 0.510101: the shared part cancels."""
    own = [variable(index, 3, span(0.99, 1.01)) for index in (0, 1)]
    shared = variable(2, 3, span(0.98, 1.02))
    r1, r2 = 1000.0 * own[0] * shared, 2000.0 * own[1] * shared
    total = r1 + r2
    assert (total.value.low[0], total.value.high[0]) == pytest.approx((2910.6, 3090.6))
    ratio = own[0] * 1000.0 / (own[1] * 2000.0)
    assert (ratio.value.low[0], ratio.value.high[0]) == pytest.approx(
        (0.490099, 0.510101), abs=1e-6
    )
    entangled: Gradient = r1 / r2
    # Naively the shared tolerance counts twice; its partial straddles zero and tells so.
    assert entangled.value.low[0] < 0.4901
    assert entangled.partials is not None
    assert entangled.partials.low[2, 0] < 0.0 < entangled.partials.high[2, 0]
