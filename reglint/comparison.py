"""A comparison: what a change does to the margins. Data, and what follows from it."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from reglint.finding import Finding, Outcome, Verdict
from reglint.source import Problem
from reglint.spec import Spec, Waiver

#: A smaller change of a margin, as a fraction of the limit, is rounding.
_ROUNDING = 1e-9


@dataclass(frozen=True, slots=True)
class Movement:
    """One rule of one spec, before and after; nothing where it was not judged."""

    rule: str
    before: Finding | None
    after: Finding | None

    @property
    def change(self) -> float | None:
        """Return how much margin was won, as a fraction of the limit; negative where lost."""
        if self.before is None or self.after is None:
            return None
        if self.before.margin is None or self.after.margin is None:
            return None
        return self.after.margin - self.before.margin

    @property
    def moved(self) -> bool:
        """Tell whether anything about the rule changed."""
        change = self.change
        if change is None:
            return _told(self.before) != _told(self.after)
        return abs(change) > _ROUNDING or _told(self.before) != _told(self.after)

    @property
    def worse(self) -> bool:
        """Tell whether the rule is worse than before: its outcome, or the margin of a failure.

        A rule that was not judged before counts as passed. A waiver excuses what it accepts.
        """
        if self.after is None or self.after.waived:
            return False
        before = self.before.outcome if self.before else Outcome.PASS
        failing = self.after.outcome is Outcome.FAIL and before is Outcome.FAIL
        lost = failing and (self.change or 0.0) < -_ROUNDING
        excused = self.before is not None and self.before.waived
        return lost or excused or self.after.outcome.rank > before.rank


def _told(finding: Finding | None) -> tuple[object, ...]:
    if finding is None:
        return ()
    return (finding.outcome, finding.waived, finding.limit, finding.value is None)


@dataclass(frozen=True, slots=True)
class Cause:
    """Something that changed and moved margins."""

    #: What changed, as ``series_resistor.resistance``.
    what: str
    before: str
    after: str
    file: str
    #: The line it stands on now; 0 where it stands nowhere any more.
    line: int


@dataclass(frozen=True, slots=True)
class Compared:
    """One spec before and after; nothing where it was not there, or not readable."""

    before: Verdict | None
    after: Verdict | None
    movements: tuple[Movement, ...] = ()
    causes: tuple[Cause, ...] = ()

    @property
    def verdict(self) -> Verdict:
        """Return the newer verdict there is."""
        found = self.after or self.before
        assert found is not None  # noqa: S101 -- one of them by construction
        return found

    @property
    def word(self) -> str:
        """Return what became of the spec: added, removed, worse, better or changed."""
        if self.before is None:
            return "added"
        if self.after is None:
            return "removed"
        if any(each.worse for each in self.movements):
            return "worse"
        gains = [each.change or 0.0 for each in self.movements]
        return "better" if gains and min(gains) >= 0.0 and max(gains) > 0.0 else "changed"

    def waivers(self) -> Iterator[tuple[str, Waiver]]:
        """Yield the waivers that are new, changed or gone, each with the word for it."""
        before, after = (_waivers(each) for each in (self.before, self.after))
        for rule, waiver in after.items():
            if rule not in before:
                yield "new", waiver
            elif before[rule].terms != waiver.terms:
                yield "changed", waiver
        yield from (("gone", before[rule]) for rule in before.keys() - after.keys())


def _waivers(verdict: Verdict | None) -> Mapping[str, Waiver]:
    return {each.rule: each for each in verdict.spec.waivers} if verdict else {}


@dataclass(frozen=True, slots=True)
class Comparison:
    """All specs of a project before and after a change, in order of file and place."""

    #: The revision compared with, in words.
    against: str
    specs: tuple[Compared, ...]
    #: How many specs are as they were.
    same: int
    #: Waivers that end soon, each with its spec.
    ending: tuple[tuple[Spec, Waiver], ...]
    #: What cannot be used now, and what could not be used before.
    problems: tuple[Problem, ...]
    earlier_problems: tuple[Problem, ...]

    @property
    def worse(self) -> bool:
        """Tell whether a rule of any spec is worse than before."""
        return any(move.worse for spec in self.specs for move in spec.movements)

    def reaches(self, gate: str) -> bool:
        """Tell whether anything is ``worse`` than before, or changed and ``fail`` or ``warn``."""
        if gate == "worse":
            return self.worse
        least = {"fail": Outcome.FAIL.rank, "warn": Outcome.WARN.rank, "never": 3}[gate]
        after = (spec.after for spec in self.specs if spec.after)
        return any(verdict.outcome.rank >= least for verdict in after)
