"""The example repository gives exactly the reports that stand beside it.

After a wanted change the reports are made anew, from the folder ``examples``, by

    for report in text lines json sarif markdown; do
        reglint check . --today 2026-12-01 --report $report --out expected/check.$report
    done
    reglint check . --today 2026-12-01 --report junit --out expected/check.junit.xml
    reglint sheet boards/valve-controller/rev-b/rails.reg.yaml --name valve-sense \
        --out expected/valve-sense.sheet

and then read, line by line. (``check`` ends with status 2: one example is broken on purpose.)

The hand calculations below go round in passes, as on a pocket calculator: from a guess of the
output V to the current I = (V_S - V)/R - I_L, and from that current to a better V. A diode read
warm, at V_ZT and I_ZT, was at T_ref = 25 °C + 170 K/W * V_ZT * I_ZT; in the circuit it is at
T_J = T_A + 170 K/W * V * I. With x = I/I_ZT and m = ln(Z_ZK/Z_ZT)/ln(I_ZT/I_ZK) its voltage is
V = V_ZT + I_ZT * Z * q + S * (T_J - T_ref), q = (x**(1 - m) - 1)/(1 - m).
"""

import json
import re
import shutil
from collections.abc import Callable, Mapping
from datetime import date
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from reglint.cli import cli
from reglint.judge import Wanted
from reglint.project import Project

EXAMPLES = Path(__file__).parents[1] / "examples"
VALVE = "boards/valve-controller/rev-b/rails.reg.yaml"
SOLENOID = "boards/valve-controller/rev-b/solenoid.reg.yaml"

Finding = Mapping[str, Any]
Change = Callable[[str, str, str], None]


def printed(*words: str) -> tuple[int, str]:
    """Return the status and output of a command."""
    result = CliRunner().invoke(cli, words)
    return result.exit_code, result.stdout


