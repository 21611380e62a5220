"""Levers: the stated figures that may give way where rules exclude each other."""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from math import floor, log10

from reglint.check import names_of
from reglint.circuit import Circuit
from reglint.dimension import Dimension
from reglint.formula import evaluate
from reglint.functions import DIMENSIONS
from reglint.kind import FIGURES
from reglint.quantity import unit
from reglint.rule import Rule
from reglint.spec import Spec, Term

#: How far a single figure is tried: a decade to each side.
_DECADE = 10.0


@dataclass(frozen=True, slots=True)
class Lever:
    """One figure that may give way, from what is stated to the utmost that is tried."""

    path: str
    unit: str
    stated: float
    utmost: float
    #: The range whose one end it is; nothing for a single figure.
    range: Term | None = None

    @property
    def upward(self) -> bool:
        """Tell whether giving way means to grow."""
        return self.utmost > self.stated

    def at(self, share: float) -> float:
        """Return the figure at a share of the way: evenly along a range, by ratio else."""
        if self.range:
            return self.stated + share * (self.utmost - self.stated)
        return float(self.stated * (self.utmost / self.stated) ** share)

    def rounded(self, value: float) -> float:
        """Return a value to three digits, no nearer to what is stated and not beyond the utmost."""
        if value == 0.0:
            return value
        step = 10.0 ** (floor(log10(abs(value))) - 2)
        nearest = round(value / step) * step
        if (nearest < value) is self.upward and nearest != value:
            nearest += step if self.upward else -step
        inside = min if self.upward else max
        return inside(float(f"{nearest:.6g}"), self.utmost)

    def text(self, value: float) -> str:
        """Return the figure as a spec states it; a range keeps its other end."""
        if not self.range:
            return f"{value!r} {self.unit}"
        low, high = (self.range.low, value) if self.upward is False else (value, self.range.high)
        nominal = min(max(self.range.nominal, low), high)
        difference = "K" if self.unit == "degC" else self.unit
        return f"{nominal!r} {self.unit} +{high - nominal!r}/-{nominal - low!r} {difference}"


def levers(spec: Spec, circuit: Circuit, rules: Iterable[Rule], field: str) -> list[Lever]:
    """Return the figures whose giving way may help rules to hold, other than one field.

    Those are the ends of the ranges that the rules depend on, and the figures that their
    limits are made of.
    """
    found: dict[tuple[str, bool], Lever] = {}
    for rule in rules:
        value, limit = (circuit.reach_of(each) for each in (rule.holds.value, rule.holds.limit))
        of = evaluate(rule.holds.limit.root, names_of(spec.kind).__getitem__, DIMENSIONS)
        some = [each for name in sorted(value | limit) for each in _of_ranges(spec, name)]
        some += [each for name in sorted(limit - value) for each in _of_figure(spec, name, of)]
        found |= {(each.path, each.upward): each for each in some}
    return [each for each in found.values() if each.path != field]


def _of_ranges(spec: Spec, name: str) -> Iterator[Lever]:
    """Yield both ends of every stated range that a name is the sum of."""
    for term in spec.swept.get(name, ()):
        field, stated = spec.kind.field(term.path), spec.swept.get(term.path, (term,))[0]
        if field and field.role == "swept" and stated.low < stated.high:
            yield Lever(term.path, field.unit, stated.high, stated.low, stated)
            if not field.single_is_maximum:
                yield Lever(term.path, field.unit, stated.low, stated.high, stated)


def _of_figure(spec: Spec, name: str, of: Dimension) -> Iterator[Lever]:
    """Yield a single figure, to become greater or less, if it is of the limit's dimension.

    Temperatures are left out: another junction is another part.
    """
    field, stated = spec.kind.field(name), spec.numbers.get(name, 0.0)
    figure = field and field.role in FIGURES and field.unit != "degC" and stated > 0.0
    if field and figure and unit(field.unit).dimension == of:
        yield Lever(name, field.unit, stated, stated * _DECADE)
        yield Lever(name, field.unit, stated, stated / _DECADE)
