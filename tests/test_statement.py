"""Formulas of a file: all are read, and what is wrong is told where it stands."""

import pytest

from reglint.document import read
from reglint.statement import Statements
from reglint.tree import Mapping


def node(text: str) -> Mapping:
    """Return a file's only document."""
    (document,) = read(text.encode()).documents
    assert isinstance(document.root, Mapping)
    return document.root


def test_formulas_are_read_as_they_stand() -> None:
    """One, several of a list, several by name; what is not stated is empty."""
    root = node('is: a + b\nmarks: [x, "2 * y"]\ngiven: {p: q, r: s}\n')
    statements = Statements()
    assert statements.formula(root, "is").text == "a + b"
    assert [each.text for each in statements.listed(root, "marks")] == ["x", "2 * y"]
    named = statements.named(root, "given")
    assert {name: each.text for name, each in named.items()} == {"p": "q", "r": "s"}
    assert statements.complaints == []


def test_what_is_not_stated_is_nothing() -> None:
    """Neither a formula nor a complaint."""
    root, statements = node("is: a\n"), Statements()
    assert statements.optional(root, "relative_to") is None
    assert (statements.listed(root, "marks"), statements.named(root, "given")) == ((), {})
    assert statements.complaints == []


def test_reading_goes_on_behind_a_formula_that_cannot_be_read() -> None:
    """Both complaints are told in one run, each with its line."""
    root, statements = node("one: a +\ntwo: b\nthree: c *\n"), Statements()
    for key in ("one", "two", "three"):
        statements.formula(root, key)
    assert [each.span.line for each in statements.complaints] == [1, 3]


@pytest.mark.parametrize(
    ("text", "column"),
    [("is: 2 * lag(x)\n", 9), ('is: "2 * lag(x)"\n', 10), ("is: '2 * lag(x)'\n", 10)],
    ids=["plain", "double quotes", "single quotes"],
)
def test_a_complaint_points_at_the_word_inside_its_quotes(text: str, column: int) -> None:
    """The function that does not exist is the tenth character behind a quote, else the ninth."""
    statements = Statements()
    statements.formula(node(text), "is")
    (found,) = statements.complaints
    assert (found.span.line, found.span.column) == (1, column)


def test_a_demand_without_a_sign_is_no_demand() -> None:
    """A rule must say on which side of its limit it is safe."""
    statements = Statements()
    statements.inequality(node("holds: rail.voltage\n"), "holds")
    (found,) = statements.complaints
    assert found.message == (
        "a rule holds one comparison with >= or <=, for example a >= b (in rail.voltage)"
    )


def test_a_collection_is_no_formula() -> None:
    """The schema refuses it before; to get here is a mistake of the program."""
    with pytest.raises(TypeError) as caught:
        Statements().formula(node("is: [a, b]\n"), "is")
    assert str(caught.value) == "the schema lets no collection stand at is"
