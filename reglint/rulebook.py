"""The rulebook: what the folders of knowledge hold, read when it is first asked for.

A folder of knowledge holds one folder for each kind (``kind.yaml`` and a file a rule), a
folder ``derating`` with a file a policy, and a folder ``parts``. The built-in folder comes
first; a repository's own folders add to it and never replace anything in it.
"""

from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Literal, TypeAlias, TypeVar

from reglint import check
from reglint.circuit import Circuit, under
from reglint.document import read
from reglint.files import Folder, read_bytes
from reglint.kind import Kind, read_kind
from reglint.nearest import hint
from reglint.part import Part, read_parts
from reglint.policy import Policy, read_policy
from reglint.rule import Rule, read_rule
from reglint.schema import complaints, knowledge_schema
from reglint.source import TOP, Complaint, Problem
from reglint.statement import Statements
from reglint.tree import Document

T = TypeVar("T")

_What: TypeAlias = Literal["kind", "rule", "policy", "part"]
_Build: TypeAlias = Callable[[Document, Path, str, Statements], T]


@cache
def built_in() -> Folder:
    """Return the folder of knowledge that comes with reglint: in the wheel, or in a checkout."""
    inside = Path(__file__).parent / "rules"
    path = inside if inside.is_dir() else inside.parents[1] / "rules"
    return Folder(path, "rules")


class Rulebook:
    """Kinds, rules, policies and parts of some folders; what is wrong with them in `problems`."""

    def __init__(self, folders: Sequence[Folder] = (), parts: Sequence[Folder] = ()) -> None:
        """Look into the built-in folder, then into further ones."""
        self._folders = (built_in(), *folders)
        self._part_folders = tuple(parts)
        self._kinds: dict[str, Kind | None] = {}
        self._rules: dict[str, Mapping[str, Rule]] = {}
        self._policies: dict[str, Policy | None] = {}
        self._circuits: dict[tuple[str, str, tuple[tuple[str, str], ...]], Circuit] = {}
        self._parts: Mapping[str, Part] | None = None
        self.problems: list[Problem] = []

    def kind_names(self) -> list[str]:
        """Return the names of all kinds, sorted."""
        found = (path for folder in self._folders for path in folder.path.glob("*/kind.yaml"))
        return sorted({path.parent.name for path in found})

    def policy_names(self) -> list[str]:
        """Return the names of all derating policies, sorted."""
        found = (path for folder in self._folders for path in folder.path.glob("derating/*.yaml"))
        return sorted({path.stem for path in found})

    def kind(self, name: str) -> Kind | None:
        """Return a kind, or nothing where there is none or its file is unsound."""
        if name not in self._kinds:
            self._kinds[name] = self._read_first(f"{name}/kind.yaml", "kind", _kind)
        return self._kinds[name]

    def rules(self, kind: Kind) -> Mapping[str, Rule]:
        """Return the rules of a kind by name, in the order of their names."""
        if kind.name not in self._rules:
            self._rules[kind.name] = dict(sorted(self._read_rules(kind)))
        return self._rules[kind.name]

    def policy(self, name: str) -> Policy | None:
        """Return a derating policy, or nothing where there is none or its file is unsound."""
        if name not in self._policies:
            self._policies[name] = self._read_first(f"derating/{name}.yaml", "policy", _policy)
        return self._policies[name]

    def circuit(self, kind: Kind, policy: Policy, styles: Mapping[str, str]) -> Circuit:
        """Return a kind under a policy, its allowances checked when first joined."""
        key = (kind.name, policy.name, tuple(sorted(styles.items())))
        if key not in self._circuits:
            circuit = self._circuits[key] = under(kind, policy, styles)
            self._note(policy.file, check.check_allowances(circuit))
        return self._circuits[key]

    def part(self, name: str) -> Part | str:
        """Return a part by name, or the sentence that says it is unknown."""
        parts = self.parts()
        return parts.get(name) or f"no part {name} is known{hint(name, parts)}"

    def parts(self) -> Mapping[str, Part]:
        """Return all parts by name; a repository's own come before the built-in ones."""
        if self._parts is None:
            own = [
                part for folder in self._part_folders for part in self._read_parts(folder, "**/")
            ]
            stock = [p for folder in self._folders for p in self._read_parts(folder, "parts/")]
            self._parts = {part.name: part for part in (*reversed(stock), *reversed(own))}
        return self._parts

    def _read_parts(self, folder: Folder, where: str) -> Iterator[Part]:
        for path in folder.files(f"{where}*.part.yaml", f"{where}*.part.yml"):
            document = self._document(path, folder, "part")
            if document is not None:
                yield from read_parts(document, folder.show(path))

    def _read_rules(self, kind: Kind) -> Iterator[tuple[str, Rule]]:
        seen: dict[str, str] = {}
        for folder in self._folders:
            for path in folder.files(f"{kind.name}/*.yaml"):
                if path.name == "kind.yaml":
                    continue
                if path.stem in seen:
                    first = seen[path.stem]
                    message = f"a rule {path.stem} exists already in {first}; rename this one"
                    self.problems.append(Problem(folder.show(path), TOP, message))
                    continue
                rule = self._read(path, folder, "rule", _rule)
                sound = rule and not self._note(rule.file, check.check_rule(rule, kind))
                if rule is not None and sound:
                    seen[path.stem] = rule.file
                    yield rule.name, rule

    def _read_first(self, inner: str, what: _What, build: _Build[T]) -> T | None:
        for folder in self._folders:
            path = folder.path / inner
            if path.is_file():
                return self._read(path, folder, what, build)
        return None

    def _read(self, path: Path, folder: Folder, what: _What, build: _Build[T]) -> T | None:
        """Read one file of knowledge; one with problems is not used."""
        document = self._document(path, folder, what)
        if document is None:
            return None
        statements = Statements()
        built = build(document, path, folder.show(path), statements)
        return None if self._note(folder.show(path), statements.complaints) else built

    def _document(self, path: Path, folder: Folder, what: _What) -> Document | None:
        shown = folder.show(path)
        data = read_bytes(path)
        if isinstance(data, str):
            self.problems.append(Problem(shown, TOP, data))
            return None
        reading = read(data)
        found = list(reading.complaints)
        for document in reading.documents:
            found += complaints(document.root, knowledge_schema(what))
        if len(reading.documents) > 1:
            found.append(Complaint(reading.documents[1].root.span, "one document a file is wanted"))
        return None if self._note(shown, found) else reading.documents[0]

    def _note(self, file: str, found: Iterable[Complaint]) -> bool:
        """Keep complaints as problems of a file; tell whether there were any."""
        problems = [Problem(file, each.span, each.message) for each in found]
        self.problems += problems
        return bool(problems)


def _kind(document: Document, path: Path, shown: str, statements: Statements) -> Kind:
    kind = read_kind(document, path.parent.name, shown, statements)
    if not statements.complaints:
        statements.complaints.extend(check.check_kind(kind))
    return kind


def _rule(document: Document, path: Path, shown: str, statements: Statements) -> Rule:
    return read_rule(document, path.stem, shown, statements)


def _policy(document: Document, path: Path, shown: str, statements: Statements) -> Policy:
    return read_policy(document, path.stem, shown, statements)
