"""The hooks: a valid manifest, and the real hook on a real repository.

Both run the tool pre-commit (https://pre-commit.com) itself.
"""

import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
EXAMPLE = ROOT / "examples/boards/valve-controller/rev-b/rails.reg.yaml"
PRE_COMMIT = [sys.executable, "-m", "pre_commit"]


def run(*command: str, folder: Path) -> subprocess.CompletedProcess[str]:
    """Run a command in a folder and return what it printed."""
    return subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)


def test_the_manifest_is_valid() -> None:
    """pre-commit accepts our manifest."""
    result = run(*PRE_COMMIT, "validate-manifest", ".pre-commit-hooks.yaml", folder=ROOT)
    assert (result.returncode, result.stdout + result.stderr) == (0, "")


@pytest.fixture
def repository(tmp_path: Path) -> Path:
    """Return a git repository with one passing spec, staged."""
    folder = tmp_path / "board"
    folder.mkdir()
    shutil.copy(EXAMPLE, folder / "rails.reg.yaml")
    text = (folder / "rails.reg.yaml").read_text(encoding="utf-8").split("\n---\n")[0]
    (folder / "rails.reg.yaml").write_text(text + "\n", encoding="utf-8")
    run("git", "init", "-q", folder=folder)
    run("git", "add", ".", folder=folder)
    return folder


@pytest.fixture
def source(tmp_path: Path) -> Path:
    """Return this checkout as a git repository of its own, whatever state it is in."""
    copy = tmp_path / "reglint"
    wanted = (
        "reglint",
        "rules",
        "pyproject.toml",
        "README.md",
        "LICENSE",
        ".pre-commit-hooks.yaml",
    )
    copy.mkdir()
    for name in wanted:
        path = ROOT / name
        ignore = shutil.ignore_patterns("__pycache__")
        if path.is_dir():
            shutil.copytree(path, copy / name, ignore=ignore)
        else:
            shutil.copy(path, copy / name)
    run("git", "init", "-q", folder=copy)
    run("git", "add", ".", folder=copy)
    identity = ("-c", "user.name=Test", "-c", "user.email=test@example.org")
    run("git", *identity, "commit", "-qm", "State under test", folder=copy)
    return copy


def test_the_hook_passes_and_fails_as_the_spec_does(repository: Path, source: Path) -> None:
    """The hook is installed from this source and stops the commit of a starved regulator."""
    command = [*PRE_COMMIT, "try-repo", str(source), "reglint", "--all-files", "--verbose"]
    passing = run(*command, folder=repository)
    if "No matching distribution" in passing.stdout or "Connection" in passing.stdout:
        pytest.skip("no package index can be reached, so the hook cannot be installed")
    assert passing.returncode == 0, passing.stdout
    assert "1 spec: 0 fail, 0 warn" in passing.stdout

    spec = repository / "rails.reg.yaml"
    text = spec.read_text(encoding="utf-8").replace("470 ohm", "4.7 kohm")
    spec.write_text(text, encoding="utf-8")
    line = text[: text.index("4.7 kohm")].count("\n") + 1
    failing = run(*command, folder=repository)
    assert failing.returncode == 1
    assert f"minimum-zener-current (loaded), line {line}" in failing.stdout
