"""Reading YAML: every trap is refused at its place, or read as an editor shows it.

Where a case follows YAML itself, the chapter of the YAML 1.2.2 specification stands beside
it; the other expectations are this project's own rules, written out.
"""

from collections.abc import Callable
from typing import Any, TypeAlias

import pytest

from reglint.document import _FASTEST, MOST_NODES, Reading, _PureParser, _read, read
from reglint.plaintext import MOST_BYTES
from reglint.source import TOP, Complaint, Span
from reglint.tree import Document, Mapping, Scalar, Sequence, find, plain, span_of

Reader: TypeAlias = Callable[[bytes | str], Reading]

SPEC = """\
# made-up valve board
kind: zener-shunt
supply:
  rail: "VBAT"
  voltage: {min: 10.5 V, max: 14.4 V}
adjust:
- series_resistor.resistance
- [a, b]
empty: {}
"""


@pytest.fixture(params=[_FASTEST, _PureParser], ids=["fastest", "pure"])
def reader(request: pytest.FixtureRequest) -> Reader:
    """Read with the C parser where there is one, and with the Python parser."""
    parser = request.param
    return lambda data: _read(data.encode() if isinstance(data, str) else data, parser)


def wrong(reading: Reading) -> list[str]:
    """Return the complaints of a file, each with line and column in front."""
    return [f"{one.span.line}:{one.span.column} {one.message}" for one in reading.complaints]


def trees(reading: Reading) -> list[Any]:
    """Return the delivered documents as bare values."""
    return [plain(one.root) for one in reading.documents]


def root(reading: Reading) -> Mapping:
    """Return the root of a file's one document, which must be sound."""
    assert wrong(reading) == []
    (document,) = reading.documents
    return document.root


OR_QUOTE = "or put the text in quotes"
ANCHOR = f"is not read: delete it, {OR_QUOTE}"
ALIAS = f"is not read: state the value, {OR_QUOTE}"
UNFIT = f"this does not fit the lines above: check the indentation, {OR_QUOTE}"
COLON = f'no ": " can stand here: check the line above too, {OR_QUOTE}'
NO_PAIR = 'this is no "name: value": put a blank after the colon'
BRACKET = "a comma or the closing bracket is missing"
ESCAPE = r"a \ in double quotes begins an escape: use single quotes"
BEGINNING = "a text cannot begin with this character: put it in quotes"
LINE_END = "is a line end to some programs only: use LF"
DIRECTIVE = "is not read: only %YAML 1.2 may begin a line with %"
DEEP = "this is nested more than 24 levels deep: flatten it"
EMPTY = "1:1 the file is empty: write a first line such as format: 1"
NO_MAPPING = 'a document is lines "name: value", not a list or a text'
NO_NAME = "a name is a text: put one that begins with [ or { in quotes"
NO_VALUE = "is a name without a value: put a blank after the colon"
TWICE = "is stated twice, first in line"
UTF_8 = "in Windows-1252) is not UTF-8: save the file as UTF-8"

