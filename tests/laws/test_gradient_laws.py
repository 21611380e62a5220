"""Laws of gradients: differences of values lie in the partials times the steps.

First for chosen formulas and numbers, then for any formula and its values to 60 digits, so
that not even a rounding may leave an enclosure.
"""

import operator
from collections.abc import Callable, Sequence
from typing import Any

import mpmath
import numpy as np
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from reglint.formula import evaluate, parse
from reglint.functions import GRADIENTS, REAL, Arithmetic
from reglint.gradient import Gradient, implicit, variable
from reglint.interval import Interval, hull, lift

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


# Any formula, to 60 digits

CONTEXT = mpmath.MPContext()
CONTEXT.dps = 60
#: Roundings at 60 digits stay far below this, and doubles' far above.
CRUMB = 1e-40
#: Beyond these a formula is left alone: towers of exponentials.
FAR = 1e200


class NoValueError(Exception):
    """The formula has no value at this point, or one too large to write down."""


class Exact:
    """A number to 60 digits that refuses what no real number answers."""

    def __init__(self, number: Any) -> None:
        """Keep the number."""
        self.number = CONTEXT.mpf(number)
        if not abs(self.number) < FAR:
            raise NoValueError

    def __neg__(self) -> "Exact":
        """Return the negative."""
        return Exact(-self.number)

    def __add__(self, other: "Exact") -> "Exact":
        """Return the sum."""
        return Exact(self.number + other.number)

    def __sub__(self, other: "Exact") -> "Exact":
        """Return the difference."""
        return Exact(self.number - other.number)

    def __mul__(self, other: "Exact") -> "Exact":
        """Return the product."""
        return Exact(self.number * other.number)

    def __truediv__(self, other: "Exact") -> "Exact":
        """Return the quotient; nothing is divided by zero."""
        return Exact(self.number / positive(abs(other.number)) * CONTEXT.sign(other.number))

    def __pow__(self, exponent: "Exact | float") -> "Exact":
        """Return the power; only whole ones of what is not positive."""
        power = exponent.number if isinstance(exponent, Exact) else CONTEXT.mpf(exponent)
        if power != CONTEXT.floor(power):
            positive(self.number)
        elif power < 0:
            positive(abs(self.number))
        return Exact(self.number**power)


def positive(number: Any) -> Any:
    """Return what is positive."""
    if number <= 0:
        raise NoValueError
    return number


def exact_exp(value: Exact) -> Exact:
    """Return the exponential of what leaves it below the limit."""
    if abs(value.number) > 400:
        raise NoValueError
    return Exact(CONTEXT.exp(value.number))


def exact_knee(ratio: Exact, exponent: Exact) -> Exact:
    """Return the textbook's quotient."""
    power = 1 - exponent.number
    logs = CONTEXT.log(positive(ratio.number))
    if abs(power * logs) > 400:
        raise NoValueError
    return Exact((CONTEXT.exp(power * logs) - 1) / power if power else logs)


def exact_falling(value: Exact, full_until: Exact, zero_at: Exact) -> Exact:
    """Return the fall, case by case."""
    x, start, end = value.number, full_until.number, zero_at.number
    return Exact(1 if x <= start else 0 if x >= end else (end - x) / (end - start))


def chosen(pick: Callable[..., Any]) -> Callable[..., Exact]:
    """Return a function of numbers as one of these."""
    return lambda *values: Exact(pick(*(each.number for each in values)))


EXACT: Arithmetic[Any] = Arithmetic(
    constant=lambda value, _dimension: Exact(value),
    functions={
        "min": chosen(min),
        "max": chosen(max),
        "abs": chosen(abs),
        "sqrt": chosen(lambda x: CONTEXT.sqrt(positive(x))),
        "exp": exact_exp,
        "log": chosen(lambda x: CONTEXT.log(positive(x))),
        "knee": exact_knee,
        "falling": exact_falling,
        "if_positive": chosen(lambda test, yes, no: yes if test > 0 else no),
    },
    solve=operator.methodcaller("never"),
    margin=operator.truediv,
)

CONSTANTS = st.sampled_from(["0", "0.1", "0.5", "1", "1.7", "2", "3"])
EXPONENTS = st.sampled_from(["0", "1", "2", "3", "0.5", "1.3"])
NUMBERS = st.one_of(ENDS, st.integers(-2, 3).map(float))
UNARY = ["(-{})", "abs({})", "sqrt({})", "exp({})", "log({})", "({}) ** -1", "({}) ** -0.7"]
BINARY = ["({} + {})", "({} - {})", "({} * {})", "({} / {})", "min({}, {})", "max({}, {})",
          "({}) ** ({})", "knee({}, {})"]  # fmt: skip
TERNARY = ["falling({}, {}, {})", "if_positive({}, {}, {})", "max({}, {}, {})"]


