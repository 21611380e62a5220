"""The formula language: what it reads, what it gives, what it refuses and where."""

import math

import pytest

from reglint.errors import FormulaError
from reglint.formula import evaluate, names_in, parse, parse_inequality, with_names, with_numbers
from reglint.functions import REAL

SIN = (
    "there is no function sin; there are abs, agreeing, exp, falling, if_positive, knee, log,"
    " max, min, off_preferred, sqrt"
)


def value(text: str, **names: float) -> float:
    """Return the value of a formula; a double underline stands for a dot."""
    known = {name.replace("__", "."): number for name, number in names.items()}
    return float(evaluate(parse(text).root, known.__getitem__, REAL))  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("1 + 2 * 3", 7.0),
        ("(1 + 2) * 3", 9.0),
        ("2 ** 3 ** 2", 512.0),
        ("-2 ** 2", -4.0),
        ("25 degC", 25.0),
        ("4.7 kohm / 1 mA", 4.7e6),
        ("20 %", 0.2),
        ("100 ppm/K * 10 K", 1e-3),
        ("2 V/4", 0.5),
        (".5", 0.5),
        ("max(1, 2, min(5, 4))", 4.0),
        ("sqrt(16) + abs(-3) + log(exp(2))", 9.0),
        ("knee(2, 0)", 1.0),
        ("knee(2, 1)", math.log(2.0)),
        ("falling(60, 50, 70)", 0.5),
        ("falling(50, 50, 50)", 1.0),
        ("falling(50.1, 50, 50)", 0.0),
        ("if_positive(0, 1, 2)", 2.0),
    ],
)
def test_a_formula_has_its_value(text: str, expected: float) -> None:
    """Operators, units and functions give what arithmetic says."""
    assert value(text) == pytest.approx(expected, rel=1e-15)


def test_a_dotted_name_is_looked_up_whole() -> None:
    """A dotted name is one name, never an attribute of another."""
    assert value("zener.current * 2", zener__current=3.0) == 6.0
    assert [name.name for name in names_in(parse("a.b.c + d").root)] == ["a.b.c", "d"]


def test_names_can_be_exchanged() -> None:
    """Exchanging names keeps everything else of the text."""
    assert with_names(parse("a + 2 * b.c"), str.upper).text == "A + 2 * B.C"


def test_numbers_are_put_in_for_a_calculator() -> None:
    """A negative number, and a base of a power, come in brackets."""
    numbers = {"a": "-1 V", "b": "2 V"}
    assert with_numbers(parse("a + b ** 2 - b"), numbers.__getitem__) == "(-1 V) + (2 V) ** 2 - 2 V"


def test_an_inequality_has_two_sides() -> None:
    """A rule's demand is a value, a sign and a limit."""
    demand = parse_inequality("a.b >= 2 V")
    assert (demand.value.text.strip(), demand.sign, demand.limit.text.strip()) == (
        "a.b",
        ">=",
        "2 V",
    )


@pytest.mark.parametrize("text", ["a", "a >= b >= c", "a == b", "a > b"])
def test_a_rule_needs_exactly_one_comparison(text: str) -> None:
    """Anything but one ``>=`` or ``<=`` is refused."""
    with pytest.raises(FormulaError):
        parse_inequality(text)


@pytest.mark.parametrize(
    ("text", "offset", "message"),
    [
        ("1 +", 3, "this is not a formula; something is missing or left over"),
        ("a + 1.2.3", 4, "this is not a number such as 4.7 or 25 degC"),
        ("a & b", 2, "'&' has no place in a formula"),
        ("2 + 'x'", 4, '"\'" has no place in a formula'),
        ("a # b", 2, "'#' has no place in a formula"),
        (
            "1 + sin(a)",
            4,
            SIN,
        ),
    ],
)
def test_a_mistake_is_told_with_its_column(text: str, offset: int, message: str) -> None:
    """What is not in the language is refused where it stands."""
    with pytest.raises(FormulaError) as refused:
        parse(text)
    assert (refused.value.offset, str(refused.value)) == (offset, message)