#: What is refused: its name, the text, and the complaints with line and column.
REFUSED: list[tuple[str, str | bytes, list[str]]] = [
    # The file as a whole.
    ("empty", "", [EMPTY]),
    ("only comments", "# licence\n\n# header\n", [EMPTY]),
    ("only markers", "---\n---\n...\n", [EMPTY]),
    ("list", "# x\n- a: 1\n", [f"2:3 {NO_MAPPING}"]),
    ("text", "\n5 V\n", [f"2:1 {NO_MAPPING}"]),
    # Bytes. RFC 3629: no character begins with 0xB0; Windows-1252 has the degree sign there.
    ("latin-1", b"a: 1\nb: \xc2\xb5\xb0C\n", [f"2:5 byte 0xB0 at offset 10 (° {UTF_8}"]),
    ("no text", b"\xef\xbb\xbfa: \x81\n", [f"1:4 byte 0x81 at offset 6 (nothing {UTF_8}"]),
    ("cut short", b"a: \xe2\x84", [f"1:4 byte 0xE2 at offset 3 (â {UTF_8}"]),
    ("UTF-16 LE", b"\xff\xfea\x00:\x00", ["1:1 the file is in UTF-16: save it as UTF-8"]),
    ("UTF-16 BE", b"\xfe\xff\x00a\x00:", ["1:1 the file is in UTF-16: save it as UTF-8"]),
    # Characters. YAML 1.2.2, 5.1 and 5.4; YAML 1.1 took U+0085, U+2028, U+2029 for line ends.
    ("bell", "a: 1\nb: x\ay\n", ["2:5 the character U+0007 is no text: delete it"]),
    ("nul", "a: \0", ["1:4 the character U+0000 is no text: delete it"]),
    ("second BOM", "\ufeffa: \ufeff1\n", ["1:4 the character U+FEFF is no text: delete it"]),
    ("form feed", "a: 1\n\fb: 2\n", [f"2:1 the character U+000C {LINE_END}"]),
    ("vertical tab", "a: 1 # \v\n", [f"1:8 the character U+000B {LINE_END}"]),
    ("next line", 'a: "x\x85y"\n', [f"1:6 the character U+0085 {LINE_END}"]),
    ("line separator", "# x\u2028\na: 1\n", [f"1:4 the character U+2028 {LINE_END}"]),
    ("paragraph", "a: |\n  x\u2029\n", [f"2:4 the character U+2029 {LINE_END}"]),
    ("lone CR", "a: 1\r\nb: 2\rc: 3\r\n", [f"2:5 the character U+000D {LINE_END}"]),
    (
        "first of each",
        "a: \f\n\f\x01\n\x01",
        [
            f"1:4 the character U+000C {LINE_END}",
            "2:2 the character U+0001 is no text: delete it",
        ],
    ),
    ("tab", "a:\n  b: 1\n \tc: 2\n\td: 3\n", ["3:2 indent with blanks, not with a tab"]),
    # Directives. YAML 1.2.2, 6.8.
    ("%TAG", "%TAG ! x:\n---\na: 1\n", [f"1:1 %TAG ! x: {DIRECTIVE}"]),
    ("%YAML 1.3", "# x\n%YAML 1.3\n---\na: 1\n", [f"2:1 %YAML 1.3 {DIRECTIVE}"]),
    # Behind the reader's back. YAML 1.2.2, 3.2.2.2, 6.9, 7.1; merge keys are a type of YAML 1.1.
    ("anchor", "a: &x 5 V\n", [f"1:4 the anchor &x {ANCHOR}"]),
    ("anchor of a mapping", "a: &x\n  b: 1\n", [f"1:4 the anchor &x {ANCHOR}"]),
    ("anchor of a name", "&x a: 1\n", [f"1:1 the anchor &x {ANCHOR}"]),
    ("alias", "a: [*x, 1]\nb: *yy\n", [f"1:5 the alias *x {ALIAS}", f"2:4 the alias *yy {ALIAS}"]),
    ("alias as a name", "*x : 1\n", [f"1:1 the alias *x {ALIAS}"]),
    (
        "alias of itself",
        "a: &x [*x]\n",
        [f"1:4 the anchor &x {ANCHOR}", f"1:8 the alias *x {ALIAS}"],
    ),
    ("tag", "a: !!float 1\n", [f"1:4 the tag !!float {ANCHOR}"]),
    ("long tag", "a: !<x:y> 1\n", [f"1:4 the tag !<x:y> {ANCHOR}"]),
    ("lone tag", "a: ! 1\n", [f"1:4 the tag ! {ANCHOR}"]),
    ("lone tag of a quote", "a:\n- ! 'x'\n", [f"2:3 the tag ! {ANCHOR}"]),
    ("tag of a list", "a: ! [1]\n", [f"1:4 the tag ! {ANCHOR}"]),
    ("tag of the root", "--- !!map\na: 1\n", [f"1:5 the tag !!map {ANCHOR}"]),
    ("both", "a: &x !y z\n", [f"1:4 the anchor &x {ANCHOR}", f"1:7 the tag !y {ANCHOR}"]),
    ("merge key", "<<: {b: 2}\n", ["1:1 the merge key << is not read: write its lines out"]),
    # Names.
    ("duplicate", "a: 1\nb: 2\na: 3\n", [f"3:1 a {TWICE} 1: delete one"]),
    ("quoted duplicate", 'x:\n  a: 1\n  "a": 2\n', [f"3:3 a {TWICE} 2: delete one"]),
    (
        "triple",
        "x: {a: 1, 'a': 2, a: 3}\n",
        [
            f"1:11 a {TWICE} 1: delete one",
            f"1:19 a {TWICE} 1: delete one",
        ],
    ),
    ("no blank after the colon", "supply: {vin:12}\n", [f"1:10 vin:12 {NO_VALUE}"]),
    ("no blank, more follows", "{min:1 V, max: 2 V}\n", [f"1:2 min:1 V {NO_VALUE}"]),
    ("list as a name", "? [a, b]\n: 1\n", [f"1:4 {NO_NAME}"]),
    ("mapping as a name", "x: {{a: 1}: 2}\n", [f"1:6 {NO_NAME}"]),
    ("no name", "?\n: 1\n", ["1:2 a name is missing before the colon"]),
    ("no name in brackets", "{: 1}\n", ["1:2 a value is missing before this (in: {: 1})"]),
    ("empty name", "a: {'': 1}\n", ["1:5 a name is missing before the colon"]),
    (
        "everything at once",
        "a: &x 1\nb: !t 2\na: *x\n",
        [
            f"1:4 the anchor &x {ANCHOR}",
            f"2:4 the tag !t {ANCHOR}",
            f"3:1 a {TWICE} 1: delete one",
            f"3:4 the alias *x {ALIAS}",
        ],
    ),
    # Depth; the root is level 1.
    ("deep", "a: " + "[" * 24 + "]" * 24, [f"1:27 {DEEP} (in: a: {'[' * 24}{']' * 20}…)"]),
    ("deep lines", "".join(f"{' ' * n}a:\n" for n in range(25)), [f"25:25 {DEEP} (in: a:)"]),
    ("bottomless", "a: " + "[\n" * 5000, [f"24:1 {DEEP} (in: [)"]),
    # Syntax, in one wording for both parsers.
    ("text with a colon", "a: b: c\n", [f"1:5 {COLON} (in: a: b: c)"]),
    ("no blank in the first line", "b:2\na: 1\n", [f"2:2 {COLON} (in: a: 1)"]),
    ("no blank in a later line", "a: 1\nb:2\nc: 3\n", [f"2:1 {NO_PAIR} (in: b:2)"]),
    ("half an indentation", "a:\n  b: 1\n c: 2\n", [f"3:2 {UNFIT} (in: c: 2)"]),
    ("less than the root", "  a: 1\nb: 2\n", [f"2:1 {UNFIT} (in: b: 2)"]),
    ("list among names", "a: 1\n- b\n", [f"2:1 {UNFIT} (in: - b)"]),
    ("list beside its name", "a: - b\n", [f"1:4 {UNFIT} (in: a: - b)"]),
    ("text behind a quote", "a: 'x' y\n", [f"1:8 {UNFIT} (in: a: 'x' y)"]),
    ("text behind a document", "{a: 1} b\n", [f"1:8 {UNFIT} (in: {{a: 1}} b)"]),
    ("no comma", "a: {x: 1 y: 2}\n", [f"1:11 {BRACKET} (in: a: {{x: 1 y: 2}})"]),
    ("wrong bracket", "a: [1, 2}\n", [f"1:9 {BRACKET} (in: a: [1, 2}})"]),
    ("open bracket", "a: [1,\n  2\nb: 3\n", [f"1:4 {BRACKET} (in: a: [1,)"]),
    ("open bracket at the end", "a: [1", [f"1:4 {BRACKET} (in: a: [1)"]),
    ("two commas", "a: [1,,2]\n", ["1:7 a value is missing before this (in: a: [1,,2])"]),
    ("comma at the end", "a: [1,\n\n\n", ["1:7 a value is missing before this (in: a: [1,)"]),
    ("glued list", "a: {b:[1]}\n", ["1:6 put a blank after the colon (in: a: {b:[1]})"]),
    ("glued question", "a: {b:?1}\n", ["1:6 put a blank after the colon (in: a: {b:?1})"]),
    ("open quote", "a: 'x\nb: 2\n", ["1:4 this quote is not closed (in: a: 'x)"]),
    ("open double quote", 'a: 1\nb: "x\n\n', ['2:4 this quote is not closed (in: b: "x)']),
    ("unknown escape", 'a: "C:\\q"\n', [f'1:4 {ESCAPE} (in: a: "C:\\q")']),
    ("half a surrogate pair", 'a: "\\ud83d"\n', [f'1:4 {ESCAPE} (in: a: "\\ud83d")']),
    ("beyond Unicode", 'a: "\\U00110000"\n', [f'1:4 {ESCAPE} (in: a: "\\U00110000")']),
    ("at sign", "a: @x\n", [f"1:4 {BEGINNING} (in: a: @x)"]),
    ("per cent", "a: %x\n", [f"1:4 {BEGINNING} (in: a: %x)"]),
    ("greater than", "a: >3 V\n", [f"1:4 {BEGINNING} (in: a: >3 V)"]),
    ("lone star", "a: * 2\n", [f"1:4 {BEGINNING} (in: a: * 2)"]),
    ("unknown tag", "a: !x!y z\n", [f"1:4 {BEGINNING} (in: a: !x!y z)"]),
    ("long line", f"a: [{'x' * 60}\n", [f"1:4 {BRACKET} (in: a: [{'x' * 43}…)"]),
]


