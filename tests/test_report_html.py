"""The page to print and sign: whole, safe, the same at every run, and drawn by a browser."""

import re
import shutil
import subprocess
from collections import Counter
from collections.abc import Callable
from datetime import date
from html.parser import HTMLParser
from pathlib import Path
from xml.etree import ElementTree as ET

import pytest

from reglint import project as project_module
from reglint.finding import Run
from reglint.judge import Wanted
from reglint.project import Project
from reglint.reports import Options, accountant, renderer
from reglint.wording import CAUTION

EXAMPLES = Path(__file__).parents[1] / "examples"
VALVE = EXAMPLES / "boards/valve-controller/rev-b"
TODAY = date(2026, 12, 1)
#: Elements of HTML that are never closed.
VOID = {"meta"}


class Page(HTMLParser):
    """Collects what a page is made of, and whether its elements are closed in order."""

    def __init__(self, text: str) -> None:
        """Read a whole page."""
        super().__init__()
        self.tags: Counter[str] = Counter()
        self.attributes: list[tuple[str, str, str]] = []
        self.words: list[str] = []
        self.open: list[str] = []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Note an element and its attributes."""
        self.tags[tag] += 1
        self.attributes += [(tag, name, value or "") for name, value in attrs]
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        """Note an element that closes itself."""
        self.tags[tag] += 1
        self.attributes += [(tag, name, value or "") for name, value in attrs]

    def handle_endtag(self, tag: str) -> None:
        """Close the innermost element, which must be this one."""
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        """Note text."""
        if self.open and self.open[-1] != "style":
            self.words.append(data)

    @property
    def text(self) -> str:
        """Return all text, blanks made single."""
        return " ".join(" ".join(self.words).split())

    def values(self, name: str) -> list[str]:
        """Return all values of an attribute."""
        return [value for _, each, value in self.attributes if each == name]


def rendered(folder: Path, *paths: Path, everything: bool = False) -> str:
    """Return the page of specs, made as the command makes it."""
    project = Project(folder)
    wanted = Wanted(TODAY, everything=everything, account=accountant("html"))
    run = project.check(project.specs(paths or (folder,)), wanted)
    return renderer("html")(run, Options(everything=everything))


@pytest.fixture(scope="module")
def text() -> str:
    """Return the page of the valve controller's board."""
    return rendered(EXAMPLES, VALVE)


@pytest.fixture(scope="module")
def page(text: str) -> Page:
    """Return the same page, taken apart."""
    return Page(text)


def drawings(text: str) -> list[ET.Element]:
    """Return the pictures of a page, each well-formed by itself."""
    found = re.findall(r"<svg .*?</svg>", text, flags=re.DOTALL)
    return [ET.fromstring(each) for each in found]  # noqa: S314 -- our own text


def test_nothing_runs_and_nothing_is_fetched(text: str, page: Page) -> None:
    """No script, no address, no element that loads: links lead into the page itself."""
    loading = {"script", "link", "img", "iframe", "object", "embed", "image", "use", "base", "form"}
    assert not loading & page.tags.keys()
    assert all(value.startswith("#") for value in page.values("href"))
    assert not page.values("src")
    assert not [name for _, name, _ in page.attributes if name.startswith("on")]
    assert "http" not in text
    assert "@import" not in text
    assert set(re.findall(r"url\((.)", text)) == {"#"}


def test_every_element_is_closed(page: Page) -> None:
    """A parser that counts finds nothing left open."""
    assert page.open == []


def test_ids_are_unique_and_every_reference_has_one(text: str, page: Page) -> None:
    """No two elements share an id; labels, links and hatches find theirs."""
    ids = page.values("id")
    assert len(ids) == len(set(ids))
    asked = {each for value in page.values("aria-labelledby") for each in value.split()}
    asked |= {value.removeprefix("#") for value in page.values("href")}
    asked |= set(re.findall(r"url\(#([^)]+)\)", text))
    assert asked <= set(ids)


def test_every_picture_has_a_name(text: str) -> None:
    """Four pictures a spec, each an image with a title and a description."""
    found = drawings(text)
    assert len(found) == 12
    for each in found:
        named = {inner.get("id"): inner.text for inner in each}
        assert each.get("role") == "img"
        assert all(named[name] for name in (each.get("aria-labelledby") or "").split())


def test_pictures_need_no_style_sheet(text: str) -> None:
    """Nothing in a drawing has a class or a style; sizes and colours are its own attributes."""
    for each in drawings(text):
        assert each.get("width") == "660"
        for inner in each.iter():
            assert not {"class", "style"} & inner.attrib.keys()


