"""The design window: against a scan of written-out specs, and where rules exclude each other."""

import json
from collections.abc import Callable
from pathlib import Path

import eseries
import pytest
from click.testing import CliRunner

from reglint.cli import cli
from reglint.finding import Outcome, Run
from reglint.reports import Options, renderer


def test_the_window_is_what_a_scan_finds(
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    check: Callable[..., Run],
    sample: Callable[..., str],
) -> None:
    """The values said to pass are those whose specs, written out one by one, pass every rule.

    The scan's values come from the library eseries.
    """
    path = tmp_path / "sample.reg.yaml"
    path.write_text(sample(), encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    told = CliRunner().invoke(cli, ["window", path.name]).stdout
    scan = sorted(eseries.erange(eseries.E24, 47.0, 4700.0))
    texts = [sample({"series_resistor.resistance": f"{v:g} ohm ± 5 %"}) for v in scan]
    run = check(*texts, everything=False)
    clean = [
        f"{value:g} ohm" if value < 1000.0 else f"{value / 1000.0:g} kohm"
        for value, verdict in zip(scan, run.verdicts, strict=True)
        if verdict.outcome is Outcome.PASS
    ]
    assert told.splitlines()[1] == f"  every rule passes at  {', '.join(clean)}"


def test_rules_that_exclude_each_other_are_named(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, sample: Callable[..., str]
) -> None:
    """A heavy load wants a small resistor, a small Zener a large one: no value does."""
    changes = {
        "loads.gauge.current": "{min: 0 mA, max: 12 mA}",
        "zener.current_max": "18 mA",
        **dict.fromkeys(f"output.{each}_regulation" for each in ("line", "load")),
        "output.ripple_rejection": None,
        "output.voltage": None,
    }
    text = sample(changes).replace('"{min: 0 mA, max: 12 mA}"', "{min: 0 mA, max: 12 mA}")
    (tmp_path / "tight.reg.yaml").write_text(text, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    told = CliRunner().invoke(cli, ["window", "tight.reg.yaml"]).stdout.splitlines()
    assert told[1] == "  no standard value holds"
    assert [line.split()[0] for line in told[2:4]] == [
        "maximum-zener-current",
        "minimum-zener-current",
    ]


def test_a_failing_spec_is_told_what_would_hold(
    check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """The check itself names the values, in words and in numbers; a passing spec needs none."""
    failing, passing = sample({"series_resistor.resistance": "1.5 kohm ± 5 %"}), sample()
    run = check(failing, passing.replace("gauge-reference", "other"), everything=False)
    values = run.verdicts[0].windows["series_resistor.resistance"]
    assert 470.0 in values
    assert 1500.0 not in values
    assert run.verdicts[1].windows == {}
    text = renderer("text")(run, Options())
    assert f"    would hold series_resistor.resistance at {values[0]:g} ohm, " in text
    report = json.loads(renderer("json")(run, Options()))
    (finding, *_) = report["specs"][0]["findings"]
    assert finding["window"] == {"series_resistor.resistance": list(values)}


def test_a_value_named_by_the_window_mends_a_spec(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, sample: Callable[..., str]
) -> None:
    """A failing resistor, exchanged for a value of the window, passes every rule."""
    text = sample({"series_resistor.resistance": "1.5 kohm ± 5 %"})
    (tmp_path / "a.reg.yaml").write_text(text, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    assert CliRunner().invoke(cli, ["check"]).exit_code == 1
    told = CliRunner().invoke(cli, ["window", "a.reg.yaml"]).stdout.splitlines()[1]
    value = told.split("at  ")[1].split(", ")[0]
    supposed = f"gauge-reference:series_resistor.resistance={value} ± 5 %"
    result = CliRunner().invoke(cli, ["check", "--suppose", supposed])
    assert result.exit_code == 0
    assert "1 spec: 0 fail, 0 warn" in result.stdout
