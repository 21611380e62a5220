"""A project on disk: which files are specs, and what a check of them comes to."""

import os
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from dataclasses import field as dataclass_field
from datetime import date
from itertools import islice
from pathlib import Path

from reglint.discovery import is_spec_name, listed, matches
from reglint.document import read
from reglint.draft import Context
from reglint.errors import UsageError
from reglint.files import Folder, read_bytes
from reglint.finding import Outcome, Run, Verdict
from reglint.judge import Case, Wanted, judge
from reglint.kind import Kind
from reglint.lever import levers
from reglint.nearest import hint
from reglint.proof import Care
from reglint.reader import read_spec
from reglint.relaxation import Move, Relaxation, nearest, verified
from reglint.rulebook import Rulebook
from reglint.schema import Schema, complaints
from reglint.settings import NAME, Settings, read_settings, root_above
from reglint.source import TOP, Complaint, Problem
from reglint.spec import Spec
from reglint.spec_schema import spec_schema
from reglint.tree import Document, Scalar, changed, find
from reglint.tree import Mapping as MappingNode
from reglint.window import Window, trials
from reglint.window import window as window_of

#: Specs judged as one array: enough for its speed, few enough that their trees take little
#: memory.
_AT_ONCE = 500
#: Specs of a run in which failing ones are told what would hold, and how many of them: each
#: costs as much as fifty others.
SMALL, _MOST_MENDED = 100, 5
#: Specs of a run that an account is made of: pictures cost half a second and 60 kB each.
_MOST_ACCOUNTS = 40


@dataclass(frozen=True, slots=True)
class Supposition:
    """A value to try without editing the file."""

    spec: str
    field: str
    text: str


@dataclass(slots=True)
class Home:
    """Settings and the rulebook they lead to: what specs under one root share."""

    settings: Settings
    rulebook: Rulebook
    problems: list[Problem]
    schemas: dict[str, Schema] = dataclass_field(default_factory=dict)

    def schema(self, kind: Kind) -> Schema:
        """Return the schema of a kind's specs, generated once."""
        if kind.name not in self.schemas:
            self.schemas[kind.name] = spec_schema(kind)
        return self.schemas[kind.name]


