"""The margin of a rule: how far its value stays on the safe side of its limit."""

from dataclasses import dataclass
from typing import TypeVar

from reglint.rule import Rule
from reglint.values import Values

T = TypeVar("T")


@dataclass(frozen=True, slots=True)
class Margin:
    """A measure for the worst case: a rule's margin as a fraction of its limit.

    Positive is safe. Where the limit is zero and broken the margin is minus infinity.
    """

    rule: Rule

    def __call__(self, values: Values[T]) -> T:
        """Return the margin at the points of ``values``, in their kind of number."""
        rule = self.rule
        value, limit = rule.holds.value, rule.holds.limit
        slack = (limit, value) if rule.holds.sign == "<=" else (value, limit)
        return values.fraction(*slack, rule.relative_to or limit)
