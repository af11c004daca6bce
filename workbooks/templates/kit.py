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
* Checks: `page.checks_head()` once, then `page.check(...)` a row; the verdict is the text OK or FAIL.
* Charts: see kit_charts.py. Colours, fonts and styles: kit_look.py. Print: `page.end()` sets the print area.
* No array formulas, no booleans, no error values as chart gaps: hosts without the functions must show the
  values that recalculation wrote.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Final

from openpyxl import Workbook
from openpyxl.formatting.rule import FormulaRule
from openpyxl.styles import Border, Font, Side
from openpyxl.utils import get_column_letter
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.pagebreak import Break

from rigidsheet.udf import kinds
from rigidsheet.udf.arguments import asked
from rigidsheet.udf.kinds import Kind
from rigidsheet.udf.limits import Limit

from .kit_look import HAIR, MARK, RULE, SOFT, add_styles, rich

# What the unit cells offer, most usual first; each can be typed over with any unit of the kind.
UNITS: Final[Mapping[str, tuple[str, ...]]] = {
    "length": ("mm", "cm", "m", "in", "ft"),
    "mass": ("kg", "g", "t", "lb"),
    "density": ("kg/m^3", "g/cm^3", "lb/in^3", "lb/ft^3"),
    "time": ("s", "ms", "min"),
    "angle": ("deg", "rad"),
    "velocity": ("m/s", "mm/s", "m/min", "ft/s", "in/s"),
    "acceleration": ("m/s^2", "mm/s^2", "g", "ft/s^2"),
    "angular velocity": ("rad/s", "deg/s", "rpm"),
    "angular acceleration": ("rad/s^2", "deg/s^2"),
    "force": ("N", "kN", "lbf", "kip"),
    "torque": ("N*m", "kN*m", "lbf*ft", "lbf*in"),
    "energy": ("J", "kJ", "ft*lbf"),
    "power": ("W", "kW", "hp"),
    "pressure": ("Pa", "kPa", "bar", "psi"),
    "moment of inertia": ("kg*m^2", "kg*mm^2", "lb*ft^2", "lb*in^2"),
    "stiffness": ("N/m", "N/mm", "lbf/in"),
}
CAUTIONS: Final = (
    "Results are as good as the model: rigid bodies, loads as entered.",
    "Stored energy, gravity and pinch points hurt people: secure the machine before you work on it.",
    "Machine-safety law, local codes and a licensed or competent engineer decide; this sheet does not.",
)
FIELDS: Final = ("Drawing", "Revision", "Date", "By", "Checked")
# Printable size that both A4 and Letter have inside the margins, in mm: width, height of a portrait page.
PRINTABLE: Final = (186.0, 250.0)
MARGIN_SIDE, MARGIN_TOP, MARGIN_FOOT = 12.0, 12.0, 16.0  # mm


def pixels(digits: float) -> int:
    """Return the width on screen of a column of so many digits of the standard type."""
    return int(digits * 7.0 + 5.0)


def millimeters(digits: float) -> float:
    """Return the printed width of a column at full size."""
    return pixels(digits) * 25.4 / 96.0


