"""Writing a report: to standard output, or to a file that is whole or not there at all."""

import os
import sys
import tempfile
from pathlib import Path

from reglint.errors import UsageError


def write(text: str, out: Path | None) -> None:
    """Write a report; a file is replaced only once the new one is complete.

    Raises `UsageError` where the file cannot be written; an older report survives.
    """
    if out is None:
        sys.stdout.write(text)
        sys.stdout.flush()
        return
    try:
        _replace(text, out)
    except OSError as error:
        raise UsageError(f"{out} cannot be written: {error.strerror or error}") from error


def _replace(text: str, out: Path) -> None:
    handle, name = tempfile.mkstemp(dir=out.parent, prefix=f".{out.name[:40]}.")
    try:
        with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
            file.write(text)
        Path(name).chmod(0o666 & ~_umask())
        Path(name).replace(out)
    except BaseException:
        Path(name).unlink(missing_ok=True)
        raise


def _umask() -> int:
    current = os.umask(0)
    os.umask(current)
    return current
