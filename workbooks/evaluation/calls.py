"""Calls from the engine into our functions: the calling cell, the reason of a refusal, the gate."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any, Final, TypeAlias

from rigidsheet.udf.cells import ERRORS, OMITTED, Answer, Block, Cell, CellError, Refusal, Value

from .engine import Callback
from .formulas import OMITTED_MARK
from .operators import COMPARE, DIGITS, compare, digits

# One of our functions: cells as positional arguments, an answer or a refusal back.
Function: TypeAlias = Callable[..., "Answer | Refusal"]

FIT: Final = "RIGIDSHEET.FRAME"  # fills the frame of an array formula in the engine's copy
TEXT_LIMIT: Final = 32_767

# Sheet number, row, column.
Place: TypeAlias = tuple[int, int, int]


@dataclass
class Calls:
    """What happened during one run of the engine."""

    reasons: dict[Place, tuple[str, Refusal]] = field(default_factory=dict)
    sizes: dict[Place, tuple[int, int]] = field(default_factory=dict)
    interrupted: BaseException | None = None

    def clear(self) -> None:
        """Forget the last run."""
        self.reasons.clear()
        self.sizes.clear()
        self.interrupted = None

    def bind(self, functions: Mapping[str, Function]) -> dict[str, Callback]:
        """Return the functions as the engine calls them, and the one that fills array frames."""
        bound: dict[str, Callback] = {
            name: self._bound(name, function) for name, function in functions.items()
        }
        bound[FIT] = self._fit
        bound[COMPARE] = compare
        bound[DIGITS] = digits
        return bound

    def _bound(self, name: str, function: Function) -> Callback:
        reasons = self.reasons

        def called(sheet: Cell = None, row: Cell = None, column: Cell = None, *cells: Cell) -> Value | Block:
            if self.interrupted is not None:
                return 0.0
            try:
                if OMITTED_MARK in cells:
                    cells = tuple(OMITTED if cell == OMITTED_MARK else cell for cell in cells)
                answer = gate(function(*cells))
            except BaseException as error:  # kept and raised after the run: the engine would swallow it
                if not isinstance(error, Exception):
                    self.interrupted = error
                    return 0.0
                answer = Refusal("#VALUE!", f"{name} failed: {error}")
            if isinstance(answer, Refusal):
                reasons.setdefault(_place(sheet, row, column), (name, answer))
                return CellError(answer.error)
            return answer

        return called

    def _fit(self, sheet: Cell, row: Cell, column: Cell, rows: Cell, columns: Cell, value: Cell) -> Block:
        """Return `value` in exactly the frame, the way array formulas show it: #N/A where it is too small."""
        height, width = int(_single(rows)), int(_single(columns))
        block: Any = value if isinstance(value, list) else [[value]]
        found = len(block), len(block[0])
        self.sizes[_place(sheet, row, column)] = found
        none = CellError("#N/A")

        def item(i: int, j: int) -> Value:
            i, j = (0 if found[0] == 1 else i), (0 if found[1] == 1 else j)
            cell = block[i][j] if i < found[0] and j < found[1] else none
            return 0.0 if cell is None else cell

        return [[item(i, j) for j in range(width)] for i in range(height)]


def _single(cell: Cell) -> float:
    value: Any = cell[0][0] if isinstance(cell, list) else cell
    return float(value)


def _place(sheet: Cell, row: Cell, column: Cell) -> Place:
    return int(_single(sheet)), int(_single(row)), int(_single(column))


def gate(answer: Any) -> Value | Block | Refusal:
    """Let through finite floats, texts, booleans and rectangular blocks of them; refuse all else."""
    if type(answer) is float:
        return answer if math.isfinite(answer) else Refusal("#NUM!", "the result is not a finite number")
    if isinstance(answer, Refusal):
        return answer if answer.error in ERRORS else Refusal("#VALUE!", answer.reason)
    if isinstance(answer, list):
        return _gate_block(answer)
    return _gate_value(answer)


def _gate_value(value: Any) -> Value | Refusal:
    if isinstance(value, str):
        long = len(value) > TEXT_LIMIT
        return Refusal("#VALUE!", "the text is longer than a cell can hold") if long else str(value)
    if isinstance(value, bool):
        return value
    if isinstance(value, CellError):
        return value
    try:
        number = float(value)
    except (TypeError, ValueError, OverflowError):
        return Refusal("#VALUE!", f"the result is a {type(value).__name__}, which no cell can hold")
    return number if math.isfinite(number) else Refusal("#NUM!", "the result is not a finite number")


def _gate_block(block: list[Any]) -> Block | Refusal:
    widths = {len(row) if isinstance(row, list) else -1 for row in block}
    if len(widths) != 1 or min(widths) < 1:
        return Refusal("#VALUE!", "the result is not a rectangular block of cells")
    result: Block = []
    for row in block:
        line: list[Value] = []
        for item in row:
            value = _gate_value(item)
            if isinstance(value, Refusal):
                return value
            line.append(value)
        result.append(line)
    return result
