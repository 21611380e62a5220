"""Formulas: their text, their tree, and the one walker that evaluates them.

A formula is read by Python's own parser and then copied, node by node, into the few
nodes below; whatever has no counterpart is refused. Nothing of it is ever executed,
and a dotted name is looked up whole: it never becomes an attribute access.
"""

import ast
import operator
import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Any, TypeAlias, TypeVar, cast

from reglint.dimension import Dimension
from reglint.errors import DimensionError, FormulaError, QuantityError
from reglint.functions import NAMES, Arithmetic
from reglint.quantity import Unit, literal_at
from reglint.source import TOP, Complaint, Span

T = TypeVar("T")

#: Longer or deeper formulas than these are no formula an engineer would read.
MOST_CHARACTERS = 1000
MOST_DEPTH = 40


@dataclass(frozen=True, slots=True)
class Number:
    """A constant: its value in SI units (°C for temperatures) and its dimension."""

    value: float
    dimension: Dimension
    offset: int


@dataclass(frozen=True, slots=True)
class Name:
    """A field or a quantity, by its dotted name."""

    name: str
    offset: int


@dataclass(frozen=True, slots=True)
class Call:
    """A function of the language applied to its arguments."""

    function: str
    arguments: tuple["Expression", ...]
    offset: int


@dataclass(frozen=True, slots=True)
class Operation:
    """Two operands joined by one of ``+ - * / **``."""

    sign: str
    left: "Expression"
    right: "Expression"
    offset: int


@dataclass(frozen=True, slots=True)
class Negative:
    """An operand with its sign turned."""

    operand: "Expression"
    offset: int


Expression: TypeAlias = Number | Name | Call | Operation | Negative


@dataclass(frozen=True, slots=True)
class Formula:
    """An expression together with the text it was read from."""

    text: str
    root: Expression
    #: Where the text stands in its file.
    span: Span = TOP

    def complaint(self, error: FormulaError) -> Complaint:
        """Give an error about this formula its place in the file."""
        return Complaint(_inside(self.span, error.offset), f"{error} (in {self.text.strip()})")


@dataclass(frozen=True, slots=True)
class Inequality:
    """``value >= limit`` or ``value <= limit``: what a rule demands."""

    value: Formula
    #: ``">="`` or ``"<="``.
    sign: str
    limit: Formula


_OPERATORS: Mapping[type[ast.operator], str] = {
    ast.Add: "+",
    ast.Sub: "-",
    ast.Mult: "*",
    ast.Div: "/",
    ast.Pow: "**",
}
_JOIN: Mapping[str, Callable[[Any, Any], Any]] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
    "**": operator.pow,
}
_NUMBER = re.compile(r"(?<![\w.])[0-9.]")
#: Letters that only look like ours, quotes, comments and line ends stay outside.
_FOREIGN = re.compile(r"[^ !(-+\--9<=>A-Z_a-z,]")
#: Python joins the words around such a dot, but then the name is not in the text.
_PARTED = re.compile(r"\. ")


def parse(text: str, span: Span = TOP) -> Formula:
    """Read a formula; raise `FormulaError` at the column of whatever is not in the language."""
    bare, literals = _without_units(text)
    return Formula(text, _copy(_python_tree(bare), literals), span)


def parse_inequality(text: str, span: Span = TOP) -> Inequality:
    """Read a rule's demand: two formulas joined by one ``>=`` or ``<=``."""
    parts = re.split("(>=|<=)", text)
    if len(parts) != 3:  # noqa: PLR2004 -- value, sign, limit
        raise FormulaError("a rule holds one comparison with >= or <=, for example a >= b")
    value, sign, limit = parts
    first = parse(value, span)
    try:
        return Inequality(first, sign, parse(limit, _inside(span, len(value) + len(sign))))
    except FormulaError as error:
        raise FormulaError(str(error), error.offset + len(value) + len(sign)) from error


def evaluate(node: Expression, names: Callable[[str], T], arithmetic: Arithmetic[T]) -> T:
    """Evaluate an expression with any kind of number.

    Raises `FormulaError` at the operation whose dimensions do not fit.
    """
    if isinstance(node, Name):  # told by isinstance, as this runs for every name of a formula
        return names(node.name)
    if isinstance(node, Number):
        return arithmetic.constant(node.value, node.dimension)
    try:
        match node:
            case Operation(sign, left, Number(power)) if sign == "**":
                base: Any = evaluate(left, names, arithmetic)
                return cast(T, base**power)
            case Operation(sign, left, right):
                first = evaluate(left, names, arithmetic)
                return cast(T, _JOIN[sign](first, evaluate(right, names, arithmetic)))
            case Call(function, arguments):
                values = [evaluate(each, names, arithmetic) for each in arguments]
                return arithmetic.functions[function](*values)
            case Negative(operand):
                inner: Any = evaluate(operand, names, arithmetic)
                return cast(T, -inner)
    except DimensionError as error:
        raise FormulaError(str(error), node.offset) from error