@dataclass(slots=True)
class Project:
    """Reads specs below a working folder; paths are shown relative to it."""

    folder: Path
    #: Takes the place of every spec's and the settings' own policy.
    derating: str | None = None
    #: Values to try instead of those in the files.
    suppositions: tuple[Supposition, ...] = ()
    homes: dict[Path, Home] = dataclass_field(default_factory=dict)
    #: Specs found that git does not track: a check elsewhere will not see them.
    untracked: list[Path] = dataclass_field(default_factory=list)
    #: Whether failing specs of a small run are told what would hold, and how many were.
    mends: bool = True
    mended: int = 0
    #: How many specs an account was made of.
    accounted: int = 0
    #: The suppositions that met their spec.
    used: set[Supposition] = dataclass_field(default_factory=set)

    def show(self, path: Path) -> str:
        """Return how a path is shown: relative, with ``/``."""
        return Path(os.path.relpath(path, self.folder)).as_posix()

    def home(self, path: Path) -> Home:
        """Return the home of a file: of the nearest settings above it, or a bare one."""
        root = root_above(path.parent)
        key = root or self.folder
        if key not in self.homes:
            self.homes[key] = self._home(root)
        return self.homes[key]

    def gate(self) -> str:
        """Return the strictest gate of the settings met."""
        gates = {home.settings.gate for home in self.homes.values()} or {"fail"}
        return min(gates, key=("warn", "fail", "never").index)

    def _home(self, root: Path | None) -> Home:
        if root is None:
            return Home(Settings(self.folder), Rulebook(), [])
        settings, found = read_settings(root)
        shown = self.show(root / NAME)
        rulebook = Rulebook(
            [self._folder(root, name) for name in settings.rules],
            [self._folder(root, name) for name in settings.parts],
        )
        return Home(settings, rulebook, [Problem(shown, c.span, c.message) for c in found])

    def _folder(self, root: Path, name: str) -> Folder:
        return Folder(root / name, self.show(root / name))

    def check(self, paths: Iterable[Path], wanted: Wanted) -> Run:
        """Check the specs that paths lead to; one bad file never stops the others."""
        verdicts: list[Verdict] = []
        cases: list[Case] = []
        problems: list[Problem] = []
        for path in paths:
            read_cases, found = self.read(path)
            cases += read_cases
            problems += found
            if len(cases) >= _AT_ONCE:
                verdicts += self._judged(cases, wanted, mend=False)
                cases = []
        small = not verdicts and len(cases) <= SMALL
        verdicts += self._judged(cases, wanted, mend=small and self.mends)
        return Run(tuple(verdicts), tuple(sorted({*problems, *self.problems()})))

    def _judged(self, cases: Sequence[Case], wanted: Wanted, *, mend: bool) -> Iterator[Verdict]:
        """Judge some specs; if they are to be mended, the first that fail are told what holds."""
        verdicts = judge(cases, wanted)
        self._account(cases, verdicts, wanted)
        rows = [row for row, each in enumerate(verdicts) if each.outcome is Outcome.FAIL]
        rows = rows[: _MOST_MENDED - self.mended] if mend else []
        self.mended += len(rows)
        mended = self._windows([(cases[row], verdicts[row]) for row in rows], wanted.today)
        windows = dict(zip(rows, mended, strict=True))
        for row, verdict in enumerate(verdicts):
            yield _bare(replace(verdict, windows=windows.get(row, {})))

    def _account(self, cases: Sequence[Case], verdicts: list[Verdict], wanted: Wanted) -> None:
        """Give verdicts their accounts, the worst first while there is room for them."""
        if wanted.account is None:
            return
        rows = sorted(range(len(cases)), key=lambda row: (-verdicts[row].outcome.rank, row))
        rows = sorted(rows[: _MOST_ACCOUNTS - self.accounted])
        fully = replace(wanted, everything=True, extents=True)
        whole = judge([cases[row] for row in rows], fully)
        for row, verdict in zip(rows, whole, strict=True):
            self.accounted += 1
            trials_ = self._trials(cases[row])
            made = wanted.account(cases[row], verdict, trials_, self.accounted)
            verdicts[row] = replace(verdicts[row], account=made)

    def _trials(self, case: Case) -> dict[str, dict[float, Case]]:
        """Return a spec's variants over the standard values of each field its rules adjust."""
        fields = sorted({field for rule in case.rules.values() for field in rule.adjust})
        found = {}
        for field in fields:
            tried = trials(case.spec, field)
            variants = self.variants(case, ({field: text} for text in tried.values()))
            pairs = zip(tried, variants, strict=True)
            found[field] = {value: each for value, each in pairs if each is not None}
        return found

    def _windows(
        self, failing: Sequence[tuple[Case, Verdict]], today: date
    ) -> list[dict[str, tuple[float, ...]]]:
        """Return, for each failing spec, what holds of the fields its failing rules name.

        All values of all of them are judged together: that costs little more than one.
        """
        asked = [
            (row, field, tried)
            for row, (case, verdict) in enumerate(failing)
            for field in _adjusted(case, verdict)
            if (tried := trials(case.spec, field))
        ]
        pairs = [(failing[row][0], {f: text}) for row, f, tried in asked for text in tried.values()]
        verdicts = iter(self._judged_variants(pairs, today))
        found: list[dict[str, tuple[float, ...]]] = [{} for _ in failing]
        for row, field, tried in asked:
            own = list(islice(verdicts, len(tried)))
            found[row][field] = window_of(failing[row][0].spec, field, list(tried), own).holding()
        return found

    def window(self, case: Case, field: str, tried: Mapping[float, str], today: date) -> Window:
        """Return what each value tried of one field comes to."""
        verdicts = self._judged_variants([(case, {field: t}) for t in tried.values()], today)
        return window_of(case.spec, field, list(tried), verdicts)

    def relaxations(self, case: Case, window: Window, today: date) -> list[Relaxation]:
        """Return what may give way where no standard value holds, each figure alone."""
        tried = trials(case.spec, window.field)

        def holding(
            moves: Sequence[Move], values: Sequence[float], *, proven: bool
        ) -> list[tuple[float, ...]]:
            pairs = [(lever, to, value) for lever, to in moves for value in values]
            changes = [{each.path: each.text(to), window.field: tried[v]} for each, to, v in pairs]
            variants = [(case, change) for change in changes]
            verdicts = self._judged_variants(variants, today, proven=proven)
            rows = (verdicts[at : at + len(values)] for at in range(0, len(pairs), len(values)))
            return [window_of(case.spec, window.field, values, row).holding() for row in rows]

        rules = [case.rules[each] for each in window.clash()]
        some = levers(case.spec, case.circuit, rules, window.field)
        found = nearest(some, lambda moves: holding(moves, window.gap(), proven=False))
        return list(verified(found, lambda moves: holding(moves, list(tried), proven=True)))

    def _judged_variants(
        self,
        changes: Sequence[tuple[Case, Mapping[str, str]]],
        today: date,
        *,
        proven: bool = True,
    ) -> list[Verdict | None]:
        """Return the verdict on each spec under its change; none on one that is unsound.

        A witness is enough for a failure; only what has none is proven, where that is wanted.
        """
        variants = [each for case, change in changes for each in self.variants(case, [change])]
        sound = [row for row, each in enumerate(variants) if each is not None]
        found: list[Verdict | None] = [None] * len(variants)
        for care in (Care.SEARCHED, Care.DECIDED) if proven else (Care.SEARCHED,):
            cases = [each for row in sound if (each := variants[row])]
            for row, verdict in zip(sound, judge(cases, Wanted(today, care=care)), strict=True):
                found[row] = verdict
            sound = [row for row in sound if (v := found[row]) and v.outcome is not Outcome.FAIL]
        return found

    def problems(self) -> list[Problem]:
        """Return what is wrong with the settings and knowledge met so far."""
        homes = self.homes.values()
        return [each for home in homes for each in (*home.problems, *home.rulebook.problems)]

    def read(self, path: Path) -> tuple[list[Case], list[Problem]]:
        """Read the specs of one file."""
        shown = self.show(path)
        data = read_bytes(path)
        if isinstance(data, str):
            return [], [Problem(shown, TOP, data)]
        reading, home = read(data), self.home(path)
        found, cases = list(reading.complaints), []
        for stated in reading.documents:
            document = self._supposed(stated)
            wrong: list[Complaint] = []
            case = self._case(document, home, shown, wrong)
            found += wrong if document is stated else map(_as_supposed, wrong)
            if case is not None:
                cases.append(case)
        found += _repeated([case.spec for case in cases])
        return cases, [Problem(shown, each.span, each.message) for each in found]

    def _supposed(self, document: Document) -> Document:
        """Return a document with the values to try put in."""
        node = find(document.root, ("name",))
        for each in self.suppositions:
            if isinstance(node, Scalar) and node.text == each.spec:
                document = with_value(document, each.field, each.text)
                self.used.add(each)
        return document

    def variants(self, case: Case, changes: Iterable[Mapping[str, str]]) -> list[Case | None]:
        """Return a spec once for each change, texts by path; none for one that is unsound."""
        home, found = self.home(self.folder / case.spec.file), list[Complaint]()
        cases = []
        for change in changes:
            document = Document(case.spec.root, 1)
            for field, text in change.items():
                document = with_value(document, field, text)
            cases.append(self._case(document, home, case.spec.file, found))
        return cases

    def _case(
        self, document: Document, home: Home, shown: str, found: list[Complaint]
    ) -> Case | None:
        """Read one spec and join it with what judges it; complaints go to ``found``."""
        book = home.rulebook
        node = find(document.root, ("kind",))
        name = node.text if isinstance(node, Scalar) else ""
        kind = book.kind(name) if name in book.kind_names() else None
        if kind is None:
            found.append(_no_kind(document, node, name, book))
            return None
        unfit = complaints(document.root, home.schema(kind))
        context = Context(shown, home.settings.derating, book.part)
        spec, wrong = read_spec(document, kind, context, unfit)
        policy = book.policy(name := self.derating or spec.derating) if spec else None
        if spec and policy is None:
            known = book.policy_names()
            wrong.append(
                Complaint(
                    spec.place("derating"),
                    f"there is no derating policy {name}{hint(name, known)}"
                    f" (known: {', '.join(known)})",
                )
            )
        found += wrong
        if wrong or spec is None or policy is None:
            return None
        judged = replace(spec, derating=policy.name)
        return Case(judged, book.circuit(kind, policy, spec.styles), book.rules(kind))

    def specs(self, paths: Sequence[Path]) -> list[Path]:
        """Return the spec files that paths lead to, sorted as they are shown.

        A folder stands for the specs below it; a file of knowledge or settings stands
        for the whole project it belongs to. Raises `UsageError` for a path that does
        not exist and for one that leads to no spec.
        """
        found: set[Path] = set()
        for path in paths:
            if not path.exists():
                raise UsageError(f"{self.show(path)}: there is no such file or folder")
            below = [path] if is_spec_name(path) else list(self._below(path))
            if not below:
                raise UsageError(f"{self.show(path)}: there is no spec here (*.reg.yaml)")
            found.update(below)
        return sorted(found, key=self.show)

    def _below(self, path: Path) -> Iterator[Path]:
        folder = path if path.is_dir() else root_above(path.parent) or path.parent
        for each, tracked in listed(folder):
            home = self.home(each)
            inner = each.relative_to(home.settings.root) if _inside(each, home) else each
            if any(matches(inner.as_posix(), glob) for glob in home.settings.specs):
                if not tracked:
                    self.untracked.append(each)
                yield each


