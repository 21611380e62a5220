"""Paths, links, permissions and interruptions: nothing hangs, climbs out or is half written."""

import os
import signal
import subprocess
import sys
import time
from collections.abc import Callable
from datetime import date
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from reglint import output
from reglint.cli import cli
from reglint.finding import Run
from reglint.judge import Wanted
from reglint.project import Project

ROOT = Path(__file__).parents[1]
Sample = Callable[..., str]


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Return an empty working folder."""
    place = tmp_path / "work"
    place.mkdir()
    monkeypatch.chdir(place)
    return place


def check(*words: str) -> Result:
    """Return what the command line gives."""
    return CliRunner().invoke(cli, ["check", "--today", "2026-12-01", "--report", "lines", *words])


def checked(folder: Path) -> Run:
    """Return a check of all specs below a folder."""
    project = Project(folder)
    return project.check(project.specs([folder]), Wanted(date(2026, 12, 1)))


@pytest.mark.parametrize(
    "name",
    [
        "with blank.reg.yaml",
        "a,b;c.reg.yaml",
        "größe-Ω.reg.yaml",
        "two\nlines.reg.yaml",
        "-dash.reg.yaml",
        "x" * 240 + ".reg.yaml",
    ],
)
def test_a_file_of_any_name_is_checked(name: str, folder: Path, sample: Sample) -> None:
    """A name is a name, whatever stands in it."""
    (folder / name).write_text(sample(), encoding="utf-8")
    run = checked(folder)
    assert [verdict.spec.file for verdict in run.verdicts] == [name]


def test_a_link_is_followed_and_told_by_its_own_name(folder: Path, sample: Sample) -> None:
    """A spec may be shared by a link, also from outside: it is only read."""
    outside = folder.parent / "shared.yaml"
    outside.write_text(sample(), encoding="utf-8")
    (folder / "linked.reg.yaml").symlink_to(outside)
    assert [verdict.spec.file for verdict in checked(folder).verdicts] == ["linked.reg.yaml"]


def test_links_in_a_circle_end(folder: Path, sample: Sample) -> None:
    """A folder linked into itself, and a link to itself, are no endless way down."""
    (folder / "a.reg.yaml").write_text(sample(), encoding="utf-8")
    (folder / "down").symlink_to(folder)
    (folder / "round.reg.yaml").symlink_to(folder / "round.reg.yaml")
    files = [verdict.spec.file for verdict in checked(folder).verdicts]
    assert files.count("a.reg.yaml") == 1
    assert len(files) < 5


def test_a_link_to_nothing_is_no_file(folder: Path) -> None:
    """A named link that leads nowhere is misuse, as any path that is not there."""
    (folder / "gone.reg.yaml").symlink_to(folder / "nowhere")
    found = check("gone.reg.yaml")
    assert str(found.exception) == "gone.reg.yaml: there is no such file or folder"


@pytest.mark.parametrize("glob", ["../**/*.reg.yaml", "/**/*.reg.yaml"])
def test_a_pattern_cannot_climb_out(glob: str, folder: Path, sample: Sample) -> None:
    """Patterns select below the settings' folder; what lies outside is not found."""
    (folder.parent / "outside.reg.yaml").write_text(sample(), encoding="utf-8")
    (folder / "inside.reg.yaml").write_text(sample(), encoding="utf-8")
    (folder / "reglint.yaml").write_text(f'format: 1\nspecs: ["{glob}"]\n', encoding="utf-8")
    assert str(check(".").exception) == ".: there is no spec here (*.reg.yaml)"


@pytest.mark.parametrize(
    "part", ["../../etc/passwd", "/etc/passwd", "a/b", "..", "x" * 5000, "a\\nb", "%s"]
)
def test_a_part_is_a_name_not_a_path(part: str, folder: Path, sample: Sample) -> None:
    """Whatever a spec calls its part, no file is looked for under that name."""
    text = sample({"zener": {"part": part, "minimum_current": "5 mA"}})
    (folder / "a.reg.yaml").write_text(text, encoding="utf-8")
    run = checked(folder)
    assert run.verdicts == ()
    assert any("no part " in problem.message for problem in run.problems)


@pytest.mark.parametrize("derating", ["../none", "/etc/passwd", "none.yaml", "*"])
def test_a_policy_is_a_name_not_a_path(derating: str, folder: Path, sample: Sample) -> None:
    """No file outside the folders of policies is read."""
    text = sample({"derating": derating})
    (folder / "a.reg.yaml").write_text(text, encoding="utf-8")
    run = checked(folder)
    assert run.verdicts == ()
    (problem,) = run.problems
    assert problem.message.startswith(f"there is no derating policy {derating}")
    assert problem.message.endswith(" (known: eee-inst-002, half-power, none)")


def test_a_folder_named_like_a_spec_is_no_spec(folder: Path, sample: Sample) -> None:
    """Only files are specs; the folder's own are found."""
    (folder / "x.reg.yaml").mkdir()
    (folder / "x.reg.yaml" / "in.reg.yaml").write_text(sample(), encoding="utf-8")
    run = checked(folder)
    assert [verdict.spec.file for verdict in run.verdicts] == ["x.reg.yaml/in.reg.yaml"]