def calls(forms: list[str], *arguments: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    """Draw one of the forms with its arguments filled in."""
    return st.builds(str.format, st.sampled_from(forms), *arguments)


ANY_FORMULA = st.recursive(
    st.one_of(st.sampled_from("xy"), st.sampled_from("xy"), CONSTANTS),
    lambda inner: st.one_of(
        calls(UNARY, inner),
        calls(["({}) ** {}"], inner, EXPONENTS),
        calls(BINARY, inner, inner),
        calls(TERNARY, inner, inner, inner),
    ),
    max_leaves=5,
)


def exactly(formula: str, point: Sequence[float]) -> Any:
    """Return a formula's value at a point; a point without one is not looked at."""
    names = dict(zip("xy", map(Exact, point), strict=True))
    try:
        return evaluate(parse(formula).root, names.__getitem__, EXACT).number
    except NoValueError:
        assume(False)  # noqa: FBT003 -- the way hypothesis is told


def enclosed(formula: str, box: Sequence[Sequence[float]]) -> Gradient:
    """Return a formula's gradient over a box."""
    names: dict[str, Any] = {n: variable(i, 2, hull(*box[i])) for i, n in enumerate("xy")}
    return gradient_of(evaluate(parse(formula).root, names.__getitem__, GRADIENTS))


def gradient_of(found: Gradient) -> Gradient:
    """Return what is known: an undefined value or slope proves nothing and is not looked at."""
    assume(not np.isnan(found.value.low))
    assume(found.partials is None or not np.isnan(found.partials.low).any())
    return found


def reach(found: Gradient, steps: Sequence[Interval]) -> Interval:
    """Return the partials times the steps."""
    total = lift(0.0)
    if found.partials is not None:
        for index, step in enumerate(steps):
            total = total + Interval(found.partials.low[index], found.partials.high[index]) * step
    return total


def between(one: float, other: float) -> st.SearchStrategy[float]:
    """Draw a number between two, or one of them."""
    low, high = min(one, other), max(one, other)
    return st.one_of(st.floats(low, high), st.sampled_from([low, high]))


def holds(outer: Interval, value: Any) -> bool:
    """Compare to 60 digits."""
    crumb = CRUMB * (1 + abs(value))
    return bool(float(outer.low) - crumb <= value <= float(outer.high) + crumb)


ANYTHING = settings(
    deadline=None,
    max_examples=400,
    suppress_health_check=[HealthCheck.filter_too_much, HealthCheck.too_slow],
)


@ANYTHING
@given(ANY_FORMULA, st.tuples(*[NUMBERS] * 4), st.data())
def test_any_formula_s_values_and_differences_are_enclosed(
    formula: str, ends: tuple[float, ...], data: st.DataObject
) -> None:
    """At any two points of any box, every value and difference, without any room."""
    box = ends[:2], ends[2:]
    one, other = ([data.draw(between(*side)) for side in box] for _ in range(2))
    values = exactly(formula, one), exactly(formula, other)
    found = enclosed(formula, box)
    assert holds(found.value, values[0])
    steps = [lift(p) - q for p, q in zip(one, other, strict=True)]
    crumb = CRUMB * (1 + abs(values[0]) + abs(values[1]))
    total = reach(found, steps)
    assert float(total.low) - crumb <= values[0] - values[1] <= float(total.high) + crumb


@ANYTHING
@given(ANY_FORMULA, NUMBERS, NUMBERS, st.sampled_from([0, 1]))
def test_a_partial_encloses_the_derivative(formula: str, x: float, y: float, index: int) -> None:
    """The slope of a step of 1e-20 in a small box; at a kink one between those of both sides."""
    step = CONTEXT.mpf(1e-20)
    ahead, behind = ([CONTEXT.mpf(x), CONTEXT.mpf(y)] for _ in range(2))
    ahead[index] += step
    behind[index] -= step
    derivative = (exactly(formula, ahead) - exactly(formula, behind)) / (2 * step)
    found = enclosed(formula, [(x - 1e-9, x + 1e-9), (y - 1e-9, y + 1e-9)])
    slope = reach(found, [lift(float(index == 0)), lift(float(index == 1))])
    room = CONTEXT.mpf(1e-12) * (1 + abs(derivative))
    assert float(slope.low) - room <= derivative <= float(slope.high) + room


def cubic(root: Any, p: Any, q: Any) -> Any:
    """Return what falls through zero at the root: it has no closed form we need."""
    return p - root * (q + root * root)


def cubic_root(p: float, q: float) -> Any:
    """Return the root to 60 digits."""
    return CONTEXT.findroot(lambda x: cubic(x, CONTEXT.mpf(p), CONTEXT.mpf(q)), (0, 3), "anderson")


@settings(deadline=None)
@given(st.tuples(*[st.floats(0.1, 4.0)] * 4), st.data())
def test_an_implicit_function_s_differences_are_enclosed(
    ends: tuple[float, ...], data: st.DataObject
) -> None:
    """The root of p = q x + x**3 rises with p and falls with q; its partials enclose how far."""
    box = sorted(ends[:2]), sorted(ends[2:])
    least, most = cubic_root(box[0][0], box[1][1]), cubic_root(box[0][1], box[1][0])
    root = hull(float(least) - 1e-12, float(most) + 1e-12)
    p, q = (variable(index, 2, hull(*side)) for index, side in enumerate(box))
    moved = cubic(Gradient(root), p, q)
    slope = cubic(variable(0, 1, root), p.value, q.value)
    found = implicit(root, moved, slope, off=lift(1.0))
    points = [[data.draw(between(*side)) for side in box] for _ in range(2)]
    difference = cubic_root(*points[0]) - cubic_root(*points[1])
    steps = [lift(one) - other for one, other in zip(*points, strict=True)]
    assert holds(reach(found, steps), difference)
