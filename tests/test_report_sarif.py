"""The SARIF report: rules, places, links, fingerprints and suppressions (SARIF 2.1.0, OASIS)."""

import json
import re
from dataclasses import replace
from datetime import date
from pathlib import Path
from typing import Any

import pytest

from reglint.finding import Finding, Outcome, Run, Verdict
from reglint.judge import Wanted
from reglint.project import Project
from reglint.reports import Options, renderer
from reglint.source import TOP, Problem, Span

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "examples"
STARVED = {"series_resistor.resistance": "4.7 kohm ± 5 %"}
KEY = "ruleSpecOccurrence/v1"

Result = dict[str, Any]


@pytest.fixture(scope="module")
def examples() -> Run:
    """Return a check of the examples, passes included."""
    project = Project(EXAMPLES)
    paths = project.specs((EXAMPLES,))
    return project.check(paths, Wanted(date(2026, 12, 1), everything=True))


@pytest.fixture
def verdict(examples: Run) -> Verdict:
    """Return the verdict on one spec, to put other findings into."""
    return next(each for each in examples.verdicts if each.spec.name == "solenoid-clamp")


def log_of(run: Run, **wanted: bool) -> dict[str, Any]:
    """Return the one run of the log."""
    log = json.loads(renderer("sarif")(run, Options(**wanted)))
    assert (log["version"], len(log["runs"])) == ("2.1.0", 1)
    found: dict[str, Any] = log["runs"][0]
    return found


def results_of(run: Run, **wanted: bool) -> list[Result]:
    """Return the results of the log."""
    found: list[Result] = log_of(run, **wanted)["results"]
    return found


def about(results: list[Result], rule: str, spec: str) -> Result:
    """Return the one result of a rule about a spec."""
    (found,) = (
        each
        for each in results
        if each["ruleId"] == rule
        and each["locations"][0].get("logicalLocations") == [{"name": spec}]
    )
    return found


def only(verdict: Verdict, *findings: Finding) -> Run:
    """Return a run with one verdict of these findings."""
    return Run((replace(verdict, findings=findings, windows={}),), ())


def fingerprint(result: Result) -> str:
    """Return the fingerprint of a result, which has no other."""
    ((key, value),) = result["partialFingerprints"].items()
    assert (key, len(value)) == (KEY, 64)
    return str(value)


def test_a_run_that_found_nothing_still_has_results() -> None:
    """Results are an empty list, not missing: that tells a host that all is mended."""
    log = log_of(Run((), ()))
    assert log["results"] == []
    assert log["columnKind"] == "unicodeCodePoints"
    assert log["invocations"] == [{"executionSuccessful": True, "toolExecutionNotifications": []}]
    assert [each["id"] for each in log["tool"]["driver"]["rules"]] == ["waiver", "unreadable"]


def test_every_rule_of_the_kinds_met_is_declared(examples: Run) -> None:
    """Declared are all rules of the folders, found broken or not, and our own two."""
    files = [*ROOT.glob("rules/zener-shunt/*.yaml"), *EXAMPLES.glob("house-rules/*/*.yaml")]
    names = sorted(f"zener-shunt/{path.stem}" for path in files if path.name != "kind.yaml")
    rules = log_of(examples)["tool"]["driver"]["rules"]
    assert [each["id"] for each in rules] == ["waiver", "unreadable", *names]


def test_a_rule_is_explained_where_it_is_declared(examples: Run) -> None:
    """Title, reason, demand, source and remedy come with the log; the level is the usual one."""
    rules = log_of(examples)["tool"]["driver"]["rules"]
    (found,) = (each for each in rules if each["id"] == "zener-shunt/battery-drain")
    reason = (
        "Field stations live on one battery from spring to autumn; "
        "a shunt regulator drains it day and night."
    )
    assert found == {
        "id": "zener-shunt/battery-drain",
        "shortDescription": {"text": "A regulator on the battery rail draws little when idle."},
        "fullDescription": {"text": reason},
        "help": {
            "text": f"{reason} Holds, under no_load: supply.current <= 40 mA."
            " Source: House rule of the company (invented)."
            " Remedy: Raise the series resistance, or feed the load through a series regulator."
        },
        "defaultConfiguration": {"level": "error"},
    }


def test_a_rule_that_only_warns_is_declared_a_warning(examples: Run) -> None:
    """The shock caution never fails a regulator."""
    rules = log_of(examples)["tool"]["driver"]["rules"]
    levels = {each["id"]: each["defaultConfiguration"]["level"] for each in rules}
    assert levels["zener-shunt/shock-caution"] == "warning"
    assert levels["waiver"] == "warning"
    assert levels["unreadable"] == "error"


