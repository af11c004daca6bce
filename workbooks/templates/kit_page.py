"""One sheet of a workbook: title block, sections, inputs, results, print."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any, Final

from openpyxl.formatting.rule import FormulaRule
from openpyxl.styles import Border, Font, Side
from openpyxl.utils import get_column_letter
from openpyxl.worksheet.datavalidation import DataValidation
from openpyxl.worksheet.pagebreak import Break

from rigidsheet.udf.limits import Limit
from rigidsheet.udf.units.kinds import Kind
from rigidsheet.udf.units.quantities import asked

from .kit_cells import (
    CAUTIONS,
    FIELDS,
    MARGIN_FOOT,
    MARGIN_SIDE,
    MARGIN_TOP,
    PRINTABLE,
    UNITS,
    Place,
    list_of,
    millimeters,
    outside,
)
from .kit_look import HAIR, MARK, RULE, SOFT, rich

if TYPE_CHECKING:
    from .kit import Book


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
        self._chosen: dict[int, list[str]] = {}  # words by the row of their choice
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
        beyond = outside(place.ref, limit)
        if beyond:
            si = f"IF({beyond},NA(),{si})"
            self._say_outside(f"AND({when},{beyond})" if when else beyond, limit, note)
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

    def _say_outside(self, beyond: str, limit: Limit | None, note: str) -> None:
        """Say in the place of the note what a number outside its limit must be."""
        if limit is not None and "_" not in note:
            text = f'=IF({beyond},"must be {limit.words}","{note}")'
            self.put(self.NOTE, text, "RS note")

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

    def chosen(self, choice: Place, word: str) -> str:
        """Return a cell, right of the printed part, that holds 1 when a word is chosen and else 0."""
        words = self._chosen.setdefault(choice.row, [])
        if word not in words:
            words.append(word)
            column = self.columns + len(words)
            self.put(column, f'=IF({choice.ref}="{word}",1,0)', "RS si", row=choice.row)
        return self.at(self.columns + 1 + words.index(word), choice.row)

    def condition(self, label: str, formula: str, kind: Kind, why: str) -> None:
        """Write a number in SI that must be above zero before anything is worked out, and why if it is not."""
        self.put(self.LABEL, rich(label), "RS label")
        self.put(self.VALUE, f'=IFERROR(IF({formula}>0,"","{why}"),"")', "RS note")
        found = f"=IF(IFERROR({formula},1)>0,IFERROR({formula},0),NA())"  # what is missing shows elsewhere
        self.put(self.SI, found, "RS si", form='0.0000;-0.0000;""')
        self.put(self.SI_UNIT, kind.si, "RS unit fixed")
        self._grey_errors(self.SI)
        self.book.need(self.at(self.SI), "")
        self.row += 1

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
            found = DataValidation(type="list", formula1=list_of(words), allow_blank=True)
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

    def steps(self, title: str, call: str, count: int) -> None:
        """Write the working of a call as a section: `count` lines, the last one tall for a long balance."""
        self.section(title)
        function, _, rest = call.partition("(")
        for k in range(1, count + 1):
            step = f'INDEX(RB_WORKING("{function}",{rest}),{k},1)'
            self.put(self.lead, self.book.guarded(f'IFERROR({step},"")'), "RS step")
            self.sheet.merge_cells(
                start_row=self.row, start_column=self.lead, end_row=self.row, end_column=self.columns
            )
            if k == count:
                self.sheet.row_dimensions[self.row].height = 25.0
            self.row += 1

    def cautions(self) -> None:
        """Write the cautions that every sheet carries."""
        self.section("Cautions")
        self.prose(CAUTIONS)

    def end(self) -> None:
        """Set the print area to what is filled."""
        last = get_column_letter(self.columns)
        self.sheet.print_area = f"A1:{last}{max(self.row - 1, 1)}"
