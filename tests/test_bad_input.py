"""Bad input ends in a sentence with its place, never in a traceback, and stops nothing else."""

import os
import stat
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from reglint.cli import cli
from reglint.errors import UsageError

GOOD = """format: 1
kind: zener-shunt
name: good
supply: {voltage: {min: 11 V, nom: 12 V, max: 13 V}}
output: {voltage: {min: 4 V, max: 5.8 V}}
loads: {gauge: {current: {min: 0.5 mA, nom: 1 mA, max: 2 mA}}}
ambient: {min: 0 °C, nom: 25 °C, max: 40 °C}
series_resistor: {resistance: 470 ohm ± 5 %, power_rating: 0.5 W, zero_power_at: 155 °C}
zener: {part: 1N4733A, minimum_current: 5 mA, tempco: {min: -1.5 mV/K, max: 1.5 mV/K}}
"""


UNMATCHED = "the waiver of prefered-value matches nothing: there is no such rule"


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Return a working folder with one sound spec in it."""
    (tmp_path / "good.reg.yaml").write_text(GOOD, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def run(*words: str) -> Result:
    """Return what a command comes to; nothing but our own refusals may escape it."""
    result = CliRunner().invoke(cli, words)
    if result.exception and not isinstance(result.exception, SystemExit | UsageError):
        raise result.exception
    return result


def changed(old: str, new: str) -> bytes:
    """Return the sound spec with one text in place of another."""
    assert old in GOOD
    return GOOD.replace(old, new).encode()


CASES = {
    "not UTF-8": (b"name: gr\xfcn\n", 1, 9, "byte 0xFC at offset 8"),
    "empty": (b"", 1, 1, "the file is empty: write a first line such as format: 1"),
    "comments only": (b"# nothing yet\n", 1, 1, "the file is empty"),
    "tab": (b"supply:\n\tvoltage: 12 V\n", 2, 1, "indent with blanks, not with a tab"),
    "duplicate key": (changed("name: good", "name: good\nname: bad"), 4, 1, "name"),
    "alias": (changed("470 ohm ± 5 %", "*value"), 8, 31, "the alias *value is not read"),
    "anchor": (changed("470 ohm ± 5 %", "&a 470 ohm"), 8, 31, "&a"),
    "tag": (changed("12 V", "!!float 12"), 4, 36, "!!float"),
    "deep": (b"a: " + b"[" * 60 + b"]" * 60, 1, 27, "deep"),
    "no unit": (changed("min: 11 V", "min: 11"), 4, 25, "supply.voltage: 11 needs a unit, for example 11 V"),
    "wrong unit": (changed("min: 11 V", "min: 11 A"), 4, 25, "supply.voltage: 11 A is a current; a voltage is wanted here"),
    "comma": (changed("{min: 0 °C, nom: 25 °C, max: 40 °C}", "25,5 °C"), 7, 10, "ambient: 25,5 °C: a comma is not a decimal point here; write 25.5 °C"),
    "min above max": (changed("min: 11 V", "min: 14 V"), 4, 20, "supply.voltage: a range runs from min over nom to max, but here min 14 V, nom 12 V, max 13 V"),
    "negative tolerance": (changed("± 5 %", "± -5 %"), 8, 31, "-5 %: a tolerance is written without a sign"),
    "zero resistance": (changed("470 ohm ± 5 %", "0 ohm"), 8, 31, "series_resistor.resistance: 0 ohm must be more than 0 ohm"),
    "tolerance of all": (changed("± 5 %", "± 100 %"), 8, 31, "series_resistor.resistance: 0 ohm must be more than 0 ohm"),
    "unknown part": (changed("1N4733A", "1N4733"), 9, 15, "zener.part: no part 1N4733 is known; the nearest known one is 1N4733A"),
    "unknown kind": (changed("zener-shunt", "zener-shut"), 2, 7, "there is no kind zener-shut; the nearest known one is zener-shunt"),
    "no kind": (b"format: 1\n", 1, 1, "kind is missing; write one of: zener-shunt"),
    "unknown key": (changed("ambient", "ambiant"), 7, 1, "ambiant is not known here; the nearest known one is ambient"),
    "unknown policy": (GOOD.encode() + b"derating: half-powr\n", 10, 11, "there is no derating policy half-powr; the nearest known one is half-power"),
    "bad date": (GOOD.encode() + b"waivers: {preferred-value: {reason: r, approved_by: a, until: soon}}\n", 10, 63, "waivers.preferred-value.until: soon is no date; write one such as 2027-06-30"),
    "a list": (b"- 1\n", 1, 3, "a document is lines"),
    "broken brackets": (changed("max: 13 V}}", "max: 13 V}"), 4, 9, "a comma or the closing bracket is missing"),
    "load without figure": (changed("gauge: {current: {min: 0.5 mA, nom: 1 mA, max: 2 mA}}", "gauge: {}"), 6, 16, "loads.gauge: state current or resistance"),
    "nothing stands here": (changed("name: good", "name:"), 3, 5, "nothing stands here"),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES)
def test_a_bad_spec_is_told_at_its_place(case: str, folder: Path) -> None:
    """The place and the sentence are there, and the sound spec beside it is still checked."""
    data, line, column, message = CASES[case]
    (folder / "bad.reg.yaml").write_bytes(data)
    result = run("check", ".", "--report", "lines", "--everything")
    lines = [each for each in result.stdout.splitlines() if "bad.reg.yaml" in each]
    assert any(each.startswith(f"bad.reg.yaml:{line}:{column}: unreadable: ") for each in lines), (
        lines
    )
    assert any(message in each for each in lines), lines
    assert sum("good.reg.yaml" in each for each in result.stdout.splitlines()) >= 10
    assert result.exit_code == 2


def test_everything_wrong_in_a_file_is_told_in_one_run(folder: Path) -> None:
    """Unknown keys, wrong units and unknown parts of one file come together."""
    text = GOOD.replace("11 V", "11").replace("470 ohm", "470 V").replace("1N4733A", "x")
    (folder / "bad.reg.yaml").write_text(text + "colour: red\n", encoding="utf-8")
    result = run("check", "bad.reg.yaml", "--report", "lines")
    assert [each.split(":")[1] for each in result.stdout.splitlines()] == ["4", "8", "9", "10"]


def test_a_regulator_that_never_regulates_is_a_finding(folder: Path) -> None:
    """A supply below the Zener voltage leaves the diode off: a failure, no crash."""
    text = GOOD.replace("{min: 11 V, nom: 12 V, max: 13 V}", "{min: 2 V, nom: 3 V, max: 4 V}")
    (folder / "low.reg.yaml").write_text(text, encoding="utf-8")
    result = run("check", "low.reg.yaml", "--report", "lines")
    assert "fail: minimum-zener-current: good: zener.current is 0 A at worst" in result.stdout
    assert result.exit_code == 1


@pytest.mark.parametrize(
    ("waiver", "message"),
    [
        (
            "prefered-value: {reason: r, approved_by: a, until: 2027-01-01}",
            f"{UNMATCHED}; the nearest known one is preferred-value",
        ),
        (
            "preferred-value: {reason: r, approved_by: a, until: 2026-11-30}",
            "the waiver of preferred-value expired on 2026-11-30",
        ),
        (
            "preferred-value: {reason: r, approved_by: a, until: 2027-01-01}",
            "the waiver of preferred-value matches nothing: the rule passes",
        ),
    ],
)
def test_a_waiver_that_does_not_work_is_a_warning(waiver: str, message: str, folder: Path) -> None:
    """Unknown rules, expired dates and needless waivers are told loudly."""
    (folder / "good.reg.yaml").write_text(f"{GOOD}waivers:\n  {waiver}\n", encoding="utf-8")
    result = run("check", ".", "--today", "2026-12-01", "--report", "lines")
    assert result.stdout == f"good.reg.yaml:11:3: warn: waiver: good: {message}\n"
    assert result.exit_code == 0


def test_an_unreadable_house_rule_leaves_the_others_at_work(folder: Path) -> None:
    """The place is in the rule's file; built-in rules and the other house rule still run."""
    rules = folder / "house/zener-shunt"
    rules.mkdir(parents=True)
    (folder / "reglint.yaml").write_text("format: 1\nrules: [house]\n", encoding="utf-8")
    rule = (
        "format: 1\ntitle: T\ncondition: loaded\nholds: {holds}\npoint_at: supply.voltage\n"
        "reason: R.\nsource: S.\nremedy: M.\npasses: {{}}\nfails: {{}}\n"
    )
    (rules / "bad.yaml").write_text(rule.format(holds="supply.voltage >= 1 A"), encoding="utf-8")
    (rules / "good.yaml").write_text(rule.format(holds="supply.voltage >= 12 V"), encoding="utf-8")
    (rules / "worse.yaml").write_text(rule.format(holds="supply.voltag >= 1 V"), encoding="utf-8")
    result = run("check", ".", "--report", "lines")
    lines = result.stdout.splitlines()
    assert lines[0] == (
        "house/zener-shunt/bad.yaml:4:25: unreadable: this is in A, but V is wanted (in 1 A)"
    )
    assert lines[1] == (
        "house/zener-shunt/worse.yaml:4:8: unreadable: there is no field or quantity supply.voltag;"
        " the nearest known one is supply.voltage (in supply.voltag)"
    )
    assert lines[2].startswith("good.reg.yaml:4:20: fail: good: good: supply.voltage is 11 V")
    assert result.exit_code == 2