def test_a_long_reason_is_cut_to_what_hosts_take(verdict: Verdict) -> None:
    """A full description has at most 1024 characters, its escapes counted."""
    name = "supply-headroom"
    rule = replace(verdict.rules[name], reason="[" * 3000)
    alone = replace(verdict, rules={name: rule}, findings=())
    rules = log_of(Run((alone,), ()))["tool"]["driver"]["rules"]
    assert rules[-1]["fullDescription"]["text"] == "\\[" * 511 + "…"
    assert rules[-1]["help"]["text"].startswith("\\[" * 3000)


def test_the_worst_results_come_first(examples: Run) -> None:
    """A host that keeps only so many results keeps unread files and failures."""
    found = [(each["ruleId"] == "unreadable", each["level"]) for each in results_of(examples)]
    order = [(True, "error"), (False, "error"), (False, "warning")]
    assert [(each, found.count(each)) for each in order] == list(
        zip(order, (4, 7, 11), strict=True)
    )
    assert found == sorted(found, key=order.index)


def test_a_result_leads_to_its_rule(examples: Run) -> None:
    """The index of every result is the place of the rule it names."""
    log = log_of(examples, everything=True, complete=True)
    rules = log["tool"]["driver"]["rules"]
    assert all(rules[each["ruleIndex"]]["id"] == each["ruleId"] for each in log["results"])


def test_a_result_tells_numbers_first_and_links_to_what_ate_the_margin(examples: Run) -> None:
    """The whole message: numbers, reason, worst point, shares with links, remedy, values."""
    found = about(results_of(examples), "zener-shunt/no-load-dissipation", "beacon")
    assert found["message"]["text"] == (
        "beacon: zener.power is 849.1 mW at worst, at most 400 mW is wanted (margin −112 %)."
        " With the loads gone the Zener takes the whole current; at the highest supply and"
        " ambient it must stay within its derated rating."
        " Worst at ambient 75 °C, series_resistor.resistance 142.5 ohm, supply.voltage 22 V,"
        " zener.impedance 7 ohm, zener.tempco 8 mV/K, zener.voltage 9.573 V."
        " Eaten by [supply.voltage](1) 58 %, [ambient](2) 33 %,"
        " [series_resistor.resistance](3) 8 %."
        " Raise the series resistance, lower the highest supply,"
        " or take a Zener of higher rating."
        " Would hold: no standard value of series_resistor.resistance: reglint window"
        " boards/soil-station/rev-a, field trial/beacon.reg.yaml tells why."
    )
    assert (found["kind"], found["level"]) == ("fail", "error")


def test_every_link_leads_to_one_place(examples: Run) -> None:
    """The numbers linked to in a message are those of the related locations."""
    linked = 0
    for each in results_of(examples, everything=True, complete=True):
        links = re.findall(r"(?<!\\)\]\((\d+)\)", each["message"]["text"])
        places = [str(place["id"]) for place in each.get("relatedLocations", ())]
        assert links == places
        linked += len(links)
    assert linked > 50


def test_a_place_has_all_four_coordinates(examples: Run) -> None:
    """The starved solenoid driver's resistance: line 20, columns 15 to 28, as in its file."""
    line = "  resistance: 560 ohm ± 5 %"
    found = about(results_of(examples), "zener-shunt/minimum-zener-current", "solenoid-clamp")
    assert found["locations"] == [
        {
            "physicalLocation": {
                "artifactLocation": {"uri": "boards/valve-controller/rev-b/solenoid.reg.yaml"},
                "region": {
                    "startLine": 20,
                    "startColumn": line.index("560") + 1,
                    "endLine": 20,
                    "endColumn": len(line) + 1,
                },
            },
            "logicalLocations": [{"name": "solenoid-clamp"}],
        }
    ]


def test_a_place_over_several_lines_is_cut_to_the_first(verdict: Verdict) -> None:
    """Of a text over lines 3 to 6 the first character is shown; line 3's length is forgotten."""
    run = only(verdict, Finding("supply-headroom", Outcome.FAIL, "broken", Span(3, 5, 6, 2)))
    place = results_of(run)[0]["locations"][0]["physicalLocation"]
    assert place["region"] == {"startLine": 3, "startColumn": 5, "endLine": 3, "endColumn": 6}


@pytest.mark.parametrize(
    ("file", "uri"),
    [
        ("boards/rev a, b/x.reg.yaml", "boards/rev%20a%2C%20b/x.reg.yaml"),
        ("a:b?c#d%.reg.yaml", "a%3Ab%3Fc%23d%25.reg.yaml"),
        ("Ω.reg.yaml", "%CE%A9.reg.yaml"),
        ("caf\udce9.reg.yaml", "caf%E9.reg.yaml"),
    ],
)
def test_a_file_s_name_is_percent_encoded(file: str, uri: str) -> None:
    """A path is a relative reference (RFC 3986), whatever characters or bytes it has."""
    found = results_of(Run((), (Problem(file, TOP, "no spec"),)))[0]
    assert found["locations"][0]["physicalLocation"]["artifactLocation"] == {"uri": uri}


