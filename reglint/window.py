"""The design window: the standard values of one field for which a spec holds."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations

from reglint.finding import Outcome, Verdict
from reglint.preferred import series_for, values
from reglint.quantity import render
from reglint.spec import Spec

#: How far around the stated value standard values are tried: a decade to each side.
_DECADE = 10.0
#: Values at which something else is tried as well.
_FEW = 8


@dataclass(frozen=True, slots=True)
class Window:
    """What each standard value of a field comes to."""

    field: str
    unit: str
    #: The series of IEC 60063 tried.
    series: str
    #: For each value the rules that fail and the rules that warn.
    failing: Mapping[float, frozenset[str]]
    warning: Mapping[float, frozenset[str]]

    def holding(self) -> tuple[float, ...]:
        """Return the values at which no rule fails."""
        return tuple(value for value, rules in self.failing.items() if not rules)

    def needs(self, rule: str) -> tuple[float, ...]:
        """Return the values at which one rule does not fail."""
        return tuple(value for value, rules in self.failing.items() if rule not in rules)

    def clash(self) -> tuple[str, ...]:
        """Return the rule that no value satisfies, or two that exclude each other."""
        rules = sorted(frozenset().union(*self.failing.values()))
        for count in (1, 2):
            for some in combinations(rules, count):
                if all(not failing.isdisjoint(some) for failing in self.failing.values()):
                    return some
        return ()

    def gap(self) -> tuple[float, ...]:
        """Return a few values from where one of two clashing rules ends to where the other begins.

        Of a rule that no value satisfies, a few of all.
        """
        values = sorted(self.failing)
        needs = [self.needs(rule) for rule in self.clash()]
        if len(needs) > 1:
            ends = sorted((min(each), max(each)) for each in needs)
            values = [each for each in values if ends[0][1] <= each <= ends[1][0]]
        step = -(-len(values) // _FEW)
        return tuple(values[::step])


def trials(spec: Spec, field: str) -> dict[float, str]:
    """Return the standard values to try, with their texts: the stated tolerance is kept.

    There are none for a field without a nominal value and a tolerance.
    """
    nominal, tolerance = (spec.numbers.get(f"{field}.{end}") for end in ("nominal", "tolerance"))
    if nominal is None or tolerance is None or nominal <= 0.0:
        return {}
    unit = spec.kind.fields[field].unit
    found = values(series_for(tolerance), nominal / _DECADE, nominal * _DECADE)
    return {value: f"{value!r} {unit} ± {100.0 * tolerance!r} %" for value in found}


def window(
    spec: Spec, field: str, tried: Sequence[float], verdicts: Sequence[Verdict | None]
) -> Window:
    """Return what the verdicts on a spec's variants, one for each value tried, come to.

    A value without a verdict made the spec unsound: it is none of the window's.
    """
    sound = {v: each for v, each in zip(tried, verdicts, strict=True) if each}
    return Window(
        field=field,
        unit=spec.kind.fields[field].unit,
        series=series_for(spec.numbers[f"{field}.tolerance"]),
        failing={value: _rules(each, Outcome.FAIL) for value, each in sound.items()},
        warning={value: _rules(each, Outcome.WARN) for value, each in sound.items()},
    )


def _rules(verdict: Verdict, outcome: Outcome) -> frozenset[str]:
    found = (f for f in verdict.findings if not f.waived and f.rule in verdict.rules)
    return frozenset(each.rule for each in found if each.outcome is outcome)


def told(spec: Spec, found: Window) -> str:
    """Return a window in words."""
    lines = [f"{found.field} of {spec.name}, values of {found.series}"]
    lines += _holding(found) if found.holding() else _clash(found)
    return "\n".join(lines) + "\n"


def _holding(found: Window) -> Iterator[str]:
    clean = [value for value in found.holding() if not found.warning[value]]
    if clean:
        yield f"  every rule passes at  {_listed(clean, found.unit)}"
    for value in found.holding():
        if rules := sorted(found.warning[value]):
            yield f"  with warnings at      {render(value, found.unit)} ({', '.join(rules)})"


def _clash(found: Window) -> Iterator[str]:
    yield "  no standard value holds"
    for rule in found.clash():
        yield f"  {rule} holds at  {_span(found.needs(rule), found.unit)}"


def _listed(values_: Sequence[float], unit: str) -> str:
    return ", ".join(render(value, unit) for value in values_)


def _span(values_: Sequence[float], unit: str) -> str:
    if not values_:
        return "no value tried"
    ends = sorted({values_[0], values_[-1]})
    return " to ".join(render(value, unit) for value in ends)
