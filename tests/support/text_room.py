"""Whether the texts of a printed sheet have the room that they need, from the widths of their letters."""

from __future__ import annotations

import math
from collections.abc import Iterator
from io import BytesIO
from typing import Any

import openpyxl

# Advance widths of Helvetica, which Arial and its twins share, in thousandths of the size, from the blank on
# (Adobe Core 14 font metrics; from memory).
WIDTHS = (
    *(278, 278, 355, 556, 556, 889, 667, 191, 333, 333, 389, 584, 278, 333, 278, 278, *([556] * 10)),
    *(278, 278, 584, 584, 584, 556, 1015, 667, 667, 722, 722, 667, 611, 778, 722, 278, 500, 667, 556, 833),
    *(722, 778, 667, 778, 722, 667, 611, 722, 667, 944, 667, 667, 611, 278, 278, 278, 469, 556, 333),
    *(556, 556, 500, 556, 556, 278, 556, 556, 222, 222, 500, 222, 833, 556, 556, 556, 556, 333, 500, 278),
    *(556, 500, 722, 500, 500, 500, 334, 260, 334, 584),
)
BOLD = 1.07  # bold letters are wider by so much on the average


def text_width(text: str, size: float, bold: bool) -> float:
    """Return the width of a text in mm."""
    total = sum(WIDTHS[ord(c) - 32] if 32 <= ord(c) < 127 else 600 for c in text) / 1000.0
    return total * size * (BOLD if bold else 1.0) * 25.4 / 72.0


def column_width(sheet: Any, column: int) -> float:
    """Return the printed width of a column in mm: 7 dots a digit of Arial 10, and 5, at 96 dots an inch."""
    letter = openpyxl.utils.get_column_letter(column)
    return int(sheet.column_dimensions[letter].width * 7.0 + 5.0) * 25.4 / 96.0


def cut_off(package: bytes) -> Iterator[str]:
    """Yield each text of a printed sheet that is wider than its cell and the free cells beside it."""
    for sheet in openpyxl.load_workbook(BytesIO(package), data_only=True):
        area = openpyxl.utils.range_boundaries(sheet.print_area.split("!")[-1].replace("$", ""))
        last = int(area[2] or 1)
        merged = {r.min_row * 1000 + r.min_col: (r.max_row, r.max_col) for r in sheet.merged_cells.ranges}
        for row in sheet.iter_rows(max_row=area[3], max_col=last):
            for cell in row:
                if isinstance(cell.value, str) and cell.value.strip():
                    yield from _lacking(sheet, cell, merged, last)


def _lacking(sheet: Any, cell: Any, merged: dict[int, tuple[int, int]], last: int) -> Iterator[str]:
    own = merged.get(cell.row * 1000 + cell.column, (cell.row, cell.column))[1]
    room = sum(column_width(sheet, c) for c in range(cell.column, own + 1)) - 1.0
    size, bold = float(cell.font.size), bool(cell.font.bold)
    if cell.alignment.wrap_text:
        words = max(text_width(word, size, bold) for word in cell.value.split())
        height = float(sheet.row_dimensions[cell.row].height or 13.5)
        lines = math.ceil(text_width(cell.value, size, bold) / room * 1.05)
        if words > room or lines * size * 1.2 > height + 1.0:
            yield f"{sheet.title}!{cell.coordinate}: {cell.value!r} needs {lines} lines"
        return
    if cell.alignment.horizontal in ("left", None):
        column = own + 1
        while column <= last and sheet.cell(cell.row, column).value in (None, ""):
            room += column_width(sheet, column)
            column += 1
    elif cell.alignment.horizontal == "center":
        for step in (-1, 1):
            column = (cell.column if step < 0 else own) + step
            if 1 <= column <= last and sheet.cell(cell.row, column).value in (None, ""):
                room += column_width(sheet, column)
    if text_width(cell.value, size, bold) > room:
        yield f"{sheet.title}!{cell.coordinate}: {cell.value!r}"
