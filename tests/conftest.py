"""What many tests share: checking specs given as text, and the kinds' samples with changes."""

from collections.abc import Callable, Mapping
from datetime import date
from pathlib import Path

import pytest
from hypothesis import settings

from reglint.finding import Run
from reglint.judge import Wanted
from reglint.project import Project
from reglint.rulebook import Rulebook
from reglint.tree import Mapping as MappingNode
from reglint.tree import Node, Scalar

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
