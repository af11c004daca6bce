"""What Calc hands over as cells, and answers as what Calc takes; no office needed."""

from __future__ import annotations

import functools
import hashlib
import json
from dataclasses import replace
from typing import Any, Final

from ..catalogue import FUNCTIONS
from ..cells import OMITTED, Answer, Cell, Refusal, Value
from ..compiling import arguments_of
from ..declaration import Arg, CellFunction, Form
from ..reading.words import Rest

# A reference to whole columns or rows arrives in full; its blank end is not meant.
WHOLE_ROWS: Final = 65_536
WHOLE_COLUMNS: Final = 1_024

# Forms that always fill several cells.
BLOCKS: Final = frozenset({Form.VECTOR, Form.SPACE, Form.TEXTS, Form.TABLE})


@functools.cache
def fingerprint() -> str:
    """Return a short text that changes whenever a function or the order of its arguments changes."""
    table = [(f.name, [a.name for a in arguments_of(f)]) for f in FUNCTIONS.values()]
    return hashlib.sha256(json.dumps(table).encode()).hexdigest()[:16]


def method_name(name: str) -> str:
    """Return the name of the method behind a function: RB_ARM is rbArm, with no underscore left."""
    first, *rest = name.lower().split("_")
    return first + "".join(word.capitalize() for word in rest)


def host_arguments(f: CellFunction) -> tuple[Arg, ...]:
    """Return the arguments as Calc is told of them.

    "The same arguments as that call" becomes one argument after the other, as many as the longest call has:
    Calc would cut the answer of an array formula if the last argument were declared as repeating.
    """
    arguments = arguments_of(f)
    if not arguments or not isinstance(arguments[-1].shape, Rest):
        return arguments
    last = arguments[-1]
    longest = max(len(arguments_of(g)) for g in FUNCTIONS.values())
    return (*arguments[:-1], *(replace(last, name=f"argument_{i}") for i in range(1, longest + 1)))


def may_be_one_cell(f: CellFunction) -> bool:
    """Say whether an answer of a function may be one number or one text.

    In Calc a block of one cell is not that cell: IF with such a condition cannot hold another IF (Err:509),
    and a text in it is unequal to the same text typed in a cell. So one cell has to leave by itself.
    """
    return f.result.open or any(field.form not in BLOCKS for field in f.result.fields)


def normalise(arguments: tuple[Any, ...]) -> list[Cell]:
    """Return the arguments of one call as cells.

    The add-in gives a number, a text, a boolean, None for an argument left out, an empty tuple for a blank
    cell, or a tuple of rows in which a blank cell is an empty text. A block of one cell is that cell.
    """
    return [a if type(a) is float else normalised(a) for a in arguments]


def normalised(argument: Any) -> Cell:
    """Return one argument as a cell."""
    kind = type(argument)
    if kind is tuple:
        if not argument:
            return None
        if len(argument) == 1 and len(argument[0]) == 1:
            return plain(argument[0][0])
        # most rows hold no blank cell, and only a search in C keeps long columns fast
        rows = [[plain(v) for v in row] if "" in row else list(row) for row in argument]
        return trimmed(rows)
    if argument is None:
        return OMITTED
    return float(argument) if kind is int else argument


def plain(value: Any) -> Value:
    """Return one cell of a block; there Calc gives an empty text for a blank cell."""
    if value == "" or value is None:
        return None
    return float(value) if type(value) is int else value


def trimmed(block: list[list[Value]]) -> list[list[Value]]:
    """Return a block without the blank end of whole columns or whole rows."""
    if len(block) >= WHOLE_ROWS:
        last = next((i for i in range(len(block), 0, -1) if any(v is not None for v in block[i - 1])), 1)
        block = block[:last]
    if len(block[0]) >= WHOLE_COLUMNS:
        last = max(next((i for i in range(len(r), 0, -1) if r[i - 1] is not None), 1) for r in block)
        block = [row[:last] for row in block]
    return block


def express(answer: Answer | Refusal) -> tuple[tuple[float | str, ...], ...] | str:
    """Return an answer as rows, or the text of the error that the cell shall show."""
    if type(answer) is float or type(answer) is str:
        return ((answer,),)
    if type(answer) is Refusal:
        return answer.error
    if type(answer) is list:
        return tuple([tuple([v if type(v) is not bool else float(v) for v in row]) for row in answer])
    return ((float(answer),),)  # type: ignore[arg-type]
