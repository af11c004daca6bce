"""What passes between a spreadsheet program and a function: cells, errors, refusals."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, TypeAlias

ERRORS: Final = ("#VALUE!", "#NUM!", "#N/A", "#DIV/0!", "#REF!", "#NAME?", "#NULL!")


class Omitted:
    """The argument was left out, which is neither a blank cell nor zero."""

    _one: Omitted | None = None

    def __new__(cls) -> Omitted:
        if cls._one is None:
            cls._one = super().__new__(cls)
        return cls._one

    def __repr__(self) -> str:
        return "OMITTED"


OMITTED: Final = Omitted()


@dataclass(frozen=True, slots=True)
class CellError:
    """A spreadsheet error that stood in a cell: its text, like #N/A."""

    text: str


@dataclass(frozen=True, slots=True)
class Refusal:
    """A refused call: the spreadsheet error the cell shows and the sentence that says why."""

    error: str
    reason: str


# One value of a cell. None is a blank cell.
Value: TypeAlias = float | str | bool | CellError | None
# A block of cells: rows of equal length.
Block: TypeAlias = list[list[Value]]
# What a host hands over for one argument, after `normalise`.
Cell: TypeAlias = float | str | bool | CellError | Omitted | Block | None
# What a function gives back: a value or a rectangular block of finite floats, texts and booleans.
Answer: TypeAlias = float | str | list[list[float | str]]
