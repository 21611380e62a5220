"""The JUnit XML report: suites, cases, and what becomes of each outcome."""

from dataclasses import replace
from datetime import date
from pathlib import Path
from xml.etree import ElementTree as ET

import pytest

from reglint.finding import Finding, Outcome, Run, Verdict
from reglint.judge import Wanted
from reglint.project import Project
from reglint.reports import Options, renderer, wants_everything
from reglint.source import TOP, Problem

EXAMPLES = Path(__file__).parents[1] / "examples"
GATEWAY = "boards/pump-gateway/rev-c/rails.reg.yaml"
SOIL = "boards/soil-station/rev-a, field trial/rails.reg.yaml"
SOLENOID = "boards/valve-controller/rev-b/solenoid.reg.yaml"


@pytest.fixture(scope="module")
def examples() -> Run:
    """Return a check of the examples, passes included."""
    project = Project(EXAMPLES)
    paths = project.specs((EXAMPLES,))
    return project.check(paths, Wanted(date(2026, 12, 1), everything=True))


def report(run: Run) -> ET.Element:
    """Return the report of a run, read back."""
    text = renderer("junit")(run, Options(everything=True))
    return ET.fromstring(text)  # noqa: S314 -- a report of our own


def case(root: ET.Element, classname: str, name: str) -> ET.Element:
    """Return the one case of this name."""
    (found,) = root.findall(f"testsuite[@name='{classname}']/testcase[@name='{name}']")
    assert found.get("classname") == classname
    return found


def told(found: ET.Element) -> list[tuple[str, str]]:
    """Return the elements of a case, each with the first line of its text."""
    return [(each.tag, (each.text or "").splitlines()[0]) for each in found]


def test_the_format_asks_for_passes() -> None:
    """A build server counts what passes, though nobody asked for everything."""
    assert wants_everything("junit")
    assert not wants_everything("text")


def test_a_suite_is_a_spec_and_a_case_a_rule(examples: Run) -> None:
    """Every spec has its suite and every rule of its kind its case, skipped ones too."""
    root = report(examples)
    suites = {each.get("name"): each for each in root}
    for verdict in examples.verdicts:
        names = [
            each.get("name", "") for each in suites[f"{verdict.spec.file}: {verdict.spec.name}"]
        ]
        assert sorted(verdict.rules) == sorted(
            name for name in names if name and not name.startswith("waiver of ")
        )
    assert len(suites) == len(examples.verdicts) + 1


def test_no_two_cases_have_the_same_names(examples: Run) -> None:
    """A build server follows a case from run to run by class and name."""
    cases = [
        (each.get("classname"), each.get("name")) for each in report(examples).iter("testcase")
    ]
    assert len(set(cases)) == len(cases) == 214


def test_a_pass_says_where_and_what(examples: Run) -> None:
    """A passing case has output only, with its place in the text."""
    (found,) = case(report(examples), f"{GATEWAY}: modem-standby", "battery-drain")
    message = "supply.current is 22.44 mA at worst, at most 40 mA is wanted (margin +43.9 %)"
    assert (found.tag, found.text) == ("system-out", f"pass, {GATEWAY}, line 12\n{message}")


def test_a_failure_has_the_sentence_and_the_details(examples: Run) -> None:
    """The message is what a list shows; the text has worst point, shares, remedy and values."""
    (found,) = case(report(examples), f"{SOLENOID}: solenoid-clamp", "output-voltage-low")
    message = "rail.voltage is 10.02 V at worst, at least 10.5 V is wanted (margin −4.57 %)"
    assert (found.tag, found.get("message"), found.get("type")) == ("failure", message, "fail")
    lines = (found.text or "").splitlines()
    assert lines[:2] == [f"fail, {SOLENOID}, line 12", message]
    labels = ["reason", "worst at", "eaten by", "remedy"]
    assert [line.split("  ")[0] for line in lines[2:-1]] == labels
    why = f"reglint window {SOLENOID} tells why"
    assert lines[-1] == f"would hold no standard value of series_resistor.resistance: {why}"


def test_a_warning_passes_and_says_so(examples: Run) -> None:
    """A warning is no failure of a build, and is not silent."""
    found = case(report(examples), f"{GATEWAY}: pump-relay", "supply-headroom")
    assert told(found) == [("system-out", f"warn, {GATEWAY}, line 53")]


def test_a_rule_that_was_not_checked_is_skipped(examples: Run) -> None:
    """What was not checked never counts as passed."""
    found = case(report(examples), f"{SOIL}: rain-gauge", "maximum-zener-current")
    assert told(found) == [("skipped", f"warn, {SOIL}, line 57")]
    assert "not checked: zener.current_max is not stated" in (found[0].text or "").splitlines()


