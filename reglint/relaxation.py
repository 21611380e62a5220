"""Relaxations: the least move of one stated figure with which some standard value holds."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from typing import TypeAlias

from reglint.lever import Lever
from reglint.quantity import render

#: Halvings of the way from what is stated to the utmost tried.
_HALVINGS = 10
#: Relaxations verified and told, the smallest first.
_MOST = 5


@dataclass(frozen=True, slots=True)
class Relaxation:
    """A lever moved as little as it must be, and the standard values that then hold."""

    lever: Lever
    value: float
    holding: tuple[float, ...]

    @property
    def size(self) -> float:
        """Return how much gives way, as a fraction of what is stated."""
        return abs(self.value - self.lever.stated) / max(abs(self.lever.stated), abs(self.value))


#: A lever, and the figure it is moved to.
Move: TypeAlias = tuple[Lever, float]
#: Tells which standard values hold after each move.
Holding: TypeAlias = Callable[[Sequence[Move]], list[tuple[float, ...]]]


def nearest(tried: Sequence[Lever], holding: Holding) -> list[Move]:
    """Return the least move of each lever with which some value holds; of some there is none."""
    able = holding([(lever, lever.utmost) for lever in tried])
    live = [lever for lever, values in zip(tried, able, strict=True) if values]
    near, far = [0.0] * len(live), [1.0] * len(live)
    for _ in range(_HALVINGS if live else 0):
        middles = [0.5 * (low + high) for low, high in zip(near, far, strict=True)]
        found = holding([(lever, lever.at(m)) for lever, m in zip(live, middles, strict=True)])
        for index, (middle, values) in enumerate(zip(middles, found, strict=True)):
            (far if values else near)[index] = middle
    return [(lever, lever.rounded(lever.at(m))) for lever, m in zip(live, far, strict=True)]


def verified(moves: Sequence[Move], holding: Holding) -> list[Relaxation]:
    """Return the smallest moves that, rounded, still make some value hold."""
    relaxed = [Relaxation(*move, ()) for move in moves]
    smallest = sorted(relaxed, key=lambda each: (each.size, each.lever.path))[:_MOST]
    found = holding([(each.lever, each.value) for each in smallest]) if smallest else []
    pairs = zip(smallest, found, strict=True)
    return [replace(each, holding=values) for each, values in pairs if values]


def told(relaxations: Sequence[Relaxation], unit_: str) -> str:
    """Return the smallest relaxations in words, with the values, of ``unit_``, that then hold."""
    lines = ["  one figure may give way instead:"] if relaxations else []
    for each in relaxations:
        lever = each.lever
        value, stated = render(each.value, lever.unit, 3), render(lever.stated, lever.unit, 3)
        bound = "at least" if lever.upward else "at most"
        held = ", ".join(render(value, unit_) for value in each.holding)
        lines.append(f"    {lever.path} {bound} {value} instead of {stated}: then {held}")
    return "".join(f"{line}\n" for line in lines)
