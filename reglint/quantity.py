"""Quantities as people write them: text with a unit, and ranges with tolerances.

The gate is strict: the whole text must match, the unit must be one of a closed table,
and nothing is guessed. Values are in SI units; temperatures in °C.
"""

import math
import re
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from functools import cache, lru_cache

from reglint import dimension
from reglint.dimension import KELVIN, ONE, Dimension
from reglint.errors import QuantityError
from reglint.nearest import hint
from reglint.plaintext import short

_PREFIXES: Mapping[str, int] = {
    "": 0,
    "p": -12,
    "n": -9,
    "u": -6,
    "\u00b5": -6,  # micro sign
    "\u03bc": -6,  # Greek mu
    "m": -3,
    "k": 3,
    "M": 6,
    "G": 9,
}
#: Each unit's dimension, what a quantity in it is called, and the prefixes it is used with.
#: M is not among those of volt, ampere and watt: where it stands, m was meant.
_UNITS: Mapping[str, tuple[Dimension, str, str]] = {
    "V": (dimension.VOLT, "a voltage", "nuµμmk"),
    "A": (dimension.AMPERE, "a current", "pnuµμmk"),
    "W": (dimension.WATT, "a power", "nuµμmk"),
    "ohm": (dimension.OHM, "a resistance", "uµμmkMG"),
    "F": (dimension.FARAD, "a capacitance", "pnuµμm"),
    "H": (dimension.HENRY, "an inductance", "nuµμm"),
    "S": (dimension.SIEMENS, "a conductance", "nuµμm"),
    "Hz": (dimension.HERTZ, "a frequency", "mkMG"),
    "s": (dimension.SECOND, "a time", "pnuµμm"),
    "K": (KELVIN, "a temperature difference", "m"),
}
_OHM_SIGNS = ("\u03a9", "\u2126")  # Greek omega, and the ohm sign of old character sets
_CELSIUS = ("degC", "°C")
#: Plain numbers by another name, and the power of ten each stands for.
_RATIOS: Mapping[str, int] = {"1": 0, "%": -2, "ppm": -6}
_RATIO_WORD = "a plain number"

#: What a field in a unit may say, where 4.7 of it would be odd.
_EXAMPLES: Mapping[str, str] = {
    "degC": "25 °C",
    "K/W": "170 K/W",
    "W/K": "6.67 mW/K",
    "V/K": "1.5 mV/K",
    "1/K": "100 ppm/K",
    "1": "4.7",
}

