"""The kit that working sheets are made with: one look, one way to lay out inputs, results and checks.

How to write a template with it
-------------------------------
::

    book = Book("Swing gate", "Two hinges, wind, a person on the tip", blank)
    page = book.page("Inputs", INPUT_COLUMNS, landscape=True)     # widths in digits, printed size checked
    page.title_block()
    book.status(page)                                             # the line that counts missing inputs
    page.section("Gate leaf", page.INPUT_WORDS)
    leaf = page.quantity("Width of the leaf", "b", 3.2, "m", "leaf_width", kinds.LENGTH, limit=POSITIVE)
    drive = page.choice("Drive", "", "gearbox", ("cylinder", "gearbox"), "drive")
    work = book.page("Working", ...)
    inertia = work.result("Moment of inertia", "I", f'RB_ROLLUP({parts},"Izz","origin",{{unit}})',
                          kinds.INERTIA, "kg*m^2", "leaf_inertia")
    work.derived("Torque", "T", f"{inertia.si}*{alpha.si}", kinds.TORQUE, "N*m", "torque")

* A `Place` is what `quantity` and `result` return: `.ref` value cell, `.unit` unit cell, `.pair` value and unit
  together (hand this to functions), `.si` the number in SI (for plain cell arithmetic). All are absolute and
  carry the sheet, so they work in formulas of every sheet.
* Physics in plain cells uses `.si` only; what a person reads is converted on the way out. So a switched unit
  cell never changes the physics.
* An empty or wrong input shows its refusal in the SI column beside it, and there only: every formula that
  depends on inputs goes through `book.guarded`, which leaves the cell empty text until all inputs are there.
* `quantity(..., when=...)` is needed only while the condition (a formula text) holds.
* Load cases and checks: kit_checks.py (`CaseTable`, `Checks`); the verdict is the text OK or FAIL.
* Parts list: kit_parts.py. Charts: kit_charts.py. Sketch: kit_sketch.py (points) with `sketch_chart`.
* Colours, fonts and styles: kit_look.py. Print: `page.end()` sets the print area.
* No array formulas, no booleans, no error values as chart gaps: hosts without the functions must show the
  values that recalculation wrote.
"""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

from openpyxl import Workbook
from openpyxl.workbook.defined_name import DefinedName

from .kit_cells import Place
from .kit_look import MARK, add_styles
from .kit_page import Page

__all__ = ["Book", "Page", "Place"]


class Book:
    """A workbook in the making."""

    def __init__(self, title: str, line: str, blank: bool) -> None:
        self.title, self.line, self.blank = title, line, blank
        self.workbook = Workbook()
        self.workbook.remove(self.workbook.active)
        add_styles(self.workbook)
        self.pages: dict[str, Page] = {}
        self.fields: dict[str, str] = {}  # field of the title block -> its cell on the first page
        self.ready_ref = ""
        self._status: tuple[Page, int]
        self._needed: dict[str, int] = {}  # condition (empty: always) -> how many numbers in SI
        self._si: list[str] = []  # those cells, page by page

    def page(self, name: str, widths: Sequence[float], *, landscape: bool = False, lead: int = 2) -> Page:
        """Add a sheet with columns of these widths, printed so that they fill the page; texts start at `lead`."""
        made = Page(self, self.workbook.create_sheet(name), widths, landscape, lead)
        self.pages[name] = made
        return made

    def name(self, name: str, ref: str) -> None:
        """Give a name to a cell or range like Inputs!$D$12."""
        self.workbook.defined_names[name] = DefinedName(name, attr_text=ref)

    def need(self, ref: str, when: str) -> None:
        """Count a number in SI among those that must be there."""
        self._needed[when] = self._needed.get(when, 0) + 1
        self._si.append(ref)

    def missing(self) -> str:
        """Return the formula text that counts the inputs that are missing or refused."""
        wanted = "+".join(
            f"{count}" if not when else f"IF({when},{count},0)" for when, count in self._needed.items()
        )
        return f"{wanted}-COUNT({','.join(self._si)})"

    def status(self, page: Page) -> None:
        """Keep a line of a page for the state of the inputs; everything that is guarded looks at it."""
        self.ready_ref = page.at(page.columns)  # at the end of the row, so that the sentence has room
        self._status = page, page.row
        self.name("inputs_complete", self.ready_ref)
        page.skip()

    def _write_status(self) -> None:
        page, row = self._status
        count = self.missing()
        page.put(page.columns, f"=IF({count}=0,1,0)", "RS si", row=row, form=";;;")
        text = f'({count})&" inputs are missing or refused. Fill in the boxed cells marked {MARK};'
        text += ' a refusal shows beside them."'
        legend = (
            f'"Boxed cells marked {MARK} are yours; finely framed cells hold units. All inputs are there."'
        )
        page.put(2, f"=IF({self.ready_ref}=1,{legend},{text})", "RS line", row=row)

    def guarded(self, formula: str) -> str:
        """Return a formula that stays empty text until everything it rests on is there."""
        return f'=IF({self.ready_ref},{formula.removeprefix("=")},"")'

    def unguarded(self, formula: str) -> str:
        """Return what a guarded formula works out once all is there."""
        return formula.removeprefix(f"=IF({self.ready_ref},").removesuffix(',"")')

    def save(self, path: Path) -> None:
        """Write the workbook."""
        properties = self.workbook.properties
        properties.creator, properties.title = "Rigidsheet", self.title
        self.workbook.calculation.fullCalcOnLoad = False
        self._write_status()
        for page in self.pages.values():
            page.end()
        self.workbook.save(path)