def test_a_rule_without_a_limit_is_skipped(examples: Run) -> None:
    """A rule the spec states no limit for has a case that says why it did not run."""
    found = case(report(examples), f"{GATEWAY}: modem-standby", "line-regulation")
    assert told(found) == [("skipped", "The spec states no limit for it.")]


def test_a_waived_finding_passes_with_its_waiver(examples: Run) -> None:
    """An accepted finding is told with who accepts it, why and until when."""
    found = case(report(examples), f"{GATEWAY}: modem-standby", "preferred-value")
    assert told(found) == [("system-out", f"waived, {GATEWAY}, line 12")]
    assert (found[0].text or "").splitlines()[-1] == (
        "waived     stock of the pilot run; by hardware lead until 2027-06-30"
    )


def test_a_waived_failure_does_not_fail(examples: Run) -> None:
    """Whoever accepts a failure for a time gets a green build until then."""
    modem = next(each for each in examples.verdicts if each.spec.name == "modem-standby")
    failing = Finding("preferred-value", Outcome.FAIL, "off", TOP, waived=True, margin=-1.0)
    root = report(Run((replace(modem, findings=(failing,)),), ()))
    found = case(root, f"{GATEWAY}: modem-standby", "preferred-value")
    assert told(found) == [("system-out", f"waived, {GATEWAY}, line 1")]
    assert root.get("failures") == "0"


def test_trouble_with_a_waiver_is_a_case_of_its_own(examples: Run) -> None:
    """An expired waiver is named by the rule it no longer covers."""
    found = case(report(examples), f"{GATEWAY}: flow-meter", "waiver of output-when-zener-open")
    assert told(found) == [("system-out", f"warn, {GATEWAY}, line 30")]


def test_an_unreadable_file_is_a_suite_of_errors(examples: Run) -> None:
    """Each mistake of a file is a case that erred, with its place in the text."""
    file = "boards/pump-gateway/rev-c/draft.reg.yaml"
    suite = next(each for each in report(examples) if each.get("name") == file)
    names = ["unreadable", "unreadable (2)", "unreadable (3)", "unreadable (4)"]
    assert [each.get("name") for each in suite] == names
    assert (suite[0][0].tag, suite[0][0].text) == (
        "error",
        f"{file}, line 5, column 31\nsupply.voltage: 12 needs a unit, for example 12 V",
    )


def test_the_counts_are_those_of_the_run(examples: Run) -> None:
    """Failures, errors and skips add up, over the suites and over all."""
    root = report(examples)
    unchecked = 1
    skipped = sum(len(each.skipped) for each in examples.verdicts) + unchecked
    assert root.attrib == {"name": "reglint", "tests": "214", "failures": "7", "errors": "4"}
    assert sum(int(each.get("skipped", "")) for each in root) == skipped
    for counted in ("tests", "failures", "errors"):
        assert sum(int(each.get(counted, "")) for each in root) == int(root.get(counted, ""))


def test_what_was_assumed_and_the_caution_stand_in_the_suite(examples: Run) -> None:
    """A green suite still tells what it rests on, and what it is not."""
    suite = next(each for each in report(examples) if "modem-standby" in each.get("name", ""))
    lines = (suite.findtext("system-out") or "").splitlines()
    assert lines[0] == "assumed zener.impedance: a single figure is a maximum: swept from zero"
    assert lines[-1] == (
        "This is a screening aid: a pass is no proof of safety or compliance."
        " Local codes and licensed practice decide."
    )


def test_names_that_print_alike_are_told_apart(examples: Run) -> None:
    """Two specs whose names differ in unprintable characters only have two classes."""
    found = examples.verdicts[0]
    names = ["a\u202eb", "a\u202db", "a\u2066b"]
    alike = [replace(found, spec=replace(found.spec, name=name)) for name in names]
    suites = [each.get("name") for each in report(Run(tuple(alike), ()))]
    file = found.spec.file
    assert suites == [f"{file}: a�b", f"{file}: a�b (2)", f"{file}: a�b (3)"]


def test_what_xml_forbids_is_replaced(examples: Run) -> None:
    """Control characters, noncharacters and halves of pairs have no place in XML 1.0 (2.2)."""
    message = (
        "".join(map(chr, (0, 8, 11, 12, 31, 0xD800, 0xFFFE, 0xFFFF))) + " ]]> & <b> \U0001f600"
    )
    verdict: Verdict = replace(
        examples.verdicts[0],
        findings=(Finding("supply-headroom", Outcome.FAIL, message, TOP, margin=-1.0),),
    )
    root = report(Run((verdict,), (Problem("a\ud800.reg.yaml", TOP, message),)))
    shown = "�" * 8 + " ]]> & <b> \U0001f600"
    assert [each.get("message") for each in root.iter("failure")] == [shown]
    assert [each.get("message") for each in root.iter("error")] == [shown]
