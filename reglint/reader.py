"""Reading a spec: from the document and its kind to typed values, or to complaints."""

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import replace
from datetime import date

from reglint import quantity
from reglint.absent import read_absent
from reglint.draft import Context, Draft
from reglint.errors import QuantityError
from reglint.figure import READERS, Misread, check_bounds
from reglint.kind import Field, Kind
from reglint.nearest import hint
from reglint.part import Part
from reglint.source import Complaint, Span
from reglint.spec import Spec, Term, Waiver
from reglint.tree import Document, Node, Scalar, find, plain, section
from reglint.tree import Mapping as MappingNode

#: The temperature at which components are stated.
_REFERENCE = 25.0


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
        read_absent(draft, one)
    _check_parts(draft)
    _check_items(draft)
    waivers = tuple(_waivers(draft))
    _widen(draft)
    distributions = dict(_distributions(draft))
    told = {each.span for each in unfit}
    complaints = [*unfit, *(each for each in draft.complaints if each.span not in told)]
    if complaints:
        return None, sorted(complaints, key=lambda each: each.span)
    _total(draft)
    return _spec(draft, waivers, distributions, context), []


def _spec(
    draft: Draft,
    waivers: tuple[Waiver, ...],
    distributions: Mapping[str, str],
    context: Context,
) -> Spec:
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
        distributions=distributions,
        purpose=texts.get("purpose", ""),
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
            READERS[one.role](draft, one, node)
        except Misread as error:
            draft.complain(one.path, str(error), error.node)
        except QuantityError as error:
            draft.complain(one.path, str(error), node)
    return node is not None


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
        check_bounds(one, sum(term.low for term in draft.swept[one.path]))
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


def _distributions(draft: Draft) -> Iterator[tuple[str, str]]:
    """Yield the distribution of each figure that states one; it must be a figure with a range."""
    known = {term.path for terms in draft.swept.values() for term in terms}
    for path, entry in section(draft.root, "distributions").entries.items():
        if path not in known:
            message = f"{path} is no figure with a range{hint(path, known)}"
            draft.complain("distributions", message, entry.key)
        elif isinstance(entry.value, Scalar):
            yield path, entry.value.text


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
