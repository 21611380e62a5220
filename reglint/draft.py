"""Reading a spec: from the document and its kind to typed values, or to complaints."""

import math
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from datetime import date

import numpy as np

from reglint import quantity
from reglint.errors import QuantityError
from reglint.formula import Formula, Number, evaluate, names_in
from reglint.functions import REAL
from reglint.kind import Field, Kind
from reglint.part import Part
from reglint.quantity import Range
from reglint.source import Complaint, Span
from reglint.spec import Assumption, Spec, Term, Waiver
from reglint.tree import Document, Node, Scalar, find, plain, section, span_of
from reglint.tree import Mapping as MappingNode

#: The temperature at which components are stated.
_REFERENCE = 25.0


@dataclass(slots=True)
class Draft:
    """A spec in the making: values as they are read, and everything wrong with them."""

    root: MappingNode
    kind: Kind
    parts: Mapping[str, Part]
    numbers: dict[str, float] = field(default_factory=dict)
    swept: dict[str, tuple[Term, ...]] = field(default_factory=dict)
    texts: dict[str, str] = field(default_factory=dict)
    origins: dict[str, str] = field(default_factory=dict)
    assumptions: list[Assumption] = field(default_factory=list)
    neglected: dict[str, str] = field(default_factory=dict)
    complaints: list[Complaint] = field(default_factory=list)

    def complain(self, path: str, message: str, at: Node | None = None) -> None:
        """Note what is wrong with a field, at its value or where its part is named."""
        component = path.split(".", maxsplit=1)[0]
        if path in self.origins:
            where = f" (from {self.origins[path]}{f', line {at.span.line}' if at else ''})"
            span = span_of(self.root, (component, "part"))
            self.complaints.append(Complaint(span, f"{path}: {message}{where}"))
        else:
            span = at.span if at is not None else span_of(self.root, path.split("."))
            self.complaints.append(Complaint(span, f"{path}: {message}"))

    def assume(self, path: str, says: str) -> None:
        """Note what was taken for a figure the spec does not state."""
        self.assumptions.append(Assumption(path, says))


class _Misread(Exception):  # noqa: N818 -- it carries a complaint to whoever knows the field
    """A figure inside a range that is no quantity, with its own place."""

    def __init__(self, message: str, node: Scalar) -> None:
        super().__init__(message)
        self.node = node


@dataclass(frozen=True, slots=True)
class Context:
    """What reading a spec needs to know beside the document and its kind."""

    #: The file's path as it is shown.
    file: str
    #: The derating policy of specs that name none.
    policy: str
    #: A part by name, or the sentence that says why there is none.
    find_part: Callable[[str], Part | str]


def read_spec(
    document: Document, kind: Kind, context: Context, unfit: Sequence[Complaint]
) -> tuple[Spec | None, list[Complaint]]:
    """Read one spec as far as it goes; there is none where anything is wrong with it.

    ``unfit`` is what its schema has said already; it is said again in the complaints
    returned, in order of place and without repetition.
    """
    draft = Draft(document.root, kind, {})
    draft.parts = dict(_parts(draft, context.find_part))
    fields = [one for each in kind.fields.values() for one in _expanded(draft, each)]
    absent = [one for one in fields if not _read_stated(draft, one)]
    # What stands in for a field may need others, so all that is stated comes first.
    for one in absent:
        _read_absent(draft, one)
    _check_parts(draft)
    _check_items(draft)
    waivers = tuple(_waivers(draft))
    _widen(draft)
    told = {each.span for each in unfit}
    complaints = [*unfit, *(each for each in draft.complaints if each.span not in told)]
    if complaints:
        return None, sorted(complaints, key=lambda each: each.span)
    _total(draft)
    return _spec(draft, waivers, context), []


def _spec(draft: Draft, waivers: tuple[Waiver, ...], context: Context) -> Spec:
    texts = plain(draft.root)
    components = draft.kind.components
    styles = {name: draft.texts.get(f"{name}.style", "") for name in components}
    return Spec(
        file=context.file,
        root=draft.root,
        kind=draft.kind,
        name=texts["name"],
        derating=texts.get("derating", context.policy),
        styles=styles,
        numbers=draft.numbers,
        swept=draft.swept,
        texts=draft.texts,
        origins=draft.origins,
        assumptions=tuple(draft.assumptions),
        neglected=draft.neglected,
        waivers=waivers,
    )