def test_a_pipe_is_not_waited_for(folder: Path) -> None:
    """A named pipe that nobody writes to is a problem, not a wait."""
    os.mkfifo(folder / "pipe.reg.yaml")
    cases, problems = Project(folder).read(folder / "pipe.reg.yaml")
    assert cases == []
    assert [problem.message for problem in problems] == ["this is no plain file"]


def test_a_file_that_vanishes_is_a_problem(folder: Path, sample: Sample) -> None:
    """Between being found and being read a file may go; the others are checked."""
    for name in ("a.reg.yaml", "b.reg.yaml"):
        (folder / name).write_text(sample({"name": name[0]}), encoding="utf-8")
    project = Project(folder)
    specs = project.specs([folder])
    specs[0].unlink()
    run = project.check(specs, Wanted(date(2026, 12, 1)))
    assert [verdict.spec.name for verdict in run.verdicts] == ["b"]
    assert [str(problem) for problem in run.problems] == ["a.reg.yaml:1:1: there is no such file"]


def test_an_empty_file_is_a_problem(folder: Path) -> None:
    """An empty spec is not a passing one."""
    (folder / "a.reg.yaml").touch()
    (problem,) = checked(folder).problems
    assert str(problem) == (
        "a.reg.yaml:1:1: the file is empty: write a first line such as format: 1"
    )


def test_an_older_report_survives_a_full_disk(
    folder: Path, sample: Sample, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The new report is written aside and takes the old one's place only when it is whole."""
    (folder / "a.reg.yaml").write_text(sample(), encoding="utf-8")
    (folder / "report").write_text("the older one", encoding="utf-8")

    def full(*_: object, **__: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(output.os, "fdopen", full)
    found = check("a.reg.yaml", "--out", "report")
    assert str(found.exception) == "report cannot be written: No space left on device"
    assert (folder / "report").read_text(encoding="utf-8") == "the older one"
    assert sorted(path.name for path in folder.iterdir()) == ["a.reg.yaml", "report"]


def test_a_missing_folder_for_the_report_is_told(folder: Path, sample: Sample) -> None:
    """Nothing is made that nobody asked for."""
    (folder / "a.reg.yaml").write_text(sample(), encoding="utf-8")
    found = check("a.reg.yaml", "--out", "no/such/report")
    assert str(found.exception) == "no/such/report cannot be written: No such file or directory"


def test_a_check_writes_nothing_beside_its_report(folder: Path, sample: Sample) -> None:
    """A tree that must not be written to can be checked."""
    (folder / "a.reg.yaml").write_text(sample(), encoding="utf-8")
    before = sorted(folder.rglob("*"))
    assert check("a.reg.yaml").exit_code == 0
    assert sorted(folder.rglob("*")) == before


def started(folder: Path, *words: str, unbuffered: str = "") -> subprocess.Popen[bytes]:
    """Start a check in a process of its own."""
    return subprocess.Popen(
        [sys.executable, "-m", "reglint", "check", *words],
        cwd=folder,
        env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONUNBUFFERED": unbuffered},
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )


@pytest.mark.parametrize("unbuffered", ["", "1"])
def test_a_reader_that_stops_reading_is_no_traceback(
    unbuffered: str, folder: Path, sample: Sample
) -> None:
    """As with ``| head -1``: status 141, as the shell gives it, and nothing on standard error."""
    texts = [sample({"name": f"r{number}"}) for number in range(50)]
    (folder / "a.reg.yaml").write_text("---\n".join(texts), encoding="utf-8")
    process = started(folder, "a.reg.yaml", "--everything", unbuffered=unbuffered)
    assert process.stdout
    assert process.stdout.readline()
    process.stdout.close()
    assert process.stderr
    assert process.stderr.read() == b""
    process.stderr.close()
    assert process.wait() == 141


def test_a_full_standard_output_is_told(folder: Path, sample: Sample) -> None:
    """A report that does not fit is no report, also where Python does not buffer."""
    (folder / "a.reg.yaml").write_text(sample(), encoding="utf-8")
    with Path("/dev/full").open("wb") as full:
        done = subprocess.run(
            [sys.executable, "-m", "reglint", "check", "a.reg.yaml"],
            cwd=folder,
            env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONUNBUFFERED": "1"},
            stdout=full,
            stderr=subprocess.PIPE,
            check=False,
        )
    assert done.stderr == b"reglint: the report cannot be written: No space left on device\n"
    assert done.returncode == 2


@pytest.mark.skipif(
    signal.getsignal(signal.SIGINT) is signal.SIG_IGN,
    reason="the shell that runs these tests has Ctrl-C ignored by what it starts",
)
def test_an_interrupt_leaves_no_half_report(folder: Path, sample: Sample) -> None:
    """Ctrl-C ends in a sentence and status 130; the older report is as it was."""
    for number in range(1500):
        (folder / f"{number}.reg.yaml").write_text(sample(), encoding="utf-8")
    (folder / "report").write_text("the older one", encoding="utf-8")
    process = started(folder, ".", "--out", "report", "--everything")
    time.sleep(1.5)  # by then it reads or judges: the whole takes many seconds
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=30)
    assert (out, err.strip()) == (b"", b"reglint: stopped; no report was written")
    assert process.returncode == 130
    assert (folder / "report").read_text(encoding="utf-8") == "the older one"
