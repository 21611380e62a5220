"""Rule files may come from a stranger's branch: a formula can do nothing but arithmetic."""

import time

import pytest

from reglint.errors import FormulaError, QuantityError
from reglint.formula import evaluate, parse
from reglint.functions import REAL

ESCAPES = [
    "__import__('os').system('true')",
    "().__class__.__bases__",
    "a.__class__.__mro__[1]",
    "a.__init__()",
    "zener.current()",
    "(lambda: 1)()",
    "[x for x in (1, 2)]",
    "{1: 2}",
    "(a := 1)",
    "f'{a}'",
    "'text'",
    "b'bytes'",
    "a[0]",
    "a if b else c",
    "a and b",
    "not a",
    "a in b",
    "a is b",
    "a | b",
    "~a",
    "a << 99",
    "a // b",
    "a % b",
    "a @ b",
    "max(*a)",
    "max(a, key=b)",
    "max(1, 2) (3)",
    "await a",
    "yield a",
    "...",
    "True",
    "None.x()",
    "1j",
    "0x10",
    "1_000",
    "1e999",
    "nan()",
    "open(a)",
    "eval(a)",
    "a; b",
    "a\nb",
    "a\x00b",
    "a\\b",
    "ａ + 1",  # a full-width letter
    "zenеr.current",  # a Cyrillic letter
    "a ＋ b",
    "a, b",
    "a = 1",
    "import os",
    "a" * 5000,
    "(" * 500 + "1" + ")" * 500,
    "-" * 900 + "1",
    "1" + " + 1" * 200,
    "2 ** " * 150 + "2",
    "getattr(a, b)",
    "a.format()",
    "print(a)",
    "globals()",
    "breakpoint()",
    "exec(a)",
    "compile(a, b, c)",
    "lambda: 1",
    "(yield)",
    "*a",
    "**a",
    "@a",
    "a -> b",
    "a!r",
    "`a`",
    "$a",
    "1 # a comment",
    "# a comment",
    "a\u200bb",  # a blank of no width
    "\u202ea + b",  # the other way round
    "ℯxp(1)",  # NFKC makes it exp
    "ｍｉｎ(1, 2)",  # full-width letters, which NFKC makes min
    "µ(1)",
    "9" * 10_000,
    "1" + "+1" * 50_000,
    "min(" + "1, " * 5000 + "1)",
    "a" + ".b" * 5000,
    "abs(" * 300 + "1" + ")" * 300,
    "",
    "   ",
]


@pytest.mark.parametrize("text", ESCAPES, ids=range(len(ESCAPES)))
def test_an_escape_is_refused_quickly(text: str) -> None:
    """Everything beyond arithmetic is refused by the reader, at once and with a place."""
    start = time.perf_counter()
    with pytest.raises((FormulaError, QuantityError, KeyError)):
        # A text that is a mere name is looked up whole, and nothing has it.
        evaluate(parse(text).root, {}.__getitem__, REAL)
    assert time.perf_counter() - start < 1.0


def test_a_huge_power_is_infinite_at_once() -> None:
    """A tower of powers costs nothing: numbers are doubles."""
    import numpy as np  # noqa: PLC0415

    with np.errstate(over="ignore"):
        assert float(evaluate(parse("10 ** 10 ** 10").root, {}.__getitem__, REAL)) == float("inf")
