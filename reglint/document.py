"""YAML files as trees in which every name and value knows its place.

All scalars are read as text; types are the schema's matter. What YAML does behind the
reader's back (implicit types, anchors, merge keys, tags, the last of two equal names wins)
does not happen or is refused at its place: so trees grow from the parser's events, as
composed nodes have forgotten the anchors. A tab between words counts as one blank.
"""

import re
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import yaml

from reglint.plaintext import clean_text, place, short
from reglint.source import TOP, Complaint, Span
from reglint.tree import Document, Entry, Mapping, Node, Scalar, Sequence

#: A spec is 5 levels deep. Trees are walked by recursion, which must not meet Python's limit.
MOST_LEVELS = 24
#: A spec has some 100 names and values; a file may well hold hundreds of specs.
MOST_NODES = 50_000
#: After so many complaints nothing is read behind a syntax error; each costs a pass.
_ENOUGH = 50


@dataclass(frozen=True, slots=True)
class Reading:
    """The sound documents of a file, and all that is wrong with the others."""

    documents: tuple[Document, ...]
    complaints: tuple[Complaint, ...]


def read(data: bytes) -> Reading:
    """Read a file's bytes; whatever is wrong with them is a complaint, never an exception."""
    return _read(data, _FASTEST)


def _read(data: bytes, parser: Callable[[str], Any]) -> Reading:
    """Read with a given parser; a text that is not clean is not parsed at all."""
    text = clean_text(data)
    if not isinstance(text, str):
        return Reading((), tuple(text))
    return _Trees(text, parser).read()


_DOCUMENT = re.compile(r"^---(?=[ \r\n]|\Z)", re.MULTILINE)
_PROPERTY = re.compile(r" *([&!][^\s\[\]{},]*)")
_QUOTE = "put the text in quotes"


class _Trees:
    """The trees of one file while they grow."""

    def __init__(self, text: str, parser: Callable[[str], Any]) -> None:
        self.text, self.parser = text, parser
        self.complaints: list[Complaint] = []
        self.documents: list[Document] = []
        self.index = self.nodes = 0
        self.closed = False

    def read(self) -> Reading:
        start = 0
        while start < len(self.text) and len(self.complaints) < _ENOUGH:
            start = self._read_from(start)
        if not self.index and not self.complaints:
            self._complain(TOP, "the file is empty: write a first line such as format: 1")
        self.complaints.sort(key=lambda one: (one.span, one.message))
        return Reading(tuple(self.documents), tuple(self.complaints))

    def _read_from(self, start: int) -> int:
        """Read up to the end, or to a break; return where the next document begins."""
        # Blanks in place of what was read keep all lines and indices true.
        blanks = re.sub(r"[^\r\n]+", lambda found: " " * len(found[0]), self.text[:start])
        self.next = self.parser(blanks + self.text[start:]).get_event
        try:
            while type(event := self.next()) is not yaml.StreamEndEvent:
                if type(event) is yaml.DocumentStartEvent:
                    self._document()
        except yaml.MarkedYAMLError as error:
            following = _DOCUMENT.search(self.text, max(self._break_off(error), start + 3))
            if following and self.nodes <= MOST_NODES:
                return following.start()
        return len(self.text)

    def _document(self) -> None:
        event = self.next()
        if event.start_mark.index == event.end_mark.index and type(event) is yaml.ScalarEvent:
            return
        self.index += 1
        before = len(self.complaints)
        root = self._node(event, 1)
        self.closed = self.next().explicit
        if not isinstance(root, Mapping):
            self._complain(root.span, 'a document is lines "name: value", not a list or a text')
        elif len(self.complaints) == before:
            self.documents.append(Document(root, self.index))

    def _node(self, event: Any, level: int) -> Node:
        """Read the value that an event begins; most are texts, so they come first."""
        self.nodes += 1
        if self.nodes > MOST_NODES:
            raise yaml.MarkedYAMLError(None, None, "node count", event.start_mark)
        if type(event) is not yaml.ScalarEvent:
            return self._collection(event, level)
        if event.tag or event.anchor:
            self._refuse_properties(event)
        style = event.style
        span = self._block_span(event) if style and style in "|>" else _span(event, event)
        return Scalar(event.value, span, not style)

    def _collection(self, event: Any, level: int) -> Node:
        if type(event) is yaml.AliasEvent:
            alias = Scalar(f"*{event.anchor}", _span(event, event), plain=True)
            what = f"the alias {short(alias.text)} is not read: state the value, or {_QUOTE}"
            self._complain(alias.span, what)
            return alias
        if event.tag or event.anchor:
            self._refuse_properties(event)
        if level > MOST_LEVELS:
            raise yaml.MarkedYAMLError(None, None, "nesting depth", event.start_mark)
        is_mapping = type(event) is yaml.MappingStartEvent
        return (self._mapping if is_mapping else self._sequence)(event, level + 1)

    def _mapping(self, start: Any, level: int) -> Mapping:
        entries: dict[str, Entry] = {}
        while type(event := self.next()) is not yaml.MappingEndEvent:
            self._enter(entries, self._node(event, level), self._node(self.next(), level))
        first = next(iter(entries.values()), None)
        return Mapping(entries, first.key.span if first else _span(start, event))

    def _sequence(self, start: Any, level: int) -> Sequence:
        items: list[Node] = []
        while type(event := self.next()) is not yaml.SequenceEndEvent:
            items.append(self._node(event, level))
        return Sequence(tuple(items), items[0].span if items else _span(start, event))

    def _enter(self, entries: dict[str, Entry], key: Node, value: Node) -> None:
        if isinstance(value, Scalar) and value.plain and not value.text:
            value = self._nothing(key)
        if not isinstance(key, Scalar):
            self._complain(key.span, "a name is a text: put one that begins with [ or { in quotes")
        elif not key.text:
            self._complain(key.span, "a name is missing before the colon")
        elif key.text == "<<" and key.plain:
            self._complain(key.span, "the merge key << is not read: write its lines out")
        elif key.text in entries:
            what = f"is stated twice, first in line {entries[key.text].key.span.line}: delete one"
            self._complain(key.span, f"{short(key.text)} {what}")
        else:
            entries[key.text] = Entry(key, value)

    def _nothing(self, key: Node) -> Scalar:
        """Return the empty value behind a name; the parsers disagree about its place."""
        if isinstance(key, Scalar) and key.plain and ":" in key.text:
            what = "is a name without a value: put a blank after the colon"
            self._complain(key.span, f"{short(key.text)} {what}")
        end = key.span.end_line, key.span.end_column
        return Scalar("", Span(*end, *end), plain=True)

    def _block_span(self, event: Any) -> Span:
        """Return the place of a block text without the blank lines and comments below it."""
        raw = self.text[event.start_mark.index : event.end_mark.index].rstrip(" \r\n")
        shown = raw if "\n" in raw else raw.split(" ")[0]
        line, column, more = event.start_mark.line, event.start_mark.column, shown.count("\n")
        end = len(shown) - shown.rfind("\n") + (0 if more else column)
        return Span(line + 1, column + 1, line + 1 + more, end)

    def _refuse_properties(self, event: Any) -> None:
        """Complain about the anchor and the tag in front of a value."""
        index = event.start_mark.index
        while found := _PROPERTY.match(self.text, index):
            index, sign = found.end(), found[1]
            span = place(self.text, found.start(1), len(sign))
            what = "anchor" if sign[0] == "&" else "tag"
            self._complain(span, f"the {what} {short(sign)} is not read: delete it, or {_QUOTE}")

    def _complain(self, span: Span, message: str) -> None:
        self.complaints.append(Complaint(span, message))

    def _break_off(self, error: Any) -> int:
        """Say in our words what YAML refuses, and return where reading stopped."""
        text, said = self.text, f"{error.context}: {error.problem}"
        if "document start" in said and not self.closed:
            # Text behind a document without a new start belongs to it: its indentation broke.
            self.documents = [one for one in self.documents if one.index != self.index]
        at, sentence = next(row[1:] for row in _SYNTAX if re.search(row[0], said))
        stop: int = error.problem_mark.index
        index = error.context_mark.index if error.context_mark else stop
        if at == "here" or (at == "line" and "\n" not in text[index:stop]):
            index = stop
        # An error at the end stands behind the last text, where an editor can show it.
        index = min(index, len(text.rstrip(" \r\n")))
        line = text[text.rfind("\n", 0, index) + 1 :].partition("\n")[0]
        self._complain(place(text, index), f"{sentence} (in: {short(line.strip())})")
        return stop


