"""Limits as objects: the same object checks a value, words the refusal, and fills help and validation."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any, Final

import numpy as np


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
        return bool(self._within(value).all())

    def first_outside(self, value: Any) -> tuple[int, float]:
        """Return position (from 0) and number of the first one outside the limit."""
        if type(value) is float:
            return 0, value
        flat = value.ravel()
        position = int(np.argmin(self._within(flat)))
        return position, float(flat[position])

    def _within(self, values: Any) -> Any:
        """Return where the numbers of an array lie within the limit."""
        good = values > self.low if self.low_open else values >= self.low
        good &= values < self.high if self.high_open else values <= self.high
        return good & (values != 0.0) if self.nonzero else good


POSITIVE: Final = Limit("greater than zero", low=0.0, low_open=True)
NOT_NEGATIVE: Final = Limit("of zero or more", low=0.0)
NONZERO: Final = Limit("other than zero", nonzero=True)
FRACTION: Final = Limit("above 0 and at most 1", low=0.0, high=1.0, low_open=True)
AT_LEAST_ONE: Final = Limit("of 1 or more", low=1.0)
