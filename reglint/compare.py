"""Comparing: a project as it is with one of its revisions, spec by spec and rule by rule."""

import os
from collections import defaultdict
from collections.abc import Container, Iterable, Iterator, Sequence
from dataclasses import dataclass
from datetime import date, timedelta
from pathlib import Path
from typing import TypeAlias

from reglint.cause import alike, causes
from reglint.comparison import Compared, Comparison, Movement
from reglint.errors import UsageError
from reglint.finding import Verdict
from reglint.judge import Case, Wanted, judge
from reglint.project import Project
from reglint.proof import Care
from reglint.revision import revision
from reglint.source import Problem
from reglint.spec import Spec, Waiver

#: A spec before and after; nothing where it was not there.
Pair: TypeAlias = tuple[Case | None, Case | None]

#: A waiver that ends within this time is about to.
_SOON = timedelta(days=30)


@dataclass(frozen=True, slots=True)
class _State:
    """What one state of a project says."""

    cases: Sequence[Case]
    problems: tuple[Problem, ...]
    #: For each path asked for, whether it leads to a spec.
    leads: tuple[bool, ...]


def compare(
    folder: Path, paths: Sequence[Path], against: str, derating: str | None, today: date
) -> Comparison:
    """Compare the specs that paths lead to with those of a revision, under the working folder.

    Raises `UsageError` for paths that lead nowhere in both, and for a revision that is not there.
    """
    now = _state(Project(folder, derating), paths)
    with revision(folder, against) as (found, place):
        there = [place / os.path.relpath(path, folder) for path in paths]
        then = _state(Project(place, derating), there)
    for path, one, other in zip(paths, now.leads, then.leads, strict=True):
        if not (one or other):
            shown = Path(os.path.relpath(path, folder)).as_posix()
            raise UsageError(f"{shown}: there is no spec (*.reg.yaml), now or at {against}")
    pairs = _paired(then.cases, now.cases)
    moved = [(old, new) for old, new in pairs if not (old and new and alike(old, new))]
    return Comparison(
        against=str(found),
        specs=tuple(_compared(moved, today)),
        same=len(pairs) - len(moved),
        ending=tuple(_ending(now.cases, today)),
        problems=now.problems,
        earlier_problems=then.problems,
    )


def _state(project: Project, paths: Sequence[Path]) -> _State:
    """Read the specs that paths lead to; a path may lead somewhere in the other state only."""
    led = [_specs(project, path) for path in paths]
    read = [project.read(path) for path in sorted(set().union(*led), key=project.show)]
    problems = {*(each for _, some in read for each in some), *project.problems()}
    cases = [case for some, _ in read for case in some]
    return _State(cases, tuple(sorted(problems)), tuple(map(bool, led)))


def _specs(project: Project, path: Path) -> list[Path]:
    """Return the specs a path leads to, if it leads anywhere in this state."""
    try:
        return project.specs([path])
    except UsageError:
        return []


def _paired(then: Sequence[Case], now: Sequence[Case]) -> list[Pair]:
    """Return each spec before and after, by file and name; one that moved, by its name alone."""
    before = {_key(case): case for case in then}
    after = {_key(case): case for case in now}
    lost, come = (
        _by_name(one.values(), other) for one, other in ((before, after), (after, before))
    )
    for name in lost.keys() & come.keys():
        if len(lost[name]) == len(come[name]) == 1:
            before[_key(come[name][0])] = before.pop(_key(lost[name][0]))
    pairs = [(before.get(key), after.get(key)) for key in before.keys() | after.keys()]
    return sorted(pairs, key=_place)


def _place(pair: Pair) -> tuple[str, int]:
    (spec, *_) = [case.spec for case in reversed(pair) if case]
    return spec.file, spec.line


def _key(case: Case) -> tuple[str, str]:
    return case.spec.file, case.spec.name


def _by_name(cases: Iterable[Case], other: Container[object]) -> dict[str, list[Case]]:
    """Return the cases that the other state does not have, by name."""
    found = defaultdict(list)
    for case in cases:
        if _key(case) not in other:
            found[case.spec.name].append(case)
    return found


def _compared(pairs: Sequence[Pair], today: date) -> Iterator[Compared]:
    """Judge specs before and after and yield what became of them."""
    wanted = Wanted(today, everything=True, care=Care.DECIDED)
    both = [case for pair in pairs for case in pair if case]
    verdicts = dict(zip(map(id, both), judge(both, wanted), strict=True))
    for before, after in pairs:
        old, new = (verdicts.get(id(each)) if each else None for each in (before, after))
        caused = tuple(causes(before, after)) if before and after else ()
        yield Compared(old, new, tuple(_movements(old, new)), caused)


def _movements(old: Verdict | None, new: Verdict | None) -> Iterator[Movement]:
    """Yield the rules that moved; all of a spec that is new."""
    before, after = ({f.rule: f for f in v.findings} if v else {} for v in (old, new))
    if new is not None:
        for rule in dict.fromkeys([*before, *after]):
            movement = Movement(rule, before.get(rule), after.get(rule))
            if movement.moved:
                yield movement


def _ending(cases: Sequence[Case], today: date) -> Iterator[tuple[Spec, Waiver]]:
    """Yield the waivers that end soon; those that ended are findings."""
    for case in cases:
        for waiver in case.spec.waivers:
            if today <= waiver.until <= today + _SOON:
                yield case.spec, waiver
