"""Rule files may come from a stranger's branch: a formula can do nothing but arithmetic."""

import time
import tracemalloc
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from reglint import dimension, gradient, interval
from reglint.errors import FormulaError
from reglint.files import Folder
from reglint.formula import evaluate, parse, parse_inequality
from reglint.functions import DIMENSIONS, GRADIENTS, INTERVALS, REAL, Arithmetic
from reglint.rulebook import Rulebook

LANGUAGE = "a formula has numbers, names, + - * / **, brackets and the functions of the language"
UNFINISHED = "this is not a formula; something is missing or left over"
NUMBER = "this is not a number such as 4.7 or 25 degC"
DEEP = "this formula is nested too deeply"
PARTED = "a dotted name is written without blanks"
LONG = "a formula has at most 1000 characters"
FUNCTIONS = "abs, agreeing, exp, falling, if_positive, knee, log, max, min, off_preferred, sqrt"


def foreign(character: str) -> str:
    """Return what is said of a character outside the language."""
    return f"{character!r} has no place in a formula"


def no_function(name: str) -> str:
    """Return what is said of a word that is called and is no function."""
    return f"there is no function {name}; there are {FUNCTIONS}"


#: Ways out of expression evaluators, from memory; what is said of each, and at which column from 0.
ESCAPES: list[tuple[str, str, int]] = [
    # Dunder chains and attributes of results.
    ("().__class__.__bases__", NUMBER, 2),
    ("a.__class__.__mro__[1]", foreign("["), 19),
    ("(a).__class__.__subclasses__()", NUMBER, 3),
    ("a.__init__()", LANGUAGE, 0),
    ("a.__init__.__globals__()", LANGUAGE, 0),
    ("max.__self__.open()", LANGUAGE, 0),
    ("(1).__class__", NUMBER, 3),
    ("1 .__class__", NUMBER, 2),
    ("max(a, b).real", NUMBER, 9),
    # Calls of anything that is not a function of the language.
    ("__import__(os)", no_function("__import__"), 0),
    ("getattr(a, b)", no_function("getattr"), 0),
    ("open(a)", no_function("open"), 0),
    ("eval(a)", no_function("eval"), 0),
    ("exec(a)", no_function("exec"), 0),
    ("compile(a)", no_function("compile"), 0),
    ("globals()", no_function("globals"), 0),
    ("vars()", no_function("vars"), 0),
    ("input()", no_function("input"), 0),
    ("breakpoint()", no_function("breakpoint"), 0),
    ("type(a)", no_function("type"), 0),
    ("nan()", no_function("nan"), 0),
    ("time.time()", LANGUAGE, 0),
    ("os.environ.get(a)", LANGUAGE, 0),
    ("zener.current()", LANGUAGE, 0),
    ("max(1, 2)(3)", LANGUAGE, 0),
    ("max(max)(a)", LANGUAGE, 0),
    # Arguments in other ways than one after another.
    ("max(*a)", LANGUAGE, 4),
    ("max(**a)", LANGUAGE, 0),
    ("max(a, key=b)", LANGUAGE, 0),
    ("max(a for a in b)", LANGUAGE, 3),
    # Texts, bytes, formats, containers, subscripts.
    ("'text'", foreign("'"), 0),
    ('"text"', foreign('"'), 0),
    ("b'bytes'", foreign("'"), 1),
    ("f'{a}'", foreign("'"), 1),
    ("'{a}'.format(b)", NUMBER, 5),
    ("'%s' % a", foreign("'"), 0),
    ("a[0]", foreign("["), 1),
    ("[a for a in b]", foreign("["), 0),
    ("{a: b}", foreign("{"), 0),
    ("{a for a in b}", foreign("{"), 0),
    ("(a, b)", LANGUAGE, 0),
    ("a, b", LANGUAGE, 0),
    ("()", LANGUAGE, 0),
    # Words of Python.
    ("(lambda: a)()", foreign(":"), 7),
    ("lambda a", UNFINISHED, 8),
    ("(a := b)", foreign(":"), 3),
    ("(a for a in b)", LANGUAGE, 0),
    ("await a", LANGUAGE, 0),
    ("(yield a)", LANGUAGE, 1),
    ("(yield)", LANGUAGE, 1),
    ("a if b else c", LANGUAGE, 0),
    ("a and b", LANGUAGE, 0),
    ("not a", LANGUAGE, 0),
    ("a in b", LANGUAGE, 0),
    ("a is b", LANGUAGE, 0),
    ("import os", UNFINISHED, 0),
    ("del a", UNFINISHED, 0),
    ("print a", UNFINISHED, 0),
    ("a; b", foreign(";"), 1),
    ("a = b", UNFINISHED, 0),
    ("a == b", LANGUAGE, 0),
    ("a > b", LANGUAGE, 0),
    # Constants that are no numbers with a unit.
    ("...", NUMBER, 0),
    ("True", LANGUAGE, 0),
    ("None", LANGUAGE, 0),
    ("1j", NUMBER, 0),
    ("1_000", NUMBER, 0),
    ("0x10", NUMBER, 0),
    ("0b1", NUMBER, 0),
    ("1if a else b", NUMBER, 0),
    ("1e999", "1e999 1 is too large for a number", 0),
    ("a + 1e999999999999999999 kV", "1e999999999999999999 kV is too large for a number", 4),
    ("a >= 1e400", "1e400 1 is too large for a number", 5),
    ("9" * 41, NUMBER, 0),
    # Other operators.
    ("a | b", foreign("|"), 2),
    ("a & b", foreign("&"), 2),
    ("a ^ b", foreign("^"), 2),
    ("~a", foreign("~"), 0),
    ("a << 99", LANGUAGE, 0),
    ("a // b", LANGUAGE, 0),
    ("a % b", foreign("%"), 2),
    ("a @ b", foreign("@"), 2),
    ("+a", LANGUAGE, 0),
    # What only looks like the language; Python would read the first five as ASCII (NFKC).
    ("ａ + 1", foreign("ａ"), 0),
    ("ｍｉｎ(a)", foreign("ｍ"), 0),
    ("ℯxp(a)", foreign("ℯ"), 0),
    ("a.__ｃlass__", foreign("ｃ"), 4),
    ("ﬁeld", foreign("ﬁ"), 0),
    ("zenеr.current", foreign("е"), 3),
    ("a ＋ b", foreign("＋"), 2),
    ("a − b", foreign("−"), 2),
    ("a\u200bb", foreign("\u200b"), 1),
    ("a\u00a0+ b", foreign("\u00a0"), 1),
    ("a + 1\u0661", NUMBER, 4),
    # Comments, line ends, backslashes, null bytes, blanks inside names.
    ("a # b", foreign("#"), 2),
    ("a\nb", foreign("\n"), 1),
    ("a)\nimport os\n(a", foreign("\n"), 2),
    ("a\\\n", foreign("\\"), 1),
    ("a\\u0062", foreign("\\"), 1),
    ("a\x00b", foreign("\x00"), 1),
    ("a\tb", foreign("\t"), 1),
    ("a. b", PARTED, 1),
    ("a .b", NUMBER, 2),
    # Length and depth.
    ("a" * 1001, LONG, 1000),
    ("0" + "+1" * 50_000, LONG, 1000),
    ("(" * 400 + "a" + ")" * 400, UNFINISHED, 199),
    ("-" * 900 + "a", DEEP, 41),
    ("-" * 41 + "a", DEEP, 41),
    ("a" + " + a" * 41, DEEP, 0),
    ("2 ** " * 150 + "2", DEEP, 200),
    ("abs(" * 41 + "a" + ")" * 41, DEEP, 164),
    # Nothing, or not all.
    ("", LANGUAGE, 0),
    ("   ", LANGUAGE, 0),
    ("a)", UNFINISHED, 2),
    ("(a", UNFINISHED, 0),
    ("a +", UNFINISHED, 3),
]