@dataclass(frozen=True, slots=True)
class Place:
    """A value cell with its unit cell and its number in SI."""

    sheet: str
    row: int
    value_column: int
    unit_column: int
    si_column: int

    def _at(self, column: int) -> str:
        return f"{self.sheet}!${get_column_letter(column)}${self.row}"

    @property
    def ref(self) -> str:
        return self._at(self.value_column)

    @property
    def unit(self) -> str:
        return self._at(self.unit_column)

    @property
    def pair(self) -> str:
        return f"{self.ref}:${get_column_letter(self.unit_column)}${self.row}"

    @property
    def si(self) -> str:
        return self._at(self.si_column)


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
        self.ready_ref = page.at(page.SI)
        self._status = page, page.row
        self.name("inputs_complete", self.ready_ref)
        page.skip()

    def _write_status(self) -> None:
        page, row = self._status
        count = self.missing()
        page.put(page.SI, f"=IF({count}=0,1,0)", "RS si", row=row, form=";;;")
        text = f'({count})&" inputs are missing or refused. Fill in the boxed cells marked {MARK};'
        text += ' a refusal shows beside them."'
        legend = f'"Boxed cells marked {MARK} are yours to fill in; finely framed cells hold units. All inputs are there."'
        page.put(2, f"=IF({self.ready_ref}=1,{legend},{text})", "RS line", row=row)

    def guarded(self, formula: str) -> str:
        """Return a formula that stays empty text until everything it rests on is there."""
        return f'=IF({self.ready_ref}=1,{formula.removeprefix("=")},"")'

    def save(self, path: Path) -> None:
        """Write the workbook."""
        properties = self.workbook.properties
        properties.creator, properties.title = "Rigidsheet", self.title
        self.workbook.calculation.fullCalcOnLoad = False
        self._write_status()
        for page in self.pages.values():
            page.end()
        self.workbook.save(path)


