"""The wheel: built, installed elsewhere, and run from there on a spec."""

import subprocess
import sys
import venv
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return the wheel built from this checkout, without reaching for build tools elsewhere."""
    folder = tmp_path_factory.mktemp("wheel")
    command = [sys.executable, "-m", "build", "--wheel", "--no-isolation", "--outdir", str(folder)]
    subprocess.run(command, cwd=ROOT, capture_output=True, check=True)
    (found,) = folder.glob("*.whl")
    return found


def test_the_wheel_checks_a_spec_from_elsewhere(wheel: Path, tmp_path: Path) -> None:
    """Installed in its own environment, the wheel brings its rules and passes the starter."""
    home = tmp_path / "environment"
    # The test environment's packages stand in for a download; reglint itself comes from the wheel.
    venv.create(home, with_pip=True, system_site_packages=False)
    python = home / "bin/python"
    install = [python, "-m", "pip", "install", "--quiet", "--no-deps", wheel]
    subprocess.run(install, check=True, capture_output=True)
    site = next(home.glob("lib/python*/site-packages"))
    (site / "shared.pth").write_text(f"{Path(pytest.__file__).parents[1]}\n", encoding="utf-8")
    spec = tmp_path / "new.reg.yaml"

    def reglint(*words: str) -> subprocess.CompletedProcess[str]:
        command = [python, "-I", "-m", "reglint", *words]
        return subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, check=False)

    spec.write_text(reglint("starter", "zener-shunt").stdout, encoding="utf-8")
    result = reglint("check", "new.reg.yaml")
    assert result.returncode == 0, result.stdout + result.stderr
    assert "1 spec: 0 fail, 0 warn, 1 pass; rules: 0 fail, 0 warn, 17 pass." in result.stdout
    where = [python, "-I", "-c", "import reglint; print(reglint.__file__)"]
    assert str(home) in subprocess.run(where, capture_output=True, text=True, check=True).stdout
