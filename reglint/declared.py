"""The pictures a kind declares: which of its names and formulas make them."""

from collections.abc import Mapping
from dataclasses import dataclass, field

from reglint.formula import Formula
from reglint.statement import Statements
from reglint.tree import Mapping as MappingNode
from reglint.tree import plain, section, sections


@dataclass(frozen=True, slots=True)
class Curves:
    """Two formulas over a quantity that is set free: they meet at the operating point.

    The band is drawn over the whole box, the lines at the two corners where the free
    quantity, before it was freed, is least and greatest.
    """

    title: str
    says: str
    condition: str
    #: The quantity set free: it runs upwards, whatever its own formula says.
    free: Formula
    #: Its range, evaluated where the quantity is greatest.
    start: Formula
    end: Formula
    band: Formula
    lines: Formula
    #: Figures drawn as straight lines, in the dimension of either axis.
    marks: tuple[Formula, ...]


@dataclass(frozen=True, slots=True)
class Area:
    """Two stated names that span an area, coloured by what the rules come to at each point."""

    title: str
    says: str
    across: Formula
    up: Formula


@dataclass(frozen=True, slots=True)
class Declared:
    """All that a kind declares, by name; the margins of its rules need no declaration."""

    curves: Mapping[str, Curves] = field(default_factory=dict)
    areas: Mapping[str, Area] = field(default_factory=dict)


def read_declared(node: MappingNode, statements: Statements) -> Declared:
    """Read the section ``pictures`` of a kind; complaints go to ``statements``."""
    curves, areas = sections(section(node, "curves")), sections(section(node, "areas"))
    return Declared(
        curves={name: _read_curves(each, statements) for name, each in curves.items()},
        areas={name: _read_area(each, statements) for name, each in areas.items()},
    )


def _read_curves(node: MappingNode, statements: Statements) -> Curves:
    texts = plain(node)
    return Curves(
        title=texts["title"],
        says=texts["says"].strip(),
        condition=texts["condition"],
        free=statements.formula(node, "free"),
        start=statements.formula(node, "from"),
        end=statements.formula(node, "to"),
        band=statements.formula(node, "band"),
        lines=statements.formula(node, "lines"),
        marks=statements.listed(node, "marks"),
    )


def _read_area(node: MappingNode, statements: Statements) -> Area:
    texts = plain(node)
    return Area(
        title=texts["title"],
        says=texts["says"].strip(),
        across=statements.formula(node, "across"),
        up=statements.formula(node, "up"),
    )
