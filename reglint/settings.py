"""The settings of a repository: what ``reglint.yaml`` at its root states."""

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from reglint.document import read
from reglint.files import read_bytes
from reglint.schema import complaints, knowledge_schema
from reglint.source import TOP, Complaint
from reglint.tree import plain

#: The file that marks the root of a project.
NAME = "reglint.yaml"

_SPECS = ("**/*.reg.yaml", "**/*.reg.yml")


@dataclass(frozen=True, slots=True)
class Settings:
    """What holds for all specs below one folder."""

    root: Path
    #: Patterns of spec files, relative to the root.
    specs: tuple[str, ...] = _SPECS
    #: Folders with further rules, kinds and policies, and with further parts.
    rules: tuple[str, ...] = ()
    parts: tuple[str, ...] = ()
    derating: str = "none"
    #: The outcome from which a check ends with status 1: ``fail``, ``warn`` or ``never``.
    gate: str = "fail"


def root_above(folder: Path) -> Path | None:
    """Return the nearest folder, this one or above, that holds settings."""
    for each in (folder, *folder.parents):
        if (each / NAME).is_file():
            return each
    return None


def read_settings(root: Path) -> tuple[Settings, list[Complaint]]:
    """Return the settings of a root; with complaints, the defaults stand in."""
    data = read_bytes(root / NAME)
    if isinstance(data, str):
        return Settings(root), [Complaint(TOP, data)]
    reading = read(data)
    found = list(reading.complaints)
    for document in reading.documents:
        found += complaints(document.root, knowledge_schema("settings"))
    if found or not reading.documents:
        return Settings(root), found
    stated = plain(reading.documents[0].root)
    found += _outside(root, stated)
    return (Settings(root), found) if found else (_settings(root, stated), [])


def _settings(root: Path, stated: dict[str, Any]) -> Settings:
    return Settings(
        root=root,
        specs=tuple(stated.get("specs", _SPECS)),
        rules=tuple(stated.get("rules", ())),
        parts=tuple(stated.get("parts", ())),
        derating=stated.get("derating", "none"),
        gate=stated.get("gate", "fail"),
    )


def _outside(root: Path, stated: dict[str, Any]) -> Iterator[Complaint]:
    """Complain about folders that lie outside the repository or are not there."""
    for key in ("rules", "parts"):
        for name in stated.get(key, ()):
            folder = (root / name).resolve()
            if not folder.is_relative_to(root.resolve()):
                yield Complaint(TOP, f"{key}: {name} lies outside the folder of {NAME}")
            elif not folder.is_dir():
                yield Complaint(TOP, f"{key}: there is no folder {name}")
