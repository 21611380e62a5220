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
#: Points for each regulator under each of three conditions: 1,000,050 in all.
POINTS = 6_667
#: What the document allows: optimism of 1e-9, pessimism of 0.1 %.
OPTIMISM, PESSIMISM = 1e-9, 1e-3


def knee(x: Array, m: float) -> Array:
    """Integrate u**-m from 1 to x."""
    return np.log(x) if m == 1.0 else (x ** (1.0 - m) - 1.0) / (1.0 - m)


def zener_voltage(p: Point, fixed: Mapping[str, float], current: Array, volts: Array) -> Array:
    """Return the Zener voltage at a current, the junction warmed by ``volts`` times it."""
    i_zt, heat = fixed["i_zt"], fixed["r_th"]
    reference = 25.0 + fixed["settled"] * heat * p["v_zt"] * i_zt
    drift = p["s"] * (p["t_a"] + heat * volts * current - reference)
    bend = knee(np.maximum(current / i_zt, 1e-12), fixed["m"])
    return p["v_zt"] + i_zt * p["z"] * bend + drift


def headroom(p: Point, fixed: Mapping[str, float]) -> Array:
    """Return what the supply has above the least at which the Zener has its minimum.

    The Zener's own warming there by substitution, again and again, until it stands still.
    """
    least = np.full_like(p["v_s"], fixed["i_min"])
    volts = p["v_zt"]
    for _ in range(30):
        volts = zener_voltage(p, fixed, least, volts)
    return p["v_s"] - volts - p["r"] * (least + p["i_l"] + p["g"] * volts)


def operating_point(p: Point, fixed: Mapping[str, float]) -> tuple[Array, Array]:
    """Return Zener current and output voltage, by bisection on the current."""

    def node(current: Array) -> Array:
        return (p["v_s"] - p["r"] * (current + p["i_l"])) / (1.0 + p["r"] * p["g"])

    def excess(current: Array) -> Array:
        volts = node(current)
        return volts - zener_voltage(p, fixed, current, volts)

    low = np.full_like(p["v_s"], 1e-12 * fixed["i_zt"])
    high = np.maximum(p["v_s"] / p["r"], low)
    off = excess(low) <= 0.0
    for _ in range(64):
        middle = 0.5 * (low + high)
        above = excess(middle) > 0.0
        low, high = np.where(above, middle, low), np.where(above, high, middle)
    current = np.where(off, 0.0, 0.5 * (low + high))
    return current, np.maximum(node(current), 0.0)


def power_share(t: Array, full: float, zero: float) -> Array:
    """Return the share of a rating left at a temperature."""
    return np.clip((zero - t) / (zero - full), 0.0, 1.0)


def margins(p: Point, fixed: Mapping[str, float]) -> dict[str, Array]:
    """Return the margins of seven rules at points."""
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
        "supply-headroom": headroom(p, fixed) / p["v_s"],
    }


#: Which load currents each rule sees: the loads' full range, nothing, or anything between.
LOADS = {
    "minimum-zener-current": "loaded",
    "no-load-dissipation": "no_load",
    "zener-junction-temperature": "no_load",
    "resistor-dissipation": "any_load",
    "output-voltage-low": "any_load",
    "output-voltage-high": "any_load",
    "supply-headroom": "loaded",
}

#: Our short names under the names reports use.
NAMES = {
    "supply.voltage": "v_s",
    "series_resistor.resistance": "r",
    "zener.voltage": "v_zt",
    "zener.impedance": "z",
    "zener.tempco": "s",
    "ambient": "t_a",
    "load.current": "i_l",
    "load.conductance": "g",
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
            "settled": 0.0 if seed % 4 == 1 else 1.0,
            "p_z": 1.0,
            "p_r": 2.0,
            "v_min": v_zt * 0.8,
            "v_max": v_zt * 1.15,
        }
        self.z_zk = z_zk
        # Every other one feeds a resistive load as well; every fourth was read pulsed.
        g = random.uniform(1e-4, 1e-3)
        self.ranges["g"] = (0.6 * g, g) if seed % 2 else (0.0, 0.0)

    def text(self) -> str:
        """Return the regulator as a spec."""
        span = {
            name: f"{{min: {low!r} {unit}, max: {high!r} {unit}}}"
            for (name, (low, high)), unit in zip(
                self.ranges.items(), ("V", "ohm", "V", "ohm", "V/K", "°C", "A", "S"), strict=True
            )
        }
        fixed, (g_low, g_high) = self.fixed, self.ranges["g"]
        probe = ""
        if g_high:
            least, most = 1.0 / g_high, 1.0 / g_low
            probe = f", probe: {{resistance: {{min: {least!r} ohm, max: {most!r} ohm}}}}"
        return f"""
format: 1
kind: zener-shunt
name: random
supply: {{voltage: {span["v_s"]}}}
output: {{voltage: {{min: {fixed["v_min"]!r} V, max: {fixed["v_max"]!r} V}}}}
loads: {{load: {{current: {span["i_l"]}}}{probe}}}
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
  test: {"settled" if fixed["settled"] else "pulsed"}
  power_rating: 1 W
  derate_above: 50 °C
  junction_max: 175 °C
"""

    def box(self, condition: str) -> dict[str, tuple[float, float]]:
        """Return the ranges under an operating condition."""
        loads = {name: self.ranges[name] for name in ("i_l", "g")}
        least = {"loaded": 1.0, "no_load": 0.0, "any_load": 0.0}[condition]
        most = 0.0 if condition == "no_load" else 1.0
        return {**self.ranges, **{n: (least * lo, most * hi) for n, (lo, hi) in loads.items()}}

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
            unit = random.random((len(case.ranges), POINTS))
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


def test_the_worst_point_named_has_the_margin_reported(
    cases: list[Case], findings: list[dict[str, Finding]]
) -> None:
    """No worst case is pessimistic: each is met at its corner, a point of the box."""
    for case, found in zip(cases, findings, strict=True):
        for rule, condition in LOADS.items():
            corner = {NAMES[name]: value for name, value in (found[rule].corner or {}).items()}
            box = case.box(condition)
            for name, value in corner.items():
                # A conductance is the inverse of the resistance stated, to a last digit.
                slack = 1e-15 * abs(value)
                assert box[name][0] - slack <= value <= box[name][1] + slack, name
            point = {name: np.array([corner.get(name, low)]) for name, (low, _) in box.items()}
            at_corner = float(margins(point, case.fixed)[rule][0])
            assert found[rule].margin == pytest.approx(at_corner, rel=1e-9, abs=1e-9), rule


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


def test_every_verdict_without_resistive_loads_is_proven(
    cases: list[Case], findings: list[dict[str, Finding]]
) -> None:
    """Every rule is decided: a failure by its witness, the rest by a bound."""
    plain = [f for case, f in zip(cases, findings, strict=True) if case.ranges["g"] == (0.0, 0.0)]
    assert len(plain) == SPECS // 2
    assert all(found[rule].proven for found in plain for rule in LOADS)


def test_what_is_not_proven_is_rare_and_warns(findings: list[dict[str, Finding]]) -> None:
    """With resistive loads a diode that may just turn off defies a proof: at most 1 % do."""
    undecided = [f[rule] for f in findings for rule in LOADS if not f[rule].proven]
    assert len(undecided) <= SPECS * len(LOADS) // 100
    assert all(finding.outcome.value == "warn" for finding in undecided)
