"""Hostile names: whatever a file calls things, every report stays what its format promises.

Each format has a reader in ``READERS``; a new format without one fails here.
"""

import json
import re
import string
import unicodedata
from collections.abc import Callable, Iterator, Mapping
from datetime import date
from html.parser import HTMLParser
from urllib.parse import unquote
from xml.etree import ElementTree as ET

import pytest
from markdown_it import MarkdownIt

from reglint import comparisons, reports
from reglint.comparison import Compared, Comparison, Movement
from reglint.finding import Finding, Outcome, Run, Verdict
from reglint.judge import Wanted
from reglint.plaintext import short
from reglint.printable import printable
from reglint.project import Project
from reglint.reports import Options
from reglint.source import TOP, Problem

Sample = Callable[..., str]

NAUGHTY = [
    "<script>alert(1)</script>",
    "<!-- -->",
    "&lt;&amp;&#0;",
    "]]>",
    "<![CDATA[",
    "a|b||c",
    "@everyone",
    "#12",
    "[here](1)",
    "![x](https://example.org/x.png)",
    "**bold** _it_ ~~no~~",
    "`code` ``` fence",
    "</details></summary>",
    "# heading",
    "---",
    "- item",
    "1. item",
    "> quote",
    "$1 ${HOME} $(id)",
    "{0} {} {{x}}",
    "%s %n 100%",
    "'single' \"double\"",
    "back\\slash \\n \\",
    "\\[x](1)",
    "tab\there",
    "two\nlines",
    "carriage\rreturn",
    "blank\n\n<b>html</b>",
    "null\0bell\a\x7f",
    "\x1b[31mred\x1b[0m\x1b[2J",
    "right\u202eot\u202cleft",
    "\u2066isolate\u2069",
    "zero\u200bwidth\ufeff",
    "line\u2028paragraph\u2029next\x85",
    "\U0001f600\U0001f1e9\U0001f1ea",
    "e\u0301 Ω µ − 漢字",
    "private\ue000\U000e0041",
    "::warning file=x::y",
    "a: b: c",
    " blanks around ",
    "x" * 10_000,
]
#: The schema takes letters, digits, _ and - for a load.
LOADS = ["a_b_c", "b--c", "e\u00e9", "L" * 1000]
#: A folder's or file's name may hold anything but NUL and a slash, in at most 255 bytes.
FILES = [name for name in NAUGHTY if "\0" not in name and "/" not in name and len(name) < 100]


def quoted(text: str) -> str:
    """Return a text as it stands between YAML's double quotes, all but its letters escaped."""
    plain = string.ascii_letters
    return "".join(each if each in plain else f"\\U{ord(each):08X}" for each in text)


def spec(sample: Sample, name: str, load: str) -> str:
    """Return a failing spec whose every text is the name, with a waiver that has expired."""
    changes: dict[str, object] = {
        "name": quoted(name),
        "purpose": quoted(name),
        "supply.rail": quoted(name),
        "output.rail": quoted(name),
        "series_resistor.ref": quoted(name),
        "zener.ref": quoted(name),
        f"loads.{load}": {"current": {"min": "0 mA", "nom": "4 mA", "max": "40 mA"}},
        "waivers": {
            "supply-headroom": waived(name, "2027-01-01"),
            "shock-caution": waived(name, "2026-01-01"),
            quoted(name)[:1000]: waived(name, "2027-01-01"),
        },
    }
    return sample(changes)


def waived(name: str, until: str) -> Mapping[str, str]:
    """Return a waiver whose texts are the name."""
    return {"reason": quoted(name), "approved_by": quoted(name), "until": until}


@pytest.fixture(scope="module")
def run(tmp_path_factory: pytest.TempPathFactory, sample: Sample) -> Run:
    """Return a check of specs and of unreadable files with hostile names in them and on them."""
    paths, tmp_path = [], tmp_path_factory.mktemp("hostile")
    for number, name in enumerate(NAUGHTY):
        path = tmp_path / f"{number}.reg.yaml"
        path.write_text(spec(sample, name, LOADS[number % len(LOADS)]), encoding="utf-8")
        paths.append(path)
    for name in FILES:
        path = tmp_path / f"{name}.reg.yaml"
        path.write_text(f'kind: "{quoted(name)}"\n"{quoted(name)}": x\n', encoding="utf-8")
        paths.append(path)
    # One spec is told what would hold; each takes seconds.
    return Project(tmp_path, mended=4).check(paths, Wanted(date(2026, 12, 1)))


def shown(run: Run) -> Iterator[Finding]:
    """Yield the findings that are no pass."""
    for verdict in run.verdicts:
        yield from (each for each in verdict.findings if each.outcome is not Outcome.PASS)


def is_plain(line: str) -> bool:
    """Tell whether a terminal shows a line as it is: nothing moves, hides or turns round."""
    return not any(unicodedata.category(each) in ("Cc", "Cf", "Zl", "Zp") for each in line)


def read_lines(text: str, run: Run) -> None:
    """Find one line a finding and a problem, none of which a terminal obeys."""
    lines = text.removesuffix("\n").split("\n")
    assert len(lines) == len(list(shown(run))) + len(run.problems)
    assert all(map(is_plain, lines))