class Page:
    """One sheet, filled from the top; columns: mark, label, symbol, value, unit, SI value, SI unit, notes."""

    MARK, LABEL, SYMBOL, VALUE, UNIT, SI, SI_UNIT, NOTE = range(1, 9)
    INPUT_WORDS: Final = {VALUE: "value", UNIT: "unit", SI: "in SI"}

    def __init__(
        self, book: Book, sheet: Any, widths: Sequence[float], landscape: bool, lead: int = 2
    ) -> None:
        self.book, self.sheet, self.widths = book, sheet, tuple(widths)
        self.name, self.lead = sheet.title, lead
        self.rule_to = len(self.widths)  # how far the lines under headings reach; less beside a sketch
        self.row = 1
        self.sections = 0
        self._validations: dict[tuple[str, ...], Any] = {}
        for i, width in enumerate(self.widths, 1):
            sheet.column_dimensions[get_column_letter(i)].width = width
        sheet.sheet_view.showGridLines = False
        sheet.sheet_format.defaultRowHeight, sheet.sheet_format.customHeight = 13.5, True
        self._print(landscape)

    @property
    def columns(self) -> int:
        return len(self.widths)

    def _print(self, landscape: bool) -> None:
        setup, inch = self.sheet.page_setup, 25.4
        setup.orientation = "landscape" if landscape else "portrait"
        setup.paperSize = 9  # A4; everything also fits Letter
        wide, high = PRINTABLE if not landscape else (PRINTABLE[1] + 5.0, PRINTABLE[0] - 6.0)
        self.printable = wide, high
        self.scale = min(100, int(100.0 * wide / sum(map(millimeters, self.widths))))
        setup.scale = self.scale
        margins = self.sheet.page_margins
        margins.left = margins.right = MARGIN_SIDE / inch
        margins.top, margins.bottom = MARGIN_TOP / inch, MARGIN_FOOT / inch
        margins.header, margins.footer = 6.0 / inch, 8.0 / inch
        self.sheet.print_options.horizontalCentered = True
        foot = self.sheet.oddFooter
        for part, text in ((foot.left, "&F"), (foot.center, "&A"), (foot.right, "Page &P of &N")):
            part.text, part.size, part.font, part.color = text, 8, "Arial", SOFT

    # -- cells ---------------------------------------------------------------------------------------------

    def put(self, column: int, value: Any, style: str, *, row: int = 0, form: str = "") -> Any:
        """Write a cell in one of the kit's styles."""
        cell = self.sheet.cell(row or self.row, column)
        cell.value, cell.style = value, style
        if form:
            cell.number_format = form
        return cell

    def at(self, column: int, row: int = 0) -> str:
        """Return the absolute reference of a cell of this page."""
        return f"{self.name}!${get_column_letter(column)}${row or self.row}"

    def span(self, first: tuple[int, int], last: tuple[int, int]) -> str:
        """Return the absolute reference of a range given by (row, column) twice."""
        (r1, c1), (r2, c2) = first, last
        return f"{self.name}!${get_column_letter(c1)}${r1}:${get_column_letter(c2)}${r2}"

    def skip(self, rows: int = 1, height: float = 0.0) -> None:
        """Leave rows free."""
        if height:
            self.sheet.row_dimensions[self.row].height = height
        self.row += rows

    # -- heads ---------------------------------------------------------------------------------------------

    def title_block(self, repeat_rows: int = 0) -> None:
        """Write title and the fields drawing, revision, date, by, checked; the first page holds the fields."""
        sheet, first = self.sheet, not self.book.fields
        for row, height in ((1, 24.0), (2, 16.0), (3, 14.0), (4, 4.0)):
            sheet.row_dimensions[row].height = height
        self.put(self.lead, self.book.title, "RS title", row=1)
        self.put(self.lead, self.book.line, "RS line", row=3)
        for name, (begin, end) in zip(FIELDS, self._field_columns(), strict=True):
            self.put(begin, name, "RS field name", row=1)
            for column in range(begin, end + 1):
                self.put(column, None, "RS field" if first else "RS field shown", row=2)
            if end > begin:
                sheet.merge_cells(start_row=2, start_column=begin, end_row=2, end_column=end)
            if first:
                self.book.fields[name] = self.at(begin, 2)
                self.book.name(f"sheet_{name.lower()}", self.at(begin, 2))
            else:
                home = self.book.fields[name]
                sheet.cell(2, begin).value = f'=IF({home}="","",{home})'
        for column in range(self.lead, self.columns + 1):
            self.put(column, None, "RS rule", row=4)
        sheet.print_title_rows = f"1:{max(repeat_rows, 4)}"
        self.row = 5

    def _field_columns(self) -> list[tuple[int, int]]:
        """Return first and last column of each field, filled from the right: about 22 mm for each."""
        spans: list[tuple[int, int]] = []
        column = self.columns
        for _ in FIELDS:
            end, width = column, 0.0
            while width < 12.0 and column > self.lead + 1:
                width += self.widths[column - 1]
                column -= 1
            spans.append((column + 1, end))
        return spans[::-1]

    def section(self, title: str, columns: Mapping[int, str] | None = None) -> None:
        """Start a numbered section; `columns` are small words over some columns."""
        self.sections += 1
        self.sheet.row_dimensions[self.row].height = 8.0
        self.row += 1
        self.sheet.row_dimensions[self.row].height = 17.0
        for column in range(self.lead, self.rule_to + 1):
            self.put(column, None, "RS heading")
        self.put(self.lead, f"{self.sections}   {title}", "RS heading")
        for column, word in (columns or {}).items():
            cell = self.put(column, word, "RS column")
            cell.border = Border(bottom=Side("thin", color=RULE))
        self.row += 1

    # -- inputs --------------------------------------------------------------------------------------------

    def quantity(
        self,
        label: str,
        symbol: str,
        value: float,
        unit: str,
        name: str,
        kind: Kind,
        *,
        limit: Limit | None = None,
        note: str = "",
        when: str = "",
    ) -> Place:
        """Write an input with its unit cell and its number in SI; a refusal shows beside it."""
        place = Place(self.name, self.row, self.VALUE, self.UNIT, self.SI)
        plain = kind.si in ("", "-")
        self._input_row(label, symbol, None if self.book.blank else value, "RS input", name, note)
        self.put(self.UNIT, None if plain else unit, "RS unit fixed" if plain else "RS unit")
        si = (
            f'RB_CONVERT({place.pair},"{kind.si}")'
            if not plain
            else f"IF(ISNUMBER({place.ref}),{place.ref},NA())"
        )
        self.put(self.SI, f'=IF({when},{si},"not used")' if when else f"={si}", "RS si")
        si_unit = f'=IF({when},"{kind.si}","")' if when else kind.si
        self.put(self.SI_UNIT, None if plain else si_unit, "RS unit fixed")
        self._grey_errors(self.SI)
        self.book.need(place.si, when)
        if not plain:
            self.unit_choices(self.UNIT, kind)
        self._limit(self.VALUE, label, kind, limit)
        self.row += 1
        return place

    def choice(
        self, label: str, symbol: str, value: str, words: Sequence[str], name: str, *, note: str = ""
    ) -> Place:
        """Write an input that is one of some words; its SI cell holds the position of the word from 1."""
        place = Place(self.name, self.row, self.VALUE, self.UNIT, self.SI)
        self._input_row(label, symbol, None if self.book.blank else value, "RS input text", name, note)
        self.put(self.UNIT, None, "RS input text")
        self.sheet.merge_cells(
            start_row=self.row, start_column=self.VALUE, end_row=self.row, end_column=self.UNIT
        )
        number = "NA()"
        for i, word in reversed(list(enumerate(words, 1))):
            number = f'IF({place.ref}="{word}",{i},{number})'
        self.put(self.SI, f"={number}", "RS si", form=";;;")
        self._grey_errors(self.SI)
        self.book.need(place.si, "")
        self._list(self.VALUE, words, f"{label}: one of {', '.join(words)}", strict=True)
        self.row += 1
        return place

    def _input_row(self, label: str, symbol: str, value: Any, style: str, name: str, note: str) -> None:
        self.sheet.row_dimensions[self.row].height = 14.5
        self.put(self.MARK, MARK, "RS mark")
        self.put(self.LABEL, label, "RS label")
        self.put(self.SYMBOL, rich(symbol, 10, italic=True, serif=True) or None, "RS symbol")
        self.put(self.VALUE, value, style)
        self.put(self.NOTE, rich(note, 8, italic=True, color=SOFT) or None, "RS note")
        self.book.name(name, self.at(self.VALUE))

    def _grey_errors(self, column: int) -> None:
        ref = self.sheet.cell(self.row, column).coordinate
        rule = FormulaRule(formula=[f"ISERROR({ref})"], font=Font(color=HAIR))
        self.sheet.conditional_formatting.add(ref, rule)

    def unit_choices(self, column: int, kind: Kind, row: int = 0) -> None:
        """Offer the usual units of a kind in a unit cell; any other unit of the kind may be typed."""
        self._list(column, UNITS[kind.name], f"A unit of {kind.name}", row=row)

    def _list(
        self, column: int, words: Sequence[str], prompt: str, *, row: int = 0, strict: bool = False
    ) -> None:
        key = (*words, "strict" if strict else "")
        found = self._validations.get(key)
        if found is None:
            found = DataValidation(type="list", formula1=f'"{",".join(words)}"', allow_blank=True)
            found.showErrorMessage = strict
            found.errorTitle, found.error = "Not one of the words", prompt
            self._validations[key] = found
            self.sheet.add_data_validation(found)
        found.add(self.sheet.cell(row or self.row, column))

    def _limit(self, column: int, label: str, kind: Kind, limit: Limit | None) -> None:
        self.limited(self.sheet.cell(self.row, column).coordinate, label, kind, limit)

    def limited(self, cells: str, label: str, kind: Kind, limit: Limit | None) -> None:
        """Validate cells against a limit of the functions: the same object words the refusal there."""
        found = DataValidation(type="decimal", allow_blank=True, showErrorMessage=True)
        low = limit.low if limit is not None else float("-inf")
        high = limit.high if limit is not None else float("inf")
        if limit is None or limit.nonzero:
            found.operator, found.formula1, found.formula2 = "between", "-1E+300", "1E+300"
        elif high == float("inf"):
            found.operator = "greaterThan" if limit.low_open else "greaterThanOrEqual"
            found.formula1 = f"{low:g}"
        else:
            tiny = "1E-300" if limit.low_open and low == 0.0 else f"{low:g}"
            found.operator, found.formula1, found.formula2 = "between", tiny, f"{high:g}"
        found.errorTitle, found.error = label[:31], f"{label} must be {asked(kind, limit)}."[:250]
        self.sheet.add_data_validation(found)
        found.add(cells)

    # -- results -------------------------------------------------------------------------------------------

    def result(
        self,
        label: str,
        symbol: str,
        formula: str,
        kind: Kind,
        unit: str,
        name: str = "",
        *,
        note: str = "",
        strong: bool = False,
        needed: bool = False,
    ) -> Place:
        """Write a result of a function, in the unit of its unit cell and in SI.

        `{unit}` in the formula is where the unit goes. With `needed`, the number in SI is not guarded: it shows
        its own refusal, and everything waits for it.
        """
        place = self._result_row(label, symbol, unit, kind, name, note)
        shown = self.book.guarded(formula.replace("{unit}", place.unit))
        si = formula.replace("{unit}", f'"{kind.si}"')
        self._result_values(place, shown, f"={si}" if needed else self.book.guarded(si), strong)
        if needed:
            self._grey_errors(self.SI)
            self.book.need(place.si, "")
        self.row += 1
        return place

    def derived(
        self,
        label: str,
        symbol: str,
        formula: str,
        kind: Kind,
        unit: str,
        name: str = "",
        *,
        note: str = "",
        strong: bool = False,
    ) -> Place:
        """Write a result of plain arithmetic with numbers in SI, shown in the unit of its unit cell."""
        place = self._result_row(label, symbol, unit, kind, name, note)
        factor = "1" if kind.si in ("", "-") else f'RB_CONVERT("1 {kind.si}",{place.unit})'
        self._result_values(
            place, self.book.guarded(f"{place.si}*{factor}"), self.book.guarded(formula), strong
        )
        self.row += 1
        return place

    def _result_row(self, label: str, symbol: str, unit: str, kind: Kind, name: str, note: str) -> Place:
        place = Place(self.name, self.row, self.VALUE, self.UNIT, self.SI)
        plain = kind.si in ("", "-")
        self.put(self.LABEL, label, "RS label")
        self.put(self.SYMBOL, rich(symbol, 10, italic=True, serif=True) or None, "RS symbol")
        self.put(self.UNIT, None if plain else unit, "RS unit fixed" if plain else "RS unit")
        self.put(self.SI_UNIT, None if plain else kind.si, "RS unit fixed")
        if not plain:
            self.unit_choices(self.UNIT, kind)
        self.put(self.NOTE, rich(note, 8, italic=True, color=SOFT) or None, "RS note")
        if name:
            self.book.name(name, place.ref)
        return place

    def _result_values(self, place: Place, shown: str, si: str, strong: bool) -> None:
        self.put(self.VALUE, shown, "RS result" if strong else "RS value")
        self.put(self.SI, si, "RS si")

    # -- print ---------------------------------------------------------------------------------------------

    def page_break(self) -> None:
        """Start a new printed page above the present row."""
        self.sheet.row_breaks.append(Break(id=self.row - 1))

    def prose(self, lines: Sequence[str], height: float = 12.5) -> None:
        """Write sentences, one a row, across the page."""
        for line in lines:
            self.put(self.lead, rich(line, 8.5), "RS prose")
            self.sheet.row_dimensions[self.row].height = height
            self.row += 1

    def cautions(self) -> None:
        """Write the cautions that every sheet carries."""
        self.section("Cautions")
        self.prose(CAUTIONS)

    def end(self) -> None:
        """Set the print area to what is filled."""
        last = get_column_letter(self.columns)
        self.sheet.print_area = f"A1:{last}{max(self.row - 1, 1)}"


__all__ = ["CAUTIONS", "FIELDS", "UNITS", "Book", "Page", "Place", "kinds"]