def cases(table: list[tuple[str, str | bytes, list[Any]]]) -> pytest.MarkDecorator:
    """Turn a table into cases, each under its name."""
    names = [row[0] for row in table]
    return pytest.mark.parametrize(("text", "expected"), [row[1:] for row in table], ids=names)


@cases(REFUSED)
def test_trap_is_refused_at_its_place(
    reader: Reader, text: str | bytes, expected: list[str]
) -> None:
    """A trap is refused with one wording at one place, whichever parser reads."""
    reading = reader(text)
    assert wrong(reading) == expected
    assert trees(reading) == []


#: What is harmless: its name, the text and the bare values of its documents.
HARMLESS: list[tuple[str, str | bytes, list[Any]]] = [
    (
        "no types",
        "a: no\nb: 1:30\nc: 010\nd: ~\n",
        [{"a": "no", "b": "1:30", "c": "010", "d": "~"}],
    ),
    ("formulas", "a: b * c\nd: x *y\ne: a & b\n", [{"a": "b * c", "d": "x *y", "e": "a & b"}]),
    ("formula in a list", "f: 5 V!\ng: [a *b]\n", [{"f": "5 V!", "g": ["a *b"]}]),
    ("quoted signs", "'*a': '&b'\n'!c': '<<'\n'<<': 1\n", [{"*a": "&b", "!c": "<<", "<<": "1"}]),
    ("BOM", b"\xef\xbb\xbfa: 1\n", [{"a": "1"}]),
    ("CRLF", "a: 1\r\nb: |\r\n  x\r\n  y\r\n", [{"a": "1", "b": "x\ny\n"}]),
    ("no last line end", "a:\n- 1", [{"a": ["1"]}]),
    ("version and licence", "# licence\n%YAML 1.2\n---\na: 1\n", [{"a": "1"}]),
    ("version without marker", "%YAML 1.1 # x\na: 1\n", [{"a": "1"}]),
    ("tabs between words", 'a:\t5\tV\t# x\nb: "c\td"\n\t\n\t# x\n', [{"a": "5 V", "b": "c d"}]),
    ("nothing", "a:\nb: {c: , d}\n", [{"a": "", "b": {"c": "", "d": ""}}]),
    ("empty text", "a:b: ''\n", [{"a:b": ""}]),
    ("quoted name with a colon", '{"a:b": }\n', [{"a:b": ""}]),
    ("quoted name without a blank", '{"a":1,"b":[2]}\n', [{"a": "1", "b": ["2"]}]),
    ("colon in a name", "http://x: 1\n", [{"http://x": "1"}]),
    (
        "question",
        "a: {b: why?, c: d ? e, f?: g}\n",
        [{"a": {"b": "why?", "c": "d ? e", "f?": "g"}}],
    ),
    ("folded", "a: >-\n  x\n  y\n\nb: 1\n", [{"a": "x y", "b": "1"}]),
    ("escapes", 'a: "\\u03a9 \\" \\\\"\n', [{"a": 'Ω " \\'}]),
    ("both ohms", "a: 1 \u2126\nb: 1 \u03a9\n", [{"a": "1 \u2126", "b": "1 \u03a9"}]),
    (
        "deepest",
        "a: " + "[" * 23 + "]" * 23,
        [{"a": [[[[[[[[[[[[[[[[[[[[[[[]]]]]]]]]]]]]]]]]]]]]]]}],
    ),
    ("empty documents", "---\n---\na: 1\n---\n# x\n---\nb: 2\n---\n", [{"a": "1"}, {"b": "2"}]),
]


