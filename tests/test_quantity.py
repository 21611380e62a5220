"""Quantities: what the gate reads, and what it refuses with advice."""

import time

import pytest

from reglint.errors import QuantityError
from reglint.quantity import Range, parse, parse_range, range_of, render, unit


@pytest.mark.parametrize(
    ("text", "wanted", "value"),
    [
        ("4.7 kohm", "ohm", 4700.0),
        ("4.7 k\u03a9", "ohm", 4700.0),
        ("4.7 k\u2126", "ohm", 4700.0),
        ("10 mohm", "ohm", 0.01),
        ("250 mW", "W", 0.25),
        ("100 ppm/K", "1/K", 1e-4),
        ("0.05 %/°C", "1/K", 5e-4),
        ("-10 °C", "degC", -10.0),
        ("−10 degC", "degC", -10.0),
        ("5 %", "1", 0.05),
        ("40", "1", 40.0),
        ("20 dB", "1", 10.0),
        ("20 mV/V", "1", 0.02),
        ("150 K/W", "K/W", 150.0),
        ("150 °C/W", "K/W", 150.0),
        ("6.67 mW/°C", "W/K", 6.67e-3),
        ("1e-3A", "A", 1e-3),
        ("10 \u00b5A", "A", 1e-5),
        ("10 \u03bcA", "A", 1e-5),
        (".5 V", "V", 0.5),
        ("5. V", "V", 5.0),
    ],
)
def test_a_quantity_is_read_in_si(text: str, wanted: str, value: float) -> None:
    """A number with a unit of the wanted kind has its value in SI units, or in °C."""
    assert parse(text, wanted) == pytest.approx(value, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "wanted", "message"),
    [
        ("5", "V", "5 needs a unit, for example 5 V"),
        ("5", "degC", "5 needs a unit, for example 5 °C"),
        ("5,1 V", "V", "5,1 V: a comma is not a decimal point here; write 5.1 V"),
        ("5 A", "V", "5 A is a current; a voltage is wanted here, for example 5 V"),
        ("5 MW", "W", "MW is not our guess to make: write mW or kW"),
        ("4.7 Kohm", "ohm", "the prefix K is written k: kohm"),
        ("nan V", "V", "nan V is not a number; write one, for example 4.7 V"),
        (".inf V", "V", ".inf V is not a number; write one, for example 4.7 V"),
        ("1e999 V", "V", "1e999 V is too large for a number"),
        (
            "200 mkV",
            "V",
            (
                "mkV is not a unit known here; the nearest known one is mV"
                " (known: V, A, W, ohm, F, H, S, Hz, s, K, °C, %, ppm)"
            ),
        ),
        ("1e99999999999999999999 V", "V", "1e99999999999999999999 V is too large for a number"),
        ("25 K", "degC", "25 K: write a temperature in °C and a difference of temperatures in K"),
        ("1.5.2 V", "V", "1.5.2 V is not a quantity; write a number and a unit, for example 4.7 V"),
        ("1_000 V", "V", "1_000 V is not a quantity; write a number and a unit, for example 4.7 V"),
        ("V", "V", "V is not a quantity; write a number and a unit, for example 4.7 V"),
        (
            "5 Volt",
            "V",
            "Volt is not a unit known here (known: V, A, W, ohm, F, H, S, Hz, s, K, °C, %, ppm)",
        ),
    ],
)
def test_anything_else_is_refused_with_advice(text: str, wanted: str, message: str) -> None:
    """What is no such quantity is quoted, with what to write instead."""
    with pytest.raises(QuantityError) as refused:
        parse(text, wanted)
    assert str(refused.value) == message


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("12 V", Range(12.0, 12.0, 12.0)),
        ("12 V ± 0.5 V", Range(11.5, 12.0, 12.5)),
        ("12 V +- 0.5 V", Range(11.5, 12.0, 12.5)),
        ("12 V +/- 500 mV", Range(11.5, 12.0, 12.5)),
        ("10 V ± 10 %", Range(9.0, 10.0, 11.0)),
        ("10 V +10/-20 %", Range(8.0, 10.0, 11.0)),
        ("10 V +10 %/-20 %", Range(8.0, 10.0, 11.0)),
        ("10 V +1 V/-2 V", Range(8.0, 10.0, 11.0)),
    ],
)
def test_a_range_is_read_in_all_its_forms(text: str, expected: Range) -> None:
    """Symmetric and uneven tolerances, relative and absolute."""
    found = parse_range(text, "V")
    assert (found.min, found.nom, found.max) == pytest.approx(
        (expected.min, expected.nom, expected.max)
    )


