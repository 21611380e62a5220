"""A git revision's YAML files in a folder of their own; the working tree is never touched."""

import os
import subprocess
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from tempfile import TemporaryDirectory

from reglint.errors import UsageError

#: Modes of regular files in git's trees; links and submodules are no files of ours.
_FILES = (b"100644", b"100755")
_YAML = (b".yaml", b".yml")


@dataclass(frozen=True, slots=True)
class Revision:
    """A revision as it was asked for, and the commit that it is."""

    name: str
    commit: str

    def __str__(self) -> str:
        """Return the name with the commit's first digits."""
        return f"{self.name} ({self.commit[:10]})"


@contextmanager
def revision(folder: Path, name: str) -> Iterator[tuple[Revision, Path]]:
    """Yield a revision and the place of ``folder`` among its YAML files, until it is left.

    Raises `UsageError` where there is no repository, no git, or no such revision.
    """
    top = Path(os.fsdecode(_git(folder, "rev-parse", "--show-toplevel").rstrip(b"\n")))
    found = Revision(name, _commit(folder, name))
    with TemporaryDirectory(prefix="reglint-") as place:
        root = Path(place).resolve()
        _write(top, found.commit, root)
        inside = root / folder.resolve().relative_to(top.resolve())
        inside.mkdir(parents=True, exist_ok=True)
        yield found, inside


def _commit(folder: Path, name: str) -> str:
    """Return the commit a name stands for; a name that looks like an option is none."""
    words = ("rev-parse", "--verify", "--quiet", "--end-of-options", f"{name}^{{commit}}")
    if found := _git(folder, *words):
        return found.decode().strip()
    shallow = _git(folder, "rev-parse", "--is-shallow-repository").strip() == b"true"
    advice = f"; this clone is shallow: git fetch --depth=1 origin {name} may bring it"
    raise UsageError(f"there is no revision {name} here{advice if shallow else ''}")


def _write(top: Path, commit: str, root: Path) -> None:
    """Write the YAML files of a commit below a folder."""
    listing = _git(top, "ls-tree", "-r", "-z", "--full-tree", commit).split(b"\0")
    entries = [_entry(each) for each in listing if each]
    wanted = [(oid, path) for mode, oid, path in entries if mode in _FILES and path.endswith(_YAML)]
    contents = _contents(top, [oid for oid, _ in wanted])
    for (_, path), data in zip(wanted, contents, strict=True):
        place = root / os.fsdecode(path)
        place.parent.mkdir(parents=True, exist_ok=True)
        place.write_bytes(data)


def _entry(line: bytes) -> tuple[bytes, bytes, bytes]:
    """Return mode, object and path of a line of a tree's listing."""
    about, _, path = line.partition(b"\t")
    mode, _, oid = about.split(b" ")
    return mode, oid, path


def _contents(top: Path, objects: list[bytes]) -> Iterator[bytes]:
    """Yield the contents of objects, in their order."""
    asked = b"".join(each + b"\n" for each in objects)
    given = _git(top, "cat-file", "--batch", asked=asked)
    start = 0
    for _ in objects:
        end = given.index(b"\n", start)
        size = int(given[start:end].split(b" ")[2])
        yield given[end + 1 : end + 1 + size]
        start = end + size + 2


def _git(folder: Path, *words: str, asked: bytes = b"") -> bytes:
    """Return what git answers, if only nothing; where it complains `UsageError` tells why."""
    plain = {**os.environ, "LC_ALL": "C"}
    try:
        done = subprocess.run(  # noqa: S603 -- fixed words; a name follows --end-of-options
            ["git", *words],  # noqa: S607 -- found where the machine has it
            cwd=folder,
            env=plain,
            input=asked,
            capture_output=True,
            check=False,
        )
    except OSError as error:
        raise UsageError(f"git cannot be run: {error.strerror}") from error
    if done.returncode and done.stderr:
        said = done.stderr.decode(errors="replace").splitlines()[0].removeprefix("fatal: ")
        raise UsageError(f"git says of {folder}: {said}")
    return done.stdout