def test_a_text_never_makes_a_link_or_a_placeholder(verdict: Verdict) -> None:
    """Brackets, braces and backslashes of a name mean themselves (SARIF 2.1.0, 3.11.5, 3.11.6)."""
    spec = replace(verdict.spec, name="[here](1) {0} \\ \u202eb")
    found = Finding("waiver", Outcome.WARN, "expired", TOP)
    text = results_of(only(replace(verdict, spec=spec), found))[0]["message"]["text"]
    assert text == r"\[here\](1) {{0}} \\ " + "�b: expired."


def test_waived_findings_are_left_out(examples: Run) -> None:
    """The accepted series value of the modem is no result, and no result has suppressions."""
    results = results_of(examples)
    assert all("suppressions" not in each for each in results)
    assert "zener-shunt/preferred-value" not in {each["ruleId"] for each in results}


def test_the_complete_log_has_waived_findings_with_their_waiver(examples: Run) -> None:
    """With one suppression in the run every result has the list (SARIF 2.1.0, 3.27.23)."""
    results = results_of(examples, complete=True)
    assert len(results) == len(results_of(examples)) + 1
    *others, waived = results
    assert all(each["suppressions"] == [] for each in others)
    assert waived["ruleId"] == "zener-shunt/preferred-value"
    (found,) = waived["suppressions"]
    place = found.pop("location")["physicalLocation"]
    assert place["artifactLocation"] == {"uri": "boards/pump-gateway/rev-c/rails.reg.yaml"}
    assert found == {
        "kind": "external",
        "status": "accepted",
        "justification": "stock of the pilot run; by hardware lead until 2027-06-30",
    }


def test_a_pass_is_no_problem(examples: Run) -> None:
    """With everything wanted a passing rule is of the kind pass, without a level."""
    results = results_of(examples, everything=True)
    found = about(results, "zener-shunt/supply-headroom", "valve-sense")
    assert (found["kind"], found["level"]) == ("pass", "none")
    assert len([each for each in results if each["kind"] == "pass"]) == examples.count(Outcome.PASS)


def test_an_unreadable_file_fails_the_run_and_is_a_result(examples: Run) -> None:
    """A host must not take results as complete, and shows the mistake at its place."""
    log = log_of(examples)
    file = "boards/pump-gateway/rev-c/draft.reg.yaml"
    (invocation,) = log["invocations"]
    assert invocation == {
        "executionSuccessful": False,
        "toolExecutionNotifications": [
            {
                "descriptor": {"id": "incomplete"},
                "level": "error",
                "message": {
                    "text": f"{file} could not be used: what depends on it was not checked."
                },
                "locations": [{"physicalLocation": {"artifactLocation": {"uri": file}}}],
            }
        ],
    }
    assert [each["id"] for each in log["tool"]["driver"]["notifications"]] == ["incomplete"]
    first = log["results"][0]
    assert (first["ruleId"], first["level"]) == ("unreadable", "error")
    assert first["message"]["text"] == "supply.voltage: 12 needs a unit, for example 12 V."
    region = first["locations"][0]["physicalLocation"]["region"]
    assert region == {"startLine": 5, "startColumn": 31, "endLine": 5, "endColumn": 40}


def test_every_result_has_a_fingerprint_of_its_own(examples: Run) -> None:
    """No two results of a run are taken for one."""
    results = results_of(examples, everything=True, complete=True)
    assert len({fingerprint(each) for each in results}) == len(results) > 100


def test_a_fingerprint_survives_other_lines_and_values(check: Any, sample: Any) -> None:
    """The same rule broken further down and by more is the same result."""
    first = results_of(check(sample(STARVED)))
    worse = {**STARVED, "series_resistor.resistance": "5.6 kohm ± 5 %"}
    second = results_of(check("# a line\n# another\n" + sample(worse)))
    assert first[0]["locations"] != second[0]["locations"]
    assert [fingerprint(each) for each in first] == [fingerprint(each) for each in second]


def test_two_specs_of_one_name_have_fingerprints_of_their_own(check: Any, sample: Any) -> None:
    """Names are unique on a board only: the second board's results are others."""
    results = results_of(check(sample(STARVED), sample(STARVED)))
    assert len({fingerprint(each) for each in results}) == len(results) > 2


def test_a_fingerprint_is_the_same_however_much_is_listed(examples: Run) -> None:
    """Passes and waived findings in the log change no other result's fingerprint."""
    few = {fingerprint(each) for each in results_of(examples)}
    all_ = {fingerprint(each) for each in results_of(examples, everything=True, complete=True)}
    assert few < all_


def test_two_waivers_that_do_not_work_are_two_results(check: Any, sample: Any) -> None:
    """Trouble with a waiver is told apart by the rule that is waived."""
    reason = {"reason": "why", "approved_by": "who", "until": "2026-01-01"}
    waivers = {"supply-headroom": reason, "preferred-value": reason}
    results = results_of(check(sample({"waivers": waivers})))
    assert [each["ruleId"] for each in results] == ["waiver", "waiver"]
    assert len({fingerprint(each) for each in results}) == 2