def names_in(node: Expression) -> Iterator[Name]:
    """Yield every name of an expression, in the order of reading."""
    match node:
        case Name():
            yield node
        case Call(_, arguments):
            for argument in arguments:
                yield from names_in(argument)
        case Operation(_, left, right):
            yield from names_in(left)
            yield from names_in(right)
        case Negative(operand):
            yield from names_in(operand)


def with_names(formula: Formula, renamed: Callable[[str], str]) -> Formula:
    """Return the formula with its names exchanged, in text and tree alike."""
    return parse(_exchanged(formula, lambda name, _rest: renamed(name)), formula.span)


def with_numbers(formula: Formula, text_of: Callable[[str], str]) -> str:
    """Return the formula's text with the numbers put in, for a pocket calculator."""

    def number(name: str, rest: str) -> str:
        text = text_of(name)
        powered = rest.lstrip().startswith("**")
        return f"({text})" if powered or text.startswith(("-", "−")) else text

    return _exchanged(formula, number).strip()


def _inside(span: Span, offset: int) -> Span:
    """Return the place ``offset`` characters into a text; a text of many lines keeps its start."""
    if span.line != span.end_line:
        return span
    return replace(span, column=min(span.column + offset, span.end_column))


def _exchanged(formula: Formula, exchange: Callable[[str, str], str]) -> str:
    text = formula.text
    for found in sorted(names_in(formula.root), key=lambda each: -each.offset):
        before, rest = text[: found.offset], text[found.offset + len(found.name) :]
        text = before + exchange(found.name, rest) + rest
    return text


def _without_units(text: str) -> tuple[str, dict[int, Number]]:
    """Blank out every constant's unit, so that Python's parser keeps all columns.

    Returns the text and the constants by their column.
    """
    if len(text) > MOST_CHARACTERS:
        raise FormulaError(f"a formula has at most {MOST_CHARACTERS} characters", MOST_CHARACTERS)
    bare, literals, position = text, {}, 0
    while found := _NUMBER.search(text, position):
        offset = found.start()
        literal = _literal(text, offset)
        if literal is None:
            raise FormulaError("this is not a number such as 4.7 or 25 degC", offset)
        value, unit, position = literal
        literals[offset] = Number(value, unit.dimension, offset)
        bare = f"{bare[:offset]}0{' ' * (position - offset - 1)}{bare[position:]}"
    if foreign := _FOREIGN.search(bare):
        raise FormulaError(f"{foreign[0]!r} has no place in a formula", foreign.start())
    if parted := _PARTED.search(bare):
        raise FormulaError("a dotted name is written without blanks", parted.start())
    return bare, literals


def _literal(text: str, offset: int) -> tuple[float, Unit, int] | None:
    try:
        return literal_at(text, offset)
    except QuantityError as error:
        raise FormulaError(str(error), offset) from error


def _python_tree(bare: str) -> ast.expr:
    blanks = len(bare) - len(bare.lstrip())
    try:
        # A blank first bracket keeps the columns and lets a formula start with blanks.
        return ast.parse(f"({bare}\n)", mode="eval").body
    except SyntaxError as error:
        at_end = (error.lineno or 1) > 1
        offset = len(bare) if at_end else max(blanks, (error.offset or 1) - 2)
        raise FormulaError(
            "this is not a formula; something is missing or left over", offset
        ) from None
    except (RecursionError, MemoryError):
        raise FormulaError("this formula is nested too deeply", blanks) from None


def _copy(node: ast.expr, literals: Mapping[int, Number], depth: int = 0) -> Expression:
    """Copy what the language knows of Python's tree; refuse the rest at its column."""
    offset = max(0, node.col_offset - 1)  # the bracket around it all is not in the text
    if depth > MOST_DEPTH:
        raise FormulaError("this formula is nested too deeply", offset)

    def part(child: ast.expr) -> Expression:
        return _copy(child, literals, depth + 1)

    match node:
        case ast.Constant() if offset in literals:
            return literals[offset]
        case ast.Name() | ast.Attribute():
            return Name(_dotted(node), offset)
        case ast.UnaryOp(op=ast.USub(), operand=operand):
            return Negative(part(operand), offset)
        case ast.BinOp(left=left, op=sign, right=right) if type(sign) in _OPERATORS:
            return Operation(_OPERATORS[type(sign)], part(left), part(right), offset)
        case ast.Call(func=ast.Name(id=name), args=arguments, keywords=[]):
            if name not in NAMES:
                known = ", ".join(sorted(NAMES))
                raise FormulaError(f"there is no function {name}; there are {known}", offset)
            return Call(name, tuple(map(part, arguments)), offset)
    raise FormulaError(
        "a formula has numbers, names, + - * / **, brackets and the functions of the language",
        offset,
    )


def _dotted(node: ast.expr) -> str:
    match node:
        case ast.Name(id=name):
            return name
        case ast.Attribute(value=value, attr=attribute):
            return f"{_dotted(value)}.{attribute}"
    raise FormulaError("a name is words joined by dots", node.col_offset - 1)
