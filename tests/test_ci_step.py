"""The example CI step: a real shell runs it in a real repository, and every artifact is there."""

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path
from xml.etree import ElementTree as ET

import pytest

ROOT = Path(__file__).parents[1]
ARTIFACTS = ["check.html", "check.junit.xml", "check.md", "check.sarif", "compare.md"]


@pytest.fixture
def repository(tmp_path: Path) -> Path:
    """Return the valve controller as a repository of its own, with one commit."""
    folder = tmp_path / "hardware"
    shutil.copytree(ROOT / "examples/boards/valve-controller", folder / "boards/valve-controller")
    for name in ("reglint.yaml", "ci", "parts", "house-rules"):
        source = ROOT / "examples" / name
        copy = shutil.copytree if source.is_dir() else shutil.copy
        copy(source, folder / name)
    for words in ("init -q", "add .", "commit -q -m before"):
        named = ("-c", "user.name=tester", "-c", "user.email=tester@example.org")
        subprocess.run(["git", *named, *words.split()], cwd=folder, check=True)
    return folder


def step(folder: Path, *arguments: str) -> subprocess.CompletedProcess[str]:
    """Run the step with this checkout's command line on the path."""
    tools = folder.parent / "tools"
    tools.mkdir()
    (tools / "reglint").write_text(f'#!/bin/sh\nexec "{sys.executable}" -m reglint "$@"\n')
    (tools / "reglint").chmod(0o755)
    paths = {"PATH": f"{tools}{os.pathsep}{os.environ['PATH']}", "PYTHONPATH": str(ROOT)}
    command = ["sh", "ci/check-regulators.sh", *arguments]
    return subprocess.run(
        command,
        cwd=folder,
        env={**os.environ, **paths},
        capture_output=True,
        text=True,
        check=False,
    )


def test_the_step_keeps_every_report_and_fails_with_the_gate(repository: Path) -> None:
    """The solenoid clamp fails, so the status is 1; all artifacts are there and sound."""
    done = step(repository, "HEAD")
    assert (done.returncode, done.stderr) == (1, "")
    kept = repository / "regulators"
    assert sorted(path.name for path in kept.iterdir()) == ARTIFACTS
    assert json.loads((kept / "check.sarif").read_text(encoding="utf-8"))["version"] == "2.1.0"
    assert ET.parse(kept / "check.junit.xml").getroot().tag == "testsuites"  # noqa: S314 -- our own
    assert (kept / "check.html").read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    compared = (kept / "compare.md").read_text(encoding="utf-8")
    assert "**Margins: not worse than before**" in compared
    assert done.stdout.splitlines()[-1].startswith("This is a screening aid")


def test_the_hook_of_the_example_is_valid() -> None:
    """pre-commit accepts the example's configuration."""
    command = [sys.executable, "-m", "pre_commit", "validate-config"]
    done = subprocess.run(
        [*command, "examples/.pre-commit-config.yaml"],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=False,
    )
    assert (done.returncode, done.stdout + done.stderr) == (0, "")
