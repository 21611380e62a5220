"""Comparing with a revision: what moved, why, what is worse, and what cannot be compared."""

import json
import subprocess
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner, Result

from reglint.cli import cli

Sample = Callable[..., str]
Repository = Callable[[Mapping[str, str]], Path]

PARTS = """
format: 1
title: A Zener of our own
source: Our own store (invented).
class: zener
parts:
  Z51:
    voltage: 5.1 V ± 5 %
    test_current: 49 mA
    impedance: 7 ohm
    knee_current: 1 mA
    knee_impedance: 550 ohm
    tempco: {min: -1.5 mV/K, max: 1.5 mV/K}
    power_rating: RATING
    derate_above: 50 °C
    junction_max: 175 °C
    thermal_resistance: 170 K/W
    current_max: 178 mA
"""


def git(folder: Path, *words: str) -> str:
    """Return what git answers."""
    named = ("-c", "user.name=tester", "-c", "user.email=tester@example.org")
    done = subprocess.run(
        ["git", *named, *words], cwd=folder, capture_output=True, text=True, check=True
    )
    return done.stdout.strip()


@pytest.fixture
def repository(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Repository:
    """Return a maker of a repository with one commit of some files, as the working folder."""

    def make(files: Mapping[str, str]) -> Path:
        folder = tmp_path / "work"
        folder.mkdir()
        write(folder, files)
        git(folder, "init", "-q", "-b", "main")
        git(folder, "add", ".")
        git(folder, "commit", "-q", "-m", "before")
        monkeypatch.chdir(folder)
        return folder

    return make


def write(folder: Path, files: Mapping[str, str]) -> None:
    """Write files below a folder."""
    for name, text in files.items():
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")


def run(*words: str) -> Result:
    """Return what the command line gives."""
    return CliRunner().invoke(cli, ["compare", "--today", "2026-12-01", *words])


def compared(*words: str) -> dict[str, Any]:
    """Return a comparison with HEAD as data."""
    found: dict[str, Any] = json.loads(run("--against", "HEAD", "--report", "json", *words).stdout)
    return found


def test_a_weaker_supply_is_worse_in_headroom(repository: Repository, sample: Sample) -> None:
    """The change of margin is that of two checks, and the line that changed is named."""
    folder = repository({"a.reg.yaml": sample()})
    write(folder, {"a.reg.yaml": sample({"supply.voltage.min": "9 V"})})
    (spec,) = compared()["specs"]
    checks = [headroom(folder, text) for text in (sample(), (folder / "a.reg.yaml").read_text())]
    moved = {each["rule"]: each for each in spec["rules"]}["supply-headroom"]
    assert moved["change"] == pytest.approx(checks[1] - checks[0], abs=1e-9)
    assert (moved["before"]["margin"], moved["after"]["margin"]) == pytest.approx(checks, abs=1e-9)
    lines = (folder / "a.reg.yaml").read_text(encoding="utf-8").splitlines()
    line = next(number for number, text in enumerate(lines, 1) if '"9 V"' in text)
    assert spec["causes"] == [
        {
            "what": "supply.voltage.min",
            "before": "11 V",
            "after": "9 V",
            "file": "a.reg.yaml",
            "line": line,
        }
    ]


def headroom(folder: Path, text: str) -> float:
    """Return the margin of the headroom rule that a check of a spec gives."""
    path = folder.parent / "alone.reg.yaml"
    path.write_text(text, encoding="utf-8")
    told = CliRunner().invoke(cli, ["check", str(path), "--report", "json", "--everything"]).stdout
    (spec,) = json.loads(told)["specs"]
    margin: float = {each["rule"]: each["margin"] for each in spec["findings"]}["supply-headroom"]
    return margin


def test_nothing_changed_is_nothing_told(repository: Repository, sample: Sample) -> None:
    """Blank lines and comments move no margin, whatever lines they move."""
    folder = repository({"a.reg.yaml": sample()})
    write(folder, {"a.reg.yaml": f"# The gauge.\n\n{sample()}"})
    found = compared()
    assert (found["specs"], found["same"], found["worse"]) == ([], 1, False)


@pytest.mark.parametrize(
    ("changes", "status"),
    [
        ({"supply.voltage.min": "8 V"}, 1),  # fails now
        ({"supply.voltage.max": "12.5 V"}, 0),  # better
        ({"series_resistor.resistance": "430 ohm ± 5 %"}, 0),  # both ways, all pass
        ({"series_resistor.resistance": "473 ohm ± 5 %"}, 1),  # warns now
    ],
)
def test_the_gate_shuts_on_what_is_worse(
    changes: Mapping[str, str], status: int, repository: Repository, sample: Sample
) -> None:
    """The status is 1 where an outcome is worse than before, and only there."""
    folder = repository({"a.reg.yaml": sample()})
    write(folder, {"a.reg.yaml": sample(changes)})
    assert run("--against", "HEAD").exit_code == status


def test_an_old_failure_passes_the_gate_until_it_gets_worse(
    repository: Repository, sample: Sample
) -> None:
    """A board may fail as it did; a failure with less margin is worse."""
    folder = repository({"a.reg.yaml": sample({"supply.voltage.min": "8 V"})})
    write(folder, {"a.reg.yaml": sample({"supply.voltage.min": "8 V", "purpose": "the gauge"})})
    assert run("--against", "HEAD").exit_code == 0
    write(folder, {"a.reg.yaml": sample({"supply.voltage.min": "7.9 V"})})
    assert run("--against", "HEAD").exit_code == 1
    assert run("--against", "HEAD", "--gate", "never").exit_code == 0


def test_a_new_spec_is_added_and_an_old_one_removed(repository: Repository, sample: Sample) -> None:
    """Specs are told apart by file and name."""
    folder = repository({"a.reg.yaml": sample()})
    (folder / "a.reg.yaml").unlink()
    write(folder, {"b.reg.yaml": sample({"name": "other"})})
    assert [(each["name"], each["word"]) for each in compared()["specs"]] == [
        ("gauge-reference", "removed"),
        ("other", "added"),
    ]


def test_a_spec_that_moved_is_the_same_spec(repository: Repository, sample: Sample) -> None:
    """A file that was renamed keeps its margins; no rule moved."""
    folder = repository({"rev-a/a.reg.yaml": sample()})
    git(folder, "mv", "rev-a", "rev-b")
    found = compared()
    assert (found["specs"], found["same"]) == ([], 1)


def test_a_part_that_changed_is_the_cause(repository: Repository, sample: Sample) -> None:
    """A spec that did not change itself moved by the figure of its part, and says so."""
    changes: dict[str, object] = {"zener": {"part": "Z51", "minimum_current": "5 mA"}}
    files = {"a.reg.yaml": sample(changes), "reglint.yaml": "format: 1\nparts: [parts]\n"}
    folder = repository({**files, "parts/ours.part.yaml": PARTS.replace("RATING", "1 W")})
    write(folder, {"parts/ours.part.yaml": PARTS.replace("RATING", "0.4 W")})
    (spec,) = compared()["specs"]
    assert [(each["what"], each["before"], each["after"]) for each in spec["causes"]] == [
        ("zener.power_rating", "1 W", "400 mW")
    ]
    assert spec["causes"][0]["file"] == "part Z51, parts/ours.part.yaml"
    assert "no-load-dissipation" in [each["rule"] for each in spec["rules"]]


def test_a_rule_that_changed_is_the_cause(repository: Repository, sample: Sample) -> None:
    """A tightened house rule moves margins of specs nobody touched."""
    rule = """
format: 1
title: Idle draw
condition: no_load
holds: supply.current <= LIMIT
point_at: series_resistor.resistance
reason: Battery.
source: Invented.
remedy: Raise it.
passes: {}
fails: {series_resistor.resistance: 20 ohm ± 5 %}
"""
    place = "house/zener-shunt/idle-draw.yaml"
    files = {"a.reg.yaml": sample(), "reglint.yaml": "format: 1\nrules: [house]\n"}
    folder = repository({**files, place: rule.replace("LIMIT", "40 mA")})
    write(folder, {place: rule.replace("LIMIT", "30 mA")})
    (spec,) = compared()["specs"]
    assert spec["causes"] == [
        {
            "what": "rule idle-draw",
            "before": "supply.current <= 40 mA, under no_load, reserve 0 %",
            "after": "supply.current <= 30 mA, under no_load, reserve 0 %",
            "file": place,
            "line": None,
        }
    ]
    (moved,) = spec["rules"]
    assert (moved["before"]["limit"], moved["after"]["limit"]) == (0.04, 0.03)


def test_a_policy_of_the_settings_is_the_cause(repository: Repository, sample: Sample) -> None:
    """Another derating policy in the settings moves what parts are allowed."""
    files = {"a.reg.yaml": sample(), "reglint.yaml": "format: 1\nderating: none\n"}
    folder = repository(files)
    write(folder, {"reglint.yaml": "format: 1\nderating: half-power\n"})
    (spec,) = compared()["specs"]
    told = {each["what"]: (each["before"], each["after"]) for each in spec["causes"]}
    assert told["derating"] == ("none", "half-power")


WAIVER = {
    "preferred-value": {
        "reason": "pilot stock",
        "approved_by": "hardware lead",
        "until": "2026-12-24",
    }
}


def test_a_new_waiver_never_goes_unnoticed(repository: Repository, sample: Sample) -> None:
    """A change that excuses itself is told, and that the waiver ends soon."""
    odd = {"series_resistor.resistance": "473 ohm ± 5 %"}
    folder = repository({"a.reg.yaml": sample(odd)})
    write(folder, {"a.reg.yaml": sample({**odd, "waivers": WAIVER})})
    found = compared()
    (spec,) = found["specs"]
    assert [(each["word"], each["rule"]) for each in spec["waivers"]] == [
        ("new", "preferred-value")
    ]
    assert [each["until"] for each in found["waivers_ending"]] == ["2026-12-24"]
    told = run("--against", "HEAD").stdout
    assert (
        "  waiver   new: preferred-value; pilot stock; by hardware lead until 2026-12-24\n" in told
    )


def test_what_a_waiver_no_longer_excuses_is_worse(repository: Repository, sample: Sample) -> None:
    """Without its waiver the same finding counts again."""
    odd = {"series_resistor.resistance": "473 ohm ± 5 %"}
    folder = repository({"a.reg.yaml": sample({**odd, "waivers": WAIVER})})
    write(folder, {"a.reg.yaml": sample(odd)})
    assert run("--against", "HEAD").exit_code == 1


def test_the_working_tree_is_left_alone(repository: Repository, sample: Sample) -> None:
    """Neither files nor index nor branch change."""
    folder = repository({"a.reg.yaml": sample()})
    write(folder, {"a.reg.yaml": sample({"supply.voltage.min": "9 V"}), "new.txt": "x"})
    before = git(folder, "status", "--porcelain=v2", "--branch")
    run("--against", "HEAD")
    assert git(folder, "status", "--porcelain=v2", "--branch") == before


def test_a_file_that_was_unreadable_before_stops_nothing(
    repository: Repository, sample: Sample
) -> None:
    """What could not be read then is said, and the spec counts as added."""
    folder = repository({"a.reg.yaml": "format: 1\nkind: zener-shunt\n"})
    write(folder, {"a.reg.yaml": sample()})
    found = compared()
    assert [each["word"] for each in found["specs"]] == ["added"]
    assert {each["file"] for each in found["problems_before"]} == {"a.reg.yaml"}
    assert run("--against", "HEAD").exit_code == 0


def test_a_file_that_is_unreadable_now_is_status_two(
    repository: Repository, sample: Sample
) -> None:
    """A comparison with holes in it never passes."""
    folder = repository({"a.reg.yaml": sample()})
    write(folder, {"a.reg.yaml": "format: 1\nkind: zener-shunt\n"})
    assert run("--against", "HEAD").exit_code == 2


def test_a_folder_below_the_root_is_compared_with_itself(
    repository: Repository, sample: Sample, monkeypatch: pytest.MonkeyPatch
) -> None:
    """From within a folder paths are relative to it, now and then."""
    folder = repository({"boards/one/a.reg.yaml": sample(), "b.reg.yaml": sample()})
    write(folder, {"boards/one/a.reg.yaml": sample({"supply.voltage.min": "9 V"})})
    monkeypatch.chdir(folder / "boards")
    (spec,) = compared("one")["specs"]
    assert (spec["file"], compared("one")["same"]) == ("one/a.reg.yaml", 0)


def test_a_path_that_leads_nowhere_is_refused(repository: Repository, sample: Sample) -> None:
    """A slip in a name is no comparison that finds nothing worse."""
    repository({"boards/a.reg.yaml": sample()})
    found = run("--against", "HEAD", "boards", "bords")
    assert str(found.exception) == "bords: there is no spec (*.reg.yaml), now or at HEAD"


def test_a_path_of_the_past_is_compared(repository: Repository, sample: Sample) -> None:
    """What is gone now is told as removed."""
    folder = repository({"a.reg.yaml": sample(), "b.reg.yaml": sample()})
    (folder / "b.reg.yaml").unlink()
    assert [each["word"] for each in compared("b.reg.yaml")["specs"]] == ["removed"]


@pytest.mark.parametrize("report", ["text", "markdown", "html"])
def test_every_format_tells_rule_before_and_after(
    report: str, repository: Repository, sample: Sample
) -> None:
    """Each has the headroom's row, the cause and the caution."""
    folder = repository({"a.reg.yaml": sample()})
    write(folder, {"a.reg.yaml": sample({"supply.voltage.min": "9 V"})})
    told = run("--against", "HEAD", "--report", report).stdout
    for words in ("supply-headroom", "11 V → 9 V", "Local codes and licensed practice decide"):
        assert words in told


def test_an_unknown_revision_is_refused(repository: Repository, sample: Sample) -> None:
    """The name is quoted; nothing is compared."""
    repository({"a.reg.yaml": sample()})
    found = run("--against", "nowhere")
    assert str(found.exception) == "there is no revision nowhere here"


def test_a_revision_named_like_an_option_is_no_option(
    repository: Repository, sample: Sample
) -> None:
    """Whatever stands for a revision, git takes it for one."""
    repository({"a.reg.yaml": sample()})
    found = run("--against=--all")
    assert str(found.exception) == "there is no revision --all here"


def test_a_shallow_clone_is_told_how_to_get_the_revision(
    repository: Repository, sample: Sample, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A clone of one commit lacks its parent; the advice names the command that brings it."""
    folder = repository({"a.reg.yaml": sample()})
    first = git(folder, "rev-parse", "HEAD")
    git(folder, "commit", "-q", "--allow-empty", "-m", "after")
    git(tmp_path, "clone", "-q", "--depth=1", folder.as_uri(), "shallow")
    monkeypatch.chdir(tmp_path / "shallow")
    assert str(run("--against", first).exception) == (
        f"there is no revision {first} here; this clone is shallow:"
        f" git fetch --depth=1 origin {first} may bring it"
    )
    git(tmp_path / "shallow", "fetch", "-q", "--depth=1", "origin", first)
    assert run("--against", first).exit_code == 0


def test_outside_of_a_repository_there_is_no_revision(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, sample: Sample
) -> None:
    """Git's own words say why."""
    write(tmp_path, {"a.reg.yaml": sample()})
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("GIT_CEILING_DIRECTORIES", str(tmp_path.parent))
    assert str(run("--against", "HEAD").exception) == (
        f"git says of {tmp_path}: not a git repository (or any of the parent directories): .git"
    )
