"""Trees of names and values, each with its place: what a YAML document is read as."""

from collections.abc import Iterable
from collections.abc import Sequence as Sequence_
from dataclasses import dataclass
from typing import Any, TypeAlias

from reglint.source import Span


@dataclass(frozen=True, slots=True)
class Scalar:
    """A text, and whether it stands without quotes."""

    text: str
    span: Span
    plain: bool


@dataclass(frozen=True, slots=True)
class Sequence:
    """A list; its place is that of its first item, as YAML's end of it runs too far."""

    items: "tuple[Node, ...]"
    span: Span


@dataclass(frozen=True, slots=True)
class Entry:
    """A name with its value."""

    key: Scalar
    value: "Node"


@dataclass(frozen=True, slots=True)
class Mapping:
    """Names with values, in the order of the file; its place is that of its first name."""

    entries: dict[str, Entry]
    span: Span


Node: TypeAlias = Scalar | Mapping | Sequence


@dataclass(frozen=True, slots=True)
class Document:
    """One document of a file that may hold several."""

    root: Mapping
    #: Counted from 1; empty documents do not count.
    index: int

    @property
    def line(self) -> int:
        """Return the line of its first name."""
        return self.root.span.line


def plain(node: Node) -> Any:
    """Return a node as bare ``dict``, ``list`` and ``str``."""
    if isinstance(node, Scalar):
        return node.text
    if isinstance(node, Mapping):
        return {name: plain(entry.value) for name, entry in node.entries.items()}
    return [plain(item) for item in node.items]


def find(node: Node, path: Iterable[str | int]) -> Node | None:
    """Return the value at a path of names and list positions, if there is one."""
    for step in path:
        if (entry := _step(node, step)) is None:
            return None
        node = entry.value
    return node


def span_of(node: Node, path: Iterable[str | int], *, key: bool = False) -> Span:
    """Return the place of the value at a path, or with ``key`` that of the name before it.

    Where the path leaves the tree, the last value on it stands in for the rest.
    """
    span = node.span
    for step in path:
        if (entry := _step(node, step)) is None:
            break
        node = entry.value
        span = entry.key.span if key else node.span
    return span


def _step(node: Node, step: str | int) -> Entry | None:
    if isinstance(node, Mapping):
        return node.entries.get(step) if isinstance(step, str) else None
    if isinstance(node, Sequence) and isinstance(step, int) and 0 <= step < len(node.items):
        return Entry(Scalar("", node.items[step].span, plain=True), node.items[step])
    return None


def one_line(node: Node) -> str:
    """Return a value as YAML on one line."""
    if isinstance(node, Scalar):
        return node.text if node.plain else f'"{node.text}"'
    if isinstance(node, Mapping):
        pairs = (f"{name}: {one_line(entry.value)}" for name, entry in node.entries.items())
        return "{" + ", ".join(pairs) + "}"
    return "[" + ", ".join(map(one_line, node.items)) + "]"


def changed(node: Mapping, path: Sequence_[str], text: str) -> Mapping:
    """Return a copy with one value changed or added; what is new stands where its parent does."""
    name, *rest = path
    old = node.entries.get(name)
    key = old.key if old else Scalar(name, node.span, plain=True)
    span = old.value.span if old else node.span
    if rest:
        inner = old.value if old and isinstance(old.value, Mapping) else Mapping({}, span)
        value: Node = changed(inner, rest, text)
    else:
        value = Scalar(text, span, plain=True)
    return Mapping({**node.entries, name: Entry(key, value)}, node.span)


def section(node: "Mapping", name: str) -> "Mapping":
    """Return the mapping at a name, or an empty one where there is none."""
    entry = node.entries.get(name)
    inner = entry.value if entry else None
    return inner if isinstance(inner, Mapping) else Mapping({}, node.span)


def sections(node: "Mapping") -> "dict[str, Mapping]":
    """Return the mappings directly below a node by name."""
    values = {name: entry.value for name, entry in node.entries.items()}
    return {name: value for name, value in values.items() if isinstance(value, Mapping)}
