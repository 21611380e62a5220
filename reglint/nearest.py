"""The nearest known name, for messages about unknown ones."""

from collections.abc import Iterable
from difflib import get_close_matches


def hint(name: str, known: Iterable[str]) -> str:
    """Return ``; the nearest known one is X``, or nothing where none is really near."""
    close = get_close_matches(name, list(known), n=1, cutoff=0.7)
    return f"; the nearest known one is {close[0]}" if close else ""
