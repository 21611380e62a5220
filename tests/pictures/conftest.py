"""What the tests of pictures share: a judged spec with its boxes."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import date
from pathlib import Path

import pytest

from reglint.box import Box, boxes_of
from reglint.finding import Verdict
from reglint.judge import Case, Wanted, judge
from reglint.project import Project


@dataclass(frozen=True)
class Judged:
    """A spec with its whole verdict and its boxes."""

    project: Project
    case: Case
    verdict: Verdict
    boxes: Mapping[str, Box]


@pytest.fixture
def judged(tmp_path: Path, sample: Callable[..., str]) -> Callable[..., Judged]:
    """Return a judge of the kind's sample with changes by dotted path."""

    def run(changes: Mapping[str, object] | None = None) -> Judged:
        path = tmp_path / "one.reg.yaml"
        path.write_text(sample(changes), encoding="utf-8")
        project = Project(tmp_path)
        (case,), problems = project.read(path)
        assert problems == []
        (verdict,) = judge([case], Wanted(date(2026, 12, 1), everything=True, extents=True))
        return Judged(project, case, verdict, boxes_of(case.circuit, [case.spec]))

    return run