def test_a_house_rule_cannot_replace_a_built_in_one(folder: Path) -> None:
    """A rule of the same name is refused: replacing one silently would be a waiver."""
    rules = folder / "house/zener-shunt"
    rules.mkdir(parents=True)
    (folder / "reglint.yaml").write_text("format: 1\nrules: [house]\n", encoding="utf-8")
    (rules / "shock-caution.yaml").write_text("format: 1\n", encoding="utf-8")
    result = run("check", ".", "--report", "lines")
    assert result.stdout == (
        "house/zener-shunt/shock-caution.yaml:1:1: unreadable: a rule shock-caution exists already"
        " in rules/zener-shunt/shock-caution.yaml; rename this one\n"
    )


def test_settings_may_not_climb_out_of_the_repository(folder: Path) -> None:
    """A rules folder outside the folder of reglint.yaml is refused."""
    (folder / "reglint.yaml").write_text("format: 1\nrules: [../other]\n", encoding="utf-8")
    result = run("check", ".", "--report", "lines")
    assert result.stdout == (
        "reglint.yaml:1:1: unreadable: rules: ../other lies outside the folder of reglint.yaml\n"
    )


@pytest.mark.parametrize(
    ("path", "message"),
    [
        ("missing.reg.yaml", "missing.reg.yaml: there is no such file or folder"),
        ("empty", "empty: there is no spec here (*.reg.yaml)"),
    ],
)
def test_a_path_that_leads_nowhere_is_misuse(path: str, message: str, folder: Path) -> None:
    """A named path without a spec is an error, not a silent success."""
    (folder / "empty").mkdir()
    with pytest.raises(UsageError) as refused:
        raise run("check", path).exception or AssertionError
    assert str(refused.value) == message