def _adjusted(case: Case, verdict: Verdict) -> list[str]:
    """Return the fields that a spec's failing rules name for adjustment."""
    failing = (each.rule for each in verdict.findings if each.outcome is Outcome.FAIL)
    return sorted({field for rule in failing for field in case.rules[rule].adjust})


def _as_supposed(complaint: Complaint) -> Complaint:
    return replace(complaint, message=f"{complaint.message} (with the values supposed)")


def _bare(verdict: Verdict) -> Verdict:
    """Return a verdict whose spec has lost its figures: places in a report are known by now."""
    tree = MappingNode({}, verdict.spec.root.span)
    return replace(verdict, spec=replace(verdict.spec, root=tree, numbers={}, swept={}, origins={}))


def with_value(document: Document, field: str, text: str) -> Document:
    """Return a document with another text at a field's dotted path."""
    return replace(document, root=changed(document.root, field.split("."), text))


def _no_kind(document: Document, node: object, name: str, book: Rulebook) -> Complaint:
    known = book.kind_names()
    listed = ", ".join(known)
    if not isinstance(node, Scalar):
        return Complaint(document.root.span, f"kind is missing; write one of: {listed}")
    if name in known:
        return Complaint(node.span, f"the kind {name} cannot be used: its file is unsound")
    return Complaint(node.span, f"there is no kind {name}{hint(name, known)} (known: {listed})")


def _repeated(specs: Sequence[Spec]) -> Iterator[Complaint]:
    seen: dict[str, Spec] = {}
    for spec in specs:
        if spec.name in seen:
            first = seen[spec.name].place("name").line
            message = f"the name {spec.name} is taken by the spec whose name is on line {first}"
            yield Complaint(spec.place("name"), message)
        seen.setdefault(spec.name, spec)


def _inside(path: Path, home: Home) -> bool:
    return path.is_relative_to(home.settings.root)
