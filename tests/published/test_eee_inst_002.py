"""NASA EEE-INST-002 (NASA/TP-2003-212242), tables of 5/03 with Addendum 1.

Diodes: Section S1, Table 4 (p. 270). Resistors: Section R2, Table 4 (p. 256).
"""

from collections.abc import Callable, Mapping

import pytest

from reglint.finding import Finding, Run
from reglint.formula import evaluate
from reglint.functions import REAL
from reglint.rulebook import Rulebook

BOOK = Rulebook()
POLICY = BOOK.policy("eee-inst-002")
assert POLICY is not None
RESISTORS = POLICY.classes["resistor"]


def number(style: str, name: str) -> float:
    """Return a figure of a resistor style."""
    formula = RESISTORS.styles[style][name]
    return float(evaluate(formula.root, {}.__getitem__, REAL))


PRINTED = [style for style, figures in RESISTORS.styles.items() if "printed_zero_at" in figures]


@pytest.mark.parametrize("style", PRINTED)
def test_every_printed_t2_follows_from_t1_t3_and_the_factor(style: str) -> None:
    """T2 = factor * (T3 - T1) + T1, to the whole degree the table prints."""
    t1, t3 = number(style, "full_until"), number(style, "damaged_above")
    computed = number(style, "factor") * (t3 - t1) + t1
    assert computed == pytest.approx(number(style, "printed_zero_at"), abs=0.5)


def test_all_fourteen_rows_with_a_printed_t2_are_there() -> None:
    """The table's rows but for RCR and "others", whose T2 it leaves to a formula."""
    assert len(PRINTED) == 14


def finding(run: Run, rule: str) -> Finding:
    """Return the finding of a rule of the only spec."""
    assert not run.problems
    return next(each for each in run.verdicts[0].findings if each.rule == rule)


def judged(
    check: Callable[..., Run], sample: Callable[..., str], changes: Mapping[str, object], rule: str
) -> Finding:
    """Return a rule's finding for the sample under this policy with changes."""
    return finding(check(sample({"derating": "eee-inst-002", **changes})), rule)


@pytest.mark.parametrize(
    ("junction_max", "limit"), [(125, 85.0), (150, 110.0), (175, 125.0), (200, 125.0)]
)
def test_the_junction_limit_is_the_least_of_three(
    junction_max: int, limit: float, check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """0.80 of the maximum, 125 °C, or the maximum less 40 °C: the lowest holds (note 1)."""
    changes = {"zener.junction_max": f"{junction_max} °C"}
    assert judged(check, sample, changes, "zener-junction-temperature").limit == limit


def test_a_zener_uses_half_its_power_and_three_quarters_of_its_current(
    check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """The factors of a voltage regulator diode are 0.50 and 0.75."""
    assert judged(check, sample, {}, "no-load-dissipation").limit == 0.5
    assert judged(check, sample, {}, "maximum-zener-current").limit == pytest.approx(0.75 * 0.178)


@pytest.mark.parametrize("rule", ["no-load-dissipation", "maximum-zener-current"])
def test_a_reference_diode_has_no_such_row(
    rule: str, check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """Where the standard has no row the rule is not checked, never passed."""
    found = judged(check, sample, {"zener.style": "reference"}, rule)
    assert found.outcome.value == "warn"
    assert found.message.startswith("not checked: eee-inst-002: the table ")


def test_a_film_chip_resistor_falls_from_70_to_118_degrees(
    check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """Style RM at 94 °C has half of 0.6 of its rating, and its voltage follows that power."""
    changes = {
        "ambient": "94 °C",
        "series_resistor.style": "RM",
        "series_resistor.power_rating": "2 W",
        "series_resistor.tempco": None,
        "series_resistor.resistance": "470 ohm",
    }
    assert judged(check, sample, changes, "resistor-dissipation").limit == pytest.approx(0.6)
    voltage = judged(check, sample, changes, "resistor-voltage").limit
    assert voltage == pytest.approx((0.6 * 470.0) ** 0.5)
