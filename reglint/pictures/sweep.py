"""A sweep: the margins of all rules for each value that one adjustable field could take."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from reglint.box import boxes_of
from reglint.finding import Outcome
from reglint.judge import Case
from reglint.pictures.sample import corner_margins
from reglint.preferred import series_for
from reglint.rule import Rule
from reglint.worstcase import Array

#: A margin that changes less over the whole sweep does not depend on the field.
_STILL = 1e-9


@dataclass(frozen=True, slots=True)
class Sweep:
    """The margins of some rules over the standard values of a field."""

    field: str
    unit: str
    #: The series of IEC 60063 the values are of.
    series: str
    #: The value the spec states.
    stated: float
    values: Array
    rules: tuple[Rule, ...]
    #: Shape (rules, values); NaN where a margin has no value.
    margins: Array

    def outcomes(self) -> list[Outcome]:
        """Return for each value what the worst of all rules comes to."""
        harmless = np.array([each.at_worst_warn for each in self.rules])[:, None]
        warn = np.array([each.warn_margin for each in self.rules])[:, None]
        holds, passes = (self.margins >= 0.0) | harmless, self.margins >= warn  # NaN is neither
        worst = np.where(holds.all(axis=0), np.where(passes.all(axis=0), 0, 1), 2)
        return [list(Outcome)[rank] for rank in worst]

    def moving(self) -> list[int]:
        """Return the rows of the rules whose margin changes from one value to another."""
        with np.errstate(invalid="ignore"):
            change = self.margins.max(axis=1) - self.margins.min(axis=1)
        same = (self.margins == self.margins[:, :1]).all(axis=1)  # infinities among them
        return [int(row) for row in np.flatnonzero(~same & ~(change <= _STILL))]


def sweep(
    case: Case, field: str, variants: Mapping[float, Case], rules: Sequence[Rule]
) -> Sweep | str:
    """Return the sweep of a spec over its variants, or why there is none.

    ``variants`` are the spec with each standard value in place of the field's.
    """
    if not variants:
        return f"{field}: it is stated without a tolerance, so no series is meant."
    boxes = boxes_of(case.circuit, [each.spec for each in variants.values()])
    found: dict[str, Array] = {}
    for condition, box in boxes.items():
        concerned = [rule for rule in rules if rule.condition == condition]
        if concerned:
            found |= corner_margins(box, concerned)
    if not found:
        return f"{field}: no rule was checked."
    numbers = case.spec.numbers
    return Sweep(
        field,
        case.spec.kind.fields[field].unit,
        series_for(numbers[f"{field}.tolerance"]),
        numbers[f"{field}.nominal"],
        np.array(list(variants)),
        tuple(rules),
        np.array([found[rule.name] for rule in rules]),
    )
