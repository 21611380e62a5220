"""A field: the margins of all rules over two figures that go further than a spec states."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from reglint.box import Box
from reglint.circuit import unit_of
from reglint.declared import Area
from reglint.pictures.sample import corner_margins, pinned
from reglint.rule import Rule
from reglint.worstcase import Array

#: Points of the grid across and upwards.
_ACROSS, _UP = 33, 25
#: How far around the spec's own box the field reaches: of the box's width, or of its ends.
_OF_WIDTH, _OF_ENDS = 0.7, 0.3
#: Margins beyond this say no more than that they are large.
_MOST = 10.0


@dataclass(frozen=True, slots=True)
class Field:
    """Margins over a grid; arrays of margins have the shape (up, across)."""

    declared: Area
    across: Array
    up: Array
    units: tuple[str, str]
    #: The spec's own ends across and upwards.
    own: tuple[tuple[float, float], tuple[float, float]]
    #: The rules that depend on either figure, and their margins, shape (rules, up, across).
    rules: tuple[Rule, ...]
    margins: Array

    def broken(self) -> Array:
        """Return each rule's margin where its break is a failure, and one out of reach else."""
        harmless = np.array([each.at_worst_warn for each in self.rules])
        return np.where(harmless[:, None, None], _MOST, self.margins)

    def reserve(self) -> Array:
        """Return what is left of each rule's margin over the margin under which it warns."""
        warn = np.array([each.warn_margin for each in self.rules])
        reserve: Array = self.margins - warn[:, None, None]
        return reserve


def field(declared: Area, boxes: Mapping[str, Box], rules: Sequence[Rule]) -> Field | str:
    """Return the field of one spec, whose boxes these are, or why there is none."""
    names = declared.across.text.strip(), declared.up.text.strip()
    own = (_own(boxes, names[0]), _own(boxes, names[1]))
    for name, (low, high) in zip(names, own, strict=True):
        if not np.isfinite(low + high) or low == high == 0.0:
            return f"{declared.title}: this spec gives {name} no range."
    across, up = _around(*own[0], _ACROSS), _around(*own[1], _UP)
    points = {names[0]: np.tile(across, _UP), names[1]: np.repeat(up, _ACROSS)}
    found = dict(_margins(boxes, rules, points))
    if not found:
        return f"{declared.title}: no rule that was checked depends on {' or '.join(names)}."
    drawn = tuple(rule for rule in rules if rule.name in found)
    margins = np.array([found[rule.name] for rule in drawn]).reshape(-1, _UP, _ACROSS)
    circuit = next(iter(boxes.values())).circuit
    return Field(
        declared,
        across,
        up,
        (unit_of(circuit, names[0]), unit_of(circuit, names[1])),
        own,
        drawn,
        # A margin without a value is drawn as a break: what is unknown never holds.
        np.clip(np.nan_to_num(margins, nan=-1.0), -_MOST, _MOST),
    )


def _own(boxes: Mapping[str, Box], name: str) -> tuple[float, float]:
    """Return the ends of a name over all operating conditions."""
    ends = [_ends(box, name) for box in boxes.values() if not box.condition.nominal]
    return min(low for low, _ in ends), max(high for _, high in ends)


def _ends(box: Box, name: str) -> tuple[float, float]:
    if name in box.names:
        column = box.names.index(name)
        return float(box.low[0, column]), float(box.high[0, column])
    value = float(box.fixed[name][0, 0])
    return value, value


def _around(low: float, high: float, count: int) -> Array:
    """Return values from well below a range to well above; none below zero without need."""
    room = max(_OF_WIDTH * (high - low), _OF_ENDS * max(abs(low), abs(high)))
    start = max(low - room, 0.0) if low >= 0.0 else low - room
    return np.linspace(start, high + room, count)


def _margins(
    boxes: Mapping[str, Box], rules: Sequence[Rule], points: Mapping[str, Array]
) -> Iterator[tuple[str, Array]]:
    """Yield the margins of each rule that depends on a point's figures, shape (points,)."""
    for condition, box in boxes.items():
        pins = {name: at for name, at in points.items() if not _taken_away(box, name)}
        concerned = [
            rule
            for rule in rules
            if rule.condition == condition and not pins.keys().isdisjoint(_needed(box, rule))
        ]
        if concerned:
            yield from corner_margins(pinned(box, pins), concerned).items()


def _taken_away(box: Box, name: str) -> bool:
    """Tell whether a condition takes a figure away, such as the current of absent loads."""
    terms = box.specs[0].swept.get(name, ())
    return box.condition.removable_loads == "absent" and any(term.removable for term in terms)


def _needed(box: Box, rule: Rule) -> frozenset[str]:
    return box.circuit.needed(rule.formulas(), box.condition.fixes)