@cases(HARMLESS)
def test_harmless_text_is_read(reader: Reader, text: str | bytes, expected: list[Any]) -> None:
    """What only looks like a trap is read as text."""
    reading = reader(text)
    assert wrong(reading) == []
    assert trees(reading) == expected


def test_documents_are_counted(reader: Reader) -> None:
    """Each document knows its number and the line of its first name."""
    reading = reader("# x\n\na: 1\n---\n---\n\nb: 2\n...\n---\n{c: 3}\n")
    assert [(one.index, one.line) for one in reading.documents] == [(1, 3), (2, 7), (3, 10)]


def test_documents_around_an_unsound_one_are_delivered(reader: Reader) -> None:
    """A complaint takes away its own document only."""
    reading = reader("a: 1\n---\nb: 1\nb: 2\n---\n- c\n---\nd: 4\n")
    assert [(one.index, plain(one.root)) for one in reading.documents] == [
        (1, {"a": "1"}),
        (4, {"d": "4"}),
    ]
    assert wrong(reading) == [
        f"4:1 b {TWICE} 3: delete one",
        f"6:3 {NO_MAPPING}",
    ]


def test_documents_around_a_syntax_error_are_delivered(reader: Reader) -> None:
    """Reading goes on at the next document, with true lines and columns."""
    reading = reader("a: 1\n--- {b: 2\n---\nc: &x 𝛺\n---\nd: 'e\n---\n𝛺: f\n")
    assert [(one.index, plain(one.root)) for one in reading.documents] == [
        (1, {"a": "1"}),
        (5, {"𝛺": "f"}),
    ]
    assert wrong(reading) == [
        f"2:5 {BRACKET} (in: --- {{b: 2)",
        f"4:4 the anchor &x {ANCHOR}",
        "6:4 this quote is not closed (in: d: 'e)",
    ]
    assert span_of(reading.documents[1].root, ["𝛺"]) == Span(8, 4, 8, 5)


