"""The JSON Schema of a kind's specs, generated from the kind and the block common to all."""

from collections.abc import Iterable
from typing import Any

from reglint.kind import WORDS, Field, Kind
from reglint.quantity import unit_pattern
from reglint.schema import Schema
from reglint.tree import plain

_DRAFT = "https://json-schema.org/draft/2020-12/schema"
_TEXT: Schema = {"type": "string", "minLength": 1}
_NAME = "letters, digits, _ and -, the first a letter"

_WAIVER: Schema = {
    "type": "object",
    "description": "Accepts one rule's finding for a time.",
    "additionalProperties": False,
    "required": ["reason", "approved_by", "until"],
    "properties": {
        "reason": {**_TEXT, "description": "Why the finding is accepted."},
        "approved_by": {**_TEXT, "description": "Who accepts it."},
        "until": {
            **_TEXT,
            "pattern": "^[0-9]{4}-[0-9]{2}-[0-9]{2}$",
            "patternErrorMessage": "A date such as 2027-06-30.",
            "description": "The last day on which it holds.",
            "examples": ["2027-06-30"],
        },
        "no_worse_than": {
            **_TEXT,
            "description": "The margin below which it stops working.",
            "examples": ["-5 %"],
        },
    },
}


def _common(kind_names: Iterable[str]) -> dict[str, Schema]:
    """Return the properties that specs of every kind share."""
    return {
        "format": {"description": "Version of the file format.", "enum": ["1", 1]},
        "kind": {"description": "The kind of regulator.", "enum": sorted(kind_names)},
        "name": {**_TEXT, "description": "Name of the regulator, unique on its board."},
        "purpose": {**_TEXT, "description": "What the regulator is for."},
        "derating": {
            **_TEXT,
            "description": "Derating policy, instead of the repository's.",
            "examples": ["eee-inst-002"],
        },
        "waivers": {
            "type": "object",
            "description": "Rules whose findings are accepted for a time, by the rule's name.",
            "additionalProperties": _WAIVER,
        },
        "distributions": {
            "type": "object",
            "description": "How a figure's builds are spread, for --yield, by its dotted path.",
            "additionalProperties": {"enum": ["uniform", "normal"]},
            "examples": [{"series_resistor.resistance": "normal"}],
        },
    }


def spec_schema(kind: Kind) -> Schema:
    """Return the JSON Schema (2020-12) of one kind's specs."""
    tree = _tree(kind)
    properties = _common([kind.name])
    for key, branch in tree.items():
        properties[key] = _node(kind, key, branch)
    required = ["format", "kind", "name", *(key for key in tree if _is_required(kind, key))]
    return {
        "$schema": _DRAFT,
        "title": f"Spec of a {kind.title[0].lower()}{kind.title[1:]}",
        "description": kind.about.split("\n\n")[0].replace("\n", " ").strip(),
        "type": "object",
        "additionalProperties": False,
        "required": required,
        "properties": properties,
        "defaultSnippets": [{"label": kind.name, "description": kind.title, "body": _body(kind)}],
    }


def editor_schema(kinds: Iterable[Kind]) -> Schema:
    """Return one schema for all kinds, chosen by ``kind``: what an editor is pointed to."""
    by_name = {kind.name: kind for kind in kinds}
    return {
        "$schema": _DRAFT,
        "title": "Spec of a voltage regulator",
        "description": "One YAML document that states one regulator.",
        "type": "object",
        "required": ["format", "kind", "name"],
        "properties": {"kind": _common(by_name)["kind"]},
        "allOf": [
            {
                "if": {"properties": {"kind": {"const": name}}, "required": ["kind"]},
                "then": {"$ref": f"#/$defs/{name}"},
            }
            for name in by_name
        ],
        "$defs": {name: spec_schema(kind) for name, kind in by_name.items()},
    }


def _tree(kind: Kind) -> dict[str, Any]:
    """Return the fields as the nested mappings a spec writes them in."""
    tree: dict[str, Any] = {}
    for field in kind.fields.values():
        *parents, last = field.path.split(".")
        branch = tree
        for parent in parents:
            branch = branch.setdefault(parent, {})
        branch[last] = field
    return tree


def _node(kind: Kind, key: str, branch: Any) -> Schema:
    if isinstance(branch, Field):
        return _field(branch)
    if "*" in branch:
        return _named_items(branch["*"])
    properties = {name: _field(field) for name, field in branch.items()}
    schema: dict[str, Any] = {
        "type": "object",
        "additionalProperties": False,
        "properties": properties,
    }
    required = [name for name, field in branch.items() if field.required]
    if key not in kind.components:
        return {**schema, "required": required} if required else schema
    properties |= _COMPONENT
    if required:
        schema |= {"if": {"not": {"required": ["part"]}}, "then": {"required": required}}
    return schema


_COMPONENT: dict[str, Schema] = {
    "ref": {**_TEXT, "description": "Reference designator (IEEE 315).", "examples": ["R12"]},
    "part": {**_TEXT, "description": "Part whose data fill in what is not stated here."},
    "style": {**_TEXT, "description": "Style or use by which a derating policy tells parts."},
}


def _named_items(branch: dict[str, Field]) -> Schema:
    return {
        "type": "object",
        "description": "By name; write {} where there are none.",
        "propertyNames": {"pattern": "^[A-Za-z][A-Za-z0-9_-]*$", "description": _NAME},
        "additionalProperties": {
            "type": "object",
            "additionalProperties": False,
            "properties": {name: _field(field) for name, field in branch.items()},
        },
    }


def _field(field: Field) -> Schema:
    described = {"description": field.says}
    if field.symbol:
        described["title"] = field.symbol
    if field.choices:
        return {**described, "enum": _choices(field)}
    examples = {"examples": [field.example]} if field.example else {}
    if field.role in WORDS:
        return {**_TEXT, **described, **examples}
    one = _quantity(field)
    if field.role in ("rating", "limit"):
        return {**one, **described, **examples}
    ends = ("min", "max") if field.role == "limits" else ("min", "nom", "max")
    return {
        **one,
        **described,
        **examples,
        "type": [*([one["type"]] if isinstance(one["type"], str) else one["type"]), "object"],
        "additionalProperties": False,
        "properties": dict.fromkeys(ends, one),
        **({} if field.role == "limits" else {"required": ["min", "max"]}),
    }


def _choices(field: Field) -> list[Any]:
    """Return the words of a choice; an editor reads plain true and false as booleans."""
    words: list[Any] = list(field.choices or ())
    return words + [word == "true" for word in words if word in ("true", "false")]


def _quantity(field: Field) -> dict[str, Any]:
    patterns = [unit_pattern(field.unit)]
    if field.relative_to:
        patterns.append(unit_pattern("1/K"))
    return {
        "type": ["string", "number"] if field.unit == "1" else "string",
        "pattern": "|".join(patterns),
        "patternErrorMessage": f"A quantity in {field.unit}, for example {field.example}.",
    }


def _is_required(kind: Kind, key: str) -> bool:
    """Tell whether a top-level key must be there: one of its fields must, or it is a list."""
    under = [field for field in kind.fields.values() if field.path.split(".")[0] == key]
    return any(field.required or ".*." in field.path for field in under)


def _body(kind: Kind) -> Any:
    return plain(kind.sample)
