"""Published worked examples, through the path a user's spec takes.

Stored outputs of the FOSSEE textbook-companion notebooks (contributors' reruns of the
books' examples): Floyd, *Electronic Devices*, examples 3-2 to 3-5; Malvino, *Electronic
Principles*, examples 5-10 and 24-6. Their diodes are straight lines: ``knee_impedance``
equal to ``impedance``.
"""

from collections.abc import Callable

import pytest

from reglint.finding import Extent, Finding, Run

Check = Callable[..., Run]


def extent(run: Run, quantity: str, condition: str = "loaded") -> Extent:
    """Return the range of a quantity of the only spec."""
    assert not run.problems
    wanted = (quantity, condition)
    return next(e for e in run.verdicts[0].extents if (e.quantity, e.condition) == wanted)


def finding(run: Run, rule: str) -> Finding:
    """Return the finding of a rule of the only spec."""
    assert not run.problems
    return next(each for each in run.verdicts[0].findings if each.rule == rule)


def floyd_3_5(supply: str) -> str:
    """Return the shunt regulator of Floyd's example 3-5 at one supply voltage."""
    return f"""
format: 1
kind: zener-shunt
name: floyd
supply: {{voltage: {supply}}}
loads: {{}}
ambient: {{min: 25 °C, max: 25 °C}}
series_resistor: {{resistance: 100 ohm}}
zener:
  voltage: 5.1 V
  test_current: 49 mA
  impedance: {{min: 7 ohm, max: 7 ohm}}
  knee_current: 1 mA
  knee_impedance: 7 ohm
  thermal_resistance: 0 K/W
"""


@pytest.mark.parametrize(("supply", "current"), [("4.864 V", 1e-3), ("25.737 V", 1.0 / 5.1)])
def test_floyd_3_5_input_range(supply: str, current: float, check: Check) -> None:
    """At the printed least and greatest input the Zener carries its knee and maximum current."""
    found = extent(check(floyd_3_5(supply), extents=True), "zener.current")
    # The print has three decimals of a volt, and 107 ohm divide it.
    assert found.nom == pytest.approx(current, abs=0.0005 / 107.0 * 1.01)
    assert (found.min, found.max) == pytest.approx((found.nom, found.nom), rel=1e-12)


@pytest.mark.parametrize(("current", "printed"), [("50 mA", 6.845), ("25 mA", 6.758)])
def test_floyd_3_2_voltage_at_two_currents(current: str, printed: float, check: Check) -> None:
    """6.8 V at 37 mA and 3.5 ohm: the printed voltages at 50 mA and 25 mA."""
    text = f"""
format: 1
kind: zener-shunt
name: floyd
supply: {{voltage: 20 V}}
loads: {{}}
ambient: {{min: 25 °C, max: 25 °C}}
series_resistor: {{resistance: 100 ohm}}
zener:
  voltage: 6.8 V
  test_current: 37 mA
  impedance: {{min: 3.5 ohm, max: 3.5 ohm}}
  knee_current: 1 mA
  knee_impedance: 3.5 ohm
  minimum_current: {current}
  thermal_resistance: 0 K/W
"""
    found = extent(check(text, extents=True), "zener.voltage_at_minimum")
    assert found.nom == pytest.approx(printed, abs=0.001)


def test_floyd_3_3_temperature_drift(check: Check) -> None:
    """8.2 V with +0.05 %/°C is 8.343 V at 60 °C."""
    text = """
format: 1
kind: zener-shunt
name: floyd
supply: {voltage: 20 V}
loads: {}
ambient: {min: 60 °C, max: 60 °C}
series_resistor: {resistance: 100 ohm}
zener:
  voltage: 8.2 V
  test_current: 31 mA
  impedance: {min: 0 ohm, max: 0 ohm}
  tempco: 0.05 %/°C
  thermal_resistance: 0 K/W
"""
    found = extent(check(text, extents=True), "rail.voltage")
    assert found.nom == pytest.approx(8.343, abs=0.001)


def test_floyd_3_4_power_derating(check: Check, sample: Callable[..., str]) -> None:
    """400 mW at 50 °C, 3.2 mW/°C less above: 272 mW at 90 °C."""
    changes = {
        "ambient": "90 °C",
        "zener.power_rating": "400 mW",
        "zener.derate_above": "50 °C",
        "zener.derate_slope": "3.2 mW/°C",
    }
    found = extent(check(sample(changes), extents=True), "zener.power_derated")
    assert found.nom == pytest.approx(0.272, rel=1e-12)


@pytest.mark.parametrize(
    ("resistance", "outcome"), [("116.66 ohm", "pass"), ("116.68 ohm", "fail")]
)
def test_malvino_5_10_largest_resistor(resistance: str, outcome: str, check: Check) -> None:
    """From 22 V to 12 V at 140 ohm the series resistor may be 116.67 ohm, and no more."""
    text = f"""
format: 1
kind: zener-shunt
name: malvino
supply: {{voltage: {{min: 22 V, max: 30 V}}}}
loads: {{load: {{resistance: {{min: 140 ohm, max: 10 kohm}}}}}}
ambient: {{min: 25 °C, max: 25 °C}}
series_resistor: {{resistance: {resistance}}}
zener:
  voltage: 12 V
  test_current: 20 mA
  impedance: {{min: 0 ohm, max: 0 ohm}}
  knee_current: 1 nA
  knee_impedance: 1 ohm
  minimum_current: 1 nA
  thermal_resistance: 0 K/W
"""
    assert finding(check(text), "minimum-zener-current").outcome.value == outcome


def malvino_24_6(supply: str, load: str, accepted: str) -> str:
    """Return a regulator with the outputs of Malvino's example; its values are ours.

    9.91 V at 20 mA, 20 ohm in the diode and before it: 10 mA of load cost 0.1 V, and half
    of what the supply moves by comes through. Malvino's percentages are of the full-load and
    the low-line value: by so much the output exceeds one that may not exceed them.
    """
    return f"""
format: 1
kind: zener-shunt
name: malvino
supply: {{voltage: {supply}}}
output: {{voltage: {{min: 5 V, max: {accepted}}}}}
loads: {{load: {{current: {load}}}}}
ambient: {{min: 25 °C, max: 25 °C}}
series_resistor: {{resistance: 20 ohm}}
zener:
  voltage: 9.91 V
  test_current: 20 mA
  impedance: {{min: 20 ohm, max: 20 ohm}}
  knee_current: 1 mA
  knee_impedance: 20 ohm
  tempco: 0 V/K
  thermal_resistance: 0 K/W
"""


def test_malvino_24_6_load_regulation(check: Check) -> None:
    """9.91 V without the load and 9.81 V with it are a load regulation of 1.02 %."""
    run = check(malvino_24_6("10.31 V", "10 mA", "9.81 V"), extents=True)
    assert extent(run, "rail.voltage").min == pytest.approx(9.81, abs=1e-9)
    assert extent(run, "rail.load_regulation").max == pytest.approx(0.1, abs=1e-9)
    assert finding(run, "output-voltage-high").message.endswith("(margin −1.02 %)")


def test_malvino_24_6_line_regulation(check: Check) -> None:
    """9.94 V at high line and 9.79 V at low line are a line regulation of 1.53 %."""
    run = check(malvino_24_6("{min: 10.07 V, max: 10.37 V}", "0 mA", "9.79 V"), extents=True)
    output = extent(run, "rail.voltage")
    assert (output.min, output.max) == pytest.approx((9.79, 9.94), abs=1e-9)
    assert finding(run, "output-voltage-high").message.endswith("(margin −1.53 %)")
