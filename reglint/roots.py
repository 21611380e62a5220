"""The root of a falling function, for many functions at once."""

from collections.abc import Callable
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

Array: TypeAlias = npt.NDArray[np.float64]

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
    shortest = 1e-15 * np.abs(a)
    for _ in range(_MOST_STEPS):
        trial = a + fraction * (b - a)
        at_trial = np.asarray(residual(trial))
        same_side = np.sign(at_trial) == np.sign(fa)
        c, fc = np.where(same_side, a, b), np.where(same_side, fa, fb)
        b, fb = np.where(same_side, b, a), np.where(same_side, fb, fa)
        a, fa = trial, at_trial
        best = np.where(np.abs(fa) < np.abs(fb), a, b)
        width = np.abs(b - a)
        tolerance = 2.0 * np.finfo(float).eps * np.abs(best) + 0.5 * shortest
        done = ~bracketed | (tolerance >= 0.5 * width) | (fa == 0.0) | np.isnan(fa)
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
