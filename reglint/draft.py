"""A spec in the making: values as they are read, and everything wrong with them."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

from reglint.kind import Kind
from reglint.part import Part
from reglint.source import Complaint
from reglint.spec import Assumption, Term
from reglint.tree import Mapping as MappingNode
from reglint.tree import Node, span_of


@dataclass(slots=True)
class Draft:
    """A spec in the making: values as they are read, and everything wrong with them."""

    root: MappingNode
    kind: Kind
    parts: Mapping[str, Part]
    numbers: dict[str, float] = field(default_factory=dict)
    swept: dict[str, tuple[Term, ...]] = field(default_factory=dict)
    texts: dict[str, str] = field(default_factory=dict)
    origins: dict[str, str] = field(default_factory=dict)
    assumptions: list[Assumption] = field(default_factory=list)
    neglected: dict[str, str] = field(default_factory=dict)
    complaints: list[Complaint] = field(default_factory=list)

    def complain(self, path: str, message: str, at: Node | None = None) -> None:
        """Note what is wrong with a field, at its value or where its part is named."""
        component = path.split(".", maxsplit=1)[0]
        if path in self.origins:
            where = f" (from {self.origins[path]}{f', line {at.span.line}' if at else ''})"
            span = span_of(self.root, (component, "part"))
            self.complaints.append(Complaint(span, f"{path}: {message}{where}"))
        else:
            span = at.span if at is not None else span_of(self.root, path.split("."))
            self.complaints.append(Complaint(span, f"{path}: {message}"))

    def lacks_its_part(self, path: str) -> bool:
        """Tell whether a field's component names a part that is not known; that is told already."""
        component = path.partition(".")[0]
        return f"{component}.part" in self.texts and component not in self.parts

    def assume(self, path: str, text: str, value: float | None = None, unit: str = "") -> None:
        """Note what was taken for a figure the spec does not state."""
        self.assumptions.append(Assumption(path, text, value, unit))


@dataclass(frozen=True, slots=True)
class Context:
    """What reading a spec needs to know beside the document and its kind."""

    #: The file's path as it is shown.
    file: str
    #: The derating policy of specs that name none.
    policy: str
    #: A part by name, or the sentence that says why there is none.
    find_part: Callable[[str], Part | str]
