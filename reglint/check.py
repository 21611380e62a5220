"""The check of every formula when its file is read: names that exist, dimensions that fit."""

from collections.abc import Iterator, Mapping

from reglint import quantity
from reglint.circuit import Circuit, without_policy
from reglint.declared import Curves
from reglint.dimension import Dimension
from reglint.errors import FormulaError
from reglint.formula import Formula, Name, Number, evaluate, names_in
from reglint.functions import DIMENSIONS
from reglint.kind import Kind, Quantity
from reglint.nearest import hint
from reglint.rule import Rule
from reglint.source import Complaint
from reglint.values import Values

Names = Mapping[str, Dimension]


def names_of(kind: Kind) -> Names:
    """Return every name a rule may use, with its dimension."""
    units = {path: each.unit for path, each in kind.quantities.items()}
    for component in kind.components.values():
        units |= {f"{component.name}.{key}": unit for key, unit in component.allowances.items()}
    return {**kind.stated_names, **{n: quantity.unit(u).dimension for n, u in units.items()}}


def check_kind(kind: Kind) -> Iterator[Complaint]:
    """Yield what is wrong with the formulas of a kind."""
    circuit = without_policy(kind)
    names = names_of(kind)
    complaints = [each for one in kind.quantities.values() for each in _quantity(one, names)]
    for condition in kind.conditions.values():
        for name, formula in condition.fixes.items():
            complaints += _formula(formula, names, names.get(name))
    for field in kind.fields.values():
        for formula in field.otherwise:
            complaints += _formula(formula, kind.stated_names, names[field.path])
    for curves in kind.pictures.curves.values():
        complaints += _curves(curves, kind, names)
    for area in kind.pictures.areas.values():
        complaints += [*_axis(area.across, kind, names), *_axis(area.up, kind, names)]
    yield from complaints or _loops(circuit, names)


def check_allowances(circuit: Circuit) -> Iterator[Complaint]:
    """Yield what is wrong with a policy's formulas when a kind's names are put in."""
    names = names_of(circuit.kind)
    for path, one in circuit.quantities.items():
        if path not in circuit.kind.quantities:
            yield from _quantity(one, names)


def check_rule(rule: Rule, kind: Kind) -> Iterator[Complaint]:
    """Yield what is wrong with a rule's demand, condition and names."""
    names = names_of(kind)
    value, limit = rule.holds.value, rule.holds.limit
    complaints = [*_formula(value, names), *_formula(limit, names)]
    yield from complaints
    if not complaints:
        yield from _formula(limit, names, evaluate(value.root, names.__getitem__, DIMENSIONS))
    if rule.relative_to is not None:
        yield from _formula(rule.relative_to, names)
    yield from _words(rule, kind)


def _quantity(one: Quantity, names: Names) -> Iterator[Complaint]:
    wanted = names[one.path]
    for name, formula in one.given.items():
        yield from _formula(formula, names, names.get(name))
    if one.formula is not None:
        yield from _formula(one.formula, names, wanted)
    if one.root is not None:
        yield from _formula(one.root.falling, names)
        for end in (one.root.start, one.root.end, one.root.otherwise):
            yield from _formula(end, names, wanted)
        if not isinstance(one.root.otherwise.root, Number):
            # A proof takes it that an unknown which is off stays where it is.
            yield one.root.otherwise.complaint(FormulaError("write a constant here"))


def _formula(
    formula: Formula, names: Names, wanted: Dimension | None = None
) -> Iterator[Complaint]:
    """Yield the unknown names of a formula; where all are known, what its dimensions spoil."""
    unknown = [each for each in names_in(formula.root) if each.name not in names]
    for each in unknown:
        message = f"there is no field or quantity {each.name}{hint(each.name, names)}"
        yield formula.complaint(FormulaError(message, each.offset))
    if unknown:
        return
    try:
        found = evaluate(formula.root, names.__getitem__, DIMENSIONS)
    except FormulaError as error:
        yield formula.complaint(error)
        return
    if wanted is not None and found != wanted:
        yield formula.complaint(FormulaError(f"this is in {found}, but {wanted} is wanted"))


def _curves(one: Curves, kind: Kind, names: Names) -> Iterator[Complaint]:
    """Yield what keeps curves from being drawn: unknown names, axes of several dimensions."""
    if one.condition not in kind.conditions:
        known = hint(one.condition, kind.conditions)
        yield one.band.complaint(
            FormulaError(f"{kind.name} has no condition {one.condition}{known}")
        )
    if not (isinstance(one.free.root, Name) and one.free.root.name in kind.quantities):
        yield one.free.complaint(FormulaError("one quantity is wanted here, by its name"))
        return
    up = names[one.free.root.name]
    complaints = [each for end in (one.start, one.end) for each in _formula(end, names, up)]
    complaints += _formula(one.band, names)
    yield from complaints
    if not complaints:
        across = evaluate(one.band.root, names.__getitem__, DIMENSIONS)
        yield from _formula(one.lines, names, across)
        for mark in one.marks:
            in_up = not list(_formula(mark, names, up))
            yield from () if in_up else _formula(mark, names, across)


def _axis(one: Formula, kind: Kind, names: Names) -> Iterator[Complaint]:
    """Yield what keeps a name from spanning an area: it must be a range a spec states."""
    yield from (complaints := list(_formula(one, names)))
    swept = {path for path, field in kind.fields.items() if field.role == "swept"}
    spans = isinstance(one.root, Name) and one.root.name in swept | kind.totals.keys()
    if not complaints and not spans:
        yield one.complaint(FormulaError("one swept field or total is wanted here, by its name"))


def _loops(circuit: Circuit, names: Names) -> Iterator[Complaint]:
    given = {name: of for name, of in names.items() if name not in circuit.quantities}
    for one in circuit.quantities.values():
        try:
            Values(circuit, DIMENSIONS, given)(one.path)
        except FormulaError as error:
            formula = one.root.falling if one.root else one.formula
            if formula is not None:
                yield formula.complaint(error)


def _words(rule: Rule, kind: Kind) -> Iterator[Complaint]:
    """Yield the condition and field names of a rule that its kind does not have."""
    known = {"condition": kind.conditions, "field": kind.fields}
    asked = [("condition", rule.condition), ("field", rule.point_at)]
    asked += [("field", path) for path in (*rule.needs, *rule.counts_on, *rule.adjust)]
    for what, name in asked:
        if name not in known[what]:
            message = f"{kind.name} has no {what} {name}{hint(name, known[what])}"
            yield rule.holds.value.complaint(FormulaError(message))
