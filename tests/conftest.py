"""What many tests share: checking specs given as text, and the kinds' samples with changes."""

from collections.abc import Callable, Mapping
from datetime import date
from pathlib import Path

import numpy as np
import pytest
from hypothesis import settings

from reglint.box import Box
from reglint.finding import Run
from reglint.formula import parse
from reglint.judge import Case, Wanted
from reglint.kind import Condition
from reglint.project import Project
from reglint.rulebook import Rulebook
from reglint.tree import Mapping as MappingNode
from reglint.tree import Node, Scalar
from reglint.worstcase import Measure

TODAY = date(2026, 12, 1)

# The same examples in every run: a failure belongs to the change that caused it.
settings.register_profile("reglint", deadline=None, derandomize=True)
settings.load_profile("reglint")

Check = Callable[..., Run]
Sample = Callable[..., str]


def _as_data(node: Node) -> object:
    if isinstance(node, Scalar):
        return node.text
    if isinstance(node, MappingNode):
        return {key: _as_data(entry.value) for key, entry in node.entries.items()}
    return [_as_data(item) for item in node.items]


def _as_yaml(data: object, indent: str = "") -> str:
    if not isinstance(data, Mapping):
        return f' "{data}"\n'
    if not data:
        return " {}\n"
    lines = (f'{indent}"{key}":{_as_yaml(value, indent + "  ")}' for key, value in data.items())
    return ("\n" if indent else "") + "".join(lines)


def _changed(data: dict[str, object], path: str, value: object) -> None:
    *parents, last = path.split(".")
    for parent in parents:
        inner = data.setdefault(parent, {})
        assert isinstance(inner, dict), f"{parent} is no mapping in {path}"
        data = inner
    if value is None:
        data.pop(last)
    else:
        data[last] = value


@pytest.fixture(scope="session")
def rulebook() -> Rulebook:
    """Return the built-in rulebook."""
    return Rulebook()


@pytest.fixture(scope="session")
def sample(rulebook: Rulebook) -> Sample:
    """Return a maker of spec texts: the kind's sample with changes by dotted path."""

    def make(changes: Mapping[str, object] | None = None, kind: str = "zener-shunt") -> str:
        found = rulebook.kind(kind)
        assert found is not None
        data = _as_data(found.sample)
        assert isinstance(data, dict)
        for path, value in (changes or {}).items():
            _changed(data, path, value)
        return _as_yaml(data)

    return make


@pytest.fixture
def check(tmp_path: Path) -> Check:
    """Return a checker of spec texts, one file each, through the path a user's files take."""

    def run(
        *texts: str, today: date = TODAY, everything: bool = True, extents: bool = False
    ) -> Run:
        paths = []
        for number, text in enumerate(texts):
            path = tmp_path / f"spec-{number}.reg.yaml"
            path.write_text(text, encoding="utf-8")
            paths.append(path)
        return Project(tmp_path).check(paths, Wanted(today, everything, extents))

    return run


@pytest.fixture
def case(tmp_path: Path, sample: Sample) -> Case:
    """Return the sample of the Zener shunt regulator with what it is judged by."""
    path = tmp_path / "sample.reg.yaml"
    path.write_text(sample(), encoding="utf-8")
    (found,), problems = Project(tmp_path).read(path)
    assert not problems
    return found


@pytest.fixture
def swept(case: Case) -> Callable[..., Box]:
    """Return a maker of boxes over names of no circuit, each spec with its range of every name."""

    def make(**ranges: tuple[float, float] | list[tuple[float, float]]) -> Box:
        listed = [each if isinstance(each, list) else [each] for each in ranges.values()]
        low, high = np.array(listed, dtype=float).transpose(2, 1, 0)
        specs, free = [case.spec] * len(low), Condition("free", "Nothing is fixed.")
        return Box(case.circuit, free, specs, tuple(ranges), low, 0.5 * (low + high), high, {})

    return make


@pytest.fixture
def measure() -> Callable[[str], Measure]:
    """Return a maker of measures from formulas."""

    def make(text: str) -> Measure:
        formula = parse(text)
        return lambda values: values.of(formula)

    return make
