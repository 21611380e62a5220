"""Laws of the worst case: nothing inside the ranges is worse, and wider ranges are no better.

Every point is a spec of its own, with single values for ranges, read and judged like any other.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from datetime import date
from itertools import chain
from random import Random

import pytest
from hypothesis import Phase, assume, given, settings
from hypothesis import strategies as st

from reglint.finding import Finding, Outcome
from reglint.judge import Wanted, judge
from reglint.project import Project
from reglint.proof import TOLERANCE

Findings = Mapping[str, Finding]
Judge = Callable[[list["Regulator"]], list[Findings]]

#: A difference of margins that may be rounding.
ROUNDING = 1e-9
#: Rules whose measure jumps where the diode turns off: next to the jump the worst point is
#: looked for no closer than the proof's own tolerance.
JUMPING = {"line-regulation", "ripple-rejection"}
#: Swept fields and their units; a load's resistance and current among them.
UNITS = {
    "supply": "V",
    "resistance": "ohm",
    "voltage": "V",
    "impedance": "ohm",
    "tempco": "V/K",
    "ambient": "°C",
    "current": "A",
    "load": "ohm",
}
#: Rules whose measure the ranges do not contain: two compare nominal values, and the third
#: sets the loads to the ends of their own range, which a single value does not have.
APART = {"preferred-value", "zener-test-points", "load-regulation"}
#: Rules whose limit is the same everywhere, so that their bound holds for every value; the
#: sign tells on which side.
STEADY = {"minimum-zener-current": 1.0, "output-voltage-low": 1.0, "output-voltage-high": -1.0}


@dataclass(frozen=True)
class Regulator:
    """A regulator's ranges, and what is not swept."""

    ranges: Mapping[str, tuple[float, float]]
    knee: str
    test: str
    thermal: float
    minimum: float = 0.004

    def text(self, name: str) -> str:
        """Return it as a spec of that name."""
        span = {
            path: f"{{min: {low!r} {UNITS[path]}, max: {high!r} {UNITS[path]}}}"
            for path, (low, high) in self.ranges.items()
        }
        return f"""
format: 1
kind: zener-shunt
name: {name}
supply: {{voltage: {span["supply"]}, current_limit: 50 mA}}
output:
  voltage: {{min: 4.5 V, max: 6 V}}
  absolute_maximum: 30 V
  line_regulation: 100 mV/V
  load_regulation: 300 mV
  ripple_rejection: 10
loads:
  steady: {{current: {span["current"]}, removable: false}}
  probe: {{resistance: {span["load"]}}}
ambient: {span["ambient"]}
series_resistor:
  resistance: {span["resistance"]}
  power_rating: 0.5 W
  zero_power_at: 155 °C
  voltage_rating: 50 V
zener:
  voltage: {span["voltage"]}
  test_current: 49 mA
  impedance: {span["impedance"]}
  knee_current: 1 mA
  {self.knee}
  minimum_current: {self.minimum!r} A
  tempco: {span["tempco"]}
  thermal_resistance: {self.thermal!r} K/W
  test: {self.test}
  power_rating: 1 W
  derate_above: 50 °C
  junction_max: 175 °C
  current_max: 178 mA
"""


@st.composite
def spans(draw: st.DrawFn, low: float, high: float, widest: float) -> tuple[float, float]:
    """Draw a range, sometimes of a single value."""
    start = draw(st.floats(low, high))
    return start, start + draw(st.floats(0.0, widest))


@st.composite
def regulators(draw: st.DrawFn) -> Regulator:
    """Draw a 5 V regulator that regulates, starves or does either within its ranges."""
    ranges = {
        "supply": draw(spans(5.0, 16.0, 4.0)),
        "resistance": draw(spans(100.0, 900.0, 100.0)),
        "voltage": draw(spans(4.7, 5.3, 0.5)),
        "impedance": draw(spans(0.0, 5.0, 5.0)),
        "tempco": draw(spans(-0.003, 0.001, 0.002)),
        "ambient": draw(spans(-40.0, 60.0, 60.0)),
        "current": draw(spans(0.0, 0.006, 0.006)),
        "load": draw(spans(800.0, 9e3, 9e3)),
    }
    exponent = draw(st.sampled_from([0.0, 0.7, 1.0, 1.2]))
    test, thermal = draw(st.sampled_from(["settled", "pulsed"])), draw(st.floats(0.0, 250.0))
    return Regulator(ranges, f'knee_exponent: "{exponent}"', test, thermal)


