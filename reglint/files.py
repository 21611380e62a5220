"""Reading files: the only place, beside the command line, that touches the disk."""

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from reglint.plaintext import MOST_BYTES


@dataclass(frozen=True, slots=True)
class Folder:
    """A folder and how its path is shown in reports, relative and with ``/``."""

    path: Path
    shown: str

    def show(self, path: Path) -> str:
        """Return how a path inside the folder is shown."""
        inner = path.relative_to(self.path).as_posix()
        return inner if self.shown in ("", ".") else f"{self.shown}/{inner}"

    def files(self, *patterns: str) -> Iterator[Path]:
        """Yield the files below that match any pattern, sorted."""
        found = {path for pattern in patterns for path in self.path.glob(pattern)}
        yield from sorted(path for path in found if path.is_file())


def read_bytes(path: Path) -> bytes | str:
    """Return a file's bytes, no more than one past the limit, or why it cannot be read."""
    try:
        if not (path.is_file() or path.is_dir()) and path.exists():
            return "this is no plain file"  # reading a pipe would wait for ever
        with path.open("rb") as file:
            return file.read(MOST_BYTES + 1)
    except IsADirectoryError:
        return "this is a folder, not a file"
    except FileNotFoundError:
        return "there is no such file"
    except OSError as error:
        return f"this file cannot be read: {error.strerror or error}"