def test_two_runs_give_the_same_bytes(text: str) -> None:
    """Same input, same page."""
    assert rendered(EXAMPLES, VALVE).encode() == text.encode()


def test_the_outcome_is_word_and_shape(page: Page) -> None:
    """Neither the failing nor the passing spec is told by colour alone."""
    assert "■ fail solenoid-clamp" in page.text
    assert "● pass valve-sense" in page.text


def test_a_failing_spec_has_all_that_the_text_report_tells(page: Page) -> None:
    """Message, reason, worst corner, shares with lines, remedy, and the values that would hold."""
    for said in (
        "■ fail minimum-zener-current (loaded), line 20",
        "zener.current is 0 A at worst, at least 3 mA is wanted (margin −100 %)",
        "reason Below its minimum current the diode leaves the steep part of its curve",
        "worst at ambient 60 °C, load.current 16 mA, series_resistor.resistance 532 ohm",
        "eaten by supply.voltage 48 % (line 9), loads.driver_2.current 35 % (line 16)",
        "remedy Lower the series resistance, raise the lowest supply, or lighten the load.",
        "Would hold no standard value of series_resistor.resistance",
    ):
        assert said in page.text


def test_figures_tell_where_they_come_from(page: Page) -> None:
    """A line of the spec, or a part's file; what was assumed stands beside it."""
    assert "series_resistor.resistance R 470 ohm, from 444.855 ohm to 495.145 ohm line 21" in (
        page.text
    )
    assert "part 1N4733A, rules/parts/jedec-1n4728a-1n4764a.part.yaml" in page.text


def test_the_calculation_is_the_sheet_s(page: Page) -> None:
    """Formula, numbers and result as the golden sheet of the same spec has them."""
    sheet = (EXAMPLES / "expected/valve-sense.sheet").read_text(encoding="utf-8")
    start = sheet.index("  zener.power (P_Z)")
    for line in sheet[start:].splitlines()[:4]:
        assert line.strip() in page.text


def test_the_caution_and_a_place_to_sign_are_there(page: Page) -> None:
    """At the top, and with each place to sign: three specs and the whole."""
    assert page.text.count(CAUTION) == 5
    assert page.text.count("Signed for") == 4


def test_a_waiver_is_shown_with_who_and_until() -> None:
    """A pass that rests on a waiver says so."""
    shown = Page(rendered(EXAMPLES, EXAMPLES / "boards/pump-gateway/rev-c/rails.reg.yaml"))
    assert "◇ waived preferred-value (nominal), line 12" in shown.text
    assert "waived stock of the pilot run; by hardware lead until 2027-06-30" in shown.text


def test_what_cannot_be_read_is_on_the_page() -> None:
    """A file that could not be used is listed with its place."""
    shown = Page(rendered(EXAMPLES, EXAMPLES / "boards/pump-gateway/rev-c/draft.reg.yaml"))
    assert "✕ unreadable What could not be used" in shown.text
    assert "line 10, column 25: zener.part: no part 1N4733 is known" in shown.text


def test_what_is_neglected_is_said_under_the_pictures() -> None:
    """A picture without temperature drift does not look like one with it."""
    shown = Page(rendered(EXAMPLES, EXAMPLES / "boards/soil-station"))
    assert "In this picture temperature drift is not counted." in shown.text


def test_passes_are_listed_where_everything_is_wanted() -> None:
    """``--everything`` adds the rules that hold."""
    path = VALVE / "rails.reg.yaml"
    assert "● pass shock-caution" not in Page(rendered(EXAMPLES, path)).text
    assert "● pass shock-caution" in Page(rendered(EXAMPLES, path, everything=True)).text


HOSTILE = "</title><script>alert(1)</script>\"'`{{ 7*7 }}"


def hostile(folder: Path, sample: Callable[..., str]) -> str:
    """Return the page of a spec with hostile words wherever words are free."""
    quoted = HOSTILE.replace('"', '\\"')
    changes = {"name": "x", "purpose": f"{quoted}\\u202E\\u0007", "zener.ref": quoted}
    changes |= {"supply.rail": quoted, "zener.current_max": None}
    changes |= {
        "waivers": {
            "maximum-zener-current": {
                "reason": quoted,
                "approved_by": quoted,
                "until": "2027-06-30",
            }
        }
    }
    path = folder / "<b>&\"'.reg.yaml"
    path.write_text(sample(changes), encoding="utf-8")
    return rendered(folder, path)