def test_a_hundred_megabytes_are_refused_at_once(folder: Path) -> None:
    """A huge file is not read beyond the limit."""
    with (folder / "huge.reg.yaml").open("wb") as file:
        file.truncate(100 << 20)
    result = run("check", "huge.reg.yaml", "--report", "lines")
    assert "huge.reg.yaml:1:1: unreadable: the file has 1,048,577 bytes, more than" in result.stdout


@pytest.mark.skipif(os.geteuid() == 0, reason="root may read everything")
def test_a_file_without_permission_is_a_problem(folder: Path) -> None:
    """What may not be read is told, and the rest is checked."""
    (folder / "good.reg.yaml").chmod(stat.S_IWUSR)
    assert "this file cannot be read" in run("check", ".").stdout


def test_an_equation_without_a_root_is_never_a_pass(folder: Path) -> None:
    """A house kind whose equation has no root gives a warning that says where."""
    kind = folder / "house/odd"
    kind.mkdir(parents=True)
    (folder / "reglint.yaml").write_text("format: 1\nrules: [house]\n", encoding="utf-8")
    (kind / "kind.yaml").write_text(
        """format: 1
title: Odd
about: Nothing.
source: Nowhere.
components: {}
fields:
  supply.voltage: {unit: V, role: swept, required: true, says: Supply.}
quantities:
  odd.voltage:
    unit: V
    says: Never zero.
    solve: {falling: supply.voltage + 1 V - 0 * odd.voltage, from: 0 V, to: 9 V, otherwise: 0 V}
conditions:
  loaded: {says: All.}
sample: {}
""",
        encoding="utf-8",
    )
    (kind / "odd-rule.yaml").write_text(
        "format: 1\ntitle: T\ncondition: loaded\nholds: odd.voltage >= 1 V\n"
        "point_at: supply.voltage\nreason: R.\nsource: S.\nremedy: M.\npasses: {}\nfails: {}\n",
        encoding="utf-8",
    )
    (folder / "odd.reg.yaml").write_text(
        "format: 1\nkind: odd\nname: odd\nsupply: {voltage: 5 V}\n", encoding="utf-8"
    )
    result = run("check", "odd.reg.yaml", "--report", "lines")
    assert result.stdout.startswith(
        "odd.reg.yaml:4:19: warn: odd-rule: odd: not checked: odd.voltage has no value at"
    )


@pytest.mark.parametrize("line", range(len(GOOD.splitlines())))
@pytest.mark.parametrize("junk", ["", "x", "{", "]: &", "a: b: c", "\u2028", "null", "{}", "- 1"])
def test_no_mutation_of_a_spec_ends_in_a_traceback(line: int, junk: str, folder: Path) -> None:
    """Any line replaced by junk, or doubled, ends in a status and words."""
    lines = GOOD.splitlines()
    for new in ([junk], [lines[line], lines[line]], [lines[line].split(":")[0] + ": " + junk]):
        text = "\n".join([*lines[:line], *new, *lines[line + 1 :]])
        (folder / "good.reg.yaml").write_text(text, encoding="utf-8")
        result = run("check", "good.reg.yaml", "--gate", "never")
        assert result.exit_code in (0, 2)
        assert result.stdout
