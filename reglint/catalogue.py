"""The catalogue of parts in words."""

from collections.abc import Iterable

from reglint.part import Part
from reglint.tree import one_line


def listed(parts: Iterable[Part]) -> str:
    """Return one line a part: its name, class and title, in the order of names."""
    ordered = sorted(parts, key=lambda part: part.name)
    return "".join(f"{part.name}  {part.part_class}  {part.title}\n" for part in ordered)


def described(part: Part) -> str:
    """Return what is known of one part, and from where."""
    entries = part.common.entries | part.own.entries
    lines = [f"{part.name}, a {part.part_class}: {part.title}"]
    lines += [f"  {name}: {one_line(entry.value)}" for name, entry in entries.items()]
    lines += [f"  source: {part.source}", f"  file: {part.file}"]
    return "\n".join(lines) + "\n"
