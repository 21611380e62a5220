"""Explanations: a rule, kind, quantity, field or policy in words, formulas and sources."""

from collections.abc import Iterator
from textwrap import fill

from reglint.circuit import without_policy
from reglint.errors import UsageError
from reglint.kind import Field, Kind, Quantity
from reglint.nearest import hint
from reglint.policy import PartClass, Policy
from reglint.quantity import render
from reglint.rule import Rule
from reglint.rulebook import Rulebook

_WIDTH = 96


def explain(name: str, book: Rulebook) -> str:
    """Return everything the rulebook says about a name, in every kind that knows it.

    Raises `UsageError` where nothing has the name.
    """
    texts = list(_found(name, book))
    if not texts:
        known = sorted(_known(book))
        raise UsageError(f"nothing is called {name}{hint(name, known)}")
    return "\n".join(texts)


def _found(name: str, book: Rulebook) -> Iterator[str]:
    if name in book.policy_names() and (policy := book.policy(name)):
        yield _lines(_policy(policy))
    for kind in _kinds(book):
        rules = book.rules(kind)
        if name == kind.name:
            yield _lines(_kind(kind, list(rules)))
        if name in rules:
            yield _lines(_rule(rules[name], kind))
        if name in kind.quantities:
            yield _lines(_quantity(kind.quantities[name], kind))
        if name in kind.fields:
            yield _lines(_field(kind.fields[name], kind))


def _kinds(book: Rulebook) -> Iterator[Kind]:
    yield from filter(None, map(book.kind, book.kind_names()))


def _known(book: Rulebook) -> Iterator[str]:
    yield from book.policy_names()
    for kind in _kinds(book):
        yield kind.name
        yield from (*book.rules(kind), *kind.quantities, *kind.fields)


def _lines(lines: Iterator[str]) -> str:
    return "".join(f"{line}\n" for line in lines)


def _said(label: str, text: str) -> str:
    """Return a labelled paragraph, its further lines indented under the first."""
    indent = " " * 12
    body = fill(" ".join(text.split()), _WIDTH, initial_indent=indent, subsequent_indent=indent)
    return f"  {label:<10}{body[12:]}"


def _rule(rule: Rule, kind: Kind) -> Iterator[str]:
    yield f"{rule.name}, a rule of {kind.name}: {rule.title}"
    condition = kind.conditions[rule.condition]
    holds = rule.holds
    yield _said("holds", f"{holds.value.text.strip()} {holds.sign} {holds.limit.text.strip()}")
    yield _said("under", f"{condition.name}: {condition.says}")
    if rule.relative_to is not None:
        yield _said("margin", f"relative to {rule.relative_to.text}")
    if rule.warn_margin:
        yield _said("warns", f"under a margin of {render(100 * rule.warn_margin, '1')} %")
    if rule.at_worst_warn:
        yield _said("at worst", "a warning, never a failure")
    if rule.optional:
        yield _said("skipped", "where the spec states no limit")
    yield _said("reason", rule.reason)
    yield _said("source", rule.source)
    yield _said("remedy", rule.remedy)
    yield _said("file", rule.file)


def _kind(kind: Kind, rules: list[str]) -> Iterator[str]:
    yield f"{kind.name}, a kind of regulator: {kind.title}"
    yield ""
    yield from (f"  {line}".rstrip() for line in kind.about.rstrip().splitlines())
    yield ""
    yield _said("source", kind.source)
    yield _said("fields", ", ".join(kind.fields))
    yield _said("follow", ", ".join(kind.quantities))
    yield _said("conditions", ", ".join(kind.conditions))
    yield _said("rules", ", ".join(rules))
    yield _said("file", kind.file)


def _quantity(quantity: Quantity, kind: Kind) -> Iterator[str]:
    yield f"{quantity.path}, a quantity of {kind.name} in {quantity.unit}: {quantity.says}"
    if quantity.symbol:
        yield _said("symbol", quantity.symbol)
    if quantity.formula is not None:
        yield _said("is", quantity.formula.text)
    for name, formula in quantity.given.items():
        yield _said("given", f"{name} = {formula.text}")
    if root := quantity.root:
        yield _said("is where", f"{root.falling.text} falls through zero")
        yield _said("between", f"{root.start.text}, and {root.end.text}")
        what = f"{root.otherwise.text}, where it is not positive at the start"
        yield _said("otherwise", what)
    reach = without_policy(kind).reach(quantity.path)
    yield _said("rests on", ", ".join(sorted(name for name in reach if name in kind.stated_names)))
    yield _said("source", kind.source)


def _field(field: Field, kind: Kind) -> Iterator[str]:
    unit = f" in {field.unit}" if field.unit else ""
    yield f"{field.path}, a field of {kind.name}{unit}: {field.says}"
    if field.symbol:
        yield _said("symbol", field.symbol)
    yield _said("role", field.role + (", required" if field.required else ""))
    if field.example:
        yield _said("example", field.example)
    if field.choices:
        yield _said("words", ", ".join(field.choices))
    for formula in field.otherwise:
        yield _said("otherwise", formula.text)
    if field.neglected:
        yield _said("otherwise", f"nothing, and {field.neglected.says}")


def _policy(policy: Policy) -> Iterator[str]:
    yield f"{policy.name}, a derating policy: {policy.title}"
    yield _said("about", policy.about)
    yield _said("source", policy.source)
    for part_class in policy.classes.values():
        yield from _part_class(part_class)
    yield _said("file", policy.file)


def _part_class(rows: PartClass) -> Iterator[str]:
    for name, allowance in rows.allowances.items():
        yield _said(rows.name, f"{name} = {allowance.formula.text}. {allowance.source}")
        for style, reason in allowance.not_covered.items():
            yield _said("", f"not for {style}: {reason}")
    for style, figures in rows.styles.items():
        if figures:
            listed = ", ".join(f"{name} {formula.text}" for name, formula in figures.items())
            yield _said("", f"{style}: {listed}")
