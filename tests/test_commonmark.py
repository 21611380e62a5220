"""CommonMark: texts come back as they were, and a document stays within what a host takes."""

import pytest
from markdown_it import MarkdownIt

from reglint.commonmark import document, escaped, folded, table


@pytest.mark.parametrize(
    ("text", "written"),
    [
        ("zener.current is 3 mA (margin +2 %)", "zener.current is 3 mA (margin +2 %)"),
        ("# heading", r"\#<!-- --> heading"),
        ("12. item", r"12\. item"),
        ("- item", r"\- item"),
        ("a_b _it_", r"a_b \_it\_"),
        ("a|b", r"a\|b"),
        ("<b> <= 3", r"\<b> <= 3"),
        ("&lt; & R&D", r"\&lt; & R\&D"),
        ("@all", "@<!-- -->all"),
        ("https://x.y", "https://<!-- -->x.y"),
        (":smile: 3:4", ":<!-- -->smile: 3:4"),
        ("$x$ `y` \\", r"\$x\$ \`y\` \\"),
    ],
)
def test_only_what_means_something_is_escaped(text: str, written: str) -> None:
    """Plain sentences stay readable in the source."""
    assert escaped(text) == written


@pytest.mark.parametrize("text", ["*a* **b**", "[x](y)", "![i](j)", "~~s~~", "a\\|b", "1) one"])
def test_a_reader_shows_the_text_itself(text: str) -> None:
    """One paragraph, no element in it, the same characters (markdown-it-py, GFM)."""
    shown = MarkdownIt("gfm-like").render(escaped(text)).replace("<!-- -->", "")
    assert shown == f"<p>{text}</p>\n"


def test_a_table_has_a_cell_for_every_text() -> None:
    """Pipes in texts make no further cells."""
    lines = "\n".join(table(("one", "two"), [("a|b", "c\\|d")]))
    shown = MarkdownIt("gfm-like").render(lines)
    assert "<td>a|b</td>\n<td>c\\|d</td>" in shown
    assert shown.count("<td>") == 2


def test_a_folded_title_is_plain_text() -> None:
    """In HTML a backslash escapes nothing: the title is escaped as HTML."""
    assert next(iter(folded("<b> @x", []))) == ("<details><summary>&lt;b&gt; @<!-- -->x</summary>")


def test_a_long_document_is_cut_at_a_line_and_closed() -> None:
    """What is left out is counted, folded parts are closed, head and foot stay."""
    body = list(folded("many", (f"- {number:060}" for number in range(2000))))
    text = document("mark", ["head"], body, ["foot"])
    lines = text.splitlines()
    kept = sum(line.startswith("- ") for line in lines)
    assert len(text) < 65_536
    assert (lines[0], lines[1], lines[-1]) == ("<!-- mark -->", "head", "foot")
    assert lines.count("</details>") == 1
    assert f"**Cut here: {len(body) - kept - 2} more lines.**" in lines


def test_a_short_document_is_whole() -> None:
    """Nothing is cut, and nothing says so."""
    assert document("mark", ["head"], ["body"], ["foot"]) == "<!-- mark -->\nhead\nbody\nfoot\n"
