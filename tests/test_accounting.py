"""Accounts: a kind of one's own gets its pictures by declaring them, without engine code."""

from datetime import date
from pathlib import Path

import pytest

from reglint.account import Account
from reglint.accounting import account
from reglint.judge import Wanted
from reglint.project import Project

#: A lamp behind a resistor: its voltage rises with the square of its current (invented).
KIND = """format: 1
title: Lamp
about: A resistor feeds a lamp.
source: Invented.
components: {}
fields:
  supply.voltage: {unit: V, role: swept, required: true, says: Supply.}
  series_resistor.resistance: {unit: ohm, role: swept, required: true, says: Resistor.}
  lamp.steepness: {unit: V, role: rating, required: true, says: Voltage at 10 mA.}
quantities:
  lamp.curve: {unit: V, says: "The lamp's curve.", is: lamp.steepness * (lamp.current / 10 mA) ** 2}
  lamp.left: {unit: V, says: "What the supply leaves.",
    is: supply.voltage - series_resistor.resistance * lamp.current}
  lamp.current:
    unit: A
    says: Where both meet.
    solve: {falling: lamp.left - lamp.curve, from: 0 A,
      to: supply.voltage / series_resistor.resistance, otherwise: 0 A}
conditions:
  on: {says: Lit.}
pictures:
  curves:
    lamp: {title: The lamp, says: It glows., condition: on, free: lamp.current, from: 0 A,
      to: 2 * lamp.current, band: lamp.curve, lines: lamp.left}
  areas:
    <b>: {title: Supply and resistor, says: How far., across: supply.voltage,
      up: series_resistor.resistance}
sample: {}
"""
RULE = (
    "format: 1\ntitle: T\ncondition: on\nholds: lamp.current <= 10 mA\nwarn_margin: 5 %\n"
    "point_at: supply.voltage\nreason: R.\nsource: S.\nremedy: M.\n"
    "adjust: [series_resistor.resistance]\npasses: {}\nfails: {}\n"
)
SPEC = (
    "format: 1\nkind: lamp\nname: lamp\nsupply: {voltage: 10 V ± 10 %}\n"
    "series_resistor: {resistance: 1 kohm ± 5 %}\nlamp: {steepness: 2 V}\n"
)


def made(folder: Path, kind: str = KIND, spec: str = SPEC) -> Account:
    """Return the account of the lamp's spec."""
    (folder / "house/lamp").mkdir(parents=True)
    (folder / "reglint.yaml").write_text("format: 1\nrules: [house]\n", encoding="utf-8")
    (folder / "house/lamp/kind.yaml").write_text(kind, encoding="utf-8")
    (folder / "house/lamp/lamp-current.yaml").write_text(RULE, encoding="utf-8")
    (folder / "lamp.reg.yaml").write_text(spec, encoding="utf-8")
    wanted = Wanted(date(2026, 12, 1), account=account)
    run = Project(folder).check([folder / "lamp.reg.yaml"], wanted)
    assert run.problems == ()
    found = run.verdicts[0].account
    assert found is not None
    return found


def test_a_kind_of_one_s_own_gets_its_pictures(tmp_path: Path) -> None:
    """What its file declares is drawn; the margins and the adjustable field come by themselves."""
    assert [each.title for each in made(tmp_path).pictures] == [
        "Margins of all rules",
        "The lamp",
        "Supply and resistor",
        "Margins over series_resistor.resistance",
    ]


def test_the_corners_of_its_curves_are_solved(tmp_path: Path) -> None:
    """Least: 9 V = 1050 ohm I + 2 V (I/10 mA)**2, so I = (1350 - 1050)/4e4 A."""
    lamp = made(tmp_path).pictures[1]
    assert lamp.key[0] == (
        "A",
        (
            "least lamp.current: 7.5 mA, 1.125 V, at series_resistor.resistance 1.05 kohm,"
            " supply.voltage 9 V"
        ),
    )


def test_a_hostile_name_of_a_picture_is_no_markup(tmp_path: Path) -> None:
    """The area is called ``<b>`` in its file; ids in the drawing are numbers all the same."""
    assert all("<b>" not in each.svg for each in made(tmp_path).pictures)


def test_an_equation_without_a_root_leaves_pictures_out(tmp_path: Path) -> None:
    """Where the engine has no value, a sentence says what is not drawn."""
    odd = KIND.replace("falling: lamp.left - lamp.curve", "falling: 1 V + 0 * lamp.left")
    assert made(tmp_path, odd).missing == (
        "The lamp: lamp.current has no range here.",
        (
            "Supply and resistor: no rule that was checked depends on supply.voltage or"
            " series_resistor.resistance."
        ),
        "series_resistor.resistance: no rule was checked.",
    )


@pytest.mark.parametrize("tolerance", ["", " ± 1 %", " ± 0.5 %"])
def test_a_fine_series_or_none_is_drawn_as_it_is(tolerance: str, tmp_path: Path) -> None:
    """1 % means E96, 0.5 % means E192; without a tolerance the sweep is told to be missing."""
    found = made(tmp_path, spec=SPEC.replace(" ± 5 %", tolerance))
    assert bool(found.missing) == (tolerance == "")