@pytest.mark.parametrize("report", ["text", "lines", "json", "sarif", "junit", "markdown"])
def test_the_examples_give_the_reports_beside_them(
    report: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Same input, same bytes; status 2, since one file is broken on purpose."""
    monkeypatch.chdir(EXAMPLES)
    status, output = printed("check", ".", "--today", "2026-12-01", "--report", report)
    (expected,) = EXAMPLES.glob(f"expected/check.{report}*")
    assert output.encode() == expected.read_bytes()
    assert status == 2


def test_the_sheet_is_the_one_beside_the_examples(monkeypatch: pytest.MonkeyPatch) -> None:
    """The calculation sheet of the valve sensor is reproduced byte for byte."""
    monkeypatch.chdir(EXAMPLES)
    status, output = printed("sheet", VALVE, "--name", "valve-sense")
    assert output.encode() == (EXAMPLES / "expected/valve-sense.sheet").read_bytes()
    assert status == 0


def test_each_example_shows_what_the_table_says() -> None:
    """Every spec stands in the table of examples/README.md, with the outcome it has."""
    table = (EXAMPLES / "README.md").read_text(encoding="utf-8")
    told = dict(re.findall(r"^\| `(.+?)` \| .+? \| (\w+) \|", table, flags=re.MULTILINE))
    project = Project(EXAMPLES)
    run = project.check(project.specs((EXAMPLES,)), Wanted(date(2026, 12, 1)))
    assert told == {each.spec.name: each.outcome.value for each in run.verdicts}
    assert [problem.file for problem in run.problems] == [
        "boards/pump-gateway/rev-c/draft.reg.yaml"
    ] * 4


@pytest.mark.parametrize("path", sorted(EXAMPLES.rglob("*.yaml")), ids=lambda path: path.name)
def test_each_file_says_first_that_it_is_invented(path: Path) -> None:
    """Nobody can take an example for a real board's figures."""
    assert path.read_text(encoding="utf-8").startswith("# Invented data")


@pytest.fixture
def change(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Change:
    """Return an editor of a copy of the examples, which becomes the working folder."""
    copy = tmp_path / "hardware"
    shutil.copytree(EXAMPLES, copy, ignore=shutil.ignore_patterns("expected"))
    monkeypatch.chdir(copy)

    def edit(path: str, old: str, new: str) -> None:
        text = (copy / path).read_text(encoding="utf-8")
        assert text.count(old) == 1
        (copy / path).write_text(text.replace(old, new), encoding="utf-8")

    return edit


def findings(path: str, name: str) -> dict[str, Finding]:
    """Return all findings of a spec by rule, as the JSON report has them."""
    _, output = printed("check", path, "--today", "2026-12-01", "--report", "json", "--everything")
    spec = next(each for each in json.loads(output)["specs"] if each["name"] == name)
    return {each["rule"]: each for each in spec["findings"]}


def told(finding: Finding) -> tuple[str, int, str]:
    """Return what a reader acts on: the outcome, the line and the remedy."""
    return finding["outcome"], finding["line"], finding["remedy"]


def test_a_larger_resistor_starves_the_valve_sensor_s_zener(change: Change) -> None:
    """By hand: 8.680 mA with 470 ohm, 4.648 mA with 750 ohm, where 5 mA is wanted.

    Worst are 10.8 V, R high, 2.1 mA of loads, a diode high by 5 % and without impedance, and the
    coldest day, for S = -1.5 mV/K raises the voltage of a diode colder than it was read.
        R = R_nom * (1 + 5 % + 100 ppm/K * 35 K) = R_nom * 1.0535
        T_ref = 25 + 170 * 5.355 * 0.049 = 69.607 °C
    470 ohm, so 495.145 ohm:
        V = 5.355 V     I = 8.897 mA   T_J = -1.90 °C   S * (T_J - T_ref) = +107.26 mV
        V = 5.46226 V   I = 8.6801 mA  T_J = -1.94 °C                       +107.32 mV
        V = 5.46232 V   I = 5.33768 V / 495.145 ohm - 2.1 mA = 8.6800 mA    (margin +73.6 %)
    750 ohm, so 790.125 ohm:
        V = 5.355 V     I = 4.791 mA   T_J = -5.64 °C                       +112.87 mV
        V = 5.46787 V   I = 4.6485 mA  T_J = -5.68 °C                       +112.93 mV
        V = 5.46793 V   I = 5.33207 V / 790.125 ohm - 2.1 mA = 4.6484 mA    (margin -7.03 %)
    """
    before = findings(VALVE, "valve-sense")["minimum-zener-current"]
    assert before["value"] == pytest.approx(8.6800e-3, abs=1e-7)
    assert before["margin"] == pytest.approx(0.7360, abs=5e-5)
    assert told(before) == ("pass", 21, "")

    change(VALVE, "470 ohm", "750 ohm")
    after = findings(VALVE, "valve-sense")["minimum-zener-current"]
    assert after["value"] == pytest.approx(4.6484e-3, abs=1e-7)
    assert after["margin"] == pytest.approx(-0.0703, abs=5e-5)
    assert told(after) == (
        "fail",
        21,
        "Lower the series resistance, raise the lowest supply, or lighten the load.",
    )


def test_a_larger_resistor_sags_the_valve_sensor_s_rail(change: Change) -> None:
    """By hand, down the soft knee: 4.1913 V with 470 ohm, 3.9575 V with 750 ohm; 4 V is wanted.

    Worst are 10.8 V, R high, 2.1 mA of loads, a diode low by 5 % with all its impedance, and the
    coldest day, for S = +1.5 mV/K lowers the voltage of a diode colder than it was read.
        T_ref = 25 + 170 * 4.845 * 0.049 = 65.359 °C
        m = ln(550/7)/ln(49/1) = 4.36395/3.89182 = 1.12133
    470 ohm, so 495.145 ohm:
        V = 4 V        I = 11.633 mA  x = 0.23742  q = -1.5710  V = 4.845 - 0.5389 - 0.1012
        V = 4.2050 V   I = 11.219 mA  x = 0.22897  q = -1.6142  V = 4.845 - 0.5537 - 0.1010
        V = 4.1903 V   I = 11.249 mA  x = 0.22957  q = -1.6111  V = 4.845 - 0.5526 - 0.1010
        V = 4.1914 V   I = 11.247 mA  x = 0.22953  q = -1.6113  V = 4.845 - 0.5527 - 0.1010
        V = 4.1913 V                                            (margin +4.78 %)
    750 ohm, so 790.125 ohm:
        V = 4 V        I = 6.5062 mA  x = 0.13278  q = -2.2879  V = 4.845 - 0.7847 - 0.1064
        V = 3.9539 V   I = 6.5646 mA  x = 0.13397  q = -2.2765  V = 4.845 - 0.7808 - 0.1064
        V = 3.9578 V   I = 6.5597 mA  x = 0.13387  q = -2.2774  V = 4.845 - 0.7812 - 0.1064
        V = 3.9574 V   I = 6.5601 mA  x = 0.13388  q = -2.2773  V = 4.845 - 0.7811 - 0.1064
        V = 3.9575 V                                            (margin -1.06 %)
    """
    before = findings(VALVE, "valve-sense")["output-voltage-low"]
    assert before["value"] == pytest.approx(4.1913, abs=1e-4)
    assert told(before) == ("pass", 11, "")

    change(VALVE, "470 ohm", "750 ohm")
    after = findings(VALVE, "valve-sense")["output-voltage-low"]
    assert after["value"] == pytest.approx(3.9575, abs=1e-4)
    assert after["margin"] == pytest.approx(-0.0106, abs=5e-5)
    assert told(after) == (
        "fail",
        11,
        "Lower the series resistance, raise the lowest supply, or take a tighter Zener.",
    )


def test_a_smaller_resistor_feeds_the_solenoid_s_zener(change: Change) -> None:
    """By hand: no current with 560 ohm, 5.312 mA with 330 ohm, where 3 mA is wanted.

    At 20 V both drivers take 8 mA through a resistor 5 % off. Diode open, 532 ohm leave
    20 V - 532 ohm * 16 mA = 11.49 V, 588 ohm leave 10.59 V: below 12.6 V, so the diode is off.
    330 ohm, so 346.5 ohm, a diode high by 5 % without impedance, and the hottest day, for the
    diode runs 1.4 K warmer than the T_ref = 25 + 170 * 12.6 * 0.021 = 69.982 °C it was read at:
        V = 12.6 V      I = 5.356 mA   T_J = 71.47 °C   11 mV/K * (T_J - T_ref) = 16.4 mV
        V = 12.6164 V   I = 5.309 mA   T_J = 71.39 °C                             15.5 mV
        V = 12.6155 V   I = 7.3845 V / 346.5 ohm - 16 mA = 5.312 mA   (margin +77.1 %)
    """
    before = findings(SOLENOID, "solenoid-clamp")["minimum-zener-current"]
    assert before["value"] == 0.0
    assert told(before) == (
        "fail",
        20,
        "Lower the series resistance, raise the lowest supply, or lighten the load.",
    )

    change(SOLENOID, "560 ohm", "330 ohm")
    after = findings(SOLENOID, "solenoid-clamp")["minimum-zener-current"]
    assert after["value"] == pytest.approx(5.312e-3, abs=1e-6)
    assert after["margin"] == pytest.approx(0.771, abs=5e-4)
    assert told(after) == ("pass", 20, "")


def test_the_resistor_that_feeds_the_solenoid_s_zener_cooks_it(change: Change) -> None:
    """By hand: with 330 ohm the unplugged Zener has 581 mW, where 460 mW are allowed.

    Its power V * (27 V - V)/R is greatest not at an end of V but at V = 27 V / 2 = 13.5 V, which
    a high diode reaches: on the hottest day, with 42 mA, it is at 12.6 + 0.13 + 0.98 = 13.71 V.
        313.5 ohm (330 ohm - 5 %):  13.5 V * 13.5 V / 313.5 ohm = 581.3 mW
        532 ohm (560 ohm - 5 %):    at most 13.5 V * 13.5 V / 532 ohm = 342.6 mW
        allowed at 60 °C: 0.5 * 1 W * (175 - 60)/(175 - 50) = 460 mW   (margin -26.4 %)
    """
    before = findings(SOLENOID, "solenoid-clamp")["no-load-dissipation"]
    assert before["value"] < 342.6e-3
    assert told(before) == ("pass", 25, "")

    change(SOLENOID, "560 ohm", "330 ohm")
    after = findings(SOLENOID, "solenoid-clamp")["no-load-dissipation"]
    assert after["value"] == pytest.approx(581.34e-3, rel=1e-4)
    assert after["limit"] == pytest.approx(460e-3)
    assert told(after) == (
        "fail",
        25,
        "Raise the series resistance, lower the highest supply, or take a Zener of higher rating.",
    )


def test_the_sheet_agrees_with_the_hand_calculation(change: Change) -> None:
    """By hand: nominally 4.8676 V and 13.975 mA; least and most as in the tests above.

    Nominal are 12 V, 470 ohm, 1.2 mA of loads, half the greatest impedance, 3.5 ohm, and S = 0:
        V = 5.1 V      I = 13.481 mA   x = 0.27512   q = -1.3971   V = 5.1 - 0.2396
        V = 4.8604 V   I = 13.991 mA   x = 0.28552   q = -1.3538   V = 5.1 - 0.2322
        V = 4.8678 V   I = 13.975 mA   x = 0.28520   q = -1.3551   V = 5.1 - 0.2324
        V = 4.8676 V   I = 13.975 mA
    Most current flows at 13.2 V, with R low (444.855 ohm), 0.4 mA of loads, and the diode that
    sags most: V = 4.4163 V, I = 8.7837 V / 444.855 ohm - 0.4 mA = 19.345 mA.
    """
    assert extent("zener.current (I_Z)") == pytest.approx((13.975, 8.6800, 19.345), abs=5e-4)
    assert extent("rail.voltage (V_O)")[:2] == pytest.approx((4.8676, 4.1913), abs=1e-4)

    change(VALVE, "470 ohm", "750 ohm")
    assert extent("zener.current (I_Z)")[1] == pytest.approx(4.6484, abs=5e-4)
    assert extent("rail.voltage (V_O)")[1] == pytest.approx(3.9575, abs=1e-4)


def extent(quantity: str) -> tuple[float, ...]:
    """Return nominal, least and most of a loaded quantity of the valve sensor, as printed."""
    _, sheet = printed("sheet", VALVE, "--name", "valve-sense")
    loaded = sheet.split("\nUnder loaded: ")[1].split("\nUnder ")[0]
    paragraph = loaded.split(f"\n  {quantity}: ")[1]
    shown = re.search(r"\n {6}= (\S+) \S+; least (\S+) \S+, most (\S+) ", f"{paragraph} ")
    assert shown is not None
    return tuple(float(figure) for figure in shown.groups())
