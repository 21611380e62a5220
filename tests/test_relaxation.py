"""Relaxations: figures that give way, each tried again in a spec written out by hand."""

from collections.abc import Callable, Sequence
from pathlib import Path

import pytest
from click.testing import CliRunner

from reglint.cli import cli
from reglint.finding import Outcome, Run
from reglint.lever import Lever
from reglint.relaxation import Move, Relaxation, nearest, told, verified
from reglint.spec import Term

LOAD = Lever("loads.probe.current", "A", 0.008, 0.0, Term("loads.probe.current", 0.0, 0.004, 0.008))
RATING = Lever("zener.power_rating", "W", 0.5, 5.0)


def above(least: float) -> Callable[[Sequence[Move]], list[tuple[float, ...]]]:
    """Return a judge under which one value holds from a rating on, and nothing else helps."""
    return lambda moves: [
        (470.0,) if lever is RATING and value >= least else () for lever, value in moves
    ]


def test_the_least_move_is_found() -> None:
    """Half-way by half-way, up to a thousandth of the way; what never holds is left out."""
    ((lever, value),) = nearest([LOAD, RATING], above(0.7))
    assert lever is RATING
    assert 0.7 <= value < 0.7 * 1.01


def test_a_move_that_does_not_hold_once_rounded_is_not_told() -> None:
    """What is told was judged as it is told."""
    assert verified([(RATING, 0.699), (LOAD, 0.001)], above(0.7)) == []
    assert verified([(RATING, 0.7)], above(0.7)) == [Relaxation(RATING, 0.7, (470.0,))]


def test_relaxations_are_told_with_the_values_that_then_hold() -> None:
    """A reader sees the figure, its bound, what is stated, and what it buys."""
    relaxed = [Relaxation(RATING, 0.7, (470.0,)), Relaxation(LOAD, 0.005, (390.0, 430.0))]
    assert told(relaxed, "ohm") == (
        "  one figure may give way instead:\n"
        "    zener.power_rating at least 700 mW instead of 500 mW: then 470 ohm\n"
        "    loads.probe.current at most 5 mA instead of 8 mA: then 390 ohm, 430 ohm\n"
    )


def test_nothing_is_told_where_nothing_helps() -> None:
    """No heading without a line."""
    assert told([], "ohm") == ""


def test_a_relaxation_written_into_the_spec_mends_it(
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    check: Callable[..., Run],
    sample: Callable[..., str],
) -> None:
    """The figure told makes the value told hold; two percent less helps no value near it."""
    heavy = {
        "loads.gauge.current": "2 mA +10/-2 mA",
        "zener.current_max": "18 mA",
        **dict.fromkeys(f"output.{each}_regulation" for each in ("line", "load")),
        "output.ripple_rejection": None,
        "output.voltage": None,
    }
    path = tmp_path / "tight.reg.yaml"
    path.write_text(sample(heavy), encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    lines = CliRunner().invoke(cli, ["window", path.name]).stdout.splitlines()
    (line,) = (each for each in lines if "zener.current_max" in each)
    assert line == "    zener.current_max at least 29.6 mA instead of 18 mA: then 300 ohm"

    def fails(current: float, resistance: float) -> bool:
        changes = {
            "zener.current_max": f"{current} mA",
            "series_resistor.resistance": f"{resistance} ohm ± 5 %",
        }
        (verdict,) = check(sample({**heavy, **changes}), everything=False).verdicts
        return verdict.outcome is Outcome.FAIL

    assert not fails(29.6, 300.0)
    assert all(fails(29.1, resistance) for resistance in (240.0, 270.0, 300.0, 330.0, 360.0))
