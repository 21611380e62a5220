"""Law: a span gives back the scalar's text, and both parsers give the same tree.

The texts are written by this file's own few lines, not by a YAML library, so that what must
be read is known before it is read. Spans are cut from the lines an editor shows.
"""

import json
import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any, TypeAlias

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reglint.document import _FASTEST, _PureParser, _read
from reglint.source import Span
from reglint.tree import Mapping, Node, Scalar, Sequence, find, plain, span_of

PARSERS = pytest.mark.parametrize("parser", [_FASTEST, _PureParser], ids=["fastest", "pure"])

#: Letters of all sizes in UTF-8; the last lies beyond the basic plane.
LETTERS = "abyzABYZ0189_.%/+-±°Ωµé€𝛺"
WORDS = st.text(LETTERS, min_size=1, max_size=6).filter(lambda word: word[0] not in "%-.")


@dataclass(frozen=True)
class Text:
    """A text and how it is written: plain, in quotes, or as a block."""

    style: str
    value: str


Tree: TypeAlias = "Text | list[Tree] | dict[str, Tree]"

PLAIN = st.lists(WORDS, min_size=1, max_size=3).map(lambda words: Text("plain", " ".join(words)))
QUOTED = st.builds(
    Text, st.sampled_from("'\""), st.text(LETTERS + " '\"\\:#,[]{}&*!|>?", max_size=8)
)
BLOCK = st.lists(st.one_of(WORDS, st.just("")), min_size=1, max_size=4).map(
    lambda lines: Text("|", "\n".join([*lines, "end"]))
)
FLOW: st.SearchStrategy[Tree] = st.recursive(
    st.one_of(PLAIN, QUOTED),
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(WORDS, inner, max_size=3)),
    max_leaves=5,
)
TREES: st.SearchStrategy[Tree] = st.recursive(
    st.one_of(FLOW, BLOCK),
    lambda inner: st.one_of(
        st.lists(inner, min_size=1, max_size=3),
        st.dictionaries(WORDS, inner, min_size=1, max_size=3),
    ),
    max_leaves=12,
)
DOCUMENTS = st.dictionaries(WORDS, TREES, min_size=1, max_size=4)


def flow(tree: Tree) -> str:
    """Write a tree in one line."""
    if isinstance(tree, dict):
        return "{" + ", ".join(f"{name}: {flow(value)}" for name, value in tree.items()) + "}"
    if isinstance(tree, list):
        return "[" + ", ".join(map(flow, tree)) + "]"
    if tree.style == "plain":
        return tree.value
    if tree.style == "'":
        return "'" + tree.value.replace("'", "''") + "'"
    return json.dumps(tree.value, ensure_ascii=False)


def has_block(tree: Tree) -> bool:
    """Tell whether a tree holds a block text, which cannot stand in one line."""
    if isinstance(tree, Text):
        return tree.style == "|"
    return any(map(has_block, tree.values() if isinstance(tree, dict) else tree))


def lines(tree: dict[str, Tree] | list[Tree], indent: str = "") -> Iterator[str]:
    """Write a tree in lines, with comments and blank lines where an editor's user puts them."""
    rows = tree.items() if isinstance(tree, dict) else [(None, value) for value in tree]
    for name, value in rows:
        head = f"{indent}{'-' if name is None else f'{name}:'}"
        if isinstance(value, Text) and value.style == "|":
            yield f"{head} |-  # a block"
            yield from (line and f"{indent}   {line}" for line in value.value.split("\n"))
            yield ""
        elif isinstance(value, dict | list) and (len(value) > 1 or has_block(value)):
            yield f"{head}  # below"
            yield from lines(value, f"{indent}  ")
        else:
            yield f"{head}  {flow(value)} # {flow(value)}"
        yield f"{indent} # a comment: [of, it"


def bare(tree: Tree) -> Any:
    """Return the values a reader must see."""
    if isinstance(tree, dict):
        return {name: bare(value) for name, value in tree.items()}
    return [bare(value) for value in tree] if isinstance(tree, list) else tree.value


