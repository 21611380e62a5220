"""The root of a falling function, for many functions at once: as numbers, and enclosed."""

from collections.abc import Callable
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.interval import Interval, hull, lift, where

Array: TypeAlias = npt.NDArray[np.float64]

#: Where an enclosure's ends are tried, as fractions of a root in the middle of the box (and
#: as its multiples): close by, which does for a point, and further out for a wide box.
_CLOSE = 1.0 - np.array([1e-11])
_FAR = np.concatenate(
    (1.0 - np.geomspace(1e-8, 0.01, 8), np.linspace(0.97, 0.03, 18), np.geomspace(0.01, 1e-8, 7))
)

#: A residual this small against those at the ends is rounding.
_SMALL = 1e-14
#: Enough halvings to bring any bracket of doubles down to neighbouring numbers.
_MOST_STEPS = 200


def falling_root(
    residual: Callable[[Array], Array], low: Array, high: Array, below: Array
) -> Array:
    """Return where ``residual`` passes from positive to negative between ``low`` and ``high``.

    Arrays broadcast; every element is its own equation. Where the residual is not
    positive at ``low`` already, the answer is ``below``; where it is still positive at
    ``high``, or not a number, there is no root and the answer is NaN.

    Method: T. R. Chandrupatla, Advances in Engineering Software 28 (1997) 145-149:
    inverse quadratic interpolation where it is safe, bisection elsewhere.
    """
    at_low = np.asarray(residual(low))
    high = np.maximum(low, high)
    at_high = np.asarray(residual(high))
    starts_below = at_low <= 0.0
    bracketed = (at_low > 0.0) & (at_high <= 0.0)
    inside = _refine(residual, low, high, at_low, at_high, bracketed)
    return np.where(starts_below, below, np.where(bracketed, inside, np.nan))


def _refine(
    residual: Callable[[Array], Array],
    low: Array,
    high: Array,
    at_low: Array,
    at_high: Array,
    bracketed: npt.NDArray[np.bool_],
) -> Array:
    """Shrink the bracket ``[a, b]`` until its ends are neighbours for practical purposes."""
    a, fa, b, fb, fraction = np.broadcast_arrays(high, at_high, low, at_low, 0.5)
    small = _SMALL * np.minimum(np.abs(at_low), np.abs(at_high))
    for _ in range(_MOST_STEPS):
        trial = a + fraction * (b - a)
        at_trial = np.asarray(residual(trial))
        same_side = np.sign(at_trial) == np.sign(fa)
        c, fc = np.where(same_side, a, b), np.where(same_side, fa, fb)
        b, fb = np.where(same_side, b, a), np.where(same_side, fb, fa)
        a, fa = trial, at_trial
        best = np.where(np.abs(fa) < np.abs(fb), a, b)
        width = np.abs(b - a)
        tolerance = 2.0 * np.finfo(float).eps * np.abs(best)
        done = ~bracketed | (tolerance >= 0.5 * width) | ~(np.abs(fa) > small)
        if done.all():
            break
        fraction = _next_fraction(a, fa, b, fb, c, fc)
        least = np.minimum(0.5, tolerance / np.where(width > 0.0, width, 1.0))
        fraction = np.where(done, 0.0, np.clip(fraction, least, 1.0 - least))
    return np.where(np.isnan(fa), np.nan, best)


def _next_fraction(a: Array, fa: Array, b: Array, fb: Array, c: Array, fc: Array) -> Array:
    """Return the step from ``a`` towards ``b``: interpolated where Chandrupatla's test allows."""
    xi, phi = (a - b) / (c - b), (fa - fb) / (fc - fb)
    safe = (phi**2 < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
    interpolated = fa / (fb - fa) * fc / (fb - fc) + (c - a) / (b - a) * fa / (fc - fa) * fb / (
        fc - fb
    )
    return np.where(safe & np.isfinite(interpolated), interpolated, 0.5)


def enclosed_root(
    residual: Callable[[Interval], Interval],
    guess: Array,
    low: Interval,
    high: Interval,
    below: Interval,
) -> Interval:
    """Return an enclosure of the root of every function that ``residual`` encloses.

    Around ``guess`` its ends are the nearest points tried where the residual is surely
    positive, and surely negative: that the functions fall makes it an enclosure. NaN
    where some function may still be positive at ``high``.
    """
    start, end = low.low, np.maximum(low.low, high.high)
    guess = np.where(np.isfinite(guess), guess, 0.5 * (start + end))
    first, last, sure = _around(residual, guess, start, _CLOSE)
    if not sure.all():
        first, last, sure = _around(residual, guess, start, _FAR)
    falls = sure[1] | (residual(high).high <= 0.0)
    first = np.where(sure[0], first, start)
    last = np.where(sure[1], last, np.where(falls, end, np.nan))
    inside = Interval(np.where(np.isnan(last), np.nan, first), last)
    at_low = residual(low)
    undecided = where(at_low.high <= 0.0, below, hull(below, inside))
    return where(at_low.low > 0.0, inside, undecided)


def _around(
    residual: Callable[[Interval], Interval], guess: Array, start: Array, fractions: Array
) -> tuple[Array, Array, npt.NDArray[np.bool_]]:
    """Try points on both sides of a guess, all at once.

    Returns the nearest below where the residual is surely positive, the nearest above
    where it is surely negative, and for both whether there is one.
    """
    shape = np.broadcast_shapes(np.shape(guess), np.shape(start))
    shrink = fractions.reshape(-1, *(1 for _ in shape))
    trial = np.stack(
        (
            np.maximum(guess * shrink, start),
            np.broadcast_to(guess / shrink, (len(fractions), *shape)),
        )
    )
    at_trial = residual(lift(trial))
    passes = np.stack((at_trial.low[0] > 0.0, at_trial.high[1] < 0.0))
    nearest = passes.argmax(axis=1)[:, None]
    first, last = np.take_along_axis(trial, nearest, axis=1)[:, 0]
    return first, last, np.asarray(passes.any(axis=1))
