"""Yield against closed forms and scipy.

Sums of independent uniform variables: J. V. Uspensky, Introduction to Mathematical Probability
(1937), chapter XIII, from memory; for two of them the density is a trapezoid. Wilson's interval
and truncated normal variables: scipy.stats.
"""

import json
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner, Result
from scipy import stats

from reglint.cli import cli
from reglint.finding import Yield
from reglint.rulebook import Rulebook
from reglint.spec_schema import spec_schema
from reglint.yield_ import DISTRIBUTIONS

#: Headroom is V_S - V_Z - R * 5 mA: the Zener's own line is flat and nothing drifts.
FLAT = """
format: 1
kind: zener-shunt
name: flat
supply: {voltage: SUPPLY}
output: {}
loads: {}
ambient: {min: 25 °C, max: 25 °C}
series_resistor: {resistance: 470 ohm ± 10 %}
zener:
  voltage: 5 V ± 4 %
  test_current: 5 mA
  impedance: {min: 0 ohm, max: 0 ohm}
  knee_exponent: "0"
  minimum_current: 5 mA
  tempco: 0 V/K
  thermal_resistance: 0 K/W
"""
#: Half the ranges of the Zener's voltage and of the resistor's drop, in volts.
ZENER, DROP = 0.2, 0.235


def below(excess: float) -> float:
    """Return the chance that two uniform variables of mean zero add up to more than ``excess``.

    They range over ±ZENER and ±DROP; a corner of their rectangle is cut off, or a strip.
    """
    corner = ZENER + DROP - excess
    if corner <= 2.0 * min(ZENER, DROP):
        return corner**2 / 2.0 / (4.0 * ZENER * DROP)
    return (corner - min(ZENER, DROP)) / (2.0 * max(ZENER, DROP))


def drawn(folder: Path, text: str, *options: str) -> Result:
    """Return what a check of a spec that draws builds gives."""
    path = folder / "flat.reg.yaml"
    path.write_text(text, encoding="utf-8")
    return CliRunner().invoke(cli, ["check", str(path), "--report", "json", *options])


def broken(result: Result, rule: str) -> int:
    """Return how many builds break a rule."""
    (found,) = json.loads(result.stdout)["specs"]
    return {each["rule"]: each["broken"] for each in found["yield"]}[rule]


@pytest.mark.parametrize("excess", [0.05, 0.2, 0.4])
def test_the_yield_is_that_of_a_sum_of_two_uniforms(excess: float, tmp_path: Path) -> None:
    """Of 100,000 builds as many starve as the trapezoid says, within four standard deviations."""
    count, supply = 100_000, 5.0 + 2.35 + excess
    text = FLAT.replace("SUPPLY", f"{supply!r} V")
    found = broken(drawn(tmp_path, text, "--yield", str(count)), "supply-headroom")
    chance = below(excess)
    assert abs(found - count * chance) < 4.0 * (count * chance * (1.0 - chance)) ** 0.5


def test_a_build_is_judged_at_the_worst_end_of_its_supply(tmp_path: Path) -> None:
    """A supply that may also be higher breaks the same builds: each meets its lowest supply."""
    counts = [
        broken(
            drawn(
                tmp_path,
                FLAT.replace("SUPPLY", f"{{min: 7.5 V, max: {most} V}}"),
                "--yield",
                "2000",
            ),
            "supply-headroom",
        )
        for most in (7.5, 9.5)
    ]
    assert counts[0] == counts[1] > 100


def test_a_stated_distribution_is_drawn_from(tmp_path: Path) -> None:
    """With both figures normal fewer builds starve than with both uniform."""
    text = FLAT.replace("SUPPLY", "7.6 V")
    stated = text + "distributions: {zener.voltage: normal, series_resistor.resistance: normal}\n"
    uniform, normal, wished = (
        broken(drawn(tmp_path, each, "--yield", "20000", *more), "supply-headroom")
        for each, more in ((text, ()), (stated, ()), (text, ("--distribution", "normal")))
    )
    assert normal == wished < 0.5 * uniform


def test_builds_change_no_outcome(tmp_path: Path) -> None:
    """Findings, counts and status are the same with and without builds drawn."""
    text = FLAT.replace("SUPPLY", "7.6 V")
    with_builds, without = drawn(tmp_path, text, "--yield", "50"), drawn(tmp_path, text)
    reports = [json.loads(each.stdout) for each in (with_builds, without)]
    del reports[0]["specs"][0]["yield"]
    assert reports[0] == reports[1]
    assert with_builds.exit_code == without.exit_code == 1


def test_the_text_report_tells_builds_seed_and_interval(tmp_path: Path) -> None:
    """A reader sees the count, what it says of all builds, and how it was drawn."""
    text = FLAT.replace("SUPPLY", "6 V")
    told = drawn(tmp_path, text, "--yield", "50", "--seed", "7", "--report", "text").stdout
    low, high = stats.binomtest(50, 50).proportion_ci(method="wilson")
    assert (
        "    builds     50 of 50 break supply-headroom"
        f" ({100 * low:.3g} % to {100 * high:.3g} % of all builds, at 95 % confidence)"
    ) in told.splitlines()
    assert (
        "Builds were drawn from seed 7, uniform where a spec states nothing else;"
        " they never change an outcome."
    ) in told.splitlines()


@pytest.mark.parametrize(("count", "builds"), [(0, 10), (3, 10), (10, 10), (17, 4000)])
def test_the_interval_is_wilsons(count: int, builds: int) -> None:
    """The interval of a fraction agrees with scipy's."""
    expected = stats.binomtest(count, builds).proportion_ci(0.95, method="wilson")
    found = Yield("any", count, builds).interval()
    assert found == pytest.approx((expected.low, expected.high), abs=1e-12)


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        ("uniform", stats.uniform(-1.0, 2.0)),
        ("normal", stats.truncnorm(-3.0, 3.0, scale=1.0 / 3.0)),
    ],
)
def test_draws_follow_their_distribution(name: str, expected: object) -> None:
    """Ten thousand draws pass the Kolmogorov-Smirnov test at one in a thousand."""
    values = DISTRIBUTIONS[name](np.random.default_rng(5), 10_000)
    assert stats.kstest(values, expected.cdf).pvalue > 0.001  # type: ignore[attr-defined]


def test_a_spec_may_name_every_distribution() -> None:
    """The schema knows the distributions that can be drawn."""
    kind = Rulebook().kind("zener-shunt")
    assert kind is not None
    known = spec_schema(kind)["properties"]["distributions"]["additionalProperties"]["enum"]
    assert known == list(DISTRIBUTIONS)


def test_a_distribution_of_nothing_is_a_problem(tmp_path: Path) -> None:
    """A path that has no range is pointed at, with the nearest that has one."""
    text = FLAT.replace("SUPPLY", "9 V") + "distributions: {zener.voltages: normal}\n"
    (problem,) = json.loads(drawn(tmp_path, text).stdout)["problems"]
    assert (problem["line"], problem["column"], problem["message"]) == (
        18,
        17,
        (
            "distributions: zener.voltages is no figure with a range;"
            " the nearest known one is zener.voltage"
        ),
    )
