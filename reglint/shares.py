"""Who ate the margin: what comes back when one stated figure returns to nominal."""

from collections.abc import Iterator, Sequence

import numpy as np

from reglint.box import Box, ends_of, term_ends
from reglint.finding import Share
from reglint.kind import Condition
from reglint.spec import Spec, Term
from reglint.worstcase import Array, Measure, at

#: A share smaller than this is not worth a line.
_LEAST = 0.005


def shares(box: Box, measure: Measure, points: Array) -> list[tuple[Share, ...]]:
    """Return each spec's shares of the margin eaten at its point, largest first.

    ``points`` has shape (s, n). A share is the margin that one figure alone gives back,
    as a fraction of what all of them give back one by one.
    """
    moves = [list(_moves(box, row, points[row])) for row in range(len(box.specs))]
    trials = np.repeat(points[:, None, :], 1 + max(map(len, moves), default=0), axis=1)
    for row, each in enumerate(moves):
        for index, (_, column, change) in enumerate(each):
            trials[row, index + 1, column] += change
    margins = at(box, measure, trials)
    with np.errstate(invalid="ignore"):  # from minus infinity to minus infinity nothing is gained
        gains = np.nan_to_num(np.maximum(margins[:, 1:] - margins[:, :1], 0.0), posinf=0.0)
    return [
        _ordered(spec, [path for path, _, _ in each], gain)
        for spec, each, gain in zip(box.specs, moves, gains, strict=True)
    ]


def _moves(box: Box, row: int, point: Array) -> Iterator[tuple[str, int, float]]:
    """Yield each term's path, its name's column, and the change that brings it to nominal."""
    for column, name in enumerate(box.names):
        terms = box.specs[row].swept.get(name, ())
        low, _, high = ends_of(terms, box.condition)
        where = (point[column] - low) / (high - low) if high > low else 0.0
        for term in terms:
            change = _to_nominal(term, box.condition, where)
            if change:
                yield term.path, column, change


def _to_nominal(term: Term, condition: Condition, where: float) -> float:
    low, nominal, high = term_ends(term, condition)
    return nominal - (low + where * (high - low))


def _ordered(spec: Spec, paths: Sequence[str], gains: Array) -> tuple[Share, ...]:
    total = float(gains.sum())
    if total <= 0.0:
        return ()
    listed = [
        Share(path, float(gain) / total, spec.place(path))
        for path, gain in zip(paths, gains, strict=False)
    ]
    kept = (each for each in listed if each.share >= _LEAST)
    return tuple(sorted(kept, key=lambda each: (-each.share, each.path)))
