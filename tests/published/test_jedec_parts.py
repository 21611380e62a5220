"""The shipped 1N4728A to 1N4764A series against what its makers print.

Greatest currents at 50 °C: printed figures of makers' data sheets of the series. Voltages: they
follow the E24 values of IEC 60063, as makers' Zener selection tables do. A test current at a
quarter of a watt: common practice, no source.
"""

import pytest
from eseries import E24, find_nearest

from reglint.quantity import Range, parse, parse_range
from reglint.rulebook import Rulebook
from reglint.tree import Scalar

BOOK = Rulebook()
SERIES = [f"1N{number}A" for number in range(4728, 4765)]
#: I_ZM in mA at 50 °C, as makers print it.
PRINTED = {
    "1N4728A": 276,
    "1N4730A": 234,
    "1N4733A": 178,
    "1N4735A": 146,
    "1N4739A": 100,
    "1N4740A": 91,
    "1N4742A": 76,
    "1N4744A": 61,
    "1N4750A": 34,
}


def stated(name: str, field: str) -> str:
    """Return the text of a field of a shipped part."""
    node = BOOK.parts()[name].field(field)
    assert isinstance(node, Scalar), (name, field)
    return node.text


def voltage(name: str) -> Range:
    """Return the Zener voltage of a shipped part."""
    return parse_range(stated(name, "voltage"), "V")


def test_the_series_has_its_thirty_seven_parts() -> None:
    """All numbers from 1N4728A to 1N4764A are shipped, and nothing under a near name."""
    assert sorted(name for name in BOOK.parts() if name.startswith("1N47")) == SERIES


@pytest.mark.parametrize(("name", "printed"), PRINTED.items())
def test_the_greatest_current_is_the_printed_one(name: str, printed: float) -> None:
    """A maker's printed figure is shipped as it stands."""
    assert parse(stated(name, "current_max"), "A") == pytest.approx(printed * 1e-3, rel=1e-12)


@pytest.mark.parametrize("name", SERIES)
def test_the_greatest_current_is_nine_tenths_of_a_watt(name: str) -> None:
    """Makers derate 1 W at the upper tolerance: 0.91 W by the voltage, within rounding of 5 %."""
    power = parse(stated(name, "current_max"), "A") * voltage(name).nom
    assert power == pytest.approx(0.91, rel=0.05)


@pytest.mark.parametrize("name", SERIES)
def test_the_voltage_is_of_the_e24_series(name: str) -> None:
    """The nominal voltage is a value of IEC 60063 E24, as the library eseries has it."""
    nominal = voltage(name).nom
    assert find_nearest(E24, nominal) == pytest.approx(nominal, rel=1e-12)


@pytest.mark.parametrize("name", SERIES)
def test_a_suffix_a_is_five_percent(name: str) -> None:
    """The letter A of this family means ± 5 %."""
    assert voltage(name).spread == pytest.approx(0.05, rel=1e-9)


@pytest.mark.parametrize("name", SERIES)
def test_the_test_current_is_a_quarter_of_a_watt(name: str) -> None:
    """Test current times voltage is 0.25 W within 4 %: common practice, no source."""
    power = parse(stated(name, "test_current"), "A") * voltage(name).nom
    assert power == pytest.approx(0.25, rel=0.04)


@pytest.mark.parametrize("name", SERIES)
def test_the_knee_lies_below_and_is_steeper(name: str) -> None:
    """I_ZK is below I_ZT, and there the impedance is the greater (the letter symbols' meaning)."""
    knee, test = (parse(stated(name, each), "A") for each in ("knee_current", "test_current"))
    z_zk, z_zt = (parse(stated(name, each), "ohm") for each in ("knee_impedance", "impedance"))
    assert knee < test
    assert z_zt < z_zk
