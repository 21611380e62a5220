"""IEC 60062:2016 value codes: examples of the standard as encyclopedias quote them."""

import pytest

from reglint.errors import QuantityError
from reglint.quantity import parse


@pytest.mark.parametrize(
    ("code", "ohm"),
    [
        ("R47", 0.47),
        ("4R7", 4.7),
        ("470R", 470.0),
        ("4K7", 4.7e3),
        ("4k7", 4.7e3),
        ("47K3", 47.3e3),
        ("470K", 470e3),
        ("4M7", 4.7e6),
        ("15M0", 15e6),
    ],
)
def test_a_resistor_code(code: str, ohm: float) -> None:
    """The letter stands for the decimal point; M is mega for ohms."""
    assert parse(code, "ohm", code=True) == pytest.approx(ohm, rel=1e-15)


@pytest.mark.parametrize(
    ("code", "farad"), [("2n2", 2.2e-9), ("4p7", 4.7e-12), ("3µ3", 3.3e-6), ("4m7", 4.7e-3)]
)
def test_a_capacitor_code(code: str, farad: float) -> None:
    """M is milli for farads."""
    assert parse(code, "F", code=True) == pytest.approx(farad, rel=1e-15)


@pytest.mark.parametrize("wanted", ["V", "A", "W"])
def test_no_code_stands_for_a_voltage(wanted: str) -> None:
    """4V7 and 5V1 are trade usage and no IEC 60062 codes: written out they are clearer."""
    with pytest.raises(QuantityError):
        parse("4k7", wanted, code=True)
