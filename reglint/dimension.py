"""Dimensions: a kind of number that knows its unit and nothing else.

A formula evaluated with dimensions either has one, or joins what does not fit.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction

from reglint.errors import DimensionError

#: The base the exponents stand for: what electronics measures in, not what SI derives from.
_BASE = ("V", "A", "s", "K")

_Exponents = tuple[Fraction, Fraction, Fraction, Fraction]


@dataclass(frozen=True, slots=True)
class Dimension:
    """A product of powers of volt, ampere, second and kelvin."""

    exponents: _Exponents

    def __add__(self, other: "Dimension") -> "Dimension":
        """Return the dimension of a sum; raise `DimensionError` unless both are alike."""
        if self != other:
            raise DimensionError(f"{self} and {other} cannot be added, subtracted or compared")
        return self

    __sub__ = __add__

    def __mul__(self, other: "Dimension") -> "Dimension":
        """Return the dimension of a product."""
        return _joined(self, other, 1)

    def __truediv__(self, other: "Dimension") -> "Dimension":
        """Return the dimension of a quotient."""
        return _joined(self, other, -1)

    def __neg__(self) -> "Dimension":
        """Return the same: a sign has no dimension."""
        return self

    def __pow__(self, exponent: "float | Dimension") -> "Dimension":
        """Return the dimension of a power.

        Raises `DimensionError` for an exponent that is no constant, unless base and
        exponent are both plain numbers.
        """
        if not isinstance(exponent, Dimension):
            power = Fraction(exponent).limit_denominator(1000)
            return Dimension(tuple(each * power for each in self.exponents))  # type: ignore[arg-type]
        if self == ONE == exponent:
            return ONE
        raise DimensionError(f"{self} cannot be raised to a power that is no constant")

    def __str__(self) -> str:
        """Return the unit an engineer would write: ``V``, ``K/W``, ``V²·s``."""
        return _spelled(self)


def _joined(one: Dimension, other: Dimension, sign: int) -> Dimension:
    pairs = zip(one.exponents, other.exponents, strict=True)
    return Dimension(tuple(a + sign * b for a, b in pairs))  # type: ignore[arg-type]


def _of(volt: int = 0, ampere: int = 0, second: int = 0, kelvin: int = 0) -> Dimension:
    return Dimension((Fraction(volt), Fraction(ampere), Fraction(second), Fraction(kelvin)))


ONE = _of()
VOLT = _of(volt=1)
AMPERE = _of(ampere=1)
SECOND = _of(second=1)
KELVIN = _of(kelvin=1)
OHM = VOLT / AMPERE
SIEMENS = AMPERE / VOLT
WATT = VOLT * AMPERE
FARAD = AMPERE * SECOND / VOLT
HENRY = VOLT * SECOND / AMPERE
HERTZ = ONE / SECOND

_NAMES: Mapping[Dimension, str] = {
    ONE: "1",
    VOLT: "V",
    AMPERE: "A",
    SECOND: "s",
    KELVIN: "K",
    OHM: "ohm",
    SIEMENS: "S",
    WATT: "W",
    FARAD: "F",
    HENRY: "H",
    HERTZ: "Hz",
}


def _spelled(dimension: Dimension) -> str:
    """Return a name, else a quotient of two names, else a product of powers."""
    if dimension in _NAMES:
        return _NAMES[dimension]
    for below, name in _NAMES.items():
        above = dimension * below
        if above in _NAMES:
            return f"{_NAMES[above]}/{name}"
    powers = zip(_BASE, dimension.exponents, strict=True)
    return "·".join(f"{unit}{_superscript(power)}" for unit, power in powers if power)


def _superscript(power: Fraction) -> str:
    if power == 1:
        return ""
    if power.denominator != 1:
        return f"^({power})"
    return str(power).translate(str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻"))


def _alike(first: Dimension, *others: Dimension) -> Dimension:
    for other in others:
        first + other
    return first


def _plain(*arguments: Dimension) -> Dimension:
    for argument in arguments:
        if argument != ONE:
            raise DimensionError(f"a plain number is wanted here, not one in {argument}")
    return ONE


def _falling(value: Dimension, full_until: Dimension, zero_at: Dimension) -> Dimension:
    _alike(value, full_until, zero_at)
    return ONE


def _if_positive(_test: Dimension, yes: Dimension, no: Dimension) -> Dimension:
    return _alike(yes, no)


def _off_preferred(_value: Dimension, tolerance: Dimension) -> Dimension:
    return _plain(tolerance)


def _checked(name: str, function: Callable[..., Dimension], count: int) -> Callable[..., Dimension]:
    """Return the function with its number of arguments checked; ``count`` 0 is one or more."""

    def checked(*arguments: Dimension) -> Dimension:
        fits = len(arguments) == count if count else bool(arguments)
        if not fits:
            raise DimensionError(f"{name} takes {count or 'one or more'}, not {len(arguments)}")
        return function(*arguments)

    return checked


#: What each function of the formula language does to dimensions.
FUNCTIONS: Mapping[str, Callable[..., Dimension]] = {
    name: _checked(name, function, count)
    for name, function, count in (
        ("min", _alike, 0),
        ("max", _alike, 0),
        ("abs", _alike, 1),
        ("sqrt", lambda value: value**0.5, 1),
        ("exp", _plain, 1),
        ("log", _plain, 1),
        ("knee", _plain, 2),
        ("falling", _falling, 3),
        ("if_positive", _if_positive, 3),
        ("agreeing", _if_positive, 3),
        ("off_preferred", _off_preferred, 2),
    )
}
