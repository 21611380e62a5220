"""From a file's bytes to a text whose lines all parsers and editors agree on."""

import re
from collections.abc import Iterator

from reglint.source import TOP, Complaint, Span

#: A spec has some 1,500 bytes; the worst file of this size takes 4 s to refuse (measured).
MOST_BYTES = 1 << 20

#: Line ends to YAML, but not to every editor: they would shift all lines below.
_LINE_ENDS = "\v\f\r\x85\u2028\u2029"
_FOREIGN = re.compile("[\0-\x08\v-\x1f\x7f-\x9f\u2028\u2029\ufeff\ufffe\uffff]")
_INDENTING_TAB = re.compile(r"^ *(\t)[ \t]*[^ \t\r\n#]", re.MULTILINE)
_DIRECTIVE = re.compile(r"^%(?!YAML[ \t]+1\.[12][ \t]*(#|$)).*", re.MULTILINE)


def clean_text(data: bytes) -> str | list[Complaint]:
    """Return the text of a file with LF line ends, or everything that keeps it from being read."""
    if len(data) > MOST_BYTES:
        size = f"the file has {len(data):,} bytes, more than {MOST_BYTES:,}: split it"
        return [Complaint(TOP, size)]
    try:
        text = data.decode().removeprefix("\ufeff")
    except UnicodeDecodeError as error:
        return [_not_utf8(data, error.start)]
    if unclean := sorted(_unclean(text), key=lambda one: one.span):
        return unclean
    # The directives left are harmless, and as comments they are so to every parser.
    text = f"\n{text}".replace("\n%", "\n#").replace("\t", " ")[1:]
    # libyaml takes the end of a last line without line end for a line of its own.
    return text if text.endswith("\n") else f"{text}\n"


def _not_utf8(data: bytes, start: int) -> Complaint:
    """Name the byte that is not UTF-8, and the character older programs mean by it."""
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        return Complaint(TOP, "the file is in UTF-16: save it as UTF-8")
    before = data[:start].decode().removeprefix("\ufeff")
    meant = data[start : start + 1].decode("cp1252", "ignore") or "nothing"
    what = f"byte 0x{data[start]:02X} at offset {start} ({meant} in Windows-1252) is not UTF-8"
    return Complaint(place(before, len(before)), f"{what}: save the file as UTF-8")


def _unclean(text: str) -> Iterator[Complaint]:
    """Complain about the first of each character, tab and directive that has no place here."""
    text = text.replace("\r\n", "\n")
    for character in sorted(set(_FOREIGN.findall(text))):
        line_end = character in _LINE_ENDS
        what = "a line end to some programs only: use LF" if line_end else "no text: delete it"
        what = f"the character U+{ord(character):04X} is {what}"
        yield Complaint(place(text, text.index(character)), what)
    if "\t" in text and (tab := _INDENTING_TAB.search(text)):
        yield Complaint(place(text, tab.start(1)), "indent with blanks, not with a tab")
    if (text[:1] == "%" or "\n%" in text) and (found := _DIRECTIVE.search(text)):
        what = f"{short(found[0])} is not read: only %YAML 1.2 may begin a line with %"
        yield Complaint(place(text, found.start()), what)


def place(text: str, index: int, length: int = 1) -> Span:
    """Return the place of a stretch within one line."""
    line = text.count("\n", 0, index) + 1
    column = index - text.rfind("\n", 0, index)
    return Span(line, column, line, column + length)


def short(text: str, most: int = 48) -> str:
    """Return a text cut to what a message can hold."""
    return text if len(text) <= most else f"{text[: most - 1]}…"
