"""Findings: what a rule says about a spec. Data only."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from enum import Enum
from math import sqrt

from reglint.account import Account
from reglint.kind import Kind
from reglint.rule import Rule
from reglint.source import Problem, Span
from reglint.spec import Spec


class Outcome(Enum):
    """What a rule comes to; the order is from good to bad."""

    PASS = "pass"  # noqa: S105 -- the word of the trade
    WARN = "warn"
    FAIL = "fail"

    def __bool__(self) -> bool:
        """Refuse: a warning is neither true nor false."""
        raise TypeError("an outcome is neither true nor false; compare it with Outcome.PASS")

    @property
    def rank(self) -> int:
        """Return how bad it is: 0, 1 or 2."""
        return list(Outcome).index(self)


@dataclass(frozen=True, slots=True)
class Share:
    """How much of the eaten margin one stated figure ate."""

    path: str
    #: Fraction of the margin that all figures ate together.
    share: float
    span: Span


@dataclass(frozen=True, slots=True)
class Finding:
    """What one rule says about one spec."""

    rule: str
    outcome: Outcome
    message: str
    span: Span
    remedy: str = ""
    waived: bool = False
    condition: str = ""
    #: Both sides of the inequality at the worst point, in ``unit``; none where not checked.
    value: float | None = None
    limit: float | None = None
    unit: str = ""
    #: Distance to the limit on the safe side, as a fraction.
    margin: float | None = None
    #: Whether the worst case is proven, not only the worst that was found.
    proven: bool = False
    #: What the value can provably not exceed.
    bound: float | None = None
    #: Every swept name's value at the worst point.
    corner: Mapping[str, float] | None = None
    shares: tuple[Share, ...] = ()
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Extent:
    """The range of a quantity over the box of one condition."""

    quantity: str
    condition: str
    unit: str
    min: float
    nom: float
    max: float


#: Standard score of a two-sided interval at 95 %.
_SCORE = 1.959963984540054


@dataclass(frozen=True, slots=True)
class Yield:
    """How many of the drawn builds break a rule."""

    #: The rule's name; empty for all rules together.
    rule: str
    broken: int
    builds: int

    def interval(self) -> tuple[float, float]:
        """Return what the fraction of broken builds lies between: Wilson's 95 % score interval.

        Source: E. B. Wilson, Probable inference, the law of succession, and statistical
        inference, J. Am. Stat. Assoc. 22 (1927) 209-212.
        """
        score = _SCORE
        count, found = self.builds, self.broken / self.builds
        scale = 1.0 + score**2 / count
        middle = (found + score**2 / (2.0 * count)) / scale
        half = score / scale * sqrt(found * (1.0 - found) / count + (score / (2.0 * count)) ** 2)
        return max(0.0, middle - half), min(1.0, middle + half)


@dataclass(frozen=True, slots=True)
class Verdict:
    """Everything said about one spec."""

    spec: Spec
    rules: Mapping[str, Rule]
    findings: tuple[Finding, ...]
    #: How many rules pass, listed among the findings or not.
    passed: int = 0
    #: Rules skipped because the spec states no limit for them.
    skipped: tuple[str, ...] = ()
    extents: tuple[Extent, ...] = ()
    #: For a failing spec, the standard values of its adjustable fields at which no rule fails.
    windows: Mapping[str, tuple[float, ...]] = field(default_factory=dict)
    #: If wanted, the builds that break a rule, by rule; the last is of all rules together.
    yields: tuple[Yield, ...] = ()
    #: What a reader needs beside the findings, where a report wants it and it is not too much.
    account: Account | None = None

    @property
    def kind(self) -> Kind:
        """Return the spec's kind."""
        return self.spec.kind

    @property
    def outcome(self) -> Outcome:
        """Return the worst outcome of the findings that are not waived."""
        counted = (each.outcome for each in self.findings if not each.waived)
        return max(counted, key=lambda each: each.rank, default=Outcome.PASS)


@dataclass(frozen=True, slots=True)
class Run:
    """One check of a project: verdicts and problems in order of file and place."""

    verdicts: tuple[Verdict, ...]
    problems: tuple[Problem, ...]

    def count(self, outcome: Outcome) -> int:
        """Return the number of findings of an outcome that are not waived."""
        if outcome is Outcome.PASS:
            return sum(verdict.passed for verdict in self.verdicts)
        return sum(
            each.outcome is outcome and not each.waived
            for verdict in self.verdicts
            for each in verdict.findings
        )

    @property
    def waived(self) -> int:
        """Return the number of waived findings."""
        return sum(each.waived for verdict in self.verdicts for each in verdict.findings)

    @property
    def unreadable(self) -> int:
        """Return the number of files with problems."""
        return len({problem.file for problem in self.problems})
