"""Test-only packages from npm: what they publish is fetched, never kept here."""

import shutil
import subprocess
import tarfile
from collections.abc import Callable
from pathlib import Path

import pytest

Package = Callable[[str], Path]


@pytest.fixture(scope="session")
def package(tmp_path_factory: pytest.TempPathFactory) -> Package:
    """Return a fetcher of packages, each as the folder it unpacks to; without npm tests skip."""

    def fetched(name: str) -> Path:
        npm = shutil.which("npm")
        if npm is None:
            pytest.skip(f"{name} is an npm package, and npm is not here")
        folder = tmp_path_factory.mktemp("npm")
        command = [npm, "pack", "--silent", name]
        served = subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)
        if served.returncode:
            pytest.skip(f"npm does not serve {name} here")
        with tarfile.open(folder / served.stdout.split()[-1]) as archive:
            archive.extractall(folder, filter="data")
        return folder / "package"

    return fetched
