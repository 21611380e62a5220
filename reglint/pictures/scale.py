"""Scales: from a quantity's values to places on paper, and the round values worth a mark."""

import math
from dataclasses import dataclass

#: The round values of one decade on a logarithmic scale.
_ROUND = (1, 2, 5)
#: A place this many lengths beyond an end is far enough to leave the paper.
_BEYOND = 1.0


@dataclass(frozen=True, slots=True)
class Scale:
    """Values from ``low`` to ``high`` laid from ``start`` to ``end`` on paper."""

    low: float
    high: float
    start: float
    end: float
    logarithmic: bool = False

    def __call__(self, value: float) -> float:
        """Return the place of a value; one far outside is kept near the paper."""
        share = self._share(value)
        share = min(max(share, -_BEYOND), 1.0 + _BEYOND)
        return self.start + share * (self.end - self.start)

    def _share(self, value: float) -> float:
        if not self.logarithmic:
            return (value - self.low) / (self.high - self.low)
        if value <= 0.0:
            return -math.inf
        return math.log(value / self.low) / math.log(self.high / self.low)

    def holds(self, value: float) -> bool:
        """Tell whether a value lies on the scale."""
        return self.low <= value <= self.high

    def ticks(self, most: int = 7) -> tuple[float, ...]:
        """Return round values on the scale, at most so many where it is linear."""
        return self._decades() if self.logarithmic else self._steps(most)

    def _decades(self) -> tuple[float, ...]:
        first, last = math.floor(math.log10(self.low)), math.ceil(math.log10(self.high))
        every = (float(f"{digit}e{n}") for n in range(first, last + 1) for digit in _ROUND)
        return tuple(value for value in every if self.holds(value))

    def _steps(self, most: int) -> tuple[float, ...]:
        """Return multiples of the finest step of 1, 2 or 5 that gives no more than ``most``."""
        decade = math.floor(math.log10((self.high - self.low) / most))
        for digit, power in ((d, decade + up) for up in (0, 1) for d in _ROUND):
            step = float(f"{digit}e{power}")
            first, last = math.ceil(self.low / step - 1e-9), math.floor(self.high / step + 1e-9)
            if last - first < most:
                break
        return tuple(float(f"{digit * count}e{power}") for count in range(first, last + 1))
