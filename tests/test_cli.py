"""The command line: status, gate, colour, output files, and each command's words."""

import subprocess
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from reglint import __version__
from reglint.cli import cli, main
from reglint.errors import UsageError

NEAREST = "; the nearest known one is"
FAILING = """format: 1
kind: zener-shunt
name: starved
supply: {voltage: {min: 9 V, nom: 12 V, max: 13 V}}
output: {voltage: {min: 2 V, max: 5.8 V}}
loads: {gauge: {current: {min: 0.5 mA, nom: 1 mA, max: 9 mA}}}
ambient: {min: 0 °C, nom: 25 °C, max: 40 °C}
series_resistor: {resistance: 470 ohm ± 5 %, power_rating: 0.5 W, zero_power_at: 155 °C}
zener: {part: 1N4733A, minimum_current: 5 mA, tempco: {min: -1.5 mV/K, max: 1.5 mV/K}}
"""


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Return a working folder with one failing spec."""
    (tmp_path / "a.reg.yaml").write_text(FAILING, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def run(*words: str) -> Result:
    """Return what a command comes to."""
    return CliRunner().invoke(cli, words)


@pytest.mark.parametrize(("gate", "status"), [("fail", 1), ("warn", 1), ("never", 0)])
def test_the_gate_decides_the_status(gate: str, status: int, folder: Path) -> None:
    """A failure is at or above the gates fail and warn, and below never."""
    assert folder
    assert run("check", "--gate", gate).exit_code == status


def test_settings_give_the_gate(folder: Path) -> None:
    """Without the option the repository's own gate holds."""
    (folder / "reglint.yaml").write_text("format: 1\ngate: never\n", encoding="utf-8")
    assert run("check").exit_code == 0


def test_a_report_goes_to_a_file(folder: Path) -> None:
    """With --out nothing is printed, and the file has the report."""
    printed = run("check", "--report", "lines").stdout
    assert run("check", "--report", "lines", "--out", "report.txt").stdout == ""
    assert (folder / "report.txt").read_text(encoding="utf-8") == printed
    assert sorted(each.name for each in folder.iterdir()) == ["a.reg.yaml", "report.txt"]


def test_the_complete_log_is_an_option(folder: Path) -> None:
    """Only with --complete does the SARIF log have suppressions, empty ones included."""
    assert folder
    assert '"suppressions": []' in run("check", "--report", "sarif", "--complete").stdout
    assert "suppressions" not in run("check", "--report", "sarif").stdout


def test_an_older_report_survives_where_the_new_one_cannot_be_written(folder: Path) -> None:
    """Writing into a folder that is not there is misuse, and leaves nothing behind."""
    result = run("check", "--out", "missing/report.txt")
    assert isinstance(result.exception, UsageError)
    assert (
        str(result.exception) == "missing/report.txt cannot be written: No such file or directory"
    )
    assert [each.name for each in folder.iterdir()] == ["a.reg.yaml"]