def scalars(node: Node, *path: str | int) -> Iterator[tuple[tuple[str | int, ...], Scalar]]:
    """Yield every value that is a text, with its path."""
    if isinstance(node, Scalar):
        yield path, node
    elif isinstance(node, Mapping):
        for name, entry in node.entries.items():
            yield from scalars(entry.value, *path, name)
    elif isinstance(node, Sequence):
        for position, item in enumerate(node.items):
            yield from scalars(item, *path, position)


def cut(text: str, span: Span) -> str:
    """Cut a span out of a text as an editor counts: lines, and code points in them."""
    shown = [line.removesuffix("\r") for line in text.split("\n")]
    chosen = shown[span.line - 1 : span.end_line]
    chosen[-1] = chosen[-1][: span.end_column - 1]
    chosen[0] = chosen[0][span.column - 1 :]
    return "\n".join(chosen)


def meant(cutting: str) -> str:
    """Return the text that a cutting stands for, by the rules of its first character."""
    if cutting[:1] == "'":
        return cutting[1:-1].replace("''", "'")
    if cutting[:1] == '"':
        return str(json.loads(cutting))
    if cutting[:1] == "|":
        return "\n".join(line.strip() for line in cutting.split("\n")[1:])
    return cutting


@PARSERS
@given(
    tree=DOCUMENTS, bom=st.sampled_from(["", "\ufeff"]), line_end=st.sampled_from(["\n", "\r\n"])
)
@settings(deadline=None)
def test_span_gives_back_the_text(
    parser: Any, tree: dict[str, Tree], bom: str, line_end: str
) -> None:
    """Cut out at its span, every name and every value reads as what the tree says."""
    text = line_end.join(lines(tree))
    reading = _read((bom + text).encode(), parser)
    assert reading.complaints == ()
    (document,) = reading.documents
    assert plain(document.root) == bare(tree)
    for path, scalar in scalars(document.root):
        assert meant(cut(text, scalar.span)) == scalar.text
        assert find(document.root, path) == scalar
        assert span_of(document.root, path) == scalar.span
        if isinstance(path[-1], str):
            assert cut(text, span_of(document.root, path, key=True)) == path[-1]


@given(trees=st.lists(DOCUMENTS, min_size=1, max_size=3))
@settings(deadline=None)
def test_parsers_give_the_same_trees(trees: list[dict[str, Tree]]) -> None:
    """Whether libyaml is there or not, every document has the same texts and places."""
    data = "\n---\n".join("\n".join(lines(tree)) for tree in trees).encode()
    reading = _read(data, _FASTEST)
    assert [plain(one.root) for one in reading.documents] == [bare(tree) for tree in trees]
    assert _read(data, _PureParser) == reading


#: What breaks YAML, and what hides in it.
SCRAPS = st.sampled_from(
    [*":-?,[]{}#&*!|>'\"%@`\\ \n\t", "\r\n", ": ", "- ", "---\n", "...\n", "<<: ", "&a ", "*a"]
)


@st.composite
def damaged(draw: st.DrawFn) -> str:
    """Draw a document with scraps in wrong places."""
    text = "\n".join(lines(draw(DOCUMENTS)))
    for _ in range(draw(st.integers(1, 3))):
        place = draw(st.integers(0, len(text)))
        gone = draw(st.integers(0, 2))
        text = text[:place] + draw(SCRAPS) + text[place + gone :]
    return text


@given(text=st.one_of(damaged(), st.lists(SCRAPS).map("".join)))
@settings(deadline=None)
def test_parsers_deliver_the_same_documents_of_a_damaged_file(text: str) -> None:
    """Damage never raises, and never makes one parser deliver what the other refuses."""
    # libyaml alone takes "|#" for a block text; nobody writes it.
    text = re.sub("[|>][-+0-9]*#", "", text)
    fast, pure = (_read(text.encode(), parser) for parser in (_FASTEST, _PureParser))
    assert fast.documents == pure.documents
    assert bool(fast.complaints) == bool(pure.complaints)


@PARSERS
@given(data=st.binary(max_size=40))
@settings(deadline=None)
def test_bytes_never_raise(parser: Any, data: bytes) -> None:
    """Whatever the bytes, there is a document or a complaint."""
    reading = _read(data, parser)
    assert reading.documents or reading.complaints
