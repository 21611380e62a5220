"""Dimensions: what joins, what does not, and how a unit is spelled."""

import pytest

from reglint.dimension import AMPERE, FUNCTIONS, KELVIN, ONE, VOLT, WATT, Dimension
from reglint.errors import DimensionError


@pytest.mark.parametrize(
    ("dimension", "text"),
    [
        (VOLT, "V"),
        (VOLT / AMPERE, "ohm"),
        (KELVIN / WATT, "K/W"),
        (VOLT / KELVIN, "V/K"),
        (ONE / KELVIN, "1/K"),
        (VOLT**2 * KELVIN, "V²·K"),
        (ONE, "1"),
    ],
)
def test_a_dimension_is_spelled_as_an_engineer_would(dimension: Dimension, text: str) -> None:
    """A name, a quotient of names, or a product of powers."""
    assert str(dimension) == text


def test_only_like_dimensions_add() -> None:
    """A sum of a voltage and a current is refused, with both named."""
    with pytest.raises(DimensionError) as refused:
        VOLT + AMPERE
    assert str(refused.value) == "V and A cannot be added, subtracted or compared"


def test_a_power_needs_a_constant_or_plain_numbers() -> None:
    """A voltage to the power of a quantity has no dimension."""
    assert VOLT**2 == VOLT * VOLT
    assert ONE**ONE == ONE
    with pytest.raises(DimensionError):
        VOLT**ONE


@pytest.mark.parametrize(
    ("name", "arguments", "message"),
    [
        ("log", (VOLT,), "a plain number is wanted here, not one in V"),
        ("falling", (KELVIN, KELVIN), "falling takes 3, not 2"),
        ("max", (), "max takes one or more, not 0"),
        ("min", (VOLT, AMPERE), "V and A cannot be added, subtracted or compared"),
    ],
)
def test_a_function_checks_its_arguments(
    name: str, arguments: tuple[Dimension, ...], message: str
) -> None:
    """Wrong counts and wrong dimensions are told apart."""
    with pytest.raises(DimensionError) as refused:
        FUNCTIONS[name](*arguments)
    assert str(refused.value) == message
