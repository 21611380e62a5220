"""The operating point against scipy's root finder on equations written here a second time."""

import math
from random import Random

import numpy as np
import pytest
from scipy.optimize import brentq

from reglint.circuit import Circuit, without_policy
from reglint.functions import REAL
from reglint.rulebook import Rulebook
from reglint.values import Values


@pytest.fixture(scope="module")
def circuit() -> Circuit:
    """Return the Zener shunt regulator under no policy."""
    kind = Rulebook().kind("zener-shunt")
    assert kind is not None
    return without_policy(kind)


def drawn(seed: int) -> dict[str, float]:
    """Return a random regulator: with and without heat, soft and straight knees, starved too."""
    random = Random(seed)
    v_zt = random.uniform(3.0, 60.0)
    return {
        "supply.voltage": v_zt * random.uniform(0.5, 3.0),
        "series_resistor.resistance": random.uniform(50.0, 2000.0),
        "load.current": random.choice([0.0, random.uniform(0.0, 0.02)]),
        "load.conductance": random.choice([0.0, 1.0 / random.uniform(500.0, 20e3)]),
        "ambient": random.uniform(-40.0, 85.0),
        "zener.voltage": v_zt,
        "zener.test_current": 0.25 / v_zt,
        "zener.impedance": random.choice([0.0, random.uniform(0.001, 0.05) * v_zt / (0.25 / v_zt)]),
        "zener.knee_exponent": random.choice([0.0, 1.0, random.uniform(0.3, 1.5)]),
        "zener.tempco": v_zt * random.uniform(-6e-4, 11e-4),
        "zener.thermal_resistance": random.choice([0.0, random.uniform(50.0, 300.0)]),
        "zener.test": random.choice([0.0, 1.0]),
    }


def by_scipy(p: dict[str, float]) -> tuple[float, float]:
    """Return Zener current and output voltage by Brent's method."""
    r, g, i_zt = p["series_resistor.resistance"], p["load.conductance"], p["zener.test_current"]
    m, heat = p["zener.knee_exponent"], p["zener.thermal_resistance"]
    reference = 25.0 + p["zener.test"] * heat * p["zener.voltage"] * i_zt

    def node(current: float) -> float:
        return (p["supply.voltage"] / r - current - p["load.current"]) / (1.0 / r + g)

    def excess(current: float) -> float:
        x = current / i_zt
        bend = math.log(x) if m == 1.0 else (x ** (1.0 - m) - 1.0) / (1.0 - m)
        junction = p["ambient"] + heat * node(current) * current
        drift = p["zener.tempco"] * (junction - reference)
        return node(current) - p["zener.voltage"] - i_zt * p["zener.impedance"] * bend - drift

    start = 1e-12 * i_zt
    if excess(start) <= 0.0:
        return 0.0, max(0.0, node(0.0))
    current = brentq(excess, start, p["supply.voltage"] / r, xtol=1e-18, rtol=8.9e-16)
    return current, max(0.0, node(current))


def test_four_hundred_random_operating_points(circuit: Circuit) -> None:
    """Current and voltage agree to 1e-9, whether the diode conducts or is starved."""
    points = [drawn(seed) for seed in range(400)]
    names = points[0]
    values = Values(circuit, REAL, {n: np.array([p[n] for p in points]) for n in names})
    with np.errstate(all="ignore"):
        currents, volts = values("zener.current"), values("rail.voltage")
    expected = [by_scipy(point) for point in points]
    assert currents == pytest.approx([each[0] for each in expected], rel=1e-8, abs=1e-13)
    assert volts == pytest.approx([each[1] for each in expected], rel=1e-9, abs=1e-9)
    off = sum(current == 0.0 for current, _ in expected)
    assert 20 < off < 380


@pytest.mark.parametrize(("share", "sign"), [(1.0 - 1e-6, 1.0), (1.0 + 1e-6, -1.0)])
def test_headroom_ends_where_the_zener_has_just_its_minimum(
    share: float, sign: float, circuit: Circuit
) -> None:
    """A millionth less than scipy's Zener current leaves headroom, a millionth more none."""
    points = [(point, by_scipy(point)[0]) for point in map(drawn, range(400))]
    conducting = [{**p, "zener.minimum_current": share * i} for p, i in points if i > 1e-6]
    assert len(conducting) > 100
    names = conducting[0]
    values = Values(circuit, REAL, {n: np.array([p[n] for p in conducting]) for n in names})
    with np.errstate(all="ignore"):
        headroom = values("supply.headroom")
    assert (np.sign(headroom) == sign).all()
