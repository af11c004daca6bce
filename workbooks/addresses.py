"""Cell addresses: text to row and column and back."""

from __future__ import annotations

import re
from functools import lru_cache
from typing import Final, TypeAlias

ROWS: Final = 1_048_576
COLUMNS: Final = 16_384

# First row, first column, last row, last column; all counted from 1, ends included.
Area: TypeAlias = tuple[int, int, int, int]

_CELL: Final = re.compile(r"\$?([A-Za-z]{1,3})\$?([1-9][0-9]{0,6})\Z")
_WHOLE: Final = re.compile(r"\$?([A-Za-z]{1,3}):\$?([A-Za-z]{1,3})\Z|\$?([1-9]\d*):\$?([1-9]\d*)\Z")


@lru_cache(maxsize=4096)
def column_number(letters: str) -> int:
    """Return 1 for A, 27 for AA."""
    number = 0
    for letter in letters.upper():
        number = number * 26 + ord(letter) - 64
    return number


@lru_cache(maxsize=4096)
def column_letters(number: int) -> str:
    """Return A for 1, AA for 27."""
    letters = ""
    while number:
        number, rest = divmod(number - 1, 26)
        letters = chr(65 + rest) + letters
    return letters


def cell_name(row: int, column: int) -> str:
    """Return B3 for row 3, column 2."""
    return f"{column_letters(column)}{row}"


def row_column(text: str) -> tuple[int, int] | None:
    """Return (row, column) of B3 or $B$3; None when the text is not the address of a cell."""
    found = _CELL.match(text)
    if found is None:
        return None
    row, column = int(found[2]), column_number(found[1])
    return (row, column) if row <= ROWS and column <= COLUMNS else None


def area(text: str) -> Area | None:
    """Return the area of B3, B3:C5, B:C or 3:5; None when the text is none of them."""
    first, _, last = text.partition(":")
    start = row_column(first)
    if start is not None:
        end = row_column(last) if last else start
        if end is None:
            return None
        rows, columns = sorted((start[0], end[0])), sorted((start[1], end[1]))
        return rows[0], columns[0], rows[1], columns[1]
    whole = _WHOLE.match(text)
    if whole is None:
        return None
    if whole[1]:
        left, right = sorted((column_number(whole[1]), column_number(whole[2])))
        return 1, left, ROWS, right
    top, bottom = sorted((int(whole[3]), int(whole[4])))
    return top, 1, bottom, COLUMNS


def size(block: Area) -> tuple[int, int]:
    """Return the number of rows and columns of an area."""
    return block[2] - block[0] + 1, block[3] - block[1] + 1
