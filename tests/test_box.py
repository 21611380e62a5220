"""The box of values: what an operating condition leaves of each range, and what it fixes."""

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from reglint.box import Box, boxes_of, ends_of, numbers_of, term_ends
from reglint.judge import Case
from reglint.kind import Condition
from reglint.spec import Term

Swept = Callable[..., Box]

#: A load of 1 to 3 mA, usually 2 mA, that can be unplugged.
PROBE = Term("loads.probe.current", 1e-3, 2e-3, 3e-3, removable=True)
STEADY = replace(PROBE, path="loads.steady.current", removable=False)


def condition(removable_loads: str = "connected", *, nominal: bool = False) -> Condition:
    """Return an operating condition that fixes nothing."""
    return Condition("any", "An operating condition.", removable_loads, nominal=nominal)


@pytest.mark.parametrize(
    ("under", "probe", "steady"),
    [
        (condition("connected"), (1e-3, 2e-3, 3e-3), (1e-3, 2e-3, 3e-3)),
        (condition("absent"), (0.0, 0.0, 0.0), (1e-3, 2e-3, 3e-3)),
        (condition("either"), (0.0, 2e-3, 3e-3), (1e-3, 2e-3, 3e-3)),
        (condition("absent", nominal=True), (2e-3, 2e-3, 2e-3), (2e-3, 2e-3, 2e-3)),
    ],
    ids=["connected", "absent", "either", "nominal"],
)
def test_a_condition_takes_only_removable_loads_away(
    under: Condition, probe: tuple[float, ...], steady: tuple[float, ...]
) -> None:
    """A load that may be absent reaches down to nothing; one that may not keeps its range."""
    assert (term_ends(PROBE, under), term_ends(STEADY, under)) == (probe, steady)


def test_the_ends_of_a_sum_are_the_sums_of_the_ends() -> None:
    """Of both loads, either of them there or only the steady one: 1, 4 and 6 mA."""
    found = ends_of([PROBE, STEADY], condition("either"))
    assert found == pytest.approx((1e-3, 4e-3, 6e-3), rel=1e-15)


def test_what_is_not_stated_has_no_ends() -> None:
    """Three numbers that are none, so that nothing is judged by them."""
    assert np.isnan(ends_of(None, condition())).all()


def test_corners_are_taken_of_what_moves_only(swept: Swept) -> None:
    """Two of three names move: four corners, and the third stays where it is."""
    box = swept(x=(1.0, 2.0), still=(7.0, 7.0), y=(3.0, 4.0))
    assert box.corners().tolist() == [
        [[1.0, 7.0, 3.0], [2.0, 7.0, 3.0], [1.0, 7.0, 4.0], [2.0, 7.0, 4.0]]
    ]


def test_a_name_that_moves_in_another_spec_has_equal_corners_here(swept: Swept) -> None:
    """Specs of one batch have arrays of one shape."""
    assert swept(x=[(1.0, 2.0), (5.0, 5.0)]).corners().tolist() == [[[1.0], [2.0]], [[5.0], [5.0]]]


def test_some_specs_of_a_box_keep_their_own_figures(swept: Swept) -> None:
    """Rows 2 and 0 in that order: ranges and fixed figures alike."""
    box = swept(x=[(1.0, 2.0), (3.0, 4.0), (5.0, 6.0)])
    box = replace(box, fixed={"r": np.array([[10.0], [20.0], [30.0]])})
    some = box.take([2, 0])
    assert (some.low.tolist(), some.high.tolist()) == ([[5.0], [1.0]], [[6.0], [2.0]])
    assert some.fixed["r"].tolist() == [[30.0], [10.0]]


def test_what_no_spec_varies_is_no_dimension_of_the_box(case: Case) -> None:
    """Without removable loads the load current of the sample is zero, and known."""
    box = boxes_of(case.circuit, [case.spec])["no_load"]
    assert "load.current" not in box.names
    assert box.fixed["load.current"].tolist() == [[0.0]]
    assert "supply.voltage" in box.names


def test_a_figure_that_only_another_spec_states_is_no_number(case: Case) -> None:
    """A limit that one of two specs leaves out is not a number there."""
    left = {n: v for n, v in case.spec.numbers.items() if n != "output.absolute_maximum"}
    numbers = numbers_of(case.circuit, [case.spec, replace(case.spec, numbers=left)])
    assert numbers["output.absolute_maximum"][0].tolist() == [15.0]
    assert np.isnan(numbers["output.absolute_maximum"][1]).all()


@pytest.mark.parametrize(("load", "volts"), [(0.0, 13.0), (2e-3, 12.0)])
def test_an_open_zener_does_not_clamp_the_output(load: float, volts: float, case: Case) -> None:
    """With the diode absent 500 ohm from 13 V leave 13 V, less 1 V for a load of 2 mA."""
    box = boxes_of(case.circuit, [case.spec])["zener_open"]
    point = {"supply.voltage": 13.0, "series_resistor.resistance": 500.0, "load.current": load}
    at = [point.get(name, box.nominal[0, column]) for column, name in enumerate(box.names)]
    values = box.values(np.array([[at]]))
    assert values("rail.voltage") == pytest.approx(np.array([[volts]]), rel=1e-14)
    assert np.max(values("zener.current")) == 0.0


def test_a_shorted_output_takes_the_whole_supply_into_the_resistor(case: Case) -> None:
    """From 12 V into 0 V through 470 ohm flow 12/470 A."""
    box = boxes_of(case.circuit, [case.spec])["shorted"]
    values = box.values(box.nominal[:, None, :])
    assert values("supply.current") == pytest.approx(np.array([[12.0 / 470.0]]), rel=1e-14)
