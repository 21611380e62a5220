"""SI prefixes against the quantity library pint."""

import pint
import pytest

from reglint.quantity import _PREFIXES, _UNITS, parse

UNITS = pint.UnitRegistry()


@pytest.mark.parametrize(
    ("prefix", "name"),
    [(prefix, name) for name, (_, _, prefixes) in _UNITS.items() for prefix in prefixes],
)
def test_a_prefixed_unit_is_pint_s(prefix: str, name: str) -> None:
    """3.3 of every unit we read is the same to pint."""
    plain = prefix.replace("μ", "µ")
    known = f"{plain}{name}" if name != "K" else f"{plain}kelvin"
    expected = UNITS.Quantity(3.3, known).to("kelvin" if name == "K" else name).magnitude
    assert parse(f"3.3 {prefix}{name}", name) == pytest.approx(float(expected))


def test_every_prefix_is_in_use() -> None:
    """No prefix is listed that no unit takes."""
    assert set(_PREFIXES) - {""} == {p for _, _, prefixes in _UNITS.values() for p in prefixes}