def test_document_that_loses_its_end_is_not_delivered(reader: Reader) -> None:
    """A line at the wrong indentation does not leave half a document behind."""
    reading = reader("x: 0\n---\n  a: 1\nb: 2\n")
    assert trees(reading) == [{"x": "0"}]
    assert wrong(reading) == [f"4:1 {UNFIT} (in: b: 2)"]


def test_document_with_an_end_marker_survives_what_follows(reader: Reader) -> None:
    """After an end marker the document is complete."""
    reading = reader("a: 1\n...\nb: 2\n")
    assert trees(reading) == [{"a": "1"}]
    assert wrong(reading) == [f"3:1 {UNFIT} (in: b: 2)"]


def test_many_broken_documents_end_the_reading(reader: Reader) -> None:
    """Reading gives up after 50 complaints, as each break costs a pass over the file."""
    assert len(reader("---\n{a\n" * 60).complaints) == 50


def test_alias_bomb_is_refused_unwalked(reader: Reader) -> None:
    """Aliases are never followed, so nine lines that stand for 10^9 nodes are harmless."""
    lines = ["a0: &a0 [x]"] + [
        f"a{n}: &a{n} [{', '.join([f'*a{n - 1}'] * 10)}]" for n in range(1, 9)
    ]
    reading = reader("\n".join(lines))
    assert len(reading.complaints) == 9 + 8 * 10
    assert trees(reading) == []


