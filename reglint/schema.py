"""JSON Schemas: those of the knowledge files, and that of each kind's specs.

The check of a document against its schema gives complaints with places. Every
keyword's check is ours where the wording matters: it yields only a message, and the
engine adds the place.
"""

import json
from collections.abc import Iterator, Mapping
from functools import cache
from pathlib import Path
from typing import Any, TypeAlias

from jsonschema import Draft202012Validator
from jsonschema.exceptions import ValidationError
from jsonschema.validators import extend

from reglint.nearest import hint
from reglint.source import Complaint
from reglint.tree import Mapping as MappingNode
from reglint.tree import plain, span_of

Schema: TypeAlias = Mapping[str, Any]
Errors: TypeAlias = Iterator[ValidationError]

#: The files of knowledge that have a schema of their own.
KNOWLEDGE = ("rule", "kind", "policy", "part", "settings")

#: The JSON type of what a tree is made of.
_FOUND: Mapping[type, str] = {str: "string", dict: "object", list: "array"}
#: What each JSON type is called in a message.
_TYPE_WORDS = {"string": "a text", "object": "a mapping", "array": "a list", "number": "a number"}


def _type(_validator: Any, wanted: str | list[str], instance: Any, schema: Schema) -> Errors:
    kinds = [wanted] if isinstance(wanted, str) else wanted
    found = _FOUND[type(instance)]
    if found not in kinds:
        words = " or ".join(_TYPE_WORDS[kind] for kind in kinds)
        yield ValidationError(
            f"{_TYPE_WORDS[found]} stands here; {words} is wanted{_example(schema)}"
        )
    elif instance == "":
        yield ValidationError(f"nothing stands here; a value is wanted{_example(schema)}")


def _example(schema: Schema) -> str:
    examples = schema.get("examples")
    return f", for example {examples[0]}" if examples else ""


def _required(_validator: Any, wanted: list[str], instance: Any, schema: Schema) -> Errors:
    if isinstance(instance, dict):
        for key in wanted:
            if key not in instance:
                example = _example(schema.get("properties", {}).get(key, {}))
                yield ValidationError(f"{key} is missing{example}")


def _additional(validator: Any, allowed: Any, instance: Any, schema: Schema) -> Errors:
    if not isinstance(instance, dict):
        return
    known = schema.get("properties", {})
    for key, value in instance.items():
        if key in known:
            continue
        if allowed is False:
            yield ValidationError(_unknown(key, known), path=(key,))
        else:
            yield from validator.descend(value, allowed, path=key)


def _unknown(key: str, known: Mapping[str, Any]) -> str:
    listed = ", ".join(sorted(known))
    return f"{key} is not known here{hint(key, known)} (known: {listed})"


def _enum(_validator: Any, words: list[Any], instance: Any, _schema: Schema) -> Errors:
    if instance not in words:
        listed = ", ".join(str(word) for word in words if isinstance(word, str))
        found = instance if isinstance(instance, str) else "this"
        yield ValidationError(f"{found} is not among the words accepted here: {listed}")


def _property_names(_validator: Any, names: Schema, instance: Any, _schema: Schema) -> Errors:
    if isinstance(instance, dict):
        for key in instance:
            if not _word(key):
                yield ValidationError(f"{key} is no name: {names['description']}", path=(key,))


def _word(key: str) -> bool:
    return key[:1].isalpha() and all(each.isalnum() or each in "_-" for each in key)


def _editors_only(*_arguments: Any) -> Errors:
    """Leave a keyword to editors: reading the quantity says the same, and says it better."""
    yield from ()


_Validator: Any = extend(  # type: ignore[no-untyped-call]
    Draft202012Validator,
    {
        "type": _type,
        "required": _required,
        "additionalProperties": _additional,
        "enum": _enum,
        "propertyNames": _property_names,
        "pattern": _editors_only,
        "minLength": _editors_only,
    },
)


@cache
def knowledge_schema(name: str) -> Schema:
    """Return the schema of one of the files of `KNOWLEDGE`."""
    path = Path(__file__).parent / "schemas" / f"{name}.json"
    schema: Schema = json.loads(path.read_text("utf-8"))
    return schema


def complaints(root: MappingNode, schema: Schema) -> list[Complaint]:
    """Return everything in a document that its schema does not accept, in order of place."""
    errors = _Validator(schema).iter_errors(plain(root))
    return sorted((_complaint(root, error) for error in errors), key=lambda each: each.span)


def _complaint(root: MappingNode, error: ValidationError) -> Complaint:
    path = list(error.absolute_path)
    named_key = error.validator in ("additionalProperties", "propertyNames")
    where = ".".join(str(each) for each in (path[:-1] if named_key else path))
    message = f"{where}: {error.message}" if where else error.message
    return Complaint(span_of(root, path, key=named_key), message)