def test_a_temperature_has_a_tolerance_in_kelvin() -> None:
    """A difference of temperatures is in K or °C."""
    assert parse_range("25 °C ± 5 K", "degC") == Range(20.0, 25.0, 30.0)


@pytest.mark.parametrize("text", ["12 V ± -5 %", "12 V ± +5 %"])
def test_a_tolerance_has_no_sign(text: str) -> None:
    """A signed tolerance is refused."""
    with pytest.raises(QuantityError, match="a tolerance is written without a sign"):
        parse_range(text, "V")


def test_a_range_runs_from_min_over_nom_to_max() -> None:
    """Ends out of order are quoted."""
    with pytest.raises(QuantityError) as refused:
        range_of(5.0, 6.0, 4.0, "V")
    assert (
        str(refused.value)
        == "a range runs from min over nom to max, but here min 5 V, nom 6 V, max 4 V"
    )


def test_a_nominal_value_not_stated_is_the_middle() -> None:
    """Without nom the middle stands in."""
    assert range_of(1.0, None, 4.0, "V") == Range(1.0, 2.5, 4.0)


@pytest.mark.parametrize(
    ("value", "wanted", "text"),
    [
        (4700.0, "ohm", "4.7 kohm"),
        (0.00187, "A", "1.87 mA"),
        (25.0, "degC", "25 °C"),
        (0.0015, "V/K", "1.5 mV/K"),
        (1e-4, "1/K", "100 ppm/K"),
        (0.05, "1", "0.05"),
        (170.0, "K/W", "170 K/W"),
        (0.0, "V", "0 V"),
        (float("inf"), "V", "∞ V"),
        (float("-inf"), "1", "−∞"),
        (float("nan"), "V", "no value"),
    ],
)
def test_a_value_is_rendered_with_a_fitting_prefix(value: float, wanted: str, text: str) -> None:
    """A rendered value reads as an engineer writes it."""
    assert render(value, wanted) == text


def test_a_unit_has_its_dimension() -> None:
    """A quotient of units has the quotient of their dimensions."""
    assert str(unit("mV/mA").dimension) == "ohm"


LONG = "is longer than 120 characters: write a number and a unit"


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("±" * 300_000 + "\n", f"{'±' * 47}… {LONG}"),
        ("1" * 121, f"{'1' * 47}… {LONG}"),
        (
            "9" * 50 + "R",
            f"{'9' * 50}R is not a quantity; write a number and a unit, for example 4.7 ohm",
        ),
        ("1e308 ohm ± 200 %", "1e308 ohm ± 200 % reaches beyond the largest number"),
        ("1e308 ohm +90/-10 %", "1e308 ohm +90/-10 % reaches beyond the largest number"),
    ],
    ids=["long range", "long number", "long code", "even", "uneven"],
)
def test_what_is_too_much_is_refused_at_once(text: str, message: str) -> None:
    """A text too long to be a quantity, or a value no number can hold, is refused quickly."""
    start = time.perf_counter()
    with pytest.raises(QuantityError) as refused:
        parse_range(text, "ohm", code=True)
    assert time.perf_counter() - start < 1.0
    assert str(refused.value) == message


def test_the_middle_of_the_largest_numbers_is_a_number() -> None:
    """The middle is taken of halves, whose sum cannot be too large."""
    assert range_of(1e308, None, 1.5e308, "V") == Range(1e308, 1.25e308, 1.5e308)


def test_the_least_of_doubles_is_a_range_of_itself() -> None:
    """The smallest double has no half: its middle is kept inside the range."""
    least = 5e-324
    assert range_of(least, None, least, "V") == Range(least, least, least)
