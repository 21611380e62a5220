"""A derating policy: how much of a part's rating a design may use."""

from collections.abc import Mapping
from dataclasses import dataclass

from reglint.formula import Formula
from reglint.statement import Statements
from reglint.tree import Document, plain, section, sections
from reglint.tree import Mapping as MappingNode


@dataclass(frozen=True, slots=True)
class Allowance:
    """What a policy allows one class of parts, in the class's own field names."""

    name: str
    formula: Formula
    source: str
    #: Styles the policy has no such figure for, and why.
    not_covered: Mapping[str, str]


@dataclass(frozen=True, slots=True)
class PartClass:
    """A policy's rows for one class of parts."""

    name: str
    default_style: str
    #: The figures of each style, used in allowances as ``style.NAME``.
    styles: Mapping[str, Mapping[str, Formula]]
    allowances: Mapping[str, Allowance]

    def style(self, stated: str) -> str:
        """Return the style whose rows apply to a stated one."""
        return stated if stated in self.styles else self.default_style


@dataclass(frozen=True, slots=True)
class Policy:
    """A derating policy, as its file states it."""

    name: str
    title: str
    about: str
    source: str
    classes: Mapping[str, PartClass]
    file: str


def read_policy(document: Document, name: str, file: str, statements: Statements) -> Policy:
    """Build a policy from a document that its schema accepts; complaints go to ``statements``."""
    texts = plain(document.root)
    classes = sections(section(document.root, "classes"))
    return Policy(
        name=name,
        title=texts["title"],
        about=texts["about"].strip(),
        source=texts["source"].strip(),
        classes={key: _read_class(key, node, statements) for key, node in classes.items()},
        file=file,
    )


def _read_class(name: str, node: MappingNode, statements: Statements) -> PartClass:
    texts = plain(node)
    styles = section(node, "styles")
    return PartClass(
        name=name,
        default_style=texts.get("default_style", ""),
        styles={style: statements.named(styles, style) for style in styles.entries},
        allowances={
            key: _read_allowance(key, inner, statements)
            for key, inner in sections(node).items()
            if key != "styles"
        },
    )


def _read_allowance(name: str, node: MappingNode, statements: Statements) -> Allowance:
    texts = plain(node)
    return Allowance(
        name=name,
        formula=statements.formula(node, "is"),
        source=texts.get("source", ""),
        not_covered=texts.get("not_covered", {}),
    )
