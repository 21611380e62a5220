"""Writing a report: to standard output, or to a file that is whole or not there at all."""

import os
import sys
from pathlib import Path

from reglint.errors import ReaderGoneError, UsageError


def write(text: str, out: Path | None) -> None:
    """Write a report; a file is replaced only once the new one is complete.

    Raises `UsageError` where the file cannot be written; an older report survives. Raises
    `ReaderGoneError` where standard output is read no further.
    """
    try:
        _print(text) if out is None else _replace(text, out)
    except BrokenPipeError as error:
        raise ReaderGoneError(str(error)) from error
    except OSError as error:
        what = out or "the report"
        raise UsageError(f"{what} cannot be written: {error.strerror or error}") from error


def _print(text: str) -> None:
    """Write all of a text to standard output.

    Where Python is told not to buffer, a text's own write ends early without a word once the
    reader is gone or the disk is full; writing what is left then raises what is wrong.
    """
    sys.stdout.flush()
    left = memoryview(text.encode("utf-8", "backslashreplace"))
    while left:
        left = left[sys.stdout.buffer.write(left) :]
    sys.stdout.buffer.flush()


def _replace(text: str, out: Path) -> None:
    import tempfile  # noqa: PLC0415 -- 8 ms that a report to standard output saves

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
