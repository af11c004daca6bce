"""Lays calls out in a workbook, so that any host can work them out from the same file."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import Any

import openpyxl
from host_cases import Date, HostCase, trimmed
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.formula import ArrayFormula

from rigidsheet.udf.cells import CellError, Omitted, Refusal

# A formula whose value is the error; a constant error is not the same in every program.
ERROR_FORMULAS = {"#DIV/0!": "=1/0", "#N/A": "=NA()"}


@dataclass(frozen=True)
class Placed:
    """Where the answer of a case stands."""

    case: HostCase
    where: str  # address or range on the sheet Answers
    rows: int
    columns: int


def shape_of(answer: Any) -> tuple[int, int]:
    """Return rows and columns of an answer."""
    return (len(answer), len(answer[0])) if isinstance(answer, list) else (1, 1)


def put(sheet: Any, row: int, column: int, value: Any) -> None:
    """Write one cell as a user would have it."""
    if value is None:
        return
    cell = sheet.cell(row, column)
    if isinstance(value, CellError):
        cell.value = ERROR_FORMULAS[value.text]
    elif isinstance(value, Date):
        cell.value = float(value)
        cell.number_format = "yyyy-mm-dd"
    elif value == "" and isinstance(value, str):
        cell.value = '=""'
    else:
        cell.value = value
        if isinstance(value, str):
            cell.data_type = "s"  # a text that begins with = or - is still a text


def place_argument(sheet: Any, row: int, column: int, cell: Any) -> tuple[str, int, int]:
    """Write one argument and return its reference, its width and its height."""
    block = cell if isinstance(cell, list) else [[cell]]
    for r, line in enumerate(block):
        for c, value in enumerate(line):
            put(sheet, row + r, column + c, value)
    first = f"{get_column_letter(column)}{row}"
    if not isinstance(cell, list):
        return f"Cells!{first}", 1, 1
    last = f"{get_column_letter(column + len(block[0]) - 1)}{row + len(block) - 1}"
    return f"Cells!{first}:{last}", len(block[0]), len(block)


def literal(cell: Any) -> str | None:
    """Return a cell as it is typed inside a formula, or None."""
    if isinstance(cell, bool) or cell is None or isinstance(cell, (list, CellError)):
        return None
    if isinstance(cell, str):
        return '"' + cell.replace('"', '""') + '"'
    return repr(float(cell))


def write(cases: list[HostCase], path: Path, shapes: list[Any], literals: bool = False) -> list[Placed]:
    """Write a workbook with one formula a case and return where the answers stand.

    `shapes` holds the expected answer of each case, from which the size of the array formula follows. With
    `literals` numbers and texts stand in the formula itself instead of in cells.
    """
    book = openpyxl.Workbook()
    answers = book.active
    answers.title = "Answers"
    cells_sheet = book.create_sheet("Cells")
    row = answer_row = 1
    out = []
    for case, answer in zip(cases, shapes, strict=True):
        column, height, references = 1, 1, []
        for cell in trimmed(case.cells):
            typed = literal(cell) if literals and not isinstance(cell, Omitted) else None
            if isinstance(cell, Omitted) or typed is not None:
                references.append(typed or "")
                continue
            reference, width, tall = place_argument(cells_sheet, row, column, cell)
            references.append(reference)
            column, height = column + width, max(height, tall)
        row += height
        formula = f"={case.function}({','.join(references)})"
        rows, columns = shape_of(answer) if not isinstance(answer, Refusal) else (1, 1)
        first = f"A{answer_row}"
        where = first
        if (rows, columns) == (1, 1):
            answers[first] = formula
        else:
            where = f"{first}:{get_column_letter(columns)}{answer_row + rows - 1}"
            answers[first] = ArrayFormula(where, formula)
        out.append(Placed(case, where, rows, columns))
        answer_row += rows
    book.save(path)
    return out