def _parts(draft: Draft, find_part: Callable[[str], Part | str]) -> Iterator[tuple[str, Part]]:
    """Yield the part of each component that names one; note each component's words."""
    for component in draft.kind.components.values():
        for word in ("ref", "part", "style"):
            node = find(draft.root, (component.name, word))
            if isinstance(node, Scalar):
                draft.texts[f"{component.name}.{word}"] = node.text
        name = draft.texts.get(f"{component.name}.part")
        if name is None:
            continue
        path, part = f"{component.name}.part", find_part(name)
        if isinstance(part, str):
            draft.complain(path, part)
        elif part.part_class != component.part_class:
            draft.complain(path, f"{name} is a {part.part_class}, not a {component.part_class}")
        else:
            yield component.name, part


def _check_parts(draft: Draft) -> None:
    """Complain about fields of a part that the component does not have."""
    for component, part in draft.parts.items():
        for name in part.field_names():
            if f"{component}.{name}" not in draft.kind.fields:
                draft.complain(f"{component}.part", f"{part.file} states {name}, which is no field")


def _check_items(draft: Draft) -> None:
    """Complain about named items that state none of the figures a total is made of."""
    wanted: dict[str, list[str]] = {}
    for total in draft.kind.totals.values():
        group, _, name = total.of.split(".")
        wanted.setdefault(group, []).append(name)
    for group, names in wanted.items():
        for item, entry in section(draft.root, group).entries.items():
            stated = entry.value.entries if isinstance(entry.value, MappingNode) else names
            if not any(name in stated for name in names):
                draft.complain(f"{group}.{item}", f"state {' or '.join(names)}")


def _stated(draft: Draft, path: str) -> Node | None:
    """Return the node that states a field: the spec's own, or its part's."""
    component, _, name = path.partition(".")
    node = find(draft.root, path.split("."))
    if node is None and (part := draft.parts.get(component)):
        node = part.field(name)
        if node is not None:
            draft.origins[path] = f"part {part.name}, {part.file}"
    return node


def _expanded(draft: Draft, one: Field) -> Iterator[Field]:
    """Yield a field; one of named items once for every item, in the order of the spec."""
    if "*" not in one.path:
        yield one
        return
    group, _, name = one.path.split(".")
    node = find(draft.root, (group,))
    if isinstance(node, MappingNode):
        for item in node.entries:
            yield replace(one, path=f"{group}.{item}.{name}")


def _read_stated(draft: Draft, one: Field) -> bool:
    """Read a field where it is stated; tell whether it is."""
    node = _stated(draft, one.path)
    if node is not None:
        try:
            _READERS[one.role](draft, one, node)
        except _Misread as error:
            draft.complain(one.path, str(error), error.node)
        except QuantityError as error:
            draft.complain(one.path, str(error), node)
    return node is not None


def _read_text(draft: Draft, one: Field, node: Node) -> None:
    if isinstance(node, Scalar):
        draft.texts[one.path] = node.text


def _read_choice(draft: Draft, one: Field, node: Node) -> None:
    choices = one.choices or {}
    if isinstance(node, Scalar) and node.text in choices:
        draft.texts[one.path] = node.text
        draft.numbers[one.path] = choices[node.text]
    elif one.path in draft.origins:
        raise QuantityError(f"write one of {', '.join(choices)}")


def _read_number(draft: Draft, one: Field, node: Node) -> None:
    if isinstance(node, Scalar):
        value = quantity.parse(node.text, one.unit, code=one.codes)
        _check_bounds(one, value)
        draft.numbers[one.path] = value
    elif one.path in draft.origins:
        raise QuantityError("a single figure is wanted")


def _read_limits(draft: Draft, one: Field, node: Node) -> None:
    """Read what may state a least, a most, or both."""
    ends: dict[str, float] = {}
    if isinstance(node, Scalar):
        stated = quantity.parse_range(node.text, one.unit)
        ends = {"min": stated.min, "max": stated.max}
    elif isinstance(node, MappingNode):
        ends = _ends(node, one)
        if len(ends) > 1:
            quantity.range_of(ends.get("min"), None, ends.get("max"), one.unit)
    for end, value in ends.items():
        _check_bounds(one, value)
        draft.numbers[f"{one.path}.{end}"] = value


