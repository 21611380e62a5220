"""Laws of reading a spec: what is written is what is read, and what is wrong has its line.

The specs come from the kind's own fields: every quantity a random value in its unit.
"""

from collections.abc import Callable, Mapping
from typing import Any

import pytest
from hypothesis import Phase, given, settings
from hypothesis import strategies as st

from reglint.kind import Field
from reglint.project import Project
from reglint.rulebook import Rulebook
from reglint.source import Problem
from reglint.spec import Spec

KIND = Rulebook().kind("zener-shunt")
assert KIND is not None
#: What widens another figure: drawn freely, it would leave that no sense.
WIDENING = {path for each in KIND.fields.values() for path in (each.widened_by or {}).values()}
#: Fields of a spec without loads, each with a quantity for a value.
FIELDS = [
    each
    for each in KIND.fields.values()
    if each.unit and "*" not in each.path and each.path not in WIDENING
]
VALUES = st.floats(1e-6, 1e6, allow_nan=False).map(lambda value: float(f"{value:.6g}"))


def quantity(value: float, field: Field) -> str:
    """Return a figure as a spec states it."""
    return f"{value!r} {field.unit}".removesuffix(" 1")


@st.composite
def figures(draw: st.DrawFn, field: Field) -> Any:
    """Draw a field's figure: a range in one of its spellings, limits, or a single value."""
    low, middle, high = sorted(draw(st.tuples(VALUES, VALUES, VALUES)))
    if field.role in ("swept", "limits"):
        ends = {"min": low, "max": high} | ({"nom": middle} if field.role == "swept" else {})
        return {end: quantity(value, field) for end, value in ends.items()}
    return quantity(middle, field)


@st.composite
def specs(draw: st.DrawFn) -> dict[str, Any]:
    """Draw a spec with every required field and some of the others."""
    spec: dict[str, Any] = {"format": "1", "kind": "zener-shunt", "name": "drawn", "loads": {}}
    for field in FIELDS:
        if field.required or draw(st.booleans()):
            *parents, last = field.path.split(".")
            place = spec
            for parent in parents:
                place = place.setdefault(parent, {})
            place[last] = draw(figures(field))
    return spec


def written(data: Mapping[str, Any], indent: str = "") -> str:
    """Return data as YAML, a line for each figure."""
    lines = []
    for name, value in data.items():
        if isinstance(value, Mapping) and value:
            lines.append(f"{indent}{name}:\n{written(value, indent + '  ')}")
        else:
            lines.append(f"{indent}{name}: {'{}' if value == {} else value}\n")
    return "".join(lines)


Reader = Callable[[str], tuple[list[Spec], list[Problem]]]


@pytest.fixture(scope="module")
def read(tmp_path_factory: pytest.TempPathFactory) -> Reader:
    """Return a reader of a text: its specs, and what is wrong with it."""
    project = Project(tmp_path_factory.mktemp("drawn"))

    def reader(text: str) -> tuple[list[Spec], list[Problem]]:
        path = project.folder / "drawn.reg.yaml"
        path.write_text(text, encoding="utf-8")
        cases, problems = project.read(path)
        return [case.spec for case in cases], problems

    return reader


def stated(data: Mapping[str, Any], path: str) -> Any:
    """Return what a spec's data say at a dotted path, or nothing."""
    found: Any = data
    for name in path.split("."):
        found = found.get(name) if isinstance(found, Mapping) else None
    return found


@settings(max_examples=60, phases=(Phase.explicit, Phase.generate))
@given(specs())
def test_what_is_written_is_what_is_read(read: Reader, data: dict[str, Any]) -> None:
    """Every figure has the value that stands in the file, in SI units and °C, to the last bit."""
    ((spec,), problems) = read(written(data))
    assert problems == []
    for field in FIELDS:
        found = stated(data, field.path)
        if found is None:
            continue
        if field.role == "swept":
            term = spec.swept[field.path][0]
            ends = {"min": term.low, "nom": term.nominal, "max": term.high}
        elif field.role == "limits":
            ends = {end: spec.numbers[f"{field.path}.{end}"] for end in ("min", "max")}
        else:
            ends, found = {"": spec.numbers[field.path]}, {"": found}
        assert {end: quantity(value, field) for end, value in ends.items()} == found


@settings(max_examples=30, phases=(Phase.explicit, Phase.generate))
@given(specs())
def test_a_spec_written_again_is_the_same_spec(read: Reader, data: dict[str, Any]) -> None:
    """Rendered from what was read and read once more, no value moves."""
    ((spec,), _) = read(written(data))
    again = {**data}
    for field in FIELDS:
        if field.role == "swept" and field.path in spec.swept and stated(data, field.path):
            term = spec.swept[field.path][0]
            ends = {"min": term.low, "nom": term.nominal, "max": term.high}
            *parents, last = field.path.split(".")
            place = again
            for parent in parents:
                place[parent] = {**place[parent]}
                place = place[parent]
            place[last] = {end: quantity(value, field) for end, value in ends.items()}
    ((other,), problems) = read(written(again))
    assert problems == []
    assert (other.numbers, other.swept) == (spec.numbers, spec.swept)


#: What makes a line wrong, whatever it said.
MUTATIONS = {
    "unknown key": lambda name, value: f"{name}x: {value}",
    "wrong unit": lambda name, _: f"{name}: 3 kg",
    "bare word": lambda name, _: f"{name}: much",
    "comma": lambda name, value: f"{name}: {value.replace('.', ',', 1).replace('e', ',', 1)},5",
    "twice": lambda name, value: f"{name}: {value}\n{{indent}}{name}: {value}",
    "no blank": lambda name, value: f"{name}:{value}",
    "alias": lambda name, _: f"{name}: *other",
    "tag": lambda name, value: f"{name}: !!str {value}",
    "two values": lambda name, value: f"{name}: [{value}, {value}]",
}


@settings(max_examples=150, phases=(Phase.explicit, Phase.generate))
@given(specs(), st.sampled_from(sorted(MUTATIONS)), st.integers(0, 10_000))
def test_a_line_that_was_spoilt_is_pointed_at(
    read: Reader, data: dict[str, Any], mutation: str, pick: int
) -> None:
    """A problem stands on the spoilt line; of a line twice, on the second."""
    lines = written(data).splitlines()
    figures = [number for number, line in enumerate(lines) if ": " in line and number > 2]
    figures = [each for each in figures if not lines[each].endswith("{}")]
    number = figures[pick % len(figures)]
    indent = lines[number][: len(lines[number]) - len(lines[number].lstrip())]
    name, _, value = lines[number].strip().partition(": ")
    lines[number] = indent + MUTATIONS[mutation](name, value).replace("{indent}", indent)
    found, problems = read("\n".join(lines) + "\n")
    assert found == []
    # A name without a blank behind it is a text, which YAML joins with the line below.
    wanted = {"twice": {number + 2}, "no blank": {number + 1, number + 2}}
    lines_told = {each.span.line for each in problems}
    assert lines_told & wanted.get(mutation, {number + 1}), problems
