"""Jobs: the same bytes from several processes, and no silence where one of them dies."""

import json
import os
from collections.abc import Callable
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from reglint import jobs
from reglint.cli import cli

Sample = Callable[..., str]


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory, sample: Sample) -> Path:
    """Return a folder of 104 specs in eight files, failing ones among them, and a broken file."""
    place = tmp_path_factory.mktemp("many")
    for number in range(8):
        texts = [
            sample({"name": f"r{number}-{each}", "supply.voltage.min": f"{8 + each / 4} V"})
            for each in range(13)
        ]
        (place / f"{number}.reg.yaml").write_text("---\n".join(texts), encoding="utf-8")
    (place / "broken.reg.yaml").write_text("kind: lamp\n", encoding="utf-8")
    return place


def check(folder: Path, *words: str) -> Result:
    """Return what a check of the folder gives."""
    return CliRunner().invoke(cli, ["check", str(folder), "--today", "2026-12-01", *words])


@pytest.mark.parametrize("report", ["text", "json"])
def test_two_jobs_give_the_bytes_of_one(report: str, folder: Path) -> None:
    """Order, counts, problems and status do not depend on who did the work."""
    one, two = (check(folder, "--report", report, "--jobs", count) for count in ("1", "2"))
    assert two.stdout_bytes == one.stdout_bytes
    assert two.exit_code == one.exit_code == 2


def test_a_supposition_meets_its_spec_in_any_process(folder: Path) -> None:
    """What one process used is used."""
    words = ("--suppose", "r7-3:purpose=tried", "--jobs", "2", "--report", "json")
    found = check(folder, *words)
    assert len(json.loads(found.stdout)["specs"]) == 104


class Deadly:
    """What ends the process that receives it."""

    def __call__(self) -> None:
        """Never get here: it is not called where it is sent from."""

    def __reduce__(self) -> tuple[Callable[[int], None], tuple[int]]:
        """Be unpickled as the end of the process."""
        return os._exit, (3,)


def test_a_process_that_dies_is_reported(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Nothing is reported of a run with a hole in it."""
    monkeypatch.setattr(jobs, "_checked", Deadly())
    found = check(folder, "--jobs", "2")
    assert found.stdout == ""
    assert str(found.exception) == "a process of --jobs ended before its work was done"


def test_a_small_run_is_told_what_would_hold_whatever_the_jobs(
    tmp_path: Path, sample: Sample
) -> None:
    """A run of few specs stays in one process, and keeps what only small runs are told."""
    text = sample({"supply.voltage.min": "8 V"})
    (tmp_path / "one.reg.yaml").write_text(text, encoding="utf-8")
    assert "    would hold series_resistor.resistance at " in check(tmp_path, "--jobs", "2").stdout
