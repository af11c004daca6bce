"""Load cases and checks of a working sheet.

`CaseTable` holds one row a load case with what is largest in it; RB_ENVELOPE says which case governs a column.
`Checks` is the table of demand against capacity with required and actual factor, margin and verdict.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

from openpyxl.formatting.rule import CellIsRule
from openpyxl.styles import Font, PatternFill

from .kit import Book, Page, Place

COLUMNS: Final = (2.5, 34.0, 22.0, 8.5, 11.0, 8.5, 11.0, 8.5, 9.0, 9.0, 9.0, 9.0, 9.5)
CASE, AT, DEMAND, DEMAND_UNIT, CAPACITY, CAPACITY_UNIT, REQUIRED, FACTOR, USED, MARGIN, VERDICT = range(3, 14)
SHOWN: Final = ((FACTOR, "factor", "0.00"), (USED, "utilization", "0%"), (MARGIN, "margin", "+0%;-0%;0%"))


@dataclass(frozen=True, slots=True)
class Check:
    """One row: formulas as texts, without the leading equals sign.

    `demand` is in the unit that `unit` gives (a formula; empty for plain numbers); `capacity` too. `when` is
    the condition under which the check counts at all.
    """

    label: str
    demand: str
    unit: str
    capacity: str
    name: str
    required: str = "1"
    case: str = '""'
    at: str = '""'
    sense: str = "at most"
    when: str = ""
    plain: bool = False  # a check of the calculation itself: no factor and no margin to show

    @classmethod
    def against(cls, label: str, demand: str, si: str, capacity: Place, name: str, **rest: Any) -> Check:
        """Return the check of a demand in SI against a capacity that was entered, in the unit of that."""
        shown = f'({demand})*RB_CONVERT("1 {si}",{capacity.unit})'
        return cls(label, shown, capacity.unit, capacity.ref, name, **rest)


class CaseTable:
    """Load cases by name with their values in columns; the first column after the names may hold a text."""

    def __init__(self, book: Book, page: Page, heads: Sequence[str], height: float = 36.0) -> None:
        self.book, self.page = book, page
        for column in range(2, page.columns + 1):
            page.put(column, heads[column - 2] if column - 2 < len(heads) else None, "RS head")
        page.sheet.row_dimensions[page.row].height = height
        page.row += 1
        self.first = self.last = page.row

    def add(self, name: str, text: str, values: Sequence[tuple[str, str]]) -> None:
        """Write a case: its name, a text, and formulas with their number formats."""
        page = self.page
        page.put(2, name, "RS text")
        page.put(3, text, "RS text")
        for column, (formula, form) in enumerate(values, 4):
            page.put(column, self.book.guarded(formula), "RS value", form=form)
        self.last = page.row
        page.row += 1

    def envelope(self, column: int, what: str) -> str:
        """Return RB_ENVELOPE of a column as formula text: "magnitude", "governing", "largest case", ..."""
        return f'RB_ENVELOPE({self.page.span((self.first, 2), (self.last, column))},"{what}")'

    def beside(self, column: int, what: str, wanted: int) -> str:
        """Return what stands in another column for the case that RB_ENVELOPE names."""
        cells = self.page.span((self.first, wanted), (self.last, wanted))
        names = self.page.span((self.first, 2), (self.last, 2))
        return f"INDEX({cells},MATCH({self.envelope(column, what)},{names},0))"


class Checks:
    """The table of checks on a page."""

    def __init__(self, book: Book, page: Page, at: str) -> None:
        self.book, self.page = book, page
        self.first = page.row + 1
        words = ("Check", "Governing case", at, "Demand", "Unit", "Capacity", "Unit", "Required factor")
        for column, word in enumerate((*words, "Actual factor", "Used", "Margin", "Verdict"), 2):
            page.put(column, word, "RS head")
        page.sheet.row_dimensions[page.row].height = 25.0
        page.row += 1

    def add(self, check: Check) -> None:
        """Write a check and name its demand and its verdict."""
        page, row = self.page, self.page.row
        bare = 0 if check.unit else 1  # numbers without a unit stand alone
        demand, capacity = (
            page.span((row, first), (row, unit - bare))
            for first, unit in ((DEMAND, DEMAND_UNIT), (CAPACITY, CAPACITY_UNIT))
        )
        required = page.at(REQUIRED)
        page.sheet.row_dimensions[row].height = 16.0
        page.put(2, check.label, "RS text")
        for column, formula in (
            (CASE, check.case),
            (AT, check.at),
            (DEMAND, check.demand),
            (DEMAND_UNIT, check.unit),
            (CAPACITY, check.capacity),
            (CAPACITY_UNIT, check.unit),
            (REQUIRED, check.required),
        ):
            style = "RS text" if column in (CASE, DEMAND_UNIT, CAPACITY_UNIT) else "RS value"
            page.put(column, self._formula(formula, check.when) if formula else None, style)
        page.sheet.cell(row, AT).number_format = "0.0"
        page.sheet.cell(row, REQUIRED).number_format = "0.00;;" if check.plain else "0.00"
        pair = f"{demand},{capacity}" if check.sense == "at most" else f"{capacity},{demand}"
        tested = page.at(DEMAND)
        for column, what, form in SHOWN:
            if check.plain:
                page.put(column, None, "RS value")
                continue
            text = f'IF(ABS({tested})<1E-9,"none",RB_MARGIN({pair},{required},"{what}"))'
            page.put(column, self._formula(text, check.when), "RS value", form=form)
        verdict = f'RB_CHECK({demand},{capacity},"{check.sense}",{required})'
        page.put(VERDICT, self._formula(verdict, check.when, "not used"), "RS verdict")
        self.book.name(f"check_{check.name}", page.at(VERDICT))
        self.book.name(f"demand_{check.name}", page.at(DEMAND))
        page.row += 1

    def _formula(self, text: str, when: str, otherwise: str = "") -> str:
        return self.book.guarded(f'IF({when},{text},"{otherwise}")' if when else text)

    def end(self) -> str:
        """Mark failures, and return the formula of one sentence about all checks."""
        page, last = self.page, self.page.row - 1
        cells = page.span((self.first, VERDICT), (last, VERDICT))
        local = cells.rpartition("!")[2].replace("$", "")
        red: Any = PatternFill("solid", start_color="F3DAD3", end_color="F3DAD3")
        page.sheet.conditional_formatting.add(
            local,
            CellIsRule(operator="equal", formula=['"FAIL"'], font=Font(bold=True, color="8E2A12"), fill=red),
        )
        page.sheet.conditional_formatting.add(
            local, CellIsRule(operator="equal", formula=['"not used"'], font=Font(bold=False, color="8A918D"))
        )
        count = f'COUNTIF({cells},"FAIL")'
        good = f'"All "&COUNTIF({cells},"OK")&" checks hold."'
        bad = f'{count}&" of "&(COUNTIF({cells},"OK")+{count})&" checks fail."'
        return f"IF({count}=0,{good},{bad})"