#: Several are drawn at once: judged together they cost little more than one.
SEVERAL = st.lists(regulators(), min_size=5, max_size=5)
SEEDS = st.integers(0, 2**32)
#: Points of each box.
EACH = 10


def few(examples: int) -> settings:
    """Return settings for examples of a second each, which to shrink would take minutes."""
    return settings(max_examples=examples, phases=(Phase.explicit, Phase.generate))


def points(regulator: Regulator, seed: int, count: int) -> list[Regulator]:
    """Return random points of a regulator's box, ends twice as often as what is between."""
    random = Random(seed)

    def value(low: float, high: float) -> tuple[float, float]:
        some = random.choice([low, high, random.uniform(low, high)])
        return some, some

    return [
        replace(regulator, ranges={name: value(*r) for name, r in regulator.ranges.items()})
        for _ in range(count)
    ]


@pytest.fixture(scope="module")
def judged(tmp_path_factory: pytest.TempPathFactory) -> Judge:
    """Return a judge of regulators: their findings by rule, in order."""
    folder = tmp_path_factory.mktemp("laws")
    project = Project(folder)

    def judged(regulators: list[Regulator]) -> list[Findings]:
        path = folder / "drawn.reg.yaml"
        texts = [each.text(f"drawn-{number}") for number, each in enumerate(regulators)]
        path.write_text("---".join(texts), encoding="utf-8")
        cases, problems = project.read(path)
        assert not problems
        verdicts = judge(cases, Wanted(date(2026, 12, 1), everything=True))
        return [{each.rule: each for each in verdict.findings} for verdict in verdicts]

    return judged


def never_better(wide: Findings, narrow: Findings) -> None:
    """Demand that no rule's margin is better in wider ranges."""
    for rule in wide.keys() - APART:
        inside, outside = narrow[rule].margin, wide[rule].margin
        if outside is not None:
            assert inside is not None, rule
            slack = TOLERANCE if rule in JUMPING else ROUNDING
            assert outside <= inside + slack * max(1.0, abs(inside)), rule


def not_beyond(bound: float | None, value: float | None, sign: float) -> None:
    """Demand that a value, times the sign, is not less than a bound, if there is one."""
    if bound is not None:
        assert value is not None
        assert sign * (value - bound) >= -ROUNDING * max(1.0, abs(bound))


@few(4)
@given(SEVERAL, SEEDS)
def test_no_point_of_the_box_is_worse_than_reported(
    judged: Judge, drawn: list[Regulator], seed: int
) -> None:
    """Nothing inside the ranges has less margin than the worst case, or is beyond its bound."""
    inside = [points(each, seed, EACH) for each in drawn]
    found = judged([*drawn, *chain.from_iterable(inside)])
    for row, whole in enumerate(found[: len(drawn)]):
        assert len(whole.keys() - APART) == 15
        for part in found[len(drawn) :][EACH * row : EACH * (row + 1)]:
            never_better(whole, part)
            for rule, sign in STEADY.items():
                not_beyond(whole[rule].bound, part[rule].value, sign)


@few(4)
@given(SEVERAL, SEEDS)
def test_what_fails_at_a_point_never_passes(
    judged: Judge, drawn: list[Regulator], seed: int
) -> None:
    """Where a point inside the ranges breaks a rule, the ranges do not pass it."""
    inside = [points(each, seed, EACH) for each in drawn]
    found = judged([*drawn, *chain.from_iterable(inside)])
    for row, whole in enumerate(found[: len(drawn)]):
        for part in found[len(drawn) :][EACH * row : EACH * (row + 1)]:
            for rule in whole.keys() - APART:
                margin = part[rule].margin
                if margin is not None and margin < -ROUNDING:
                    assert whole[rule].outcome is not Outcome.PASS, rule