def test_large_file_is_not_parsed(reader: Reader) -> None:
    """A file beyond the limit is refused by its size alone; one at the limit is read."""
    assert wrong(reader(b"\xff" * (MOST_BYTES + 1))) == [
        "1:1 the file has 1,048,577 bytes, more than 1,048,576: split it"
    ]
    assert trees(reader("a: 1\n".ljust(MOST_BYTES))) == [{"a": "1"}]


def test_many_nodes_are_refused() -> None:
    """The root, a name, a list and its items count; one more than the limit is refused."""
    most = MOST_NODES - 3
    assert len(trees(read(f"a: [{'b,' * most}]\n".encode()))[0]["a"]) == most
    reading = read(f"a: [{'b,' * most}b]\n---\nc: 1\n".encode())
    what = "the file has more than 50,000 names and values: split it"
    assert wrong(reading) == [f"1:{5 + 2 * most} {what} (in: a: [{'b,' * 21}b…)"]
    assert trees(reading) == []


def test_bottomless_line_is_refused() -> None:
    """A thousand brackets in one line meet libyaml's own limit, not Python's."""
    (complaint,) = read(b"[" * 100_000).complaints
    assert complaint.message == f"{DEEP} (in: {'[' * 47}…)"


def test_tree_keeps_every_place(reader: Reader) -> None:
    """Names and values know their places; a collection has that of its first name or item."""
    tree = root(reader(SPEC))
    assert tree.span == Span(2, 1, 2, 5)
    assert tree.entries["kind"].value == Scalar("zener-shunt", Span(2, 7, 2, 18), plain=True)
    assert find(tree, ["supply", "rail"]) == Scalar("VBAT", Span(4, 9, 4, 15), plain=False)
    voltage = tree.entries["supply"].value
    assert isinstance(voltage, Mapping)
    assert voltage.span == Span(4, 3, 4, 7)
    assert voltage.entries["voltage"].key == Scalar("voltage", Span(5, 3, 5, 10), plain=True)
    assert voltage.entries["voltage"].value.span == Span(5, 13, 5, 16)
    adjust = tree.entries["adjust"].value
    assert isinstance(adjust, Sequence)
    assert adjust.span == Span(7, 3, 7, 29)
    assert adjust.items[1].span == Span(8, 4, 8, 5)
    assert tree.entries["empty"].value == Mapping({}, Span(9, 8, 9, 10))


def test_entries_keep_the_order_of_the_file(reader: Reader) -> None:
    """Names come in the order in which they stand."""
    assert list(root(reader(SPEC)).entries) == ["kind", "supply", "adjust", "empty"]


def test_columns_are_code_points(reader: Reader) -> None:
    """A character beyond the basic plane counts as one; so does a tab; a BOM as none."""
    tree = root(reader('\ufeff𝛺𝛺: {"𝛺":\t5 𝛺, b: c}\r\nd: e\r\n'))
    assert span_of(tree, ["𝛺𝛺"], key=True) == Span(1, 1, 1, 3)
    assert span_of(tree, ["𝛺𝛺", "𝛺"], key=True) == Span(1, 6, 1, 9)
    assert span_of(tree, ["𝛺𝛺", "𝛺"]) == Span(1, 11, 1, 14)
    assert span_of(tree, ["𝛺𝛺", "b"]) == Span(1, 19, 1, 20)
    assert span_of(tree, ["d"]) == Span(2, 4, 2, 5)


def test_nothing_stands_behind_its_name(reader: Reader) -> None:
    """The place of a missing value is the end of its name, in lines and in brackets."""
    tree = root(reader("a:\n\n# x\nb: {c: , dd}\n"))
    assert tree.entries["a"].value == Scalar("", Span(1, 2, 1, 2), plain=True)
    assert span_of(tree, ["b", "c"]) == Span(4, 6, 4, 6)
    assert span_of(tree, ["b", "dd"]) == Span(4, 12, 4, 12)


