"""A kind of regulator: its fields, the quantities that follow, its operating conditions."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from dataclasses import field as dataclass_field
from functools import cached_property
from typing import TypeVar

from reglint import quantity
from reglint.declared import Declared, read_declared
from reglint.dimension import ONE, Dimension
from reglint.formula import Formula
from reglint.statement import Statements
from reglint.tree import Document, plain, section, sections
from reglint.tree import Mapping as MappingNode

T = TypeVar("T")

#: The roles whose values are text, not numbers.
WORDS = ("text", "choice")
#: The roles whose values are single figures.
FIGURES = ("rating", "limit", "limits")


@dataclass(frozen=True, slots=True)
class Neglect:
    """What is assumed, and must be said, where an influence is not stated."""

    value: float
    says: str


@dataclass(frozen=True, slots=True)
class Field:
    """One thing a spec states."""

    path: str
    #: ``swept``, ``rating``, ``limit``, ``limits``, ``choice`` or ``text``.
    role: str
    says: str
    #: The unit of its values; empty for words.
    unit: str = ""
    required: bool = False
    #: Letter symbol of the trade.
    symbol: str = ""
    example: str = ""
    #: Values must be greater than this, in SI units.
    above: float | None = None
    #: Values must not be less than this, in SI units.
    at_least: float | None = None
    #: A single figure is the top of a range that starts at zero.
    single_is_maximum: bool = False
    #: IEC 60062 codes are read.
    codes: bool = False
    #: Fields that widen this one: ``tempco`` and ``ageing``.
    widened_by: Mapping[str, str] | None = None
    #: The voltage, say, of which a value in %/K is a fraction.
    relative_to: str = ""
    #: Formulas tried in turn where the field is not stated.
    otherwise: tuple[Formula, ...] = ()
    neglected: Neglect | None = None
    #: The words a choice accepts, and the number each stands for in formulas.
    choices: Mapping[str, float] | None = None
    default: str = ""


@dataclass(frozen=True, slots=True)
class Total:
    """A sum over named items, such as the current of all loads."""

    path: str
    unit: str
    says: str
    #: The fields summed, with ``*`` for the item's name.
    of: str
    #: Whether reciprocals are summed.
    inverse: bool
    symbol: str = ""


@dataclass(frozen=True, slots=True)
class Root:
    """An equation: the quantity is where ``falling`` passes through zero."""

    falling: Formula
    start: Formula
    end: Formula
    #: The value where ``falling`` is not positive at the start already.
    otherwise: Formula


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number that follows from the fields by a formula, or as the root of an equation."""

    path: str
    unit: str
    says: str
    formula: Formula | None
    root: Root | None = None
    #: Names that take another value while this formula is evaluated.
    given: Mapping[str, Formula] = dataclass_field(default_factory=dict)
    symbol: str = ""


@dataclass(frozen=True, slots=True)
class Condition:
    """An operating condition: what of the fields it fixes or re-ranges."""

    name: str
    says: str
    #: ``connected``, ``absent`` or ``either``.
    removable_loads: str = "connected"
    fixes: Mapping[str, Formula] = dataclass_field(default_factory=dict)
    #: Every field at its nominal value instead of over its range.
    nominal: bool = False


@dataclass(frozen=True, slots=True)
class Component:
    """A part of the circuit, the class of its derating and what a policy allows it."""

    name: str
    part_class: str
    #: What a policy allows, by name, with its unit.
    allowances: Mapping[str, str]

    def paths(self) -> frozenset[str]:
        """Return the dotted names of its allowances."""
        return frozenset(f"{self.name}.{allowance}" for allowance in self.allowances)


@dataclass(frozen=True)
class Kind:
    """A kind of regulator, as its ``kind.yaml`` states it."""

    name: str
    title: str
    about: str
    source: str
    components: Mapping[str, Component]
    fields: Mapping[str, Field]
    totals: Mapping[str, Total]
    quantities: Mapping[str, Quantity]
    conditions: Mapping[str, Condition]
    #: A complete spec that passes every rule.
    sample: MappingNode
    file: str
    pictures: Declared = dataclass_field(default_factory=Declared)

    def field(self, path: str) -> Field | None:
        """Return the field at a dotted path, an end of one, or one of a named item's fields."""
        group, _, rest = path.partition(".")
        item = f"{group}.*.{rest.partition('.')[2]}"
        whole, _, end = path.rpartition(".")
        limits = self.fields.get(whole) if end in ("min", "max") else None
        return self.fields.get(path) or self.fields.get(item) or limits

    @cached_property
    def stated_names(self) -> Mapping[str, Dimension]:
        """Every name a spec gives a value to, with its dimension."""
        names: dict[str, Dimension] = {}
        for field in self.fields.values():
            if "*" not in field.path:
                names |= _names_of(field)
        for total in self.totals.values():
            of = quantity.unit(total.unit).dimension
            names |= dict.fromkeys((total.path, f"{total.path}.least", f"{total.path}.most"), of)
        return names


