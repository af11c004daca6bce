"""The parts list of a working sheet: a table with a row of unit cells, ready for RB_ROLLUP."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Final

from openpyxl.utils import get_column_letter

from rigidsheet.udf.limits import POSITIVE
from rigidsheet.udf.units import kinds
from rigidsheet.udf.units.kinds import Kind

from .kit import Page
from .kit_look import MARK

Labels = tuple[tuple[str, Kind | None, str], ...]
# Label of the column, its kind (None: text or count), and the unit it starts with.
COLUMNS: Final[Labels] = (
    ("part", None, ""),
    ("qty", None, ""),
    ("shape", None, ""),
    ("mass", kinds.MASS, "kg"),
    ("density", kinds.DENSITY, "kg/m^3"),
    ("L", kinds.LENGTH, "mm"),
    ("W", kinds.LENGTH, "mm"),
    ("H", kinds.LENGTH, "mm"),
    ("t", kinds.LENGTH, "mm"),
    ("OD", kinds.LENGTH, "mm"),
    ("ID", kinds.LENGTH, "mm"),
    ("x", kinds.LENGTH, "mm"),
    ("y", kinds.LENGTH, "mm"),
    ("z", kinds.LENGTH, "mm"),
    ("turn z", kinds.ANGLE, "deg"),
)
Part = Mapping[str, Any]


def turned_about(axis: str) -> Labels:
    """Return the columns for parts that lie turned about another axis of the sheet."""
    return (*COLUMNS[:-1], (f"turn {axis}", kinds.ANGLE, "deg"))


@dataclass(frozen=True, slots=True)
class PartsTable:
    """Where the parts list stands: row of labels, row of units, first and last part."""

    page: Page
    head: int
    first: int
    last: int
    columns: Labels = COLUMNS

    def through(self, row: int) -> str:
        """Return the range from the labels down to a row."""
        return self.page.span((self.head, 2), (row, 1 + len(self.columns)))

    def cell(self, label: str, row: int) -> str:
        """Return the cell of a part under a label."""
        return self.page.at(self._column(label), row)

    def si(self, label: str, row: int) -> str:
        """Return the formula text of a number of a part in SI; a blank counts as zero."""
        kind = next(kind for name, kind, _ in self.columns if name == label)
        assert kind is not None
        return f'N({self.cell(label, row)})*RB_CONVERT("1 "&{self.cell(label, self.head + 1)},"{kind.si}")'

    def _column(self, label: str) -> int:
        return 2 + [name for name, _, _ in self.columns].index(label)


def parts_table(page: Page, parts: Sequence[Part | None], columns: Labels = COLUMNS) -> PartsTable:
    """Write a parts list; None is a row left free for a further part."""
    head = page.row
    sheet, blank = page.sheet, page.book.blank
    for column, (label, kind, unit) in enumerate(columns, 2):
        page.put(column, label, "RS head")
        page.put(column, unit or None, "RS unit" if kind is not None else "RS unit fixed", row=head + 1)
        if kind is not None:
            page.unit_choices(column, kind, row=head + 1)
    sheet.row_dimensions[head].height = 16.0
    for row, part in enumerate(parts, head + 2):
        sheet.row_dimensions[row].height = 13.5
        page.put(1, MARK, "RS mark", row=row)
        for column, (label, _, _) in enumerate(columns, 2):
            value = None if blank or part is None else part.get(label)
            page.put(column, value, "RS entry text" if label in ("part", "shape") else "RS entry", row=row)
    last = head + 1 + len(parts)
    for label, kind in (("mass", kinds.MASS), ("density", kinds.DENSITY)):
        letter = get_column_letter(2 + [name for name, _, _ in columns].index(label))
        page.limited(f"{letter}{head + 2}:{letter}{last}", label, kind, POSITIVE)
    page.row = last + 1
    return PartsTable(page, head, head + 2, last, columns)
