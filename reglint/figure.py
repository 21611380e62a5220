"""Reading one figure of a spec: a word, a number, or a range, by the role of its field."""

from collections.abc import Callable, Mapping
from dataclasses import replace

from reglint import quantity
from reglint.draft import Draft
from reglint.errors import QuantityError
from reglint.kind import Field
from reglint.quantity import Range
from reglint.spec import Term
from reglint.tree import Mapping as MappingNode
from reglint.tree import Node, Scalar, find


class Misread(Exception):  # noqa: N818 -- it carries a complaint to whoever knows the field
    """A figure inside a range that is no quantity, with its own place."""

    def __init__(self, message: str, node: Scalar) -> None:
        """Keep the sentence and the figure it is about."""
        super().__init__(message)
        self.node = node


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
        check_bounds(one, value)
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
        check_bounds(one, value)
        draft.numbers[f"{one.path}.{end}"] = value


def _read_swept(draft: Draft, one: Field, node: Node) -> None:
    """Read a range; a field that may be relative is tried as a ratio when its unit says so."""
    stated = _range(draft, one, node)
    if stated is None:
        return
    check_bounds(one, stated.min)
    path = one.path
    draft.swept[path] = (Term(path, stated.min, stated.nom, stated.max, _removable(draft, path)),)
    draft.numbers |= {
        f"{path}.nominal": stated.nom,
        f"{path}.min": stated.min,
        f"{path}.max": stated.max,
    }
    if stated.spread > 0.0:
        draft.numbers[f"{path}.tolerance"] = stated.spread


READERS: Mapping[str, Callable[[Draft, Field, Node], None]] = {
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
        ends = _ends(node, replace(one, unit=unit) if relative else one)
        stated = quantity.range_of(ends.get("min"), ends.get("nom"), ends.get("max"), unit)
        if "nom" not in ends and not stated.exact:
            draft.assume(one.path, "nominal taken as the middle, ", stated.nom, unit)
    else:
        return None
    return _of_whole(draft, one, stated) if relative else stated


def _ends(node: MappingNode, one: Field) -> dict[str, float]:
    """Return the stated ends of a range written as a mapping."""
    ends = {}
    for end, entry in node.entries.items():
        if end in ("min", "nom", "max") and isinstance(entry.value, Scalar):
            try:
                ends[end] = quantity.parse(entry.value.text, one.unit, code=one.codes)
            except QuantityError as error:
                raise Misread(str(error), entry.value) from error
    return ends


def _is_ratio(node: Node) -> bool:
    """Tell whether a coefficient is stated in %/K or ppm/K."""
    texts = [node] if isinstance(node, Scalar) else []
    if isinstance(node, MappingNode):
        texts = [entry.value for entry in node.entries.values() if isinstance(entry.value, Scalar)]
    return any("%" in each.text or "ppm" in each.text for each in texts)


def _of_whole(draft: Draft, one: Field, ratio: Range) -> Range | None:
    """Turn a coefficient in 1/K into one of the whole it is a fraction of, never narrower."""
    terms = draft.swept.get(one.relative_to)
    if terms is None and draft.lacks_its_part(one.path):
        return None
    if terms is None:
        raise QuantityError(f"a coefficient in %/K needs {one.relative_to} to be stated")
    (whole,) = terms
    products = [end * of for end in (ratio.min, ratio.max) for of in (whole.low, whole.high)]
    return Range(min(products), ratio.nom * whole.nominal, max(products))


def check_bounds(one: Field, least: float) -> None:
    """Raise `QuantityError` where a field's least value is below what the field allows."""
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