def test_hostile_words_stay_words(tmp_path: Path, sample: Callable[..., str]) -> None:
    """Names, reasons and paths that hold markup are shown as they are, and are no markup."""
    shown = Page(hostile(tmp_path, sample))
    assert not {"script", "b>&\"'.reg.yaml"} & shown.tags.keys()
    assert shown.text.count(HOSTILE) >= 4
    assert "<b>&\"'.reg.yaml" in shown.text


def test_disturbing_characters_are_replaced(tmp_path: Path, sample: Callable[..., str]) -> None:
    """Characters that turn or ring are replaced, each by a mark that shows there was one."""
    text = hostile(tmp_path, sample)
    assert not set(text) & {"\u202e", "\x07"}
    assert f"{HOSTILE}��" in Page(text).text


def test_a_project_with_many_specs_says_what_is_left_out(
    tmp_path: Path, sample: Callable[..., str], monkeypatch: pytest.MonkeyPatch
) -> None:
    """The worst specs keep their pictures; of the others the page says that they have none."""
    monkeypatch.setattr(project_module, "_MOST_ACCOUNTS", 1)
    for name, most in (("first", "2 mA"), ("second", "12 mA")):
        changes = {"name": name, "loads.gauge.current.max": most}
        (tmp_path / f"{name}.reg.yaml").write_text(sample(changes), encoding="utf-8")
    text = rendered(tmp_path)
    assert "Of 1 of these specs the figures, calculation and pictures are left out" in text
    first, second = text.index('id="spec-1"'), text.index('id="spec-2"')
    assert "<svg" not in text[first:second]
    assert text[second:].count("<svg") == 4


def test_a_spec_without_loads_says_which_picture_is_missing(
    tmp_path: Path, sample: Callable[..., str]
) -> None:
    """Where there is nothing to span, a sentence stands instead."""
    (tmp_path / "a.reg.yaml").write_text(sample({"loads": {}}), encoding="utf-8")
    text = rendered(tmp_path)
    assert "Not drawn: Operating area: this spec gives load.current no range." in text
    assert text.count("<svg") == 3


def contrast(one: str, other: str) -> float:
    """Return the contrast ratio of two colours, by the definition of WCAG 2.2."""

    def luminance(colour: str) -> float:
        parts = (int(colour[at : at + 2], 16) / 255.0 for at in (1, 3, 5))
        linear = [p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts]
        return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

    light, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def test_contrast_is_defined_as_published() -> None:
    """Black on white is 21 : 1 (WCAG 2.2, definition of contrast ratio)."""
    assert contrast("#000000", "#ffffff") == pytest.approx(21.0)


@pytest.mark.parametrize("word", ["fail", "warn", "pass", "waived", "unreadable"])
def test_outcome_words_have_contrast_enough(word: str, text: str) -> None:
    """At least 4.5 : 1 against the white page (WCAG 2.2, success criterion 1.4.3)."""
    found = re.search(rf"\.{word} {{ color: (#\w{{6}}); }}", text)
    assert found is not None
    assert contrast(found[1], "#ffffff") >= 4.5


def test_a_run_without_specs_is_a_page_too() -> None:
    """Nothing to show is still well-formed."""
    assert Page(renderer("html")(Run((), ()), Options())).open == []


BROWSER = next(
    (found for name in ("chromium", "chromium-browser") if (found := shutil.which(name))), None
)


@pytest.mark.skipif(BROWSER is None, reason="there is no browser here to draw the page")
def test_a_browser_draws_the_page_and_prints_its_folded_parts(text: str, tmp_path: Path) -> None:
    """The screenshot is no blank sheet, and the printed page holds the calculation."""
    path = tmp_path / "page.html"
    path.write_text(text, encoding="utf-8")
    assert BROWSER is not None
    browser = [
        BROWSER,
        "--headless",
        "--no-sandbox",
        "--disable-gpu",
        f"--user-data-dir={tmp_path}/u",
    ]
    for word in ("--screenshot=shot.png", "--print-to-pdf=page.pdf"):
        command = [*browser, word, path.as_uri()]
        subprocess.run(command, cwd=tmp_path, capture_output=True, check=True, timeout=120)
    assert (tmp_path / "shot.png").stat().st_size > 20_000
    assert (tmp_path / "page.pdf").read_bytes().startswith(b"%PDF")
    if printed := shutil.which("pdftotext"):
        command = [printed, "-layout", "page.pdf", "-"]
        result = subprocess.run(command, cwd=tmp_path, capture_output=True, text=True, check=True)
        assert "zener.reference_temperature" in result.stdout
        assert "nominal taken as the middle" in result.stdout
