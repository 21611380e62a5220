"""The README holds: its commands are the ones that run, and its specs and rules are sound."""

import re
from pathlib import Path

import pytest
from click.testing import CliRunner

from reglint.cli import cli

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def blocks(language: str) -> list[str]:
    """Return the fenced blocks of a language."""
    return re.findall(rf"```{language}\n(.*?)```", README, flags=re.DOTALL)


def test_ci_runs_the_readme_s_test_command() -> None:
    """The second command of the README stands in .ci/run as it is, after the same set-up."""
    script = (ROOT / ".ci/run").read_text(encoding="utf-8").splitlines()
    setup, tests = (block.strip() for block in blocks("sh")[:2])
    assert tests in script
    for step in setup.split(" && ")[:2]:
        assert step in script


def test_the_tour_s_spec_gives_the_tour_s_finding(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The printed spec is starved as the printed report says."""
    (tmp_path / "tour.reg.yaml").write_text(blocks("yaml")[0], encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    printed = CliRunner().invoke(cli, ["check"]).stdout
    for line in (
        "    zener.current is 0 A at worst, at least 3 mA is wanted (margin −100 %)",
        "    remedy     Lower the series resistance, raise the lowest supply, or lighten the load.",
    ):
        assert line in printed
        assert line.strip() in README


def test_the_house_rule_of_the_readme_works(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The printed rule and settings are read, and the rule is listed."""
    _, rule, settings, _ = blocks("yaml")
    folder = tmp_path / "house-rules/zener-shunt"
    folder.mkdir(parents=True)
    (tmp_path / "parts").mkdir()
    (folder / "battery-drain.yaml").write_text(rule, encoding="utf-8")
    (tmp_path / "reglint.yaml").write_text(settings, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    result = CliRunner().invoke(cli, ["explain", "battery-drain"])
    assert "holds     supply.current <= 40 mA" in result.stdout