def read_text(text: str, run: Run) -> None:
    """Find one heading a spec, one a finding and one a problem, none of which a terminal obeys."""
    lines = text.split("\n")
    assert all(map(is_plain, lines))
    headings = [line for line in lines if re.match(r"(pass|warn|fail)  ", line)]
    assert len(headings) == len(run.verdicts)
    findings = [line for line in lines if re.match(r"  (warn|fail|waived)  ", line)]
    assert len(findings) == len(list(shown(run)))
    assert sum(line.startswith("unreadable  ") for line in lines) == len(run.problems)


def read_json(text: str, run: Run) -> None:
    """Read data, not for show: every name comes back as it was."""
    report = json.loads(text)
    assert [each["name"] for each in report["specs"]] == [v.spec.name for v in run.verdicts]
    assert [each["file"] for each in report["problems"]] == [each.file for each in run.problems]


def read_sarif(text: str, run: Run) -> None:
    """Find one result a finding that is not waived; files come back; links lead to shares only."""
    results = json.loads(text)["runs"][0]["results"]
    found = [each for each in shown(run) if not each.waived]
    assert len(results) == len(found) + len(run.problems)
    files = [_uri(each["locations"][0]) for each in results[: len(run.problems)]]
    assert files == [each.file for each in run.problems]
    named = {each["locations"][0]["logicalLocations"][0]["name"] for each in results[len(files) :]}
    assert named == {printable(each.spec.name) for each in run.verdicts}
    for each in results:
        message = each["message"]["text"]
        assert is_plain(message)
        # Without escaped characters, what is left of brackets are our own links.
        bare = re.sub(r"\\[\\\[\]]", "", message)
        links = re.findall(r"\[[^\[\]]*\]\((\d+)\)", bare)
        assert links == [str(place["id"]) for place in each.get("relatedLocations", ())]
        assert bare.count("[") == bare.count("]") == len(links)
        assert not re.search(r"(?<!\{)(\{\{)*\{(?!\{)", bare)


def _uri(location: Mapping[str, Mapping[str, Mapping[str, str]]]) -> str:
    uri = location["physicalLocation"]["artifactLocation"]["uri"]
    assert re.fullmatch(r"[A-Za-z0-9%/._~-]+", uri)
    return unquote(uri)


def read_junit(text: str, run: Run) -> None:
    """Find a case for each rule, failures where they are; no name or text was taken for markup."""
    root = ET.fromstring(text)  # noqa: S314 -- a report of our own
    tags = {"testsuites", "testsuite", "testcase", "failure", "error", "skipped", "system-out"}
    assert {each.tag for each in root.iter()} == tags
    failing = [e for e in shown(run) if e.outcome is Outcome.FAIL and not e.waived]
    assert len(list(root.iter("failure"))) == len(failing)
    assert len(list(root.iter("error"))) == len(run.problems)
    cases = [(each.get("classname"), each.get("name")) for each in root.iter("testcase")]
    assert len(set(cases)) == len(cases)
    suites = {each.get("name") for each in root}
    assert {printable(f"{v.spec.file}: {v.spec.name}") for v in run.verdicts} <= suites
    assert all(is_plain(line) for each in root.iter() for line in (each.text or "").split("\n"))