@pytest.mark.parametrize(
    ("text", "span"),
    [
        ("a: |\n  x\n\n  yz\n\n# c\n\nb: 1\n", Span(1, 4, 4, 5)),
        ("a: >-  # c\r\n  x\r\n\r\n\r\nb: 1\r\n", Span(1, 4, 2, 4)),
        ("a: |+\n  x\n\n\n", Span(1, 4, 2, 4)),
        ("a: |2-  # c\n\n\nb: 1\n", Span(1, 4, 1, 7)),
        ("a: >", Span(1, 4, 1, 5)),
        ("a: x\n\n   y\n\n# c\nb: 1\n", Span(1, 4, 3, 5)),
        ("a: 'x\n\n   y'  # c\n\nb: 1\n", Span(1, 4, 3, 6)),
    ],
)
def test_long_text_ends_with_its_last_character(reader: Reader, text: str, span: Span) -> None:
    """The place of a text of several lines leaves out blank lines and comments below it."""
    assert span_of(root(reader(text)), ["a"]) == span


def test_plain_tells_quotes_apart(reader: Reader) -> None:
    """A text is plain only where it stands without quotes and without a block sign."""
    tree = root(reader("a: x\nb: 'x'\nc: \"x\"\nd: |\n  x\ne: >\n  x\n"))
    values = [entry.value for entry in tree.entries.values()]
    assert [isinstance(one, Scalar) and one.plain for one in values] == [True] + [False] * 4


def test_find_follows_names_and_positions() -> None:
    """A path of names and positions leads to its value, or to None off the tree."""
    tree = root(read(SPEC.encode()))
    assert find(tree, []) is tree
    assert find(tree, ["adjust", 1, 0]) == Scalar("a", Span(8, 4, 8, 5), plain=True)
    off: list[list[str | int]] = [
        ["x"],
        ["adjust", 2],
        ["adjust", -1],
        ["adjust", "0"],
        [0],
        ["kind", "x"],
    ]
    assert [find(tree, path) for path in off] == [None] * 6


def test_span_of_names_and_values() -> None:
    """The place of a value or of its name; an item of a list is its own name."""
    tree = root(read(SPEC.encode()))
    assert span_of(tree, []) == Span(2, 1, 2, 5)
    assert span_of(tree, ["supply", "voltage", "max"]) == Span(5, 31, 5, 37)
    assert span_of(tree, ["supply", "voltage", "max"], key=True) == Span(5, 26, 5, 29)
    assert span_of(tree, ["adjust", 1], key=True) == Span(8, 4, 8, 5)


def test_span_of_falls_back_to_what_exists() -> None:
    """Off the tree, the last value or name on the path stands in."""
    tree = root(read(SPEC.encode()))
    assert span_of(tree, ["supply", "rail", "x"]) == Span(4, 9, 4, 15)
    assert span_of(tree, ["supply", "x", "rail"], key=True) == Span(3, 1, 3, 7)
    assert span_of(tree, ["x"], key=True) == Span(2, 1, 2, 5)


def test_plain_gives_bare_values() -> None:
    """A tree turns into dict, list and str, in order."""
    assert plain(root(read(SPEC.encode()))) == {
        "kind": "zener-shunt",
        "supply": {"rail": "VBAT", "voltage": {"min": "10.5 V", "max": "14.4 V"}},
        "adjust": ["series_resistor.resistance", ["a", "b"]],
        "empty": {},
    }


def test_reading_is_a_value() -> None:
    """Equal bytes give equal readings."""
    assert read(b"a: 1\n") == Reading(
        (
            Document(
                Mapping({"a": root(read(b"a: 1\n")).entries["a"]}, Span(1, 1, 1, 2)),
                index=1,
            ),
        ),
        (),
    )
    assert read(b"") == Reading((), (Complaint(TOP, EMPTY.removeprefix("1:1 ")),))
