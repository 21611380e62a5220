"""Two curves over a current set free, against the closed form of the straight-line Zener.

With m = 0 and no drift the diode is V = V_ZT + r (I - I_ZT), and the supply's line is
V = V_S - R (I + I_L): Kirchhoff's laws, as any textbook has them.
"""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from reglint.pictures.meeting import Meeting, meeting

#: The textbooks' straight line, without heat, drift or spread of the impedance.
STRAIGHT = {
    "zener.impedance": {"min": "7 ohm", "max": "7 ohm"},
    "zener.knee_impedance": "7 ohm",
    "zener.tempco": "0 V/K",
    "series_resistor.tempco": None,
}


def met(found: Any) -> Meeting:
    """Return the load line of a judged spec."""
    declared = found.case.circuit.kind.pictures.curves["load-line"]
    result = meeting(declared, found.boxes["any_load"])
    assert isinstance(result, Meeting)
    return result


def test_the_band_is_the_straight_line_at_both_ends_of_the_voltage(
    judged: Callable[..., Any],
) -> None:
    """5.1 V ± 5 % at 49 mA with 7 ohm: from 4.845 V and to 5.355 V, less 7 ohm times the rest."""
    found = met(judged(STRAIGHT))
    assert found.band_low == pytest.approx(4.845 + 7.0 * (found.free - 0.049), rel=1e-12)
    assert found.band_high == pytest.approx(5.355 + 7.0 * (found.free - 0.049), rel=1e-12)


def test_the_lines_are_the_supply_s_through_the_resistor(judged: Callable[..., Any]) -> None:
    """Least current: 11 V, 493.5 ohm, 2 mA of load; greatest: 13 V, 446.5 ohm, no load."""
    least, greatest = met(judged(STRAIGHT)).corners
    free = met(judged(STRAIGHT)).free
    assert least.line == pytest.approx(11.0 - 493.5 * (free + 2e-3), rel=1e-9, abs=1e-12)
    assert greatest.line == pytest.approx(13.0 - 446.5 * free, rel=1e-9, abs=1e-12)


def test_the_corners_meet_where_the_closed_form_puts_them(judged: Callable[..., Any]) -> None:
    """I = (V_S - R I_L - V_ZT + r I_ZT)/(R + r), with V_ZT high for the least, low for the most."""
    least, greatest = met(judged(STRAIGHT)).corners
    assert least.free == pytest.approx((11.0 - 493.5 * 2e-3 - 5.355 + 0.343) / 500.5, rel=1e-9)
    assert greatest.free == pytest.approx((13.0 - 4.845 + 0.343) / 453.5, rel=1e-9)
    assert greatest.met == pytest.approx(13.0 - 446.5 * greatest.free, rel=1e-9)


def test_the_free_current_runs_from_nothing_to_well_beyond(judged: Callable[..., Any]) -> None:
    """As declared: from 0 A to 1.3 times the greatest current."""
    found = met(judged(STRAIGHT))
    assert found.free[0] == 0.0
    assert found.free[-1] == pytest.approx(1.3 * found.corners[1].free)


def test_marks_lie_along_the_axis_of_their_dimension(judged: Callable[..., Any]) -> None:
    """A current is a level, voltages are uprights."""
    found = met(judged())
    assert found.levels == (("zener.minimum_current", 0.005),)
    assert found.uprights == (("output.voltage.min", 4.0), ("output.voltage.max", 5.8))


def test_a_mark_that_is_not_stated_is_not_drawn(judged: Callable[..., Any]) -> None:
    """Without limits of the output there are no uprights."""
    found = met(judged({"output.voltage": None}))
    assert found.uprights == ()


def test_the_operating_point_lies_in_the_band(judged: Callable[..., Any]) -> None:
    """With a soft knee, heat and drift too, what the engine solves lies on both curves."""
    found = met(judged())
    for corner in found.corners:
        at_curve = np.interp(corner.free, found.free, corner.curve)
        assert at_curve == pytest.approx(corner.met, rel=2e-3)
        ends = found.band_low, found.band_high
        low, high = (np.interp(corner.free, found.free, each) for each in ends)
        assert low * 0.998 <= corner.met <= high * 1.002
