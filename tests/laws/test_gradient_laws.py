"""Laws of gradients: differences of values lie in the partials times the steps."""

from collections.abc import Sequence
from typing import Any

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from reglint.formula import evaluate, parse
from reglint.functions import GRADIENTS, REAL
from reglint.gradient import variable
from reglint.interval import Interval

FORMULAS = [
    "x * y - y / (1 + x * x)",
    "sqrt(x + 5) * exp(y / 4) - log(x + 6)",
    "max(x, y, 0) - min(x * y, 1)",
    "abs(x - y) * (x + 3) ** 2",
    "(x + 6) ** 1.3 / (y + 7) ** 0.4",
    "knee(x + 5.5, 1.2) * y",
    "falling(x, -1, 2) * y",
    "agreeing(1, x + y, y + x)",
    "if_positive(x + 10, x * y, y)",
]
UNIT = st.floats(0.0, 1.0)
ENDS = st.floats(-4.0, 4.0)


def number(formula: str, point: Sequence[float]) -> float:
    """Return a formula's value at a point."""
    names = dict(zip("xy", map(np.float64, point), strict=True))
    return float(evaluate(parse(formula).root, names.__getitem__, REAL))  # type: ignore[arg-type]


@settings(deadline=None)
@given(st.sampled_from(FORMULAS), st.tuples(*[ENDS] * 4), st.tuples(*[UNIT] * 4))
def test_a_difference_lies_in_partials_times_steps(
    formula: str, ends: tuple[float, ...], shares: tuple[float, ...]
) -> None:
    """f(p) - f(q) is enclosed by the sum of partials over the box times p - q."""
    box = [sorted(ends[:2]), sorted(ends[2:])]
    spans = [Interval(np.array([low]), np.array([high])) for low, high in box]
    names: dict[str, Any] = {n: variable(i, 2, spans[i]) for i, n in enumerate("xy")}
    with np.errstate(all="ignore"):
        found = evaluate(parse(formula).root, names.__getitem__, GRADIENTS)
    points = [
        [low + share * (high - low) for (low, high), share in zip(box, pair, strict=True)]
        for pair in (shares[:2], shares[2:])
    ]
    values = [number(formula, point) for point in points]
    assert found.partials is not None
    for value in values:
        assert found.value.low[0] <= value + 1e-12 * abs(value)
        assert value - 1e-12 * abs(value) <= found.value.high[0]
    steps = [p - q for p, q in zip(*points, strict=True)]
    reach = [
        sorted((float(found.partials.low[i, 0]) * s, float(found.partials.high[i, 0]) * s))
        for i, s in enumerate(steps)
        if s
    ]
    room = 1e-9 * (1.0 + max(map(abs, values)))
    difference = values[0] - values[1]
    assert sum(low for low, _ in reach) - room <= difference <= sum(h for _, h in reach) + room


@settings(deadline=None)
@given(st.sampled_from(FORMULAS), st.tuples(ENDS, ENDS), st.sampled_from((0, 1)))
def test_at_a_point_a_partial_is_the_slope_of_a_small_step(
    formula: str, point: tuple[float, float], index: int
) -> None:
    """Over a tiny box the partials enclose a central difference, and hardly more."""
    step = 1e-4
    spans = [Interval(np.array([p - step]), np.array([p + step])) for p in point]
    names: dict[str, Any] = {n: variable(i, 2, spans[i]) for i, n in enumerate("xy")}
    with np.errstate(all="ignore"):
        found = evaluate(parse(formula).root, names.__getitem__, GRADIENTS)
    ahead, behind = list(point), list(point)
    ahead[index] += step
    behind[index] -= step
    slope = (number(formula, ahead) - number(formula, behind)) / (2.0 * step)
    assert found.partials is not None
    low, high = found.partials.low[index, 0], found.partials.high[index, 0]
    room = 1e-6 * (1.0 + abs(slope))
    assert low - room <= slope <= high + room
