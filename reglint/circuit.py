"""A kind of regulator under a derating policy: every name its formulas may use."""

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property

from reglint.formula import Formula, Number, names_in, with_names
from reglint.kind import Component, Kind, Quantity
from reglint.policy import Allowance, PartClass, Policy


@dataclass(frozen=True)
class Circuit:
    """A kind with what a policy allows its parts, as quantities among the kind's own."""

    kind: Kind
    policy: Policy
    quantities: Mapping[str, Quantity]
    #: Allowances the policy has no figure for, and why.
    not_covered: Mapping[str, str]

    @cached_property
    def _reach(self) -> Mapping[str, frozenset[str]]:
        return _closure({path: _direct(each) for path, each in self.quantities.items()})

    def reach(self, name: str) -> frozenset[str]:
        """Return every name that a name depends on, itself included."""
        return self._reach.get(name) or frozenset((name,))

    def needed(self, formulas: Iterable[Formula], fixes: Mapping[str, Formula]) -> frozenset[str]:
        """Return every name some formulas need, where an operating condition fixes others."""
        found: set[str] = set()
        ahead = {name for formula in formulas for name in _names(formula)}
        while ahead:
            name = ahead.pop()
            found.add(name)
            if name in fixes:
                ahead |= _names(fixes[name]) - found
            elif name in self.quantities:
                ahead |= _direct(self.quantities[name]) - found
        return frozenset(found)

    def reach_of(self, formula: Formula) -> frozenset[str]:
        """Return every name a formula depends on."""
        return frozenset().union(*(self.reach(each.name) for each in names_in(formula.root)))


def under(kind: Kind, policy: Policy, styles: Mapping[str, str]) -> Circuit:
    """Join a kind and a policy; ``styles`` gives each component's style, where stated."""
    quantities = dict(kind.quantities)
    not_covered = {}
    for component in kind.components.values():
        rows = policy.classes.get(component.part_class)
        style = styles.get(component.name, "")
        for name, unit in component.allowances.items():
            path = f"{component.name}.{name}"
            allowance = rows.allowances.get(name) if rows else None
            if rows is None or allowance is None:
                not_covered[path] = f"{policy.name} has no figure for it"
            elif reason := allowance.not_covered.get(rows.style(style)):
                not_covered[path] = f"{policy.name}: {reason}"
            else:
                quantities[path] = _allowed(kind, component, rows, style, allowance, unit)
    return Circuit(kind, policy, quantities, not_covered)


def unit_of(circuit: Circuit, name: str) -> str:
    """Return the unit a name's value is in."""
    base = name.rpartition(".")[0]
    if name.endswith(".tolerance"):
        return "1"
    for known in (circuit.quantities, circuit.kind.totals, circuit.kind.fields):
        for each in (name, base):
            if each in known:
                return known[each].unit or "1"
    return "1"


def without_policy(kind: Kind) -> Circuit:
    """Return a kind alone, for checks that concern no policy."""
    return under(kind, Policy("none stated", "", "", "", {}, ""), {})


def _allowed(
    kind: Kind, component: Component, rows: PartClass, style: str, allowance: Allowance, unit: str
) -> Quantity:
    """Return an allowance in the kind's own names, its style's figures put in."""
    figures = rows.styles.get(rows.style(style), {})
    own = kind.stated_names.keys() | kind.quantities.keys() | component.paths()

    def in_kind(name: str) -> str:
        figure = figures.get(name.removeprefix("style."))
        if figure is not None:
            text = with_names(figure, in_kind).text
            return text if isinstance(figure.root, Number) else f"({text})"
        return f"{component.name}.{name}" if f"{component.name}.{name}" in own else name

    return Quantity(
        path=f"{component.name}.{allowance.name}",
        unit=unit,
        says=f"What the derating policy allows. {allowance.source}".strip(),
        formula=with_names(allowance.formula, in_kind),
    )


def _direct(quantity: Quantity) -> frozenset[str]:
    """Return the names a quantity's formulas mention."""
    return frozenset(name for formula in _formulas(quantity) for name in _names(formula))


def _names(formula: Formula) -> frozenset[str]:
    return frozenset(name.name for name in names_in(formula.root))


def _formulas(quantity: Quantity) -> Iterator[Formula]:
    if quantity.formula is not None:
        yield quantity.formula
    if quantity.root is not None:
        root = quantity.root
        yield from (root.falling, root.start, root.end, root.otherwise)
    yield from quantity.given.values()


def _closure(direct: Mapping[str, frozenset[str]]) -> dict[str, frozenset[str]]:
    """Return the names reached from each name; equations make the graph cyclic."""
    reach = {name: names | {name} for name, names in direct.items()}
    grown = True
    while grown:
        grown = False
        for name, names in reach.items():
            wider = names.union(*(reach.get(other, frozenset()) for other in names))
            if len(wider) > len(names):
                reach[name], grown = wider, True
    return reach