def _names_of(field: Field) -> dict[str, Dimension]:
    """Return the names one field gives to formulas."""
    if field.role in WORDS:
        return {field.path: ONE} if field.role == "choice" else {}
    of = quantity.unit(field.unit).dimension
    ends = {f"{field.path}.min": of, f"{field.path}.max": of}
    match field.role:
        case "limits":
            return ends
        case "swept":
            nominal = {field.path: of, f"{field.path}.nominal": of}
            return nominal | ends | {f"{field.path}.tolerance": ONE}
    return {field.path: of}


def read_kind(document: Document, name: str, file: str, statements: Statements) -> Kind:
    """Build a kind from a document that its schema accepts; complaints go to ``statements``."""
    root = document.root
    texts = plain(root)

    def each(name: str, read: Callable[[str, MappingNode], T]) -> dict[str, T]:
        return {path: read(path, node) for path, node in sections(section(root, name)).items()}

    return Kind(
        name=name,
        title=texts["title"],
        about=texts["about"],
        source=texts["source"],
        components=each("components", _read_component),
        fields=each("fields", lambda path, node: _read_field(path, node, statements)),
        totals=each("totals", _read_total),
        quantities=each("quantities", lambda path, node: _read_quantity(path, node, statements)),
        conditions=each("conditions", lambda path, node: _read_condition(path, node, statements)),
        sample=section(root, "sample"),
        file=file,
        pictures=read_declared(section(root, "pictures"), statements),
    )


def _read_component(name: str, node: MappingNode) -> Component:
    texts = plain(node)
    return Component(name, texts["class"], texts["allowances"])


def _read_field(path: str, node: MappingNode, statements: Statements) -> Field:
    texts = plain(node)
    unit = texts.get("unit", "")
    neglected = texts.get("neglected")
    choices = texts.get("choices")
    return Field(
        path=path,
        role=texts["role"],
        says=texts["says"],
        unit=unit,
        required=texts.get("required") == "true",
        symbol=texts.get("symbol", ""),
        example=str(texts.get("example", "")),
        above=_bound(texts.get("above")),
        at_least=_bound(texts.get("at_least")),
        single_is_maximum=texts.get("single_is_maximum") == "true",
        codes=texts.get("codes") == "true",
        widened_by=texts.get("widened_by"),
        relative_to=texts.get("relative_to", ""),
        otherwise=statements.listed(node, "otherwise"),
        neglected=neglected and Neglect(quantity.parse(neglected["as"], unit), neglected["says"]),
        choices=choices and {word: float(number) for word, number in choices.items()},
        default=texts.get("default", ""),
    )


def _bound(text: str | None) -> float | None:
    return None if text is None else float(text)


def _read_total(path: str, node: MappingNode) -> Total:
    texts = plain(node)
    inverse = "inverse_sum_of" in texts
    return Total(
        path=path,
        unit=texts["unit"],
        says=texts["says"],
        of=texts["inverse_sum_of" if inverse else "sum_of"],
        inverse=inverse,
        symbol=texts.get("symbol", ""),
    )


def _read_quantity(path: str, node: MappingNode, statements: Statements) -> Quantity:
    texts = plain(node)
    solved = "solve" in node.entries
    return Quantity(
        path=path,
        unit=texts["unit"],
        says=texts["says"],
        formula=None if solved else statements.formula(node, "is"),
        root=_read_root(section(node, "solve"), statements) if solved else None,
        given=statements.named(node, "given"),
        symbol=texts.get("symbol", ""),
    )


def _read_root(node: MappingNode, statements: Statements) -> Root:
    return Root(
        falling=statements.formula(node, "falling"),
        start=statements.formula(node, "from"),
        end=statements.formula(node, "to"),
        otherwise=statements.formula(node, "otherwise"),
    )


def _read_condition(name: str, node: MappingNode, statements: Statements) -> Condition:
    texts = plain(node)
    return Condition(
        name=name,
        says=texts["says"],
        removable_loads=texts.get("removable_loads", "connected"),
        fixes=statements.named(node, "fixes"),
        nominal=texts.get("fields") == "nominal",
    )
