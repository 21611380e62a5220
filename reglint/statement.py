"""Formulas as they stand in a knowledge file: read all, collect what is wrong."""

from collections.abc import Callable
from dataclasses import dataclass, field, replace
from typing import TypeVar

from reglint.errors import FormulaError
from reglint.formula import Formula, Inequality, parse, parse_inequality
from reglint.source import Complaint, Span
from reglint.tree import Mapping as MappingNode
from reglint.tree import Scalar, Sequence, section

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Statements:
    """Reads one file's formulas; an unreadable one becomes a complaint and reading goes on."""

    complaints: list[Complaint] = field(default_factory=list)

    def formula(self, node: MappingNode, key: str) -> Formula:
        """Return the formula at a key that is stated."""
        return self._read(_scalar(node, key), parse, _UNREADABLE)

    def optional(self, node: MappingNode, key: str) -> Formula | None:
        """Return the formula at a key, or nothing where it is not stated."""
        return self.formula(node, key) if key in node.entries else None

    def inequality(self, node: MappingNode, key: str) -> Inequality:
        """Return a rule's demand at a key."""
        return self._read(_scalar(node, key), parse_inequality, _NO_DEMAND)

    def listed(self, node: MappingNode, key: str) -> tuple[Formula, ...]:
        """Return the list of formulas at a key, empty where it is not stated."""
        entry = node.entries.get(key)
        items = entry.value.items if entry and isinstance(entry.value, Sequence) else ()
        scalars = (item for item in items if isinstance(item, Scalar))
        return tuple(self._read(scalar, parse, _UNREADABLE) for scalar in scalars)

    def named(self, node: MappingNode, key: str) -> dict[str, Formula]:
        """Return the formulas in the mapping at a key, empty where it is not stated."""
        inner = section(node, key)
        return {name: self.formula(inner, name) for name in inner.entries}

    def _read(self, scalar: Scalar, read: Callable[[str, Span], T], otherwise: T) -> T:
        try:
            return read(scalar.text, _text_span(scalar))
        except FormulaError as error:
            self.complaints.append(
                Formula(scalar.text, _UNREADABLE.root, _text_span(scalar)).complaint(error)
            )
            return otherwise


#: Stand for formulas that could not be read; their file is not used.
_UNREADABLE = parse("0")
_NO_DEMAND = parse_inequality("0 >= 0")


def _scalar(node: MappingNode, key: str) -> Scalar:
    value = node.entries[key].value
    if not isinstance(value, Scalar):
        raise TypeError(f"the schema lets no collection stand at {key}")
    return value


def _text_span(scalar: Scalar) -> Span:
    """Return the place of the text itself, inside its quotes."""
    quote = 0 if scalar.plain else 1
    return replace(scalar.span, column=scalar.span.column + quote)
