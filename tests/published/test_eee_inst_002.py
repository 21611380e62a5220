"""NASA EEE-INST-002 (NASA/TP-2003-212242), tables of 5/03 with Addendum 1.

Diodes: Section S1, Table 4 (p. 270). Resistors: Section R2, Table 4 (p. 256).
"""

from collections.abc import Callable, Mapping

import numpy as np
import pytest
from click.testing import CliRunner

from reglint.cli import cli
from reglint.finding import Finding, Run
from reglint.formula import evaluate
from reglint.functions import REAL, Array
from reglint.rulebook import Rulebook

BOOK = Rulebook()
POLICY = BOOK.policy("eee-inst-002")
assert POLICY is not None
RESISTORS = POLICY.classes["resistor"]


def number(style: str, name: str) -> float:
    """Return a figure of a resistor style."""
    formula = RESISTORS.styles[style][name]
    return float(evaluate(formula.root, dict[str, Array]().__getitem__, REAL))


#: Style: power factor, T1, T2 and T3, as the table prints them. RCR and "others" are not
#: here: their T2 is left to the formula.
PRINTED = {
    "RLR-100ppm": (0.6, 70, 118, 150),
    "RLR-350ppm": (0.6, 70, 103, 125),
    "RNX": (0.6, 125, 155, 175),
    "RM": (0.6, 70, 118, 150),
    "RZ": (0.6, 70, 103, 125),
    "RBR-1%": (0.6, 125, 137, 145),
    "RBR-0.5%": (0.35, 125, 132, 145),
    "RBR-0.1%": (0.25, 125, 130, 145),
    "RWR": (0.6, 25, 160, 250),
    "RER": (0.6, 25, 160, 250),
    "RTR": (0.6, 85, 124, 150),
    "G311P672": (0.6, 70, 94, 110),
    "G311P683": (0.6, 125, 185, 225),
    "G311P742": (0.6, 125, 155, 175),
}


@pytest.mark.parametrize("style", PRINTED)
def test_a_resistor_style_has_its_printed_row(style: str) -> None:
    """Power factor, T1, T2 and T3 are those of the table."""
    names = ("factor", "full_until", "printed_zero_at", "damaged_above")
    assert tuple(number(style, name) for name in names) == PRINTED[style]


@pytest.mark.parametrize("style", PRINTED)
def test_the_allowed_power_ends_at_the_printed_t2(style: str) -> None:
    """T2 = factor * (T3 - T1) + T1, to the whole degree the table prints.

    Half-way from T1 to the printed T2 half the power is left, within half a degree.
    """
    factor, t1, t2, t3 = PRINTED[style]
    figures = {"factor": factor, "full_until": t1, "damaged_above": t3}
    names = {f"style.{name}": figure for name, figure in figures.items()}
    stated = {**names, "power_rating": 1.0, "ambient": (t1 + t2) / 2}
    given = {name: np.array(value) for name, value in stated.items()}
    formula = RESISTORS.allowances["power_allowed"].formula
    allowed = evaluate(formula.root, given.__getitem__, REAL)
    assert float(allowed) == pytest.approx(factor / 2, abs=0.5 * factor / (t2 - t1))


def test_no_other_style_has_a_printed_t2() -> None:
    """The rows are all fourteen of the table."""
    found = {s for s, figures in RESISTORS.styles.items() if "printed_zero_at" in figures}
    assert found == PRINTED.keys()


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


def test_a_reference_diode_keeps_the_junction_limit(
    check: Callable[..., Run], sample: Callable[..., str]
) -> None:
    """The one row of a voltage reference diode is its junction: 125 °C of 175 °C."""
    changes = {"zener.style": "reference"}
    assert judged(check, sample, changes, "zener-junction-temperature").limit == 125.0


@pytest.mark.parametrize(
    "line",
    [
        "  source    NASA/TP-2003-212242 (EEE-INST-002), tables of 5/03, with Addendum 1.",
        "Section S1, Table 4 (p. 270): voltage regulator, power 0.50.",
        "Section S1, Table 4 (p. 270): voltage regulator, Zener current 0.75.",
        "Section S1, Table 4 (p. 270): junction temperature 0.80; note 1: never above 125 °C or",
        "Section R2, Table 4 (p. 256): full factor up to T1, then linearly to zero at T2",
        "not for reference: the table has no power row for a voltage reference diode",
    ],
)
def test_explain_tells_the_tables_and_pages(line: str) -> None:
    """Whoever asks for the policy reads where each figure is printed."""
    told = CliRunner().invoke(cli, ["explain", "eee-inst-002"]).output
    assert " ".join(line.split()) in " ".join(told.split())
