"""IEC 60063:2015 preferred number series, against the library eseries and the standard's text."""

import eseries
import pytest

from reglint.preferred import SERIES

LIBRARY = {name: getattr(eseries, name) for name in SERIES}


@pytest.mark.parametrize("name", SERIES)
def test_a_series_is_the_library_s(name: str) -> None:
    """All values of a decade agree."""
    assert list(SERIES[name]) == [round(each) for each in eseries.series(LIBRARY[name])]


def test_e24_differs_from_the_formula_in_eight_places() -> None:
    """2.7 3.0 3.3 3.6 3.9 4.3 4.7 8.2 are tradition, not 10**(n/24)."""
    odd = [v for n, v in enumerate(SERIES["E24"]) if v != round(10.0 * 10.0 ** (n / 24.0))]
    assert odd == [27, 30, 33, 36, 39, 43, 47, 82]


def test_e192_differs_from_the_formula_in_one_place() -> None:
    """9.20 stands where the formula gives 9.19."""
    pairs = [(v, round(100.0 * 10.0 ** (n / 192.0))) for n, v in enumerate(SERIES["E192"])]
    assert [pair for pair in pairs if pair[0] != pair[1]] == [(920, 919)]


def test_the_series_are_nested_in_two_groups() -> None:
    """E3 to E24 contain each other, and so do E48 to E192."""
    assert set(SERIES["E3"]) < set(SERIES["E6"]) < set(SERIES["E12"]) < set(SERIES["E24"])
    assert set(SERIES["E48"]) < set(SERIES["E96"]) < set(SERIES["E192"])
