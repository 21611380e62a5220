"""The Markdown report, read by a CommonMark reader: verdict first, then rows, then the rest."""

from collections.abc import Callable

from markdown_it import MarkdownIt

from reglint.finding import Run
from reglint.reports import Options, renderer

Check = Callable[..., Run]
Sample = Callable[..., str]


def told(run: Run) -> str:
    """Return the report of a run."""
    return renderer("markdown")(run, Options())


def test_the_verdict_comes_first(check: Check, sample: Sample) -> None:
    """Under the marker that a posting step looks for, one word says how it stands."""
    lines = told(check(sample({"supply.voltage.min": "8 V"}), everything=False)).splitlines()
    assert lines[0] == "<!-- reglint check -->"
    assert lines[1].startswith("**Regulators: fail.** 1 spec: 1 fail, 0 warn, 0 pass; rules: ")


def test_what_passes_is_not_listed(check: Check, sample: Sample) -> None:
    """A run without findings is its verdict and the caution."""
    lines = told(check(sample(), everything=False)).splitlines()
    counts = "1 spec: 0 fail, 0 warn, 1 pass; rules: 0 fail, 0 warn, 17 pass."
    assert lines[1] == f"**Regulators: pass.** {counts}"
    assert not any(line.startswith(("|", "<details>")) for line in lines)
    assert lines[-1].endswith("Local codes and licensed practice decide.*")


def test_the_worst_comes_first_and_the_rest_is_folded(check: Check, sample: Sample) -> None:
    """Rows are ordered by outcome; reasons and remedies open on a click."""
    changes = {"supply.voltage.min": "8 V", "series_resistor.resistance": "473 ohm ± 5 %"}
    text = told(check(sample(changes), everything=False))
    rows = [line.split(" | ")[0].lstrip("| ") for line in text.splitlines() if line[:2] == "| "]
    assert rows[:2] == ["outcome", "---"]
    assert rows[2:] == sorted(rows[2:])  # fail comes before warn also by the alphabet
    assert {"fail", "warn"} == set(rows[2:])
    shown = MarkdownIt("gfm-like").render(text)
    assert shown.count("<details>") == shown.count("</details>") == 1
    assert "Lower the series resistance, raise the lowest supply" in shown.split("<details>")[1]


def test_an_unreadable_file_is_the_verdict(check: Check) -> None:
    """Nothing else counts where something was not looked at."""
    lines = told(check("kind: lamp\n")).splitlines()
    assert lines[1].startswith("**Regulators: unreadable.** 0 specs")
    assert "| spec-0.reg.yaml, line 1 | there is no kind lamp (known: zener-shunt) |" in lines
