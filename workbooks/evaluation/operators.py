"""Comparison and joining of texts as spreadsheet programs do them: numbers to 15 significant digits.

The engine compares and prints every bit, so that 1.1*3 <= 3.3 would fail here and hold in the sheet.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, Final

from rigidsheet.udf.cells import CellError, Value

COMPARE: Final = "RIGIDSHEET.COMPARE"
DIGITS: Final = "RIGIDSHEET.DIGITS"

_HOLDS: Final[dict[str, Callable[[int], bool]]] = {
    "=": lambda order: order == 0,
    "<>": lambda order: order != 0,
    "<": lambda order: order < 0,
    ">": lambda order: order > 0,
    "<=": lambda order: order <= 0,
    ">=": lambda order: order >= 0,
}


def rounded(number: float) -> float:
    """Return the number that 15 significant digits show."""
    return float(f"{number:.15g}")


def compare(sign: Any, left: Any, right: Any) -> Any:
    """Return whether the comparison holds, cell by cell when a block is compared."""
    holds = _HOLDS[sign]
    if type(left) is float and type(right) is float:
        if left == right:
            return holds(0)
        if abs(left - right) > 1e-14 * max(abs(left), abs(right)):  # more than a step of the 15th digit
            return holds(-1 if left < right else 1)
    elif type(left) is str and type(right) is str:
        a, b = left.casefold(), right.casefold()
        return holds(-1 if a < b else int(a > b))
    if isinstance(left, list) or isinstance(right, list):
        return _blockwise(lambda a, b: _compared(holds, a, b), left, right)
    return _compared(holds, left, right)


def _compared(holds: Callable[[int], bool], left: Value, right: Value) -> Value:
    if isinstance(left, CellError):
        return left
    if isinstance(right, CellError):
        return right
    return holds(_order(left, right))


def _order(left: Value, right: Value) -> int:
    """Return -1, 0 or 1: numbers before texts before booleans, a blank as nothing of the other's type."""
    a, b = _typed(left, right), _typed(right, left)
    if a[0] != b[0]:
        return -1 if a[0] < b[0] else 1
    if a[1] == b[1]:
        return 0
    if a[0] == 0 and rounded(a[1]) == rounded(b[1]):
        return 0
    return -1 if a[1] < b[1] else 1


def _typed(value: Value, other: Value) -> tuple[int, Any]:
    if value is None:
        value = False if isinstance(other, bool) else "" if isinstance(other, str) else 0.0
    if isinstance(value, bool):
        return 2, value
    return (1, value.casefold()) if isinstance(value, str) else (0, value)


def digits(value: Any) -> Any:
    """Return a value as it goes into a text: numbers with 15 significant digits, a blank as no text."""
    if type(value) is str:
        return value
    if isinstance(value, list):
        return [[digits(item) for item in row] for row in value]
    if isinstance(value, float):
        return rounded(value)
    return "" if value is None else value


def _blockwise(work: Callable[[Value, Value], Value], left: Any, right: Any) -> list[list[Value]]:
    """Work on two blocks cell by cell; one row, one column or one value goes with all of the other."""
    a = left if isinstance(left, list) else [[left]]
    b = right if isinstance(right, list) else [[right]]
    rows, columns = max(len(a), len(b)), max(len(a[0]), len(b[0]))
    none = CellError("#N/A")

    def at(block: list[list[Value]], i: int, j: int) -> Value:
        i, j = (0 if len(block) == 1 else i), (0 if len(block[0]) == 1 else j)
        return block[i][j] if i < len(block) and j < len(block[0]) else none

    return [[work(at(a, i, j), at(b, i, j)) for j in range(columns)] for i in range(rows)]