@pytest.mark.parametrize(
    ("text", "message", "column"), ESCAPES, ids=[ascii(text[:24]) for text, _, _ in ESCAPES]
)
def test_an_escape_is_refused_at_its_place(text: str, message: str, column: int) -> None:
    """Everything beyond arithmetic is refused by the reader, at once, with its column."""
    start = time.perf_counter()
    with pytest.raises(FormulaError) as refused:
        parse(text)
    assert time.perf_counter() - start < 1.0
    assert (str(refused.value), refused.value.offset) == (message, column)


#: Heavy or senseless, but arithmetic; a name is looked up whole and is nothing else.
HEAVY = [
    "10 ** 10 ** 10",
    "(10 ** 10) ** 10 ** 10 ** 10",
    "x ** 1e300",
    "x ** (0 - 1e300)",
    "exp(exp(exp(exp(x))))",
    "1e308 * 1e308 - 1e308 * 1e308",
    "0 ** (0 - 1)",
    "1 / (x - x)",
    "log(x - x)",
    "sqrt(0 - x)",
    "(0 - x) ** 0.5",
    "knee(0 - x, x)",
    "1e-320 ** 9",
    "max(" + "x, " * 300 + "x)",
    "(((((((x**0.1)**0.1)**0.1)**0.1)**0.1)**0.1)**0.1)**0.1",
    " + ".join(["x"] * 40),
    "x" + " " * 990 + "+ x",
]
ARITHMETICS: dict[str, tuple[Arithmetic[Any], Any]] = {
    "dimension": (DIMENSIONS, dimension.ONE),
    "array": (REAL, np.array([1.0, 2.0])),
    "interval": (INTERVALS, interval.lift(2.0)),
    "gradient": (GRADIENTS, gradient.raised(2.0)),
}


