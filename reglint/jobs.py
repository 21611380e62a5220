"""Jobs: a check shared among processes, with the same result as that of one."""

import multiprocessing
import signal
from collections.abc import Sequence
from concurrent.futures import ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from dataclasses import dataclass
from functools import partial
from pathlib import Path

from reglint.errors import UsageError
from reglint.files import read_bytes
from reglint.finding import Run
from reglint.judge import Wanted
from reglint.project import SMALL, Project, Supposition

#: Portions for each process: enough to share evenly, few enough to be worth sending.
_PORTIONS = 4


@dataclass(frozen=True, slots=True)
class _Portion:
    """What one portion of a check comes to."""

    run: Run
    used: frozenset[Supposition]


def check(project: Project, paths: Sequence[Path], wanted: Wanted, jobs: int) -> Run:
    """Check specs in up to ``jobs`` processes; a small run, or one of accounts, stays in this.

    Both of them tell of some specs more than of others, and which depends on the whole.
    Raises `UsageError` where a process ends before its work is done.
    """
    if jobs == 1 or wanted.account is not None or _documents(paths) <= SMALL:
        return project.check(paths, wanted)
    run = _shared(project, paths, wanted, jobs)
    # Documents were counted without reading them; rarely they are fewer after all.
    return run if len(run.verdicts) > SMALL else project.check(paths, wanted)


def _documents(paths: Sequence[Path]) -> int:
    """Return about how many documents files hold, and no fewer."""
    texts = (read_bytes(path) for path in paths)
    return sum(1 + text.count(b"\n---") for text in texts if isinstance(text, bytes))


def _shared(project: Project, paths: Sequence[Path], wanted: Wanted, jobs: int) -> Run:
    work = partial(_checked, project.folder, project.derating, project.suppositions, wanted)
    size = -(-len(paths) // (_PORTIONS * jobs))
    portions = [paths[start : start + size] for start in range(0, len(paths), size)]
    for path in paths:
        project.home(path)  # its gate counts in this process
    with ProcessPoolExecutor(
        min(jobs, len(portions)), multiprocessing.get_context("spawn"), _ignore_interrupts
    ) as pool:
        try:
            done = list(pool.map(work, portions))
        except BrokenProcessPool:
            raise UsageError("a process of --jobs ended before its work was done") from None
        except KeyboardInterrupt:
            pool.shutdown(wait=False, cancel_futures=True)
            raise
    project.used.update(*(each.used for each in done))
    verdicts = tuple(verdict for each in done for verdict in each.run.verdicts)
    problems = {problem for each in done for problem in each.run.problems}
    return Run(verdicts, tuple(sorted(problems)))


def _ignore_interrupts() -> None:
    """Leave Ctrl-C to the process that has the others."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)


def _checked(
    folder: Path,
    derating: str | None,
    suppositions: tuple[Supposition, ...],
    wanted: Wanted,
    paths: Sequence[Path],
) -> _Portion:
    """Check a portion in a process of its own."""
    project = Project(folder, derating, suppositions, mends=False)
    run = project.check(paths, wanted)
    return _Portion(run, frozenset(project.used))
