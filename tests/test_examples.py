"""The example repository gives exactly the reports that stand beside it.

After a wanted change the reports are made anew, from the folder ``examples``, by

    for report in text lines json; do
        reglint check . --today 2026-12-01 --report $report --out expected/check.$report
    done
    reglint sheet boards/valve-controller/rev-b/rails.reg.yaml --name valve-sense \
        --out expected/valve-sense.sheet

and then read, line by line.
"""

import math
from collections.abc import Callable
from pathlib import Path

import pytest
from click.testing import CliRunner

from reglint.cli import cli
from reglint.finding import Finding, Run

EXAMPLES = Path(__file__).parents[1] / "examples"
VALVE = "boards/valve-controller/rev-b/rails.reg.yaml"
SOLENOID = EXAMPLES / "boards/valve-controller/rev-b/solenoid.reg.yaml"


def printed(monkeypatch: pytest.MonkeyPatch, *words: str) -> tuple[int, str]:
    """Return the status and output of a command run in the folder of the examples."""
    monkeypatch.chdir(EXAMPLES)
    result = CliRunner().invoke(cli, words)
    return result.exit_code, result.stdout


@pytest.mark.parametrize("report", ["text", "lines", "json"])
def test_the_examples_give_the_reports_beside_them(
    report: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Same input, same bytes; status 2, since one file is broken on purpose."""
    status, output = printed(monkeypatch, "check", ".", "--today", "2026-12-01", "--report", report)
    assert output == (EXAMPLES / "expected" / f"check.{report}").read_text(encoding="utf-8")
    assert status == 2


def test_the_sheet_is_the_one_beside_the_examples(monkeypatch: pytest.MonkeyPatch) -> None:
    """The calculation sheet of the valve sensor is reproduced byte for byte."""
    status, output = printed(monkeypatch, "sheet", VALVE, "--name", "valve-sense")
    assert output == (EXAMPLES / "expected/valve-sense.sheet").read_text(encoding="utf-8")
    assert status == 0


def finding(run: Run, rule: str) -> Finding:
    """Return the finding of a rule in a run of one spec."""
    return next(each for each in run.verdicts[0].findings if each.rule == rule)


def test_one_resistor_changes_the_finding_as_a_hand_calculation_says(
    check: Callable[..., Run],
) -> None:
    """With 560 ohm the solenoid's Zener is off; with 180 ohm it has 24.4 mA less the loads.

    By hand, at 20 V, the resistor 5 % high, both drivers at 8 mA, the hardest diode
    (no impedance) 5 % high at 60 °C. The voltage is a settled reading, so it is at
    25 °C + 170 K/W * 12.6 V * 21 mA = 69.98 °C; at 60 °C and with hardly any current the
    junction is at some 60 °C + 170 K/W * V * I, and the coefficient is 5 to 11 mV/K.
    """
    text = SOLENOID.read_text(encoding="utf-8")
    broken = finding(check(text), "minimum-zener-current")
    # Open circuit: 20 V - 588 ohm * 16 mA = 10.59 V, below the Zener voltage: it is off.
    assert broken.value == 0.0
    assert (broken.outcome.value, broken.span.line) == ("fail", 20)
    assert broken.remedy.startswith("Lower the series resistance")

    mended = finding(check(text.replace("560 ohm", "180 ohm")), "minimum-zener-current")
    # I = (20 V - V_Z)/189 ohm - 16 mA, V_Z = 12.6 V + S * (60 °C + 170 K/W * V_Z * I - 69.98 °C).
    at = mended.corner
    assert at is not None
    assert (at["supply.voltage"], at["load.current"], at["zener.voltage"]) == (20.0, 0.016, 12.6)
    resistance, coefficient, ambient = 180.0 * 1.05, at["zener.tempco"], at["ambient"]
    v_z = 12.6
    for _ in range(50):
        current = (20.0 - v_z) / resistance - 0.016
        junction = ambient + 170.0 * v_z * current
        v_z = 12.6 + coefficient * (junction - (25.0 + 170.0 * 12.6 * 0.021))
        if at["zener.impedance"]:
            m = math.log(700.0 / 9.0) / math.log(0.021 / 0.00025)
            x = current / 0.021
            v_z += 0.021 * at["zener.impedance"] * (x ** (1.0 - m) - 1.0) / (1.0 - m)
    assert mended.value == pytest.approx(current, rel=1e-6)
    assert mended.outcome.value == "pass"