@few(8)
@given(st.lists(regulators(), min_size=25, max_size=25))
def test_everything_is_decided(judged: Judge, drawn: list[Regulator]) -> None:
    """Two hundred regulators, starved ones among them: each rule has its witness or its proof."""
    for found in judged(drawn):
        evaluated = [each for each in found.values() if each.margin is not None]
        assert len(evaluated) >= 16
        assert [each.rule for each in evaluated if not each.proven] == []


def test_a_jump_between_the_corners_is_met(judged: Judge) -> None:
    """Line regulation is worst just where the diode turns off, at no corner of these ranges."""
    exact = {"resistance": 875.0, "impedance": 1.0, "tempco": 0.0, "ambient": 25.0}
    fixed = {name: (value, value) for name, value in {**exact, "current": 2.24e-3}.items()}
    swept = {"supply": (7.6, 9.3), "voltage": (4.8, 5.1), "load": (3300.0, 10500.0)}
    starved = {"supply": (7.6, 7.6), "voltage": (5.1, 5.1), "load": (6000.0, 6000.0)}
    whole, point = judged(
        [
            Regulator({**fixed, **ranges}, 'knee_exponent: "0"', "settled", 0.0)
            for ranges in (swept, starved)
        ]
    )
    reported, found = whole["line-regulation"].margin, point["line-regulation"].margin
    assert found == pytest.approx(-7.727, abs=0.001)
    assert reported is not None
    assert found is not None
    assert reported <= found


@few(8)
@given(regulators(), st.floats(0.01, 0.5), st.sampled_from([-1, 1]))
def test_a_wider_range_of_any_field_is_never_better(
    judged: Judge, drawn: Regulator, more: float, direction: int
) -> None:
    """Widening one field's range, up or down, improves no rule's margin."""

    def wider(name: str) -> Regulator:
        low, high = drawn.ranges[name]
        step = more * max(high - low, 0.01 * abs(high))
        floor = {"tempco": -1.0, "ambient": -273.0}.get(name, 0.0)
        widened = (low, high + step) if direction > 0 else (max(floor, low - step), high)
        return replace(drawn, ranges={**drawn.ranges, name: widened})

    narrow, *wide = judged([drawn, *map(wider, UNITS)])
    for each in wide:
        never_better(each, narrow)


@few(2)
@given(SEVERAL, SEEDS)
def test_headroom_is_left_exactly_while_the_zener_has_its_minimum(
    judged: Judge, drawn: list[Regulator], seed: int
) -> None:
    """Headroom is left when a little less than the Zener's current is wanted, not a little more."""
    inside = [point for each in drawn for point in points(each, seed, EACH)]
    currents = [found["minimum-zener-current"].value or 0.0 for found in judged(inside)]
    conducting = [(p, i) for p, i in zip(inside, currents, strict=True) if i > 1e-4]
    assume(len(conducting) >= EACH)
    for factor, left in ((1.0 - 1e-4, True), (1.0 + 1e-4, False)):
        wanting = [replace(point, minimum=factor * current) for point, current in conducting]
        for found in judged(wanting):
            headroom = found["supply-headroom"].margin
            assert headroom is not None
            assert (headroom >= 0.0) is left


@few(3)
@given(SEVERAL, st.floats(0.5, 10.0), SEEDS)
def test_equal_impedances_make_a_straight_line(
    judged: Judge, drawn: list[Regulator], impedance: float, seed: int
) -> None:
    """With the knee's impedance that of the test point, V_Z = V_ZT + Z (I_Z - I_ZT)."""
    fixed = {"impedance": (impedance, impedance), "tempco": (0.0, 0.0)}
    straight = [
        replace(
            point,
            ranges={**point.ranges, **fixed},
            knee=f"knee_impedance: {impedance!r} ohm",
            thermal=0.0,
        )
        for each in drawn
        for point in points(each, seed, EACH)
    ]
    for point, found in zip(straight, judged(straight), strict=True):
        at = {name: low for name, (low, _) in point.ranges.items()}
        # The supply and the loads as one source behind one resistance.
        behind = 1.0 / (1.0 / at["resistance"] + 1.0 / at["load"])
        source = behind * (at["supply"] / at["resistance"] - at["current"])
        above_knee = source - at["voltage"] + impedance * 0.049
        current = max(0.0, above_knee / (behind + impedance))
        assert found["minimum-zener-current"].value == pytest.approx(current, rel=1e-9, abs=1e-12)
