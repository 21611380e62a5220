"""Yield: the fraction of drawn builds that break a rule. It never changes an outcome.

A build is one draw of every figure of the components. It breaks a rule when it does so at
an end of the operating ranges (supply, loads, ambient), or at the operating point of the
rule's worst case. A rule that is proven to hold is broken by no build, so none is drawn.
"""

from collections.abc import Collection, Iterable, Mapping
from dataclasses import dataclass, replace
from typing import TypeAlias
from zlib import crc32

import numpy as np
import numpy.typing as npt

from reglint.box import POINTS_AT_ONCE, Box
from reglint.finding import Finding, Yield
from reglint.margin import Margin
from reglint.rule import Rule
from reglint.ruling import ROUNDING
from reglint.spec import Spec
from reglint.worstcase import Array, at, slices

Mask: TypeAlias = npt.NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Draw:
    """How builds are drawn."""

    builds: int
    seed: int
    #: The distribution of figures whose spec states none.
    distribution: str = "uniform"


# The generators' type is quoted: naming it would load them, which takes 13 ms.
def _uniform(generator: "np.random.Generator", count: int) -> Array:
    return generator.uniform(-1.0, 1.0, count)


def _normal(generator: "np.random.Generator", count: int) -> Array:
    """Draw with 3 σ at the ends; what falls outside is drawn again, as a maker sorts it out."""
    drawn = generator.normal(0.0, 1.0 / 3.0, count)
    while (outside := np.abs(drawn) > 1.0).any():
        drawn[outside] = generator.normal(0.0, 1.0 / 3.0, int(outside.sum()))
    return drawn


#: Draws between -1 and 1, the ends of a stated range.
DISTRIBUTIONS = {"uniform": _uniform, "normal": _normal}


def yields(
    boxes: Mapping[str, Box],
    row: int,
    rules: Mapping[str, Rule],
    findings: Iterable[Finding],
    draw: Draw,
) -> tuple[Yield, ...]:
    """Return the builds of one spec that break each rule which is not proven to hold.

    The last is of all these rules together.
    """
    some = next(iter(boxes.values()))
    drawn = _drawn(some.specs[row], some.circuit.kind.components, draw)
    broken = {
        finding.rule: _broken(box.take([row]), Margin(rules[finding.rule]), finding, drawn)
        for finding in findings
        if _may_break(finding) and not (box := boxes[finding.condition]).condition.nominal
    }
    if not broken or not drawn:
        return ()
    broken[""] = np.logical_or.reduce(list(broken.values()))
    return tuple(Yield(rule, int(each.sum()), draw.builds) for rule, each in broken.items())


def _may_break(finding: Finding) -> bool:
    """Tell whether a rule was evaluated and is not proven to hold."""
    return finding.margin is not None and (finding.margin < 0.0 or not finding.proven)


def _drawn(spec: Spec, components: Collection[str], draw: Draw) -> dict[str, Array]:
    """Return the swept names of components with their value in each build, shape (builds,)."""
    names = (name for name in sorted(spec.swept) if name.partition(".")[0] in components)
    return {name: _summed(spec, name, draw) for name in names}


def _summed(spec: Spec, name: str, draw: Draw) -> Array:
    """Return the sum of a name's terms, each from its own stream: none depends on another."""
    total = np.zeros(draw.builds)
    for term in spec.swept[name]:
        generator = np.random.default_rng([draw.seed, crc32(term.path.encode())])
        spread = DISTRIBUTIONS[spec.distributions.get(term.path, draw.distribution)]
        middle, half = 0.5 * (term.low + term.high), 0.5 * (term.high - term.low)
        total += middle + half * spread(generator, draw.builds)
    return total


def _broken(box: Box, measure: Margin, finding: Finding, drawn: Mapping[str, Array]) -> Mask:
    """Tell which builds break a rule at one of the operating points, shape (builds,)."""
    operating = _operating_points(box, finding, drawn.keys())
    builds = len(next(iter(drawn.values()), ()))
    broken = []
    for some in slices(np.arange(builds), max(1, POINTS_AT_ONCE // len(operating))):
        points = np.repeat(operating[None, :, :], len(some), axis=0)
        for column, name in enumerate(box.names):
            if name in drawn:
                points[:, :, column] = drawn[name][some, None]
        margins = at(box, measure, points.reshape(1, -1, len(box.names)))
        # A margin that is not a number is no pass.
        broken.append(~(margins >= -ROUNDING).reshape(len(some), -1).all(axis=1))
    return np.concatenate(broken)


def _operating_points(box: Box, finding: Finding, drawn: Collection[str]) -> Array:
    """Return the ends of what is not drawn, and its worst point, shape (points, names)."""
    still = replace(box, high=np.where([name in drawn for name in box.names], box.low, box.high))
    worst = [(finding.corner or {}).get(name, box.low[0, i]) for i, name in enumerate(box.names)]
    return np.vstack([still.corners()[0], worst])
