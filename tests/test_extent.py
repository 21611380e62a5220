"""Extents: the least and greatest of quantities whose ranges are known."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from reglint.box import Box, boxes_of
from reglint.extent import extents
from reglint.finding import Extent
from reglint.formula import parse
from reglint.judge import Case
from reglint.kind import Quantity

Swept = Callable[..., Box]
Ranges = dict[str, tuple[float, float, float]]


def ranges(box: Box, **formulas: str) -> list[Ranges]:
    """Return least, nominal and greatest of quantities, by name, for each spec of a box."""
    quantities = {
        name: Quantity(name, "V", "A quantity.", parse(text)) for name, text in formulas.items()
    }
    box = replace(box, circuit=replace(box.circuit, quantities=quantities))
    return [
        {each.quantity: (each.min, each.nom, each.max) for each in found}
        for found in extents({"free": box})
    ]


def test_a_range_ends_inside_where_the_quantity_does(swept: Swept) -> None:
    """On [0.2, 0.9] the product x(1 - x) goes from 0.09, at an end, to 1/4, at 1/2."""
    (found,) = ranges(swept(x=(0.2, 0.9)), product="x * (1 - x)")
    assert found["product"] == pytest.approx((0.09, 0.55 * 0.45, 0.25), rel=1e-9)


def test_parallel_resistors_have_the_range_of_their_corners(swept: Swept) -> None:
    """10 to 20 beside 20 to 40: 20/3 to 40/3, and 10 in the middle (mathgroup, September 2003)."""
    box = swept(r1=(10.0, 20.0), r2=(20.0, 40.0))
    (found,) = ranges(box, parallel="r1 * r2 / (r1 + r2)")
    assert found["parallel"] == pytest.approx((20.0 / 3.0, 10.0, 40.0 / 3.0), rel=1e-14)


def test_what_does_not_vary_has_one_value(swept: Swept) -> None:
    """A constant is its own least and greatest."""
    assert ranges(swept(x=(0.0, 1.0)), fixed="7 V") == [{"fixed": (7.0, 7.0, 7.0)}]


def test_rounding_of_a_difference_is_zero(swept: Swept) -> None:
    """0.1 + 0.2 - 0.3 is no 5.6e-17 beside an end of 3."""
    (found,) = ranges(swept(x=(0.0, 3.0)), difference="0.1 + 0.2 - 0.3 + x")
    assert found["difference"] == (0.0, 1.5, 3.0)


def test_a_quantity_without_a_value_has_no_extent(swept: Swept) -> None:
    """The root of x has none at -1; the square has one."""
    (found,) = ranges(swept(x=(-1.0, 4.0)), root="sqrt(x)", square="x * x")
    assert list(found) == ["square"]


def test_specs_of_one_box_have_ranges_of_their_own(swept: Swept) -> None:
    """One ends at a corner, the other inside; the third is a single point."""
    box = swept(x=[(0.6, 0.9), (0.2, 0.9), (0.5, 0.5)])
    found = [each["product"] for each in ranges(box, product="x * (1 - x)")]
    assert [each[0] for each in found] == pytest.approx([0.09, 0.09, 0.25], rel=1e-9)
    assert [each[2] for each in found] == pytest.approx([0.24, 0.25, 0.25], rel=1e-9)


def test_an_open_zener_lets_the_output_reach_the_supply(case: Case) -> None:
    """The sample's 13 V without load; at worst 11 V less 2 mA in 470 ohm, 5 % and 0.25 % more."""
    boxes = boxes_of(case.circuit, [case.spec])
    (found,) = extents({"zener_open": boxes["zener_open"], "any_load": boxes["any_load"]})
    open_, clamped = (each for each in found if each.quantity == "rail.voltage")
    assert (open_.condition, open_.unit, open_.max) == ("zener_open", "V", 13.0)
    assert open_.min == pytest.approx(11.0 - 2e-3 * 470.0 * (1.05 + 0.0025), rel=1e-3)
    assert (clamped.condition, clamped.max < 5.8) == ("any_load", True)


def test_extents_name_quantity_condition_and_unit(swept: Swept) -> None:
    """Conditions in their order, then quantities in theirs."""
    quantity = Quantity("twice", "V", "Twice x.", parse("2 * x"))
    box = swept(x=(1.0, 2.0))
    box = replace(box, circuit=replace(box.circuit, quantities={"twice": quantity}))
    narrow = replace(box, high=np.array([[1.0]]), nominal=np.array([[1.0]]))
    assert extents({"wide": box, "narrow": narrow}) == [
        (Extent("twice", "wide", "V", 2.0, 3.0, 4.0), Extent("twice", "narrow", "V", 2.0, 2.0, 2.0))
    ]
