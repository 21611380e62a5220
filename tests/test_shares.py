"""Who ate the margin: shares of known sums, each figure brought back alone."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from reglint.box import Box
from reglint.judge import Case
from reglint.kind import Condition
from reglint.shares import shares
from reglint.spec import Term
from reglint.worstcase import Measure

Formula = Callable[[str], Measure]
Shared = list[tuple[str, float]]


@pytest.fixture
def shared(case: Case, measure: Formula) -> Callable[..., Shared]:
    """Return a maker of shares: of a measure, at a point, of terms by name."""

    def make(text: str, point: list[float], **swept: tuple[Term, ...]) -> Shared:
        low, nominal, high = (
            np.array([[sum(getattr(t, end) for t in terms) for terms in swept.values()]])
            for end in ("low", "nominal", "high")
        )
        spec = replace(case.spec, swept=swept)
        free = Condition("free", "Nothing is fixed.")
        box = Box(case.circuit, free, [spec], tuple(swept), low, nominal, high, {})
        (found,) = shares(box, measure(text), np.array([point]))
        return [(each.path, each.share) for each in found]

    return make


def test_shares_of_a_sum_are_the_tolerances(shared: Callable[..., Shared]) -> None:
    """Of 10 - x - y at its worst x lost 3 and y lost 1: three quarters and one."""
    x, y = Term("x", 1.0, 2.0, 5.0), Term("y", 0.0, 1.0, 2.0)
    assert shared("10 - x - y", [5.0, 2.0], x=(x,), y=(y,)) == [("x", 0.75), ("y", 0.25)]


def test_the_largest_share_comes_first(shared: Callable[..., Shared]) -> None:
    """In whatever order the names stand; equals by their names."""
    x, y = Term("x", 0.0, 1.0, 2.0), Term("y", 0.0, 2.0, 4.0)
    z = Term("w", 0.0, 1.0, 2.0)
    found = shared("-x - y - z", [2.0, 4.0, 2.0], x=(x,), y=(y,), z=(z,))
    assert found == [("y", 0.5), ("w", 0.25), ("x", 0.25)]


def test_the_terms_of_one_name_share_what_it_ate(shared: Callable[..., Shared]) -> None:
    """A resistance of 90 to 110 that drifts by 5 more: 10 and 5 of 15."""
    stated, drift = Term("r", 90.0, 100.0, 110.0), Term("r.tempco", -5.0, 0.0, 5.0)
    found = shared("-r", [115.0], r=(stated, drift))
    assert dict(found) == pytest.approx({"r": 2.0 / 3.0, "r.tempco": 1.0 / 3.0})


def test_a_point_between_the_ends_counts_from_where_it_is(shared: Callable[..., Shared]) -> None:
    """At 3 of [0, 4] x is 1 from its nominal 2, and y at its end is 1 from its own."""
    x, y = Term("x", 0.0, 2.0, 4.0), Term("y", 0.0, 1.0, 2.0)
    assert shared("-x - y", [3.0, 2.0], x=(x,), y=(y,)) == [("x", 0.5), ("y", 0.5)]


def test_what_would_only_cost_margin_ate_none(shared: Callable[..., Shared]) -> None:
    """The second stands at its better end: to bring it back gains nothing."""
    x, y = Term("x", 0.0, 1.0, 2.0), Term("y", 0.0, 1.0, 2.0)
    assert shared("-x - y", [2.0, 0.0], x=(x,), y=(y,)) == [("x", 1.0)]


def test_a_share_below_half_a_percent_is_not_listed(shared: Callable[..., Shared]) -> None:
    """Of 1000 and 4 the smaller is left out, and the larger is not made up to the whole."""
    x, y = Term("x", 0.0, 0.0, 1000.0), Term("y", 0.0, 0.0, 4.0)
    found = shared("-x - y", [1000.0, 4.0], x=(x,), y=(y,))
    assert dict(found) == pytest.approx({"x": 1000.0 / 1004.0})


def test_where_no_figure_alone_helps_there_are_no_shares(shared: Callable[..., Shared]) -> None:
    """Of the larger of two neither alone brings anything back."""
    x, y = Term("x", 0.0, 0.0, 1.0), Term("y", 0.0, 0.0, 1.0)
    assert shared("-max(x, y)", [1.0, 1.0], x=(x,), y=(y,)) == []


def test_a_margin_without_bound_has_no_shares(shared: Callable[..., Shared]) -> None:
    """What comes back from minus infinity is no number to share."""
    x = Term("x", 0.0, 1.0, 2.0)
    assert shared("-1 / x", [0.0], x=(x,)) == []