class Page(HTMLParser):
    """Collects the elements of a page, their attributes and its text."""

    def __init__(self) -> None:
        """Start with nothing."""
        super().__init__()
        self.tags: list[str] = []
        self.classes: list[str] = []
        self.attributes: set[str] = set()
        self.words: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Note an element and its attributes."""
        self.tags.append(tag)
        self.attributes |= {name for name, _ in attrs}
        self.classes += [value or "" for name, value in attrs if name == "class"]

    def handle_data(self, data: str) -> None:
        """Note a piece of text."""
        self.words.append(data)


def read_html(text: str, run: Run) -> None:
    """Find a box for each finding; no name became an element, an attribute or a hidden sign."""
    page = Page()
    page.feed(text)
    assert not {"script", "img", "b", "i", "iframe", "object", "form"} & set(page.tags)
    assert not any(name.startswith("on") or name in ("src", "srcset") for name in page.attributes)
    boxes = [each for each in page.classes if each.startswith("finding ")]
    assert len(boxes) == len(list(shown(run)))
    assert all(is_plain(line) for each in page.words for line in each.split("\n"))
    # A page may break a name's lines: blanks are blanks there.
    names = {printable(each.replace("\n", " ")).strip() for each in _names(run)}
    assert names <= {each.replace("\n", " ").strip() for each in page.words}


def _names(run: Run) -> Iterator[str]:
    yield from (verdict.spec.name for verdict in run.verdicts)


def read_markdown(text: str, run: Run) -> None:
    """Find the whole cut to what a host takes; spec by spec, nothing became markup or a mention."""
    assert len(text) < 65_536
    assert re.search(r"\*\*Cut here: \d+ more lines\.\*\*", text)
    render = reports.renderer("markdown")
    for verdict in run.verdicts:
        alone = Run((verdict,), ())
        words = read_whole_markdown(render(alone, Options()), alone)
        assert short(printable(verdict.spec.name)).strip() in words
    troubles = Run((), run.problems)
    read_whole_markdown(render(troubles, Options()), troubles)


def read_whole_markdown(text: str, run: Run) -> str:
    """Return the words of a document after finding a row for each finding and problem."""
    reader, page = MarkdownIt("gfm-like"), Page()
    # GitHub Flavored Markdown, 6.9: no link without www or a scheme.
    assert reader.linkify is not None
    reader.linkify.set({"fuzzy_link": False, "fuzzy_email": True})
    page.feed(reader.render(text))
    assert set(page.tags) <= {"p", "strong", "em", "ul", "li", "details", "summary", *TABLE}
    assert not page.attributes
    assert page.tags.count("tr") == 1 + len(list(shown(run))) + len(run.problems)
    words = "".join(page.words)
    assert all(is_plain(line) for line in words.split("\n"))
    assert not re.search(r"[@#]\w", "\0".join(page.words))
    return words


#: Elements of a table.
TABLE = ("table", "thead", "tbody", "tr", "th", "td")

READERS: Mapping[str, Callable[[str, Run], None]] = {
    "html": read_html,
    "json": read_json,
    "junit": read_junit,
    "lines": read_lines,
    "markdown": read_markdown,
    "sarif": read_sarif,
    "text": read_text,
}


@pytest.mark.parametrize("name", reports.names())
def test_a_report_stays_sound_whatever_names_a_file_holds(name: str, run: Run) -> None:
    """Read back by a parser of its format, a report has as many findings as the run."""
    assert name in READERS, f"write a reader of the format {name} for hostile names"
    everything = reports.wants_everything(name)
    READERS[name](reports.renderer(name)(run, Options(everything=everything)), run)


@pytest.mark.parametrize("name", reports.names())
def test_a_report_can_be_written_as_utf_8(name: str) -> None:
    """A file name that is not UTF-8 reaches no report as half a character."""
    run = Run((), (Problem("caf\udce9.reg.yaml", TOP, "the file caf\udce9 is empty"),))
    assert reports.renderer(name)(run, Options()).encode()


def test_the_hostile_specs_are_read_and_fail(run: Run) -> None:
    """The specs above are sound, fail, and are told of their waivers: else nothing is tested."""
    assert [each.spec.name for each in run.verdicts] == NAUGHTY
    assert {each.outcome for each in run.verdicts} == {Outcome.FAIL}
    assert all(any(f.waived for f in each.findings) for each in run.verdicts)
    assert {each.file for each in run.problems} == {f"{name}.reg.yaml" for name in FILES}


def test_colour_lets_no_escape_of_a_name_through(run: Run) -> None:
    """With colours on, the only escapes in the text report are those around our own words."""
    text = reports.renderer("text")(run, Options(colour=True))
    own = r"\x1b\[3[1-6]m(?:pass|warn|fail|waived|unreadable)\x1b\[0m"
    assert "\x1b" not in re.sub(rf"^( *){own}", r"\1", text, flags=re.MULTILINE)


def of_all(run: Run) -> Comparison:
    """Return a comparison in which every spec is new, every waiver ends, no problem is new."""
    specs = tuple(Compared(None, each, tuple(movements(each))) for each in run.verdicts)
    ending = tuple((each.spec, waiver) for each in run.verdicts for waiver in each.spec.waivers)
    return Comparison("main", specs, 0, ending, run.problems, run.problems)


def movements(verdict: Verdict) -> Iterator[Movement]:
    """Yield a movement for each finding, from nothing."""
    yield from (Movement(each.rule, None, each) for each in verdict.findings)


@pytest.mark.parametrize("name", ["text", "html", "markdown"])
def test_a_comparison_stays_sound_whatever_names_a_file_holds(name: str, run: Run) -> None:
    """No name becomes an element, a link, a mention or something a terminal obeys."""
    text = comparisons.renderer(name)(of_all(run))
    page = Page()
    page.feed(MarkdownIt("gfm-like").render(text) if name == "markdown" else text)
    if name == "text":
        assert all(map(is_plain, text.split("\n")))
    else:
        assert not {"script", "img", "b", "i", "iframe", "object", "form"} & set(page.tags)
        assert not any(each.startswith("on") or each == "src" for each in page.attributes)
        assert all(is_plain(line) for each in page.words for line in each.split("\n"))
    if name == "markdown":
        assert not re.search(r"[@#]\w", "\0".join(page.words))
        assert len(text) < 65_536


def test_a_comparison_as_data_gives_names_back(run: Run) -> None:
    """JSON is not for show: names are as they were."""
    report = json.loads(comparisons.renderer("json")(of_all(run)))
    assert [each["name"] for each in report["specs"]] == [v.spec.name for v in run.verdicts]


def test_every_format_of_a_comparison_is_tried() -> None:
    """A new one needs its reader above."""
    assert comparisons.names() == ["html", "json", "markdown", "text"]