@pytest.mark.parametrize("kind", ARITHMETICS)
@pytest.mark.parametrize("text", HEAVY, ids=range(len(HEAVY)))
def test_a_heavy_formula_costs_little(text: str, kind: str) -> None:
    """Numbers are doubles: no tower of powers takes time or memory, whatever it comes to."""
    arithmetic, value = ARITHMETICS[kind]
    tracemalloc.start()
    start = time.perf_counter()
    with np.errstate(all="ignore"):
        evaluate(parse(text).root, {"x": value}.__getitem__, arithmetic)
    spent, memory = time.perf_counter() - start, tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    assert spent < 1.0
    assert memory < 10_000_000


@pytest.mark.parametrize("name", ["__builtins__", "__debug__", "open", "a.__class__", "x" * 1000])
def test_a_name_is_looked_up_whole(name: str) -> None:
    """Whatever a name is called, it is asked for in the spec's figures and nowhere else."""
    asked = []

    def look_up(each: str) -> Any:
        asked.append(each)
        return 1.0

    evaluate(parse(name).root, look_up, REAL)
    assert asked == [name]


RULE = """format: 1
title: T
condition: loaded
holds: "{}"
point_at: ambient
reason: R
source: S
remedy: M
passes: {{}}
fails: {{}}
"""


@pytest.fixture
def refused(tmp_path: Path) -> Callable[[str], list[str]]:
    """Return what is told of a house rule with a demand of one's own."""

    def tell(holds: str) -> list[str]:
        path = tmp_path / "house/zener-shunt/strange.yaml"
        path.parent.mkdir(parents=True)
        path.write_text(RULE.format(holds), encoding="utf-8")
        book = Rulebook([Folder(tmp_path / "house", "house")])
        kind = book.kind("zener-shunt")
        assert kind is not None
        assert "strange" not in book.rules(kind)
        return [str(problem) for problem in book.problems]

    return tell


@pytest.mark.parametrize(
    ("holds", "told"),
    [
        (
            "open(ambient) >= 0",
            f"9: {no_function('open')} (in open(ambient) >= 0)",
        ),
        (
            "rail.voltage >= time.time",
            "25: there is no field or quantity time.time (in time.time)",
        ),
        (
            "rail.voltage >= os.environ.HOME",
            "25: there is no field or quantity os.environ.HOME (in os.environ.HOME)",
        ),
        (
            "rail.voltage >= 1e999 V",
            "25: 1e999 V is too large for a number (in rail.voltage >= 1e999 V)",
        ),
        ("min() >= 0", "9: min takes one or more, not 0 (in min())"),
        ("abs(ambient, ambient) >= 0", "9: abs takes 1, not 2 (in abs(ambient, ambient))"),
    ],
)
def test_a_rule_reads_nothing_but_its_spec(
    refused: Callable[[str], list[str]], holds: str, told: str
) -> None:
    """Files, the environment and the clock are names nobody has; the rule is not used."""
    assert refused(holds) == [f"house/zener-shunt/strange.yaml:4:{told}"]


@pytest.mark.parametrize(
    ("text", "message", "column"),
    [
        ("a >= b >= c", "a rule holds one comparison with >= or <=, for example a >= b", 0),
        ("a >= 1e999", "1e999 1 is too large for a number", 5),
        ("open(a) >= b", no_function("open"), 0),
        ("a >= b.__class__()", LANGUAGE, 5),
    ],
)
def test_an_escape_in_a_demand_is_refused(text: str, message: str, column: int) -> None:
    """Both sides of a rule's demand pass the same gate."""
    with pytest.raises(FormulaError) as refused:
        parse_inequality(text)
    assert (str(refused.value), refused.value.offset) == (message, column)
