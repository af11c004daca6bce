"""How a working is written: symbols, numbers with units, result, each line short enough for a cell."""

from __future__ import annotations

import math
from collections.abc import Iterable
from typing import Any, Final

from ..core.errors import PhysicsError

NOT_FINITE: Final = "The result is not a finite number; the inputs are too large, too small or contradictory"


def num(value: Any, digits: int = 6) -> str:
    """Return a number to `digits` significant digits, without a negative zero; refuse one that is not finite."""
    if not math.isfinite(value):
        raise PhysicsError("", NOT_FINITE)
    text = f"{float(value) + 0.0:.{digits}g}"
    return "0" if text == "-0" else text


def signed(value: Any) -> str:
    """Return a number for use inside a product or difference: in brackets when negative."""
    return f"({num(value)})" if float(value) < 0 else num(value)


def is_flat(*vectors: Any) -> bool:
    """Say whether all vectors lie in the x-y plane."""
    return all(float(v[2]) == 0.0 for v in vectors)


def vec(vector: Any, flat: bool = False) -> str:
    """Return '(x, y)' or '(x, y, z)'."""
    return "(" + ", ".join(num(c) for c in vector[: 2 if flat else 3]) + ")"


def for_rows(lines: list[str], rows: int) -> list[str]:
    """Return the working of the first row, with the remark that it stands for all rows of a column."""
    return lines if rows == 1 else [*lines, f"Row 1 of {rows}; the other rows go the same way."]


def tensor_rows(tensor: Any, unit: str = "kg*m^2") -> list[str]:
    """Return the three lines of a tensor."""
    rows = ["  [" + ", ".join(num(c) for c in row) + "]" for row in tensor]
    rows[-1] += f" {unit}"
    return rows


def total(parts: Iterable[Any]) -> str:
    """Return 'a + b - c' from numbers."""
    out = ""
    for p in parts:
        value = float(p)
        if not out:
            out = num(value)
        else:
            out += f" - {num(-value)}" if value < 0 else f" + {num(value)}"
    return out
