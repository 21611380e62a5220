"""Our JSON Schemas against the 2020-12 metaschema, and as a plain validator sees specs.

Metaschema and validator: jsonschema (https://python-jsonschema.readthedocs.io).
"""

from collections.abc import Callable
from typing import Any

import pytest
import yaml
from jsonschema import Draft202012Validator

from reglint.rulebook import Rulebook, built_in
from reglint.schema import KNOWLEDGE, knowledge_schema
from reglint.spec_schema import editor_schema, spec_schema

BOOK = Rulebook()
KINDS = [kind for kind in map(BOOK.kind, BOOK.kind_names()) if kind]
SCHEMAS: dict[str, Any] = {
    **{name: knowledge_schema(name) for name in KNOWLEDGE},
    **{kind.name: spec_schema(kind) for kind in KINDS},
    "editor": editor_schema(KINDS),
}


@pytest.mark.parametrize("name", SCHEMAS)
def test_a_schema_satisfies_the_metaschema(name: str) -> None:
    """Every schema we print is valid JSON Schema 2020-12."""
    Draft202012Validator.check_schema(SCHEMAS[name])


@pytest.mark.parametrize("kind", KINDS, ids=lambda kind: kind.name)
@pytest.mark.parametrize("name", ["own", "editor"])
def test_an_editor_accepts_the_sample(kind: Any, name: str, sample: Callable[..., str]) -> None:
    """A plain validator with YAML's own typing, as editors have, finds nothing wrong."""
    schema = SCHEMAS[kind.name if name == "own" else name]
    spec = yaml.safe_load(sample(kind=kind.name))
    assert list(Draft202012Validator(schema).iter_errors(spec)) == []


@pytest.mark.parametrize(
    ("path", "value"),
    [
        (("series_resistor", "resistance"), "470 volt"),
        (("zener", "tempco"), "5 kg"),
        (("ambient",), 25),
        (("zener", "colour"), "red"),
        (("kind",), "other"),
    ],
)
def test_an_editor_marks_what_is_wrong(
    path: tuple[str, ...], value: object, sample: Callable[..., str]
) -> None:
    """Units, types, unknown names and kinds are refused by the published schema alone."""
    spec = yaml.safe_load(sample())
    inner = spec
    for key in path[:-1]:
        inner = inner[key]
    inner[path[-1]] = value
    assert list(Draft202012Validator(SCHEMAS["zener-shunt"]).iter_errors(spec))


@pytest.mark.parametrize(
    "path", sorted(built_in().path.rglob("*.yaml")), ids=lambda path: path.stem
)
def test_the_shipped_files_satisfy_their_published_schemas(path: Any) -> None:
    """An editor with our schemas finds nothing wrong in the rulebook."""
    names = {"derating": "policy", "parts": "part"}
    name = "kind" if path.name == "kind.yaml" else names.get(path.parent.name, "rule")
    data = yaml.safe_load(path.read_text(encoding="utf-8"))
    assert list(Draft202012Validator(SCHEMAS[name]).iter_errors(data)) == []
