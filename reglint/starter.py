"""A commented spec to fill in: the kind's sample with every field explained."""

from collections.abc import Iterator

from reglint.kind import Field, Kind
from reglint.tree import Mapping as MappingNode
from reglint.tree import Node, Scalar, one_line

_COMPONENT = {
    "ref": "Reference designator (IEEE 315).",
    "part": "Part whose data fill in what is not stated here.",
    "style": "Style or use by which a derating policy tells parts.",
}


def starter(kind: Kind) -> str:
    """Return a spec of the kind's sample values, each line with what it means.

    Fields the sample does not state are there as comments with their examples.
    """
    lines = [f"# {kind.title}. The values are a sample: put in your own."]
    lines += [f"# {line}".rstrip() for line in kind.about.rstrip().splitlines()]
    for key, entry in kind.sample.entries.items():
        lines += _top(kind, key, entry.value)
    return "\n".join(lines) + "\n"


def _top(kind: Kind, key: str, node: Node) -> Iterator[str]:
    if isinstance(node, Scalar):
        yield _line(kind, key, f"{key}: {one_line(node)}", "")
    elif isinstance(node, MappingNode):
        yield f"{key}:  # {says}" if (says := _says(kind, key)) else f"{key}:"
        for name, entry in node.entries.items():
            yield _line(kind, f"{key}.{name}", f"{name}: {one_line(entry.value)}", "  ")
        yield from _others(kind, key, node)


def _line(kind: Kind, path: str, text: str, indent: str) -> str:
    says = _says(kind, path)
    return f"{indent}{text}  # {says}" if says else f"{indent}{text}"


def _says(kind: Kind, path: str) -> str:
    field = kind.fields.get(path)
    component, _, word = path.partition(".")
    if field is None:
        return _COMPONENT.get(word, "") if component in kind.components else ""
    return f"{field.symbol}: {field.says}" if field.symbol else field.says


def _others(kind: Kind, key: str, node: MappingNode) -> Iterator[str]:
    """Yield, as comments, the fields beside those that the sample states."""
    for field in kind.fields.values():
        group, _, name = field.path.partition(".")
        if group == key and name and "*" not in name and name not in node.entries:
            yield f"  # {name}: {_example(field)}  # {_says(kind, field.path)}"


def _example(field: Field) -> str:
    return field.example or field.default or "…"