@pytest.mark.parametrize(
    ("words", "variables", "coloured"),
    [
        ((), {}, False),
        ((), {"FORCE_COLOR": "1"}, True),
        ((), {"FORCE_COLOR": "1", "NO_COLOR": "1"}, False),
        (("--colour",), {"NO_COLOR": "1"}, True),
        (("--no-colour",), {"FORCE_COLOR": "1"}, False),
    ],
)
def test_colour_follows_wish_then_environment_then_terminal(
    words: tuple[str, ...],
    variables: dict[str, str],
    coloured: bool,  # noqa: FBT001 -- a parameter of the test
    folder: Path,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    """An explicit option wins, NO_COLOR beats FORCE_COLOR, and a pipe has no colour."""
    assert folder
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.delenv("FORCE_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm")
    for name, value in variables.items():
        monkeypatch.setenv(name, value)
    result = CliRunner().invoke(cli, ["check", *words], color=True)
    assert ("\x1b[31mfail\x1b[0m" in result.stdout) is coloured


def test_a_policy_can_be_chosen_for_all(folder: Path) -> None:
    """--derating takes the place of what specs and settings name."""
    assert folder
    plain = run("check", "--report", "json", "--everything").stdout
    strict = run("check", "--report", "json", "--everything", "--derating", "half-power").stdout
    assert '"limit": 1.0,' in plain
    assert '"limit": 0.5,' in strict


def test_a_changed_part_checks_its_whole_project(folder: Path) -> None:
    """A file of knowledge or settings stands for the specs that may depend on it."""
    (folder / "reglint.yaml").write_text("format: 1\n", encoding="utf-8")
    assert "starved" in run("check", "reglint.yaml").stdout


def test_a_spec_git_does_not_track_is_told(folder: Path) -> None:
    """What only this working tree has is checked, and said on standard error."""
    subprocess.run(["git", "init", "-q"], cwd=folder, check=True)
    result = run("check", "--report", "lines")
    told = "reglint: a.reg.yaml is not tracked by git yet: a check elsewhere will not see it\n"
    assert result.stderr == told
    subprocess.run(["git", "add", "a.reg.yaml"], cwd=folder, check=True)
    again = run("check", "--report", "lines")
    assert (again.stderr, again.stdout) == ("", result.stdout)


def test_an_ignored_spec_is_not_checked(folder: Path) -> None:
    """What git ignores is no part of the project."""
    subprocess.run(["git", "init", "-q"], cwd=folder, check=True)
    (folder / ".gitignore").write_text("b.reg.yaml\n", encoding="utf-8")
    (folder / "b.reg.yaml").write_text("nonsense", encoding="utf-8")
    assert "b.reg.yaml" not in run("check").stdout


def test_the_version_is_told() -> None:
    """--version names the program and its version."""
    assert run("--version").stdout == f"reglint {__version__}\n"


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (
            ("explain", "minimum-zener-curent"),
            f"nothing is called minimum-zener-curent{NEAREST} minimum-zener-current",
        ),
        (("starter", "zener"), "there is no kind zener (known: zener-shunt)"),
        (("parts", "1N4733"), f"no part 1N4733 is known{NEAREST} 1N4733A"),
        (("schema", "rul"), "there is no kind rul (known: zener-shunt)"),
        (("sheet", "a.reg.yaml", "--name", "x"), "a.reg.yaml has no spec x (it has: starved)"),
    ],
)
def test_misuse_is_told_in_a_sentence(
    words: tuple[str, ...],
    message: str,
    folder: Path,
    capsys: pytest.CaptureFixture[str],
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    """What a command cannot do ends in one line on standard error and status 2."""
    assert folder
    monkeypatch.setattr("sys.argv", ["reglint", *words])
    with pytest.raises(SystemExit) as ended:
        main()
    assert ended.value.code == 2
    assert capsys.readouterr().err == f"reglint: {message}\n"


def test_the_starter_passes_every_rule(folder: Path) -> None:
    """What starter prints is a sound spec that passes."""
    run("starter", "zener-shunt", "--out", "new.reg.yaml")
    result = run("check", "new.reg.yaml")
    assert result.stdout.startswith(
        "pass  gauge-reference (zener-shunt)  new.reg.yaml, line 11: 17"
    )
    assert result.exit_code == 0
    assert folder


def test_explain_gives_formula_reason_and_source() -> None:
    """A rule is explained by what it demands, when, why, and where that is published."""
    words = run("explain", "minimum-zener-current").stdout
    assert "holds     zener.current >= zener.minimum_current" in words
    assert "loaded: All loads connected" in words
    assert "common practice, no source" in words


def test_a_part_is_shown_with_its_source() -> None:
    """A part's figures come with the file and the source they are from."""
    words = run("parts", "1N4733A").stdout
    assert "voltage: 5.1 V ± 5 %" in words
    assert "file: rules/parts/jedec-1n4728a-1n4764a.part.yaml" in words


def test_a_run_is_reproducible(folder: Path) -> None:
    """Two runs give the same bytes."""
    assert folder
    assert run("check", "--report", "json").stdout == run("check", "--report", "json").stdout
