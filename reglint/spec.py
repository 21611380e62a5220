"""A spec: one regulator as typed values, each with the place it was stated at."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from reglint.kind import Kind
from reglint.quantity import render
from reglint.source import Span
from reglint.tree import Mapping as MappingNode
from reglint.tree import find, span_of


@dataclass(frozen=True, slots=True)
class Term:
    """One addend of a swept value: its range and where it was stated.

    A resistance is the sum of its stated value, its drift with temperature and its
    ageing; a load current is the sum of the loads.
    """

    path: str
    low: float
    nominal: float
    high: float
    #: Whether an operating condition may take it away (a removable load).
    removable: bool = False


@dataclass(frozen=True, slots=True)
class Assumption:
    """A figure the spec does not state, and what was taken for it."""

    path: str
    text: str
    #: The figure taken, behind the text; it is put in words only where somebody reads them.
    value: float | None = None
    unit: str = ""

    @property
    def says(self) -> str:
        """Return what was taken, in words."""
        return self.text if self.value is None else f"{self.text}{render(self.value, self.unit)}"


@dataclass(frozen=True, slots=True)
class Waiver:
    """A rule's finding accepted for a time."""

    rule: str
    reason: str
    approved_by: str
    until: date
    #: The margin, as a fraction, below which the waiver stops working.
    no_worse_than: float | None
    span: Span

    @property
    def terms(self) -> tuple[object, ...]:
        """Return what was agreed, wherever it stands."""
        return (self.rule, self.reason, self.approved_by, self.until, self.no_worse_than)


@dataclass(frozen=True, slots=True)
class Spec:
    """One regulator, read and typed; numbers are in SI units, temperatures in °C."""

    file: str
    root: MappingNode
    kind: Kind
    name: str
    #: The derating policy it is judged under.
    derating: str
    #: The derating style of each component that states one.
    styles: Mapping[str, str]
    #: Single numbers by their name in formulas.
    numbers: Mapping[str, float]
    #: Swept names and the terms they are the sum of.
    swept: Mapping[str, tuple[Term, ...]]
    #: Words by their path: names of rails, reference designators, parts.
    texts: Mapping[str, str]
    #: Where figures not stated in the spec itself come from, by path.
    origins: Mapping[str, str]
    assumptions: tuple[Assumption, ...]
    #: Fields that were neglected, and what a report must say about it.
    neglected: Mapping[str, str]
    waivers: tuple[Waiver, ...]
    #: How a stated figure's builds are spread between its ends, by path, where stated.
    distributions: Mapping[str, str]
    #: What the regulator is for, in the spec's own words.
    purpose: str

    @property
    def line(self) -> int:
        """Return the line where the spec starts."""
        return self.root.span.line

    def place(self, path: str) -> Span:
        """Return where a field is stated; the part that states it, or its surroundings, else."""
        component = path.split(".", maxsplit=1)[0]
        if path in self.origins and f"{component}.part" in self.texts:
            path = f"{component}.part"
        return span_of(self.root, path.split("."))

    def states(self, path: str) -> bool:
        """Tell whether the spec itself states a field."""
        return find(self.root, path.split(".")) is not None

    def has(self, name: str) -> bool:
        """Tell whether a name has a value, stated or assumed."""
        return name in self.numbers or name in self.swept
