"""Limits as objects: the same object checks a value, words the refusal, and fills help and validation."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Final


@dataclass(frozen=True, slots=True)
class Limit:
    """An interval a number must lie in, in the argument's own SI unit.

    `words` follows the kind: "a mass " + "greater than zero".
    """

    words: str
    low: float = -math.inf
    high: float = math.inf
    low_open: bool = False
    high_open: bool = False
    nonzero: bool = False

    def allows(self, value: Any) -> bool:
        """Say whether a float, or each number of an array, lies within the limit."""
        if type(value) is float:
            return (
                (value > self.low if self.low_open else value >= self.low)
                and (value < self.high if self.high_open else value <= self.high)
                and not (self.nonzero and value == 0.0)
            )
        return all(self.allows(float(v)) for v in value.ravel())

    def first_outside(self, value: Any) -> tuple[int, float]:
        """Return position (from 0) and number of the first one outside the limit."""
        if type(value) is float:
            return 0, value
        flat = [float(v) for v in value.ravel()]
        return next((i, v) for i, v in enumerate(flat) if not self.allows(v))


POSITIVE: Final = Limit("greater than zero", low=0.0, low_open=True)
NOT_NEGATIVE: Final = Limit("of zero or more", low=0.0)
NONZERO: Final = Limit("other than zero", nonzero=True)
FRACTION: Final = Limit("above 0 and at most 1", low=0.0, high=1.0, low_open=True)
AT_LEAST_ONE: Final = Limit("of 1 or more", low=1.0)
