"""The worst case against independent physics: 10^6 random samples and a global optimiser.

The equations of design and data sheet (node, soft knee, self-heating) are written here a
second time, in plain numpy, and solved by another method (bisection). Optimiser:
scipy.optimize.differential_evolution.
"""

from collections.abc import Callable, Mapping
from datetime import date
from random import Random

import numpy as np
import numpy.typing as npt
import pytest
from scipy import optimize

from reglint.finding import Finding
from reglint.judge import Wanted
from reglint.project import Project

Array = npt.NDArray[np.float64]
Point = Mapping[str, Array]

SPECS = 50
SAMPLES_EACH = 20_000
#: What the document allows: optimism of 1e-9, pessimism of 0.1 %.
OPTIMISM, PESSIMISM = 1e-9, 1e-3


def knee(x: Array, m: float) -> Array:
    """Integrate u**-m from 1 to x."""
    return np.log(x) if m == 1.0 else (x ** (1.0 - m) - 1.0) / (1.0 - m)


def operating_point(p: Point, fixed: Mapping[str, float]) -> tuple[Array, Array]:
    """Return Zener current and output voltage, by bisection on the current."""
    i_zt, m, heat = fixed["i_zt"], fixed["m"], fixed["r_th"]
    reference = 25.0 + heat * p["v_zt"] * i_zt

    def node(current: Array) -> Array:
        return p["v_s"] - p["r"] * (current + p["i_l"])

    def excess(current: Array) -> Array:
        volts = node(current)
        junction = p["t_a"] + heat * volts * current
        zener = (
            p["v_zt"] + i_zt * p["z"] * knee(current / i_zt, m) + p["s"] * (junction - reference)
        )
        return volts - zener

    low = np.full_like(p["v_s"], 1e-12 * i_zt)
    high = np.maximum(p["v_s"] / p["r"], low)
    off = excess(low) <= 0.0
    for _ in range(100):
        middle = 0.5 * (low + high)
        above = excess(middle) > 0.0
        low, high = np.where(above, middle, low), np.where(above, high, middle)
    current = np.where(off, 0.0, 0.5 * (low + high))
    return current, np.maximum(node(current), 0.0)


def power_share(t: Array, full: float, zero: float) -> Array:
    """Return the share of a rating left at a temperature."""
    return np.clip((zero - t) / (zero - full), 0.0, 1.0)


def margins(p: Point, fixed: Mapping[str, float]) -> dict[str, Array]:
    """Return the margins of six rules at points."""
    current, volts = operating_point(p, fixed)
    allowed = fixed["p_z"] * power_share(p["t_a"], 50.0, 175.0)
    resistor = fixed["p_r"] * power_share(p["t_a"], 70.0, 155.0)
    dissipated = (p["v_s"] - volts) ** 2 / p["r"]
    junction = p["t_a"] + fixed["r_th"] * volts * current
    return {
        "minimum-zener-current": current / fixed["i_min"] - 1.0,
        "no-load-dissipation": 1.0 - volts * current / allowed,
        "zener-junction-temperature": (175.0 - junction) / 150.0,
        "resistor-dissipation": 1.0 - dissipated / resistor,
        "output-voltage-low": volts / fixed["v_min"] - 1.0,
        "output-voltage-high": 1.0 - volts / fixed["v_max"],
    }


#: Which load currents each rule sees: the loads' full range, nothing, or anything between.
LOADS = {
    "minimum-zener-current": "loaded",
    "no-load-dissipation": "no_load",
    "zener-junction-temperature": "no_load",
    "resistor-dissipation": "any_load",
    "output-voltage-low": "any_load",
    "output-voltage-high": "any_load",
}


