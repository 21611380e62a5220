"""The margin of a rule: how far its value stays on the safe side of its limit."""

from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
import numpy.typing as npt

from reglint.rule import Rule
from reglint.values import Values

Array: TypeAlias = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Margin:
    """A measure for the worst case: a rule's margin as a fraction of its limit.

    Positive is safe. Where the limit is zero and broken the margin is minus infinity.
    """

    rule: Rule

    def __call__(self, values: Values[Array]) -> Array:
        """Return the margin at the points of ``values``, in their shape."""
        rule = self.rule
        value, limit = values.of(rule.holds.value), values.of(rule.holds.limit)
        slack = limit - value if rule.holds.sign == "<=" else value - limit
        scale = np.abs(limit if rule.relative_to is None else values.of(rule.relative_to))
        return np.where(slack == 0.0, 0.0, slack / scale)
