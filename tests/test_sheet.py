"""The calculation sheet: what it prints can be worked out again from what it prints."""

import math
import re
from collections.abc import Iterator
from pathlib import Path

import numpy as np
import pytest

from reglint.formula import evaluate, parse
from reglint.functions import REAL

SHEET = (Path(__file__).parents[1] / "examples/expected/valve-sense.sheet").read_text("utf-8")


def value(text: str) -> float:
    """Return the value of a formula whose names are all numbers with units."""
    with np.errstate(all="ignore"):
        return float(evaluate(parse(text).root, {}.__getitem__, REAL))


def workings() -> Iterator[tuple[str, str, str]]:
    """Yield each quantity's name, its formula with the numbers put in, and the printed result."""
    for block in re.split(r"\n(?=  [a-z])", SHEET.partition("\nUnder loaded")[2]):
        lines = [line.strip() for line in block.splitlines() if line.startswith("      ")]
        result = [line for line in lines if line.startswith("= ")]
        if result and not any(line.startswith("where this passes") for line in lines):
            name = block.split()[0].rstrip(":")
            working = lines[lines.index(result[0]) - 1]
            yield name, working, result[0].removeprefix("= ").split(";")[0]


WORKINGS = list(workings())


def test_the_sheet_works_every_quantity_out() -> None:
    """Over thirty quantities stand on the sheet with their numbers."""
    assert len(WORKINGS) > 30


@pytest.mark.parametrize(
    ("name", "working", "printed"), WORKINGS, ids=[f"{i}-{w[0]}" for i, w in enumerate(WORKINGS)]
)
def test_a_reader_gets_the_printed_result(name: str, working: str, printed: str) -> None:
    """The formula with the numbers put in gives what stands after the equals sign.

    Numbers have six digits; differences of nearly equal ones lose some of them.
    """
    slack = 2e-4 if "regulation" in name or "headroom" in name else 2e-5
    assert value(working) == pytest.approx(value(printed.strip("−") or "0"), rel=slack, abs=1e-9)


def test_the_zener_current_is_what_a_hand_calculation_says() -> None:
    """12 V, 470 ohm, 1.2 mA of loads, a Zener at half its greatest impedance.

    I = (12 V - V)/470 ohm - 1.2 mA with V = 5.1 V + 49 mA * 3.5 ohm * q(I/49 mA) and
    q(x) = (x**(1 - m) - 1)/(1 - m), m = ln(550/7)/ln(49/1); nominally no drift.
    """
    m = math.log(550.0 / 7.0) / math.log(49.0)
    current = 0.01
    for _ in range(200):
        bend = ((current / 0.049) ** (1.0 - m) - 1.0) / (1.0 - m)
        current = (12.0 - 5.1 - 0.049 * 3.5 * bend) / 470.0 - 0.0012
    printed = re.search(r"zener\.current \(I_Z\).*?= ([0-9.]+) mA", SHEET, flags=re.DOTALL)
    assert printed is not None
    assert float(printed[1]) == pytest.approx(1e3 * current, abs=5e-5)
