"""CommonMark: any text as inline content, rows of a table, and a document of a bounded length.

Sources: CommonMark 0.31.2, chapters 2.4 (backslash escapes), 4.6 and 6.6 (HTML); GitHub
Flavored Markdown, 4.10 (tables), whose cells end at every pipe without a backslash.
"""

import re
from collections.abc import Iterable, Iterator, Sequence
from html import escape

from reglint.printable import printable

#: Characters that a reader of Markdown takes for markup where they stand.
_MARKUP = re.compile(
    r"""[\\`*\[\]|~$] | (?<!\w)_ | _(?!\w) | <(?=[A-Za-z/!?]) | &(?=[#A-Za-z])
        | ^[#>+=-] | ^\d+(?=[.)])(?P<number>)""",
    re.VERBOSE,
)
#: What hosts make links, mentions and little pictures of. An empty comment within it keeps
#: them from it, and is not shown.
_LINKING = re.compile(r"[@#] | // | :(?=[a-z0-9_+-]+:) | \bwww(?=\.)", re.VERBOSE)
#: Comments on a pull request are cut beyond 65,536 characters.
_MOST = 65_000


def escaped(text: str) -> str:
    """Return text that is shown as it is: nothing in it is markup, a link or a mention."""
    plain = _MARKUP.sub(_escape, printable(text).strip())
    return _LINKING.sub(r"\g<0><!-- -->", plain)


def _escape(found: re.Match[str]) -> str:
    """Return a character with a backslash before it; a number has it before its full stop."""
    return f"{found[0]}\\" if found["number"] is not None else f"\\{found[0]}"


def row(cells: Iterable[str]) -> str:
    """Return a row of a table; the cells are escaped already."""
    return f"| {' | '.join(cells)} |"


def table(columns: Sequence[str], rows: Iterable[Sequence[str]]) -> Iterator[str]:
    """Yield the lines of a table of plain texts."""
    yield ""
    yield row(columns)
    yield row("---" for _ in columns)
    yield from (row(map(escaped, cells)) for cells in rows)
    yield ""


def folded(title: str, lines: Iterable[str]) -> Iterator[str]:
    """Yield lines that are shown when the title, a plain text, is opened."""
    shown = _LINKING.sub(r"\g<0><!-- -->", escape(printable(title)))
    yield from (f"<details><summary>{shown}</summary>", "", *lines, "", "</details>", "")


def document(marker: str, head: Sequence[str], body: Sequence[str], foot: Sequence[str]) -> str:
    """Return a document under a hidden marker, its body cut at a line where it is too long."""
    ends = [f"<!-- {marker} -->", *head, *foot]
    room = _MOST - sum(len(line) + 1 for line in ends)
    kept = list(_fitting(body, room))
    left = len(body) - len(kept)
    cut = [*_closing(kept), "", f"**Cut here: {left} more lines.**", ""] if left else []
    return "".join(f"{line}\n" for line in (ends[0], *head, *kept, *cut, *foot))


def _fitting(lines: Iterable[str], room: int) -> Iterator[str]:
    for line in lines:
        room -= len(line) + 1
        if room < 0:
            return
        yield line


def _closing(lines: Sequence[str]) -> Iterator[str]:
    """Yield what closes the folded parts that are still open."""
    opened = sum(line.startswith("<details>") for line in lines)
    yield from ["</details>"] * (opened - lines.count("</details>"))