class Case:
    """One random regulator: its box, its fixed figures and its spec's text."""

    def __init__(self, seed: int) -> None:
        """Draw a regulator; every third has its Zener voltage near half the supply."""
        random = Random(seed)
        v_zt = random.choice([3.9, 5.1, 6.8, 9.1, 12.0, 15.0])
        supply = v_zt * (2.0 if seed % 3 == 0 else random.uniform(1.6, 3.5))
        spread = random.uniform(0.02, 0.1)
        tolerance = random.choice([0.02, 0.05, 0.1])
        i_zt = 0.25 / v_zt
        rise = random.uniform(-0.001, 0.001) * v_zt
        self.ranges = {
            "v_s": (supply * (1 - spread), supply * (1 + spread)),
            "r": (0.95 * (r := round(random.uniform(100.0, 900.0))), 1.05 * r),
            "v_zt": (v_zt * (1 - tolerance), v_zt * (1 + tolerance)),
            "z": (0.0, z := round(random.uniform(2.0, 30.0), 1)),
            "s": (rise - 0.0005, rise + 0.0005),
            "t_a": (random.uniform(-40.0, 10.0), random.uniform(30.0, 85.0)),
            "i_l": (0.0005, random.uniform(0.001, 0.01)),
        }
        z_zk = z * random.uniform(5.0, 80.0)
        self.fixed = {
            "i_zt": i_zt,
            "m": float(np.log(z_zk / z) / np.log(i_zt / 0.001)),
            "r_th": random.uniform(50.0, 300.0),
            "i_min": random.uniform(0.001, 0.006),
            "p_z": 1.0,
            "p_r": 2.0,
            "v_min": v_zt * 0.8,
            "v_max": v_zt * 1.15,
        }
        self.z_zk = z_zk

    def text(self) -> str:
        """Return the regulator as a spec."""
        span = {
            name: f"{{min: {low!r} {unit}, max: {high!r} {unit}}}"
            for (name, (low, high)), unit in zip(
                self.ranges.items(), ("V", "ohm", "V", "ohm", "V/K", "°C", "A"), strict=True
            )
        }
        fixed = self.fixed
        return f"""
format: 1
kind: zener-shunt
name: random
supply: {{voltage: {span["v_s"]}}}
output: {{voltage: {{min: {fixed["v_min"]!r} V, max: {fixed["v_max"]!r} V}}}}
loads: {{load: {{current: {span["i_l"]}}}}}
ambient: {span["t_a"]}
series_resistor:
  resistance: {span["r"]}
  power_rating: 2 W
  zero_power_at: 155 °C
zener:
  voltage: {span["v_zt"]}
  test_current: {fixed["i_zt"]!r} A
  impedance: {span["z"]}
  knee_current: 1 mA
  knee_impedance: {self.z_zk!r} ohm
  minimum_current: {fixed["i_min"]!r} A
  tempco: {span["s"]}
  thermal_resistance: {fixed["r_th"]!r} K/W
  power_rating: 1 W
  derate_above: 50 °C
  junction_max: 175 °C
"""

    def box(self, condition: str) -> dict[str, tuple[float, float]]:
        """Return the ranges under an operating condition."""
        low, high = self.ranges["i_l"]
        load = {"loaded": (low, high), "no_load": (0.0, 0.0), "any_load": (0.0, high)}[condition]
        return {**self.ranges, "i_l": load}

    def margin_at(self, rule: str) -> Callable[[Array], Array]:
        """Return a rule's margin as a function of a point of the unit cube."""
        box = self.box(LOADS[rule])

        def at(unit: Array) -> Array:
            ranges = zip(box.items(), np.atleast_2d(unit.T).T, strict=True)
            point = {name: low + t * (high - low) for (name, (low, high)), t in ranges}
            return margins(point, self.fixed)[rule]

        return at


@pytest.fixture(scope="module")
def cases() -> list[Case]:
    """Return the random regulators."""
    return [Case(seed) for seed in range(SPECS)]


@pytest.fixture(scope="module")
def findings(
    tmp_path_factory: pytest.TempPathFactory, cases: list[Case]
) -> list[dict[str, Finding]]:
    """Return each regulator's findings by rule, through a user's path."""
    folder = tmp_path_factory.mktemp("random")
    paths = [folder / f"{seed:03}.reg.yaml" for seed in range(SPECS)]
    for path, case in zip(paths, cases, strict=True):
        path.write_text(case.text(), encoding="utf-8")
    run = Project(folder).check(paths, Wanted(date(2026, 12, 1), everything=True))
    assert not run.problems
    return [{f.rule: f for f in verdict.findings} for verdict in run.verdicts]


def test_no_sample_of_a_million_is_worse_than_reported(
    cases: list[Case], findings: list[dict[str, Finding]]
) -> None:
    """Random points of the box, corners included half of the time, never beat the worst case."""
    random = np.random.default_rng(20261201)
    for case, found in zip(cases, findings, strict=True):
        for condition in ("loaded", "no_load", "any_load"):
            size = SAMPLES_EACH // 3
            unit = random.random((len(case.ranges), size))
            unit[:, ::2] = np.round(unit[:, ::2])
            box = case.box(condition).items()
            point = {n: lo + u * (hi - lo) for (n, (lo, hi)), u in zip(box, unit, strict=True)}
            for rule, sampled in margins(point, case.fixed).items():
                if LOADS[rule] == condition:
                    reported = found[rule].margin
                    assert reported is not None, rule
                    least = float(sampled.min())
                    assert reported <= least + OPTIMISM * max(1.0, abs(least)), (rule, case.text())


@pytest.mark.parametrize("rule", sorted(LOADS))
def test_a_global_optimiser_finds_the_same_worst_case(
    rule: str, cases: list[Case], findings: list[dict[str, Finding]]
) -> None:
    """Differential evolution finds nothing worse, and gets within 0.1 % of what is reported."""
    for case, found in list(zip(cases, findings, strict=True))[:10]:
        bounds = [(0.0, 1.0)] * len(case.ranges)
        best = optimize.differential_evolution(
            case.margin_at(rule),
            bounds,
            rng=1,
            maxiter=200,
            popsize=8,
            tol=1e-10,
            polish=False,
            vectorized=True,
            updating="deferred",
        )
        reported = found[rule].margin
        assert reported is not None
        assert reported <= best.fun + OPTIMISM * max(1.0, abs(best.fun))
        assert best.fun - reported <= PESSIMISM


def test_some_worst_cases_lie_inside_the_box(
    cases: list[Case], findings: list[dict[str, Finding]]
) -> None:
    """With the Zener voltage near half the supply the Zener is hottest inside its tolerance."""
    inside = 0
    for case, found in zip(cases, findings, strict=True):
        low, high = case.ranges["v_zt"]
        corner = found["no-load-dissipation"].corner
        assert corner is not None
        inside += low < corner["zener.voltage"] < high
    assert inside >= 3


def test_proofs_meet_the_worst_points(findings: list[dict[str, Finding]]) -> None:
    """Every rule is decided: a failure by its witness, the rest by a bound."""
    assert all(found[rule].proven for found in findings for rule in LOADS)