def _read_swept(draft: Draft, one: Field, node: Node) -> None:
    """Read a range; a field that may be relative is tried as a ratio when its unit says so."""
    stated = _range(draft, one, node)
    if stated is None:
        return
    _check_bounds(one, stated.min)
    path = one.path
    draft.swept[path] = (Term(path, stated.min, stated.nom, stated.max, _removable(draft, path)),)
    draft.numbers |= {
        f"{path}.nominal": stated.nom,
        f"{path}.min": stated.min,
        f"{path}.max": stated.max,
    }
    if stated.spread > 0.0:
        draft.numbers[f"{path}.tolerance"] = stated.spread


_READERS: Mapping[str, Callable[[Draft, Field, Node], None]] = {
    "text": _read_text,
    "choice": _read_choice,
    "rating": _read_number,
    "limit": _read_number,
    "limits": _read_limits,
    "swept": _read_swept,
}


def _range(draft: Draft, one: Field, node: Node) -> Range | None:
    relative = bool(one.relative_to) and _is_ratio(node)
    unit = "1/K" if relative else one.unit
    if isinstance(node, Scalar):
        stated = quantity.parse_range(node.text, unit, code=one.codes)
        if stated.exact and one.single_is_maximum:
            stated = quantity.range_of(0.0, None, stated.max, unit)
            draft.assume(one.path, "a single figure is a maximum: swept from zero")
    elif isinstance(node, MappingNode):
        ends = _ends(node, replace(one, unit=unit))
        stated = quantity.range_of(ends.get("min"), ends.get("nom"), ends.get("max"), unit)
        if "nom" not in ends and not stated.exact:
            _say_middle(draft, replace(one, unit=unit), stated)
    else:
        return None
    return _of_whole(draft, one, stated) if relative else stated


def _say_middle(draft: Draft, one: Field, stated: Range) -> None:
    nominal = quantity.render(stated.nom, one.unit)
    draft.assume(one.path, f"nominal taken as the middle, {nominal}")


def _ends(node: MappingNode, one: Field) -> dict[str, float]:
    """Return the stated ends of a range written as a mapping."""
    ends = {}
    for end, entry in node.entries.items():
        if end in ("min", "nom", "max") and isinstance(entry.value, Scalar):
            try:
                ends[end] = quantity.parse(entry.value.text, one.unit, code=one.codes)
            except QuantityError as error:
                raise _Misread(str(error), entry.value) from error
    return ends


def _is_ratio(node: Node) -> bool:
    """Tell whether a coefficient is stated in %/K or ppm/K."""
    texts = [node] if isinstance(node, Scalar) else []
    if isinstance(node, MappingNode):
        texts = [entry.value for entry in node.entries.values() if isinstance(entry.value, Scalar)]
    return any("%" in each.text or "ppm" in each.text for each in texts)


def _of_whole(draft: Draft, one: Field, ratio: Range) -> Range:
    """Turn a coefficient in 1/K into one of the whole it is a fraction of, never narrower."""
    terms = draft.swept.get(one.relative_to)
    if terms is None:
        raise QuantityError(f"a coefficient in %/K needs {one.relative_to} to be stated")
    (whole,) = terms
    products = [end * of for end in (ratio.min, ratio.max) for of in (whole.low, whole.high)]
    return Range(min(products), ratio.nom * whole.nominal, max(products))


def _check_bounds(one: Field, least: float) -> None:
    if one.above is not None and least <= one.above:
        bound = quantity.render(one.above, one.unit)
        raise QuantityError(f"{quantity.render(least, one.unit)} must be more than {bound}")
    if one.at_least is not None and least < one.at_least:
        bound = quantity.render(one.at_least, one.unit)
        raise QuantityError(f"{quantity.render(least, one.unit)} must be at least {bound}")


def _removable(draft: Draft, path: str) -> bool:
    """Tell whether the named item that a field belongs to can be absent."""
    *item, _name = path.split(".")
    flag = find(draft.root, (*item, "removable"))
    return len(item) > 1 and not (isinstance(flag, Scalar) and flag.text == "false")