#: The longest number that is still one somebody measured.
_MOST_DIGITS = 40
#: Some patterns take the square of a text's length in steps; nobody writes so long a quantity.
_MOST_CHARACTERS = 120
_NUMBER = r"[-−+]?(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-−+]?[0-9]+)?"
_QUANTITY = re.compile(rf"({_NUMBER})[ ]?([^ 0-9.+−-][^ ]*|1/[^ ]+)?")
_LITERAL = re.compile(r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)(?:[eE][-+]?[0-9]+)?(?![\w.])")
_UNIT_WORD = re.compile(r" ?([A-Za-z\u03a9\u2126µμ°%]+(?:/[A-Za-z°]+)?)(?![\w.(])")
_AROUND_ZERO = re.compile(r"(?:±|\+/-|\+-) ?(.+)")
_SYMMETRIC = re.compile(r"(.+?) ?(?:±|\+/-|\+-) ?(.+)")
_UNEVEN = re.compile(rf"(.+?) \+ ?({_NUMBER})( ?[^ 0-9/]+)? ?/ ?[-−] ?({_NUMBER} ?[^ 0-9]+)")
_CODE = re.compile(r"([0-9]*)([RKkMGTpnuµμmF])([0-9]*)")
#: What a letter of an IEC 60062 code stands for; M is always mega for ohms, m milli for farads.
_CODE_LETTERS: Mapping[str, Mapping[str, int]] = {
    "ohm": {"R": 0, "K": 3, "k": 3, "M": 6, "G": 9, "T": 12},
    "F": {"F": 0, "m": -3, "u": -6, "µ": -6, "μ": -6, "n": -9, "p": -12},
}


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit: its dimension and the power of ten that leads to SI."""

    symbol: str
    dimension: Dimension
    exponent: int = 0
    #: Whether values are temperatures on the Celsius scale.
    celsius: bool = False
    #: Whether values are voltage ratios in decibels.
    decibel: bool = False


@dataclass(frozen=True, slots=True)
class Range:
    """A least, a nominal and a greatest value, in SI units; temperatures in °C."""

    min: float
    nom: float
    max: float

    @property
    def exact(self) -> bool:
        """Tell whether it is a single value."""
        return self.min == self.max

    @property
    def spread(self) -> float:
        """Return the largest deviation from nominal as a fraction of it; 0 around zero."""
        largest = max(self.max - self.nom, self.nom - self.min)
        return largest / abs(self.nom) if self.nom else 0.0


@cache
def unit(symbol: str) -> Unit:
    """Return the unit a symbol stands for, a single one or a quotient of two.

    Raises `QuantityError` for a symbol outside the table, with advice where it is near one.
    """
    if symbol in _CELSIUS:
        return Unit(symbol, KELVIN, celsius=True)
    if symbol == "dB":
        return Unit(symbol, ONE, decibel=True)
    above, slash, below = symbol.partition("/")
    top, top_exponent = _atom(above, symbol)
    if not slash:
        return Unit(symbol, top, top_exponent)
    bottom, bottom_exponent = _atom(below, symbol)
    return Unit(symbol, top / bottom, top_exponent - bottom_exponent)


def _atom(text: str, whole: str) -> tuple[Dimension, int]:
    """Return the dimension and power of ten of one unit with its prefix."""
    if text in _RATIOS:
        return ONE, _RATIOS[text]
    if text in _CELSIUS:
        return KELVIN, 0  # in a quotient a degree Celsius is a kelvin
    for sign in _OHM_SIGNS:
        text = text.replace(sign, "ohm")
    for name, (of, _, prefixes) in _UNITS.items():
        prefix = text.removesuffix(name)
        if text.endswith(name) and prefix in ("", *prefixes):
            return of, _PREFIXES[prefix]
    raise QuantityError(_advice(text, whole))


def _advice(text: str, whole: str) -> str:
    """Return what to write instead of an unknown unit."""
    for name, (_, _, prefixes) in _UNITS.items():
        prefix = text[: -len(name)]
        if text.endswith(name) and prefix == "K" and "k" in prefixes:
            return f"the prefix K is written k: {whole.replace('K', 'k', 1)}"
        if text.endswith(name) and prefix == "M":
            return f"{whole} is not our guess to make: write m{name} or k{name}"
    known = [prefix + name for name, (_, _, all_) in _UNITS.items() for prefix in ("", *all_)]
    near = hint(whole, [*known, *_RATIOS, *_CELSIUS])
    return f"{whole} is not a unit known here{near} (known: {', '.join(_UNITS)}, °C, %, ppm)"


@lru_cache(maxsize=1 << 16)
def parse(text: str, wanted: str, *, code: bool = False) -> float:
    """Return the value of a text in a wanted unit, in SI units; °C for temperatures.

    With ``code``, IEC 60062 codes such as ``4k7`` are read. Raises `QuantityError`.
    """
    _check_length(text)
    of = unit(wanted)
    if code and (coded := _coded(text, wanted)) is not None:
        return coded
    found = _QUANTITY.fullmatch(text)
    if found is None or len(found[1]) > _MOST_DIGITS:
        raise QuantityError(_refused(text, wanted))
    number, symbol = found[1], found[2]
    if symbol is None and of.dimension != ONE:
        raise QuantityError(f"{text} needs a unit, for example {text} {_spelled(wanted)}")
    stated = unit(symbol or "1")
    if stated.dimension != of.dimension or stated.celsius != of.celsius:
        raise QuantityError(_wrong_dimension(text, stated, of))
    return _value(number, stated)


def _check_length(text: str) -> None:
    if len(text) > _MOST_CHARACTERS:
        said = f"is longer than {_MOST_CHARACTERS} characters: write a number and a unit"
        raise QuantityError(f"{short(text)} {said}")


def _value(number: str, stated: Unit) -> float:
    """Return a number in a unit as the nearest double: powers of ten are exact in decimal."""
    try:
        value = float(Decimal(number.replace("−", "-")).scaleb(stated.exponent))
    except ArithmeticError:  # the exponents of decimal end somewhere, too
        value = math.inf
    if stated.decibel:
        value = 10.0 ** (value / 20.0) if value < 1e4 else math.inf  # noqa: PLR2004 -- overflow
    if not math.isfinite(value):
        raise QuantityError(f"{number} {stated.symbol} is too large for a number")
    return value


def _refused(text: str, wanted: str) -> str:
    """Return why a text is no quantity, and what to write."""
    example = f"for example {_EXAMPLES.get(wanted, f'4.7 {wanted}')}"
    if "," in text:
        return f"{text}: a comma is not a decimal point here; write {text.replace(',', '.')}"
    if text.strip(" +-−").lower().startswith(("nan", "inf", ".nan", ".inf")):
        return f"{text} is not a number; write one, {example}"
    return f"{text} is not a quantity; write a number and a unit, {example}"


def _wrong_dimension(text: str, stated: Unit, of: Unit) -> str:
    if stated.dimension == of.dimension:
        return f"{text}: write a temperature in °C and a difference of temperatures in K"
    example = f"for example 5 {_spelled(of.symbol)}"
    return f"{text} is {_noun(stated)}; {_noun(of)} is wanted here, {example}"


def _noun(of: Unit) -> str:
    if of.celsius:
        return "a temperature"
    if of.dimension == ONE:
        return _RATIO_WORD
    nouns = (noun for each, noun, _ in _UNITS.values() if each == of.dimension)
    return next(nouns, f"a quantity in {of.dimension}")


def _spelled(symbol: str) -> str:
    return "°C" if symbol == "degC" else symbol


def _coded(text: str, wanted: str) -> float | None:
    """Return the value of an IEC 60062 code, whose letter stands for the decimal point."""
    letters = _CODE_LETTERS.get(wanted, {})
    found = _CODE.fullmatch(text)
    if found is None or found[2] not in letters or not (found[1] or found[3]):
        return None
    if len(text) > _MOST_DIGITS:
        return None  # refused as any other number of so many digits
    number = f"{found[1] or 0}.{found[3] or 0}"
    return float(Decimal(number).scaleb(letters[found[2]]))


@lru_cache(maxsize=1 << 16)
def parse_range(text: str, wanted: str, *, code: bool = False) -> Range:
    """Return the range of ``12 V``, ``12 V ± 10 %``, ``12 V ± 0.5 V`` or ``12 V +10/-15 %``.

    ``± 1.5 mV/K`` is a range around zero.

    Raises `QuantityError`.
    """
    _check_length(text)
    if found := _AROUND_ZERO.fullmatch(text):
        nominal = 0.0
        above = below = _deviation(found[1], nominal, wanted)
    elif found := _SYMMETRIC.fullmatch(text):
        nominal = parse(found[1], wanted, code=code)
        above = below = _deviation(found[2], nominal, wanted)
    elif found := _UNEVEN.fullmatch(text):
        nominal = parse(found[1], wanted, code=code)
        shared = found[3] or re.sub(_NUMBER, "", found[4])
        above = _deviation(f"{found[2]}{shared}", nominal, wanted)
        below = _deviation(found[4], nominal, wanted)
    else:
        nominal = parse(text, wanted, code=code)
        above = below = 0.0
    if not math.isfinite(nominal - below) or not math.isfinite(nominal + above):
        raise QuantityError(f"{text} reaches beyond the largest number")
    return Range(nominal - below, nominal, nominal + above)


def _deviation(text: str, nominal: float, wanted: str) -> float:
    """Return how far a range reaches to one side of its nominal value."""
    of = unit(wanted)
    if text.endswith("%") and not of.celsius and of.dimension != ONE:
        size = abs(nominal) * parse(text, "1")
    elif of.celsius:
        number = re.sub(r" ?(?:°C|degC|K)$", "", text)
        size = parse(f"{number} K", "K")
    else:
        size = parse(text, wanted)
    if size < 0.0 or text.startswith(("-", "−", "+")):
        raise QuantityError(f"{text}: a tolerance is written without a sign")
    return size


def range_of(low: float | None, nominal: float | None, high: float | None, wanted: str) -> Range:
    """Return the range between stated ends; a nominal value not stated is the middle.

    Raises `QuantityError` where an end is missing or the three are not in order.
    """
    if low is None or high is None:
        raise QuantityError(f"{'min' if low is None else 'max'} is missing from the range")
    # Halved first, that no sum is too large; kept inside, as the least doubles have no half.
    half_way = min(max(low / 2.0 + high / 2.0, low), high)
    middle = half_way if nominal is None else nominal
    if not low <= middle <= high:
        told = ", ".join(
            f"{name} {render(value, wanted)}"
            for name, value in (("min", low), ("nom", nominal), ("max", high))
            if value is not None
        )
        raise QuantityError(f"a range runs from min over nom to max, but here {told}")
    return Range(low, middle, high)


def render(value: float, wanted: str, digits: int = 4) -> str:
    """Return a value with its unit and a prefix that suits it, to some significant digits."""
    symbol = _spelled(wanted)
    if math.isnan(value):
        return "no value"
    if math.isinf(value):
        return f"{'−' if value < 0 else ''}∞ {symbol}".removesuffix(" 1")
    if wanted == "1":
        return f"{value:.{digits}g}"
    if wanted == "1/K":
        return f"{value * 1e6:.{digits}g} ppm/K"
    if _UNITS.get(wanted.partition("/")[0], ("", "", ""))[2] in ("", "m"):
        return f"{value:.{digits}g} {symbol}"
    from quantiphy import Quantity  # noqa: PLC0415 -- 15 ms that a run without findings saves

    rendered: str = Quantity(value, symbol).render(prec=digits - 1)
    return rendered


def literal_at(text: str, position: int) -> tuple[float, Unit, int] | None:
    """Return the number with its unit at a position of a formula, and where it ends.

    Nothing where no number starts there. Raises `QuantityError` for one out of range.
    """
    found = _LITERAL.match(text, position)
    if found is None or len(found[0]) > _MOST_DIGITS:
        return None
    word = _UNIT_WORD.match(text, found.end())
    if word is None or not _is_unit(word[1]):
        # "2 V/x.y" is two volts divided by a name: try the word before the stroke alone.
        word = re.compile(r" ?([A-Za-z\u03a9\u2126µμ°%]+)(?![\w.(])").match(text, found.end())
    if word is None or not _is_unit(word[1]):
        return _value(found[0], unit("1")), unit("1"), found.end()
    return _value(found[0], unit(word[1])), unit(word[1]), word.end()


@cache
def _is_unit(symbol: str) -> bool:
    try:
        unit(symbol)
    except QuantityError:
        return False
    return True


@cache
def unit_pattern(wanted: str) -> str:
    """Return a regular expression (ECMA 262) of a field's texts, for editors."""
    number = r"[-−+]?([0-9]+([.][0-9]*)?|[.][0-9]+)([eE][-−+]?[0-9]+)?"
    of = unit(wanted)
    symbols = "|".join(re.escape(each).replace("/", "[/]") for each in _symbols(of))
    tolerance = (
        rf"( ?(±|[+][/]-|[+]-) ?{number} ?[^ ]+| [+] ?{number}[^/]*[/] ?[-−] ?{number} ?[^ ]+)?"
    )
    optional = "?" if of.dimension == ONE else ""
    code = "|[0-9]*[RKkMGTpnuµμmF][0-9]*" if wanted in _CODE_LETTERS else ""
    return f"^({number} ?({symbols}){optional}{tolerance}{code})$"


def _symbols(of: Unit) -> list[str]:
    """Return the symbols an editor accepts for a dimension."""
    if of.celsius:
        return list(_CELSIUS)
    if of.dimension == ONE:
        return ["%", "ppm", "dB", "mV/V", "V/V"]
    above, _, below = str(of.dimension).partition("/")
    ends = {"K": ("K", "°C", "degC"), "": ("",)}.get(below, (below,))
    tops = ["°C", "degC", "K"] if above == "K" and below else _with_prefixes(above)
    return [f"{top}/{end}" if end else top for top in tops for end in ends]


def _with_prefixes(name: str) -> list[str]:
    if name == "1":
        return ["ppm", "%", "1"]
    names = (name, *_OHM_SIGNS) if name == "ohm" else (name,)
    prefixes = _UNITS[name][2] if name in _UNITS else ""
    return [f"{prefix}{each}" for each in names for prefix in ("", *prefixes)]
