"""A meeting: two curves over a quantity set free, and the operating points where they meet.

A quantity such as the current through a diode follows from the whole circuit. Set free it
takes any value, and two formulas in its terms give the two sides whose meeting is the
circuit's operating point.
"""

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np

from reglint.box import Box
from reglint.check import names_of
from reglint.circuit import unit_of
from reglint.declared import Curves
from reglint.extent import Signed
from reglint.formula import Formula, evaluate
from reglint.functions import DIMENSIONS
from reglint.quantity import render
from reglint.values import Values
from reglint.worstcase import Array, search

#: Values of the free quantity, close together near its start, where curves bend.
_STEPS = np.linspace(0.0, 1.0, 61) ** 2

#: Names of figures and their values.
_Marks: TypeAlias = tuple[tuple[str, float], ...]


@dataclass(frozen=True, slots=True)
class Corner:
    """One corner of the box, with both curves and where they meet."""

    #: The swept names that bear on it, with their values.
    named: str
    #: The free quantity as the circuit has it, and the lines' value there.
    free: float
    met: float
    #: Both curves over the free quantity's values.
    line: Array
    curve: Array


@dataclass(frozen=True, slots=True)
class Meeting:
    """What the engine gives for one drawing; all arrays run over the free quantity's values."""

    declared: Curves
    free: Array
    band_low: Array
    band_high: Array
    corners: tuple[Corner, ...]
    #: Marks in the direction of either axis: name and value.
    levels: _Marks
    uprights: _Marks
    free_unit: str
    unit: str


def span(found: Meeting) -> tuple[float, float]:
    """Return the least and greatest value across that a drawing has to hold."""
    starts = (float(value) for each in found.corners for value in (each.line[0], each.met))
    values = (0.0, *starts, *(at for _, at in found.uprights))
    return min(values), max(values)


def meeting(declared: Curves, box: Box) -> Meeting | str:
    """Return the curves of the one spec of a box, or why there are none."""
    name = declared.free.text.strip()
    with np.errstate(all="ignore"):
        points = [search(box, Signed(name, sign)).point for sign in (1.0, -1.0)]
        free = _values_of_free(declared, box, points[1])
        if not (np.isfinite(free).all() and free[-1] > free[0]):
            return f"{declared.title}: {name} has no range here."
        low, high = _band(declared, box, free)
        corners = tuple(_corner(declared, box, point, free) for point in points)
        if not np.isfinite([*low, *high, *(v for each in corners for v in each.line)]).all():
            return f"{declared.title}: a curve has no value somewhere."
        levels, uprights = _marks(declared, box)
    found = Meeting(
        declared=declared,
        free=free,
        band_low=low,
        band_high=high,
        corners=corners,
        levels=levels,
        uprights=uprights,
        free_unit=unit_of(box.circuit, name),
        unit=str(evaluate(declared.band.root, names_of(box.circuit.kind).__getitem__, DIMENSIONS)),
    )
    start, end = span(found)
    return found if end > start else f"{declared.title}: the lines have no range here."


def _one(values: Values[Array], formula: Formula) -> float:
    return float(np.asarray(values.of(formula)).flat[0])


def _values_of_free(declared: Curves, box: Box, greatest: Array) -> Array:
    values = box.values(greatest[:, None, :])
    start, end = _one(values, declared.start), _one(values, declared.end)
    free: Array = start + (end - start) * _STEPS
    return free


def _set_free(declared: Curves, box: Box, points: Array, free: Array) -> Values[Array]:
    """Return values at each point, of shape (1, p, n), for each value of the free quantity."""
    every = np.repeat(points, len(free), axis=1)
    taken = np.tile(free, points.shape[1])[None, :]
    return box.values(every).within({declared.free.text.strip(): taken})


def _over(values: Values[Array], formula: Formula, points: int, steps: int) -> Array:
    found = np.broadcast_to(values.of(formula), (1, points * steps))
    return found.reshape(points, steps)


def _band(declared: Curves, box: Box, free: Array) -> tuple[Array, Array]:
    corners = box.corners()
    values = _set_free(declared, box, corners, free)
    curves = _over(values, declared.band, corners.shape[1], len(free))
    return curves.min(axis=0), curves.max(axis=0)


def _corner(declared: Curves, box: Box, point: Array, free: Array) -> Corner:
    name = declared.free.text.strip()
    there = box.values(point[:, None, :])
    values = _set_free(declared, box, point[:, None, :], free)
    return Corner(
        named=_named(declared, box, point[0]),
        free=float(np.asarray(there(name)).flat[0]),
        met=_one(there, declared.lines),
        line=_over(values, declared.lines, 1, len(free))[0],
        curve=_over(values, declared.band, 1, len(free))[0],
    )


def _named(declared: Curves, box: Box, point: Array) -> str:
    asked = box.circuit.needed((declared.free, declared.lines), box.condition.fixes)
    bearing = (each for each in zip(box.names, point, strict=True) if each[0] in asked)
    return ", ".join(
        f"{name} {render(float(value), unit_of(box.circuit, name))}" for name, value in bearing
    )


def _marks(declared: Curves, box: Box) -> tuple[_Marks, _Marks]:
    """Return the marks that are stated, those of the free quantity's dimension first."""
    names = names_of(box.circuit.kind)
    values = box.values(box.nominal[:, None, :])
    up = names[declared.free.text.strip()]
    levels: list[tuple[str, float]] = []
    uprights: list[tuple[str, float]] = []
    for mark in declared.marks:
        at = _one(values, mark)
        if np.isfinite(at):
            rises = evaluate(mark.root, names.__getitem__, DIMENSIONS) == up
            (levels if rises else uprights).append((mark.text.strip(), at))
    return tuple(levels), tuple(uprights)