def _span(first: Any, last: Any) -> Span:
    start, end = first.start_mark, last.end_mark
    return Span(start.line + 1, start.column + 1, end.line + 1, end.column + 1)


_NO_BEGINNING = "a text cannot begin with this character: put it in quotes"
#: What both parsers say; whether the place is here, where the construct began, or there only
#: if that is on another line; and what we say.
_SYNTAX = (
    ("nesting depth", "here", f"this is nested more than {MOST_LEVELS} levels deep: flatten it"),
    ("node count", "here", f"the file has more than {MOST_NODES:,} names and values: split it"),
    ("mapping values", "here", f'no ": " can stand here: check the line above too, or {_QUOTE}'),
    ("find expected ':'", "start", 'this is no "name: value": put a blank after the colon'),
    ("unexpected ':'", "here", "put a blank after the colon"),
    ("expected ',' or", "line", "a comma or the closing bracket is missing"),
    ("node content", "here", "a value is missing before this"),
    ("quoted scalar: found unexpected", "start", "this quote is not closed"),
    ("quoted scalar", "start", r"a \ in double quotes begins an escape: use single quotes"),
    ("any token|an alias|an anchor| tag|block scalar", "start", _NO_BEGINNING),
    ("", "here", f"this does not fit the lines above: check the indentation, or {_QUOTE}"),
)


class _PureParser(yaml.BaseLoader):
    """PyYAML's parser in Python, brought to deliver what libyaml delivers, but for ``|#``."""

    #: Where the last text without quotes ended; None within one.
    plain_end: int | None = -1

    def peek(self, index: int = 0) -> str:
        # In brackets a ? would end a text without quotes; in libyaml it does so behind a colon.
        found: str = super().peek(index)
        if found == "?" and self.plain_end is None:
            return "," if self.buffer[self.pointer + index - 1] == ":" else "x"
        return found

    def scan_plain(self) -> Any:
        self.plain_end = None
        token = super().scan_plain()
        self.plain_end = self.index
        return token

    def check_value(self) -> Any:
        # libyaml refuses {a:[1]}, but not {"a":[1]}.
        if self.flow_level and self.plain_end == self.index and self.peek(1) in ",?[]{}":
            raise yaml.MarkedYAMLError(None, None, "unexpected ':'", self.get_mark())
        return super().check_value()

    def scan_flow_scalar(self, style: str) -> Any:
        # libyaml refuses escapes that are no character, such as half a surrogate pair.
        start = self.get_mark()
        try:
            token = super().scan_flow_scalar(style)
            token.value.encode()
        except ValueError:
            raise yaml.MarkedYAMLError("quoted scalar", start, "escape", start) from None
        return token


_FASTEST = yaml.CBaseLoader if yaml.__with_libyaml__ else _PureParser
