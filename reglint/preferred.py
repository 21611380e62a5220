"""Preferred values of resistors and capacitors: the series of IEC 60063:2015."""

import math
from collections.abc import Mapping
from functools import cache

#: E24 is a list by tradition: eight of its values differ from the formula.
_E24 = (
    10,
    11,
    12,
    13,
    15,
    16,
    18,
    20,
    22,
    24,
    27,
    30,
    33,
    36,
    39,
    43,
    47,
    51,
    56,
    62,
    68,
    75,
    82,
    91,
)
#: From E48 on the values follow 10**(n/N) to three digits, but for one: 9.20, not 9.19.
_E192 = tuple({919: 920}.get(v := round(100.0 * 10.0 ** (n / 192.0)), v) for n in range(192))

#: The significant digits of each series, over one decade.
SERIES: Mapping[str, tuple[int, ...]] = {
    "E3": _E24[::8],
    "E6": _E24[::4],
    "E12": _E24[::2],
    "E24": _E24,
    "E48": _E192[::4],
    "E96": _E192[::2],
    "E192": _E192,
}

#: The tolerance each series is meant for, the coarsest first.
_MEANT_FOR = (("E6", 0.20), ("E12", 0.10), ("E24", 0.05), ("E48", 0.02), ("E96", 0.01))


def series_for(tolerance: float) -> str:
    """Return the series meant for a tolerance, a fraction; between two, the finer one."""
    for name, coarse in _MEANT_FOR:
        if tolerance >= coarse * (1.0 - 1e-9):
            return name
    return "E192"


@cache
def values(series: str, low: float, high: float) -> tuple[float, ...]:
    """Return the values of a series from ``low`` to ``high``, both included, in their unit."""
    decades = range(math.floor(math.log10(low)), math.ceil(math.log10(high)) + 1)
    every = (_value(digits, decade) for decade in decades for digits in SERIES[series])
    return tuple(each for each in every if low * (1 - 1e-9) <= each <= high * (1 + 1e-9))


def nearest(value: float, series: str) -> float:
    """Return the value of a series with the smallest distance to a positive value."""
    around = values(series, value / 10.0, value * 10.0)
    return min(around, key=lambda each: abs(each - value))


def off_preferred(value: float, tolerance: float) -> float:
    """Return the relative distance of a value to the series of its tolerance; NaN for NaN."""
    if not (value > 0.0 and tolerance > 0.0):
        return math.nan
    preferred = nearest(value, series_for(tolerance))
    return abs(value - preferred) / preferred


def _value(digits: int, decade: int) -> float:
    """Return a value free of binary dirt: 4700.0, not 4700.000000000001."""
    return float(f"{digits}e{decade - len(str(digits)) + 1}")
