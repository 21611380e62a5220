"""Causes: what differs between two readings of a spec, and so may have moved its margins."""

from collections.abc import Iterator, Mapping

from reglint.comparison import Cause
from reglint.judge import Case
from reglint.quantity import render
from reglint.rule import Rule
from reglint.spec import Spec
from reglint.tree import Mapping as MappingNode
from reglint.tree import Node, Scalar

#: What a spec states beside figures; a name is what specs are told apart by.
_BESIDE = ("waivers", "name", "purpose", "distributions")
#: What of a spec its verdict depends on.
_DECIDING = ("numbers", "swept", "texts", "styles", "origins", "derating", "neglected")


def causes(before: Case, after: Case) -> Iterator[Cause]:
    """Yield what changed in a spec, in the parts it takes figures from, and in what judges it."""
    if before.spec.file != after.spec.file:
        yield Cause("file", before.spec.file, after.spec.file, after.spec.file, after.spec.line)
    yield from _stated(before.spec, after.spec)
    yield from _taken(before.spec, after.spec)
    was, now = before.spec.derating, after.spec.derating
    if was != now and not after.spec.states("derating"):
        yield Cause("derating", was, now, after.circuit.policy.file, 0)
    yield from _formulas(before, after)
    yield from _rules(before.rules, after.rules)


def alike(before: Case, after: Case) -> bool:
    """Tell whether two readings of a spec can only come to the same verdict."""
    one, other = before.spec, after.spec
    figures = all(getattr(one, name) == getattr(other, name) for name in _DECIDING)
    waived = [each.terms for each in one.waivers] == [each.terms for each in other.waivers]
    judged = any(_formulas(before, after)) or any(_rules(before.rules, after.rules))
    return figures and waived and not judged


def _stated(before: Spec, after: Spec) -> Iterator[Cause]:
    """Yield the texts of a spec that changed, are new or gone."""
    old, new = (dict(_leaves(each.root)) for each in (before, after))
    for path in [*new, *(each for each in old if each not in new)]:
        (was, _), (now, line) = old.get(path, ("", 0)), new.get(path, ("", 0))
        if was != now and path.split(".")[0] not in _BESIDE:
            yield Cause(path, was, now, after.file if line else before.file, line)


def _leaves(node: Node, path: str = "") -> Iterator[tuple[str, tuple[str, int]]]:
    """Yield the dotted path of every scalar with its text and line."""
    if isinstance(node, MappingNode):
        for key, entry in node.entries.items():
            yield from _leaves(entry.value, f"{path}.{key}" if path else key)
    elif isinstance(node, Scalar):
        yield path, (node.text, node.span.line)


def _taken(before: Spec, after: Spec) -> Iterator[Cause]:
    """Yield the figures that a spec takes from the same part as before, and that changed there."""
    for path, origin in after.origins.items():
        part = f"{path.partition('.')[0]}.part"
        was, now = (_figure(each, path) for each in (before, after))
        same_part = path in before.origins and before.texts.get(part) == after.texts.get(part)
        if same_part and was != now:
            yield Cause(path, was, now, origin, 0)


def _figure(spec: Spec, path: str) -> str:
    """Return a figure in words: a number, or a range."""
    field = spec.kind.field(path)
    if field is None or not field.unit:
        return str(spec.texts.get(path, spec.numbers.get(path, "")))
    if path in spec.swept:
        term = spec.swept[path][0]
        ends = (render(each, field.unit) for each in (term.low, term.high))
        return " to ".join(dict.fromkeys(ends))
    return render(spec.numbers[path], field.unit) if path in spec.numbers else ""


def _formulas(before: Case, after: Case) -> Iterator[Cause]:
    """Yield the quantities of a kind or policy that are computed in another way."""
    if before.circuit is after.circuit:
        return
    old, new = (dict(_texts(each)) for each in (before, after))
    file = after.circuit.policy.file
    for path in sorted(old.keys() | new.keys()):
        if old.get(path) != new.get(path):
            at = after.circuit.kind.file if path in after.circuit.kind.quantities else file
            yield Cause(path, old.get(path, ""), new.get(path, ""), at, 0)


def _texts(case: Case) -> Iterator[tuple[str, str]]:
    """Yield how each quantity is computed, and what each operating condition fixes."""
    for path, each in case.circuit.quantities.items():
        root = each.root
        ways = [root.falling, root.start, root.end, root.otherwise] if root else [each.formula]
        texts = [way.text.strip() for way in ways if way]
        given = [f"{name} = {to.text.strip()}" for name, to in each.given.items()]
        yield path, "; ".join(texts + given)
    for condition in case.circuit.kind.conditions.values():
        for name, formula in condition.fixes.items():
            yield f"{name} under {condition.name}", formula.text.strip()


def _rules(before: Mapping[str, Rule], after: Mapping[str, Rule]) -> Iterator[Cause]:
    for name in sorted(before.keys() | after.keys()):
        was, now = (_demand(each.get(name)) for each in (before, after))
        if was != now:
            found = after.get(name) or before[name]
            yield Cause(f"rule {name}", was, now, found.file, 0)


def _demand(rule: Rule | None) -> str:
    """Return what a rule demands, in words."""
    if rule is None:
        return ""
    holds, of = rule.holds, rule.relative_to
    words = [f"{holds.value.text.strip()} {holds.sign} {holds.limit.text.strip()}"]
    words += [f"under {rule.condition}", f"reserve {100.0 * rule.warn_margin:g} %"]
    words += [f"of {of.text.strip()}"] if of else []
    words += ["a warning at worst"] if rule.at_worst_warn else []
    words += ["skipped where not stated"] if rule.optional else []
    words += [f"needs {', '.join(rule.needs)}"] if rule.needs else []
    return ", ".join(words)