def _read_absent(draft: Draft, one: Field) -> None:
    """Take what stands in for a field that is not stated, and say so."""
    component = one.path.split(".")[0]
    if one.required:
        if component in draft.parts:
            name = draft.parts[component].name
            draft.complain(one.path, f"is missing, and part {name} does not state it either")
        return
    if one.choices and one.default:
        draft.numbers[one.path] = one.choices[one.default]
        return
    for formula in one.otherwise:
        if _derive(draft, one, formula):
            return
    if one.neglected is not None:
        _neglect(draft, one)


def _derive(draft: Draft, one: Field, formula: Formula) -> bool:
    """Try a formula for a field not stated; tell whether it has a value."""
    if not all(each.name in draft.numbers for each in names_in(formula.root)):
        return False
    with np.errstate(all="ignore"):
        value = float(evaluate(formula.root, lambda n: np.asarray(draft.numbers[n]), REAL))
    if not math.isfinite(value):
        return False
    draft.numbers[one.path] = value
    source = "" if isinstance(formula.root, Number) else f"{formula.text} = "
    draft.assume(one.path, f"not stated, taken as {source}{quantity.render(value, one.unit)}")
    return True


def _neglect(draft: Draft, one: Field) -> None:
    assert one.neglected is not None  # noqa: S101 -- the caller's question
    value = one.neglected.value
    if one.role == "swept":
        draft.swept[one.path] = (Term(one.path, value, value, value),)
    else:
        draft.numbers[one.path] = value
    draft.neglected[one.path] = one.neglected.says
    draft.assume(one.path, f"not stated: {one.neglected.says}")


def _widen(draft: Draft) -> None:
    """Add drift with temperature and ageing to the ranges they widen (extreme values)."""
    ambient = draft.swept.get("ambient", ())
    distance = max((abs(end - _REFERENCE) for t in ambient for end in (t.low, t.high)), default=0.0)
    reach = {"tempco": distance, "ageing": 1.0}
    for one in draft.kind.fields.values():
        for influence, path in (one.widened_by or {}).items():
            if one.path in draft.swept and path in draft.numbers:
                (stated, *_) = draft.swept[one.path]
                most = abs(stated.nominal) * draft.numbers[path] * reach[influence]
                draft.swept[one.path] += (Term(path, -most, 0.0, most),)
        if one.widened_by and one.path in draft.swept:
            _check_widened(draft, one)


def _check_widened(draft: Draft, one: Field) -> None:
    try:
        _check_bounds(one, sum(term.low for term in draft.swept[one.path]))
    except QuantityError as error:
        draft.complain(one.path, f"with drift and ageing, {error}")


def _total(draft: Draft) -> None:
    """Sum named items into totals, and note the least and the most a total can be."""
    for total in draft.kind.totals.values():
        group, _, name = total.of.split(".")
        terms = [t for path, each in draft.swept.items() for t in each if _is(path, group, name)]
        if total.inverse:
            terms = [
                replace(t, low=1 / t.high, nominal=1 / t.nominal, high=1 / t.low) for t in terms
            ]
        draft.swept[total.path] = tuple(terms)
        fixed = [t for t in terms if not t.removable]
        draft.numbers[f"{total.path}.least"] = sum(t.low for t in fixed)
        draft.numbers[f"{total.path}.most"] = sum(t.high for t in terms)


def _is(path: str, group: str, name: str) -> bool:
    return path.startswith(f"{group}.") and path.endswith(f".{name}") and path.count(".") > 1


def _waivers(draft: Draft) -> Iterator[Waiver]:
    node = find(draft.root, ("waivers",))
    if isinstance(node, MappingNode):
        for rule, entry in node.entries.items():
            waiver = _waiver(draft, rule, entry.key.span, entry.value)
            if waiver is not None:
                yield waiver


def _waiver(draft: Draft, rule: str, span: Span, node: Node) -> Waiver | None:
    texts = plain(node)
    if not isinstance(texts, dict) or not {"reason", "approved_by", "until"} <= texts.keys():
        return None  # the schema says so
    path, worst = f"waivers.{rule}", texts.get("no_worse_than")
    try:
        until = date.fromisoformat(texts["until"])
        least = None if worst is None else quantity.parse(worst, "1")
    except ValueError:
        draft.complain(
            f"{path}.until", f"{texts['until']} is no date; write one such as 2027-06-30"
        )
    except QuantityError as error:
        draft.complain(f"{path}.no_worse_than", str(error))
    else:
        return Waiver(rule, texts["reason"], texts["approved_by"], until, least, span)
    return None
