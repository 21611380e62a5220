"""Discovery: the files below a folder, and which of them a pattern or a name makes specs."""

import os
import re
from collections.abc import Iterator
from functools import cache
from pathlib import Path

from reglint.settings import NAME

#: What git would add: files it neither tracks nor ignores.
_NOT_YET = ("--others", "--exclude-standard")


def listed(folder: Path) -> Iterator[tuple[Path, bool]]:
    """Yield the files below a folder, each with whether git will bring it elsewhere.

    Those are the files git tracks, and those it would add; all files, outside of git.
    """
    tracked, new = (_git(folder, *words) for words in (("--cached",), _NOT_YET))
    if tracked is None or new is None:
        found = dict.fromkeys(folder.rglob("*"), True)
    else:
        found = {folder / name: name in tracked for name in tracked | new}
    yield from ((path, found[path]) for path in sorted(found) if path.is_file())


def _git(folder: Path, *words: str) -> set[str] | None:
    """Return the files git lists below a folder, or nothing where there is no repository."""
    import subprocess  # noqa: PLC0415 -- 5 ms that a check of named files saves

    command = ["git", "ls-files", "-z", *words]
    try:
        listing = subprocess.run(command, cwd=folder, capture_output=True, check=True)  # noqa: S603
    except (OSError, subprocess.CalledProcessError):
        return None  # no git, or no repository: the folder itself is what there is
    return {os.fsdecode(name) for name in listing.stdout.split(b"\0") if name}


@cache
def _pattern(glob: str) -> re.Pattern[str]:
    """Translate a path pattern: ``**/`` is any folders, ``*`` and ``?`` stay inside a name."""
    pieces = re.split(r"(\*\*/|\*|\?)", glob)
    words = {"**/": "(?:.*/)?", "*": "[^/]*", "?": "[^/]"}
    return re.compile("".join(words.get(each, re.escape(each)) for each in pieces))


def matches(path: str, glob: str) -> bool:
    """Tell whether a path, relative and with ``/``, fits a pattern."""
    return _pattern(glob).fullmatch(path) is not None


def is_spec_name(path: Path) -> bool:
    """Tell whether a path that was named is to be read as a spec, whatever the patterns say."""
    knowledge = path.name.endswith((".part.yaml", ".part.yml")) or path.name == NAME
    in_rules = (path.parent / "kind.yaml").exists() or path.parent.name == "derating"
    return path.is_file() and not knowledge and not in_rules
