"""The engine's copy of a workbook: rewritten formulas in a small package of our own, in memory only."""

from __future__ import annotations

import difflib
import io
import re
import zipfile
from collections.abc import Collection, Iterator
from dataclasses import dataclass, field
from typing import Final
from xml.sax.saxutils import escape, quoteattr

from ..addresses import Area, area, cell_name, size
from ..errors import FileRefused, FormulaRefused, UnknownFunction, address
from ..files.book import Book, DefinedName
from ..files.cellxml import typed_tag
from ..files.sheetxml import FormulaCell, Sheet, splice, tag_end
from .builtins import WEAK_FUNCTIONS
from .calls import FIT
from .engine import Engine
from .formulas import CALLER_MARK, NAME_MARK, Analysis, Resolver, analyse, canonical, shifted

_ABSOLUTE: Final = re.compile(
    r"(?P<where>'(?:[^']|'')+'|[^\s'!:\[\]]+)!"
    r"(?P<area>\$[A-Za-z]{1,3}\$[1-9]\d*(?::\$[A-Za-z]{1,3}\$[1-9]\d*)?"
    r"|\$[A-Za-z]{1,3}:\$[A-Za-z]{1,3}|\$[1-9]\d*:\$[1-9]\d*)\Z"
)
_LITERAL: Final = re.compile(
    r'[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?\Z|"(?:[^"]|"")*"\Z|(?:TRUE|FALSE)\Z', re.I
)
_MARKED: Final = re.compile(f"{NAME_MARK}([^{NAME_MARK}]*){NAME_MARK}([^{NAME_MARK}]*){NAME_MARK}")

SPACE: Final = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
_OFFICE: Final = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_PACKAGE: Final = "http://schemas.openxmlformats.org/package/2006"


@dataclass
class Prepared:
    """A workbook ready for the engine, and what its formulas say."""

    book: Book
    sheets: tuple[Sheet, ...]
    engine_package: bytes = b""
    analyses: dict[tuple[int, str], Analysis] = field(default_factory=dict)  # sheet number, cell
    used: set[str] = field(default_factory=set)  # our functions that some formula calls

    def formulas(self) -> Iterator[tuple[int, Sheet, FormulaCell]]:
        """Yield every formula cell with the number of its sheet."""
        for number, sheet in enumerate(self.sheets):
            for formula in sheet.formulas:
                yield number, sheet, formula


def sheet_of(where: str) -> str:
    """Return the sheet's name out of the prefix of a reference: 'Load cases'! or Inputs!."""
    name = where.removesuffix("!")
    if name.startswith("'"):
        name = name[1:-1].replace("''", "'")
    return name


def target_of(name: DefinedName) -> tuple[str, Area] | None:
    """Return the sheet and area that a name stands for; None when it is not one fixed area."""
    found = _ABSOLUTE.match(name.text)
    block = area(found["area"]) if found else None
    return (sheet_of(found["where"]), block) if found and block else None


def _refuse_text_dates(sheet: Sheet) -> None:
    """Refuse dates kept as ISO text, as strict files may have them: SUM would pass over them in silence."""
    if b't="d"' not in sheet.data and b"t='d'" not in sheet.data:
        return
    worked_out = {formula.ref for formula in sheet.formulas}
    for _, attributes in sheet.cells:
        if attributes.get("t") == "d" and attributes["r"] not in worked_out:
            raise FileRefused(
                "a date is kept as text, which formulas would pass over",
                remedy="Save the file as an ordinary .xlsx workbook, not a strict one",
                where=address(sheet.name, attributes["r"]),
            )


class Preparation:
    """Checks every formula of a workbook and writes the engine's copy."""

    def __init__(
        self, book: Book, sheets: tuple[Sheet, ...], engine: Engine, resolve: Resolver, ours: Collection[str]
    ) -> None:
        self.prepared = Prepared(book, sheets)
        self.book = book
        self.engine = engine
        self.resolve = resolve
        self.ours = ours
        self.tabs = {sheet.name.lower() for sheet in sheets}
        self.checked: set[str] = set()
        self.masters: dict[tuple[int, str], FormulaCell] = {}  # sheet number, number of the shared formula

    def run(self) -> Prepared:
        """Return the workbook ready for the engine, or refuse the first formula that is not safe."""
        parts = []
        for number, sheet in enumerate(self.prepared.sheets):
            edits: list[tuple[int, int, bytes]] = []
            _refuse_text_dates(sheet)
            for formula in sheet.formulas:
                edits.extend(self._formula(number, sheet, formula))
            parts.append(splice(sheet.data, edits) if edits else sheet.data)
        self.prepared.engine_package = _package(self.prepared, parts)
        return self.prepared

    def _formula(self, number: int, sheet: Sheet, formula: FormulaCell) -> list[tuple[int, int, bytes]]:
        rule = formula.rule.get("t", "normal")
        if rule == "dataTable":
            raise self._refused(sheet, formula, "a what-if data table stands here", "Remove the table")
        if rule == "shared":
            self._own_text(number, formula)
        if not formula.text:
            raise self._refused(sheet, formula, "the cell holds a formula without text", "Enter it again")
        analysis = analyse(formula.text, self.resolve)
        self.prepared.analyses[number, formula.ref] = analysis
        self._check(sheet, formula, analysis, plain=rule != "array")
        place = f"{number},{formula.row},{formula.column}"
        text = analysis.engine.replace(CALLER_MARK, place)
        if NAME_MARK in text:
            text = _MARKED.sub(lambda mark: self._meaning(sheet, formula, mark[1], mark[2]), text)
        frame = formula.array
        edits = _without_error(sheet, formula)
        if frame is None:
            text = f"@({text})"
        else:
            rows, columns = size(frame)
            if rows * columns > 1_000_000:
                raise self._refused(sheet, formula, "the array formula is immense", "Make it smaller")
            text = f"{FIT}({place},{rows},{columns},{text})"
            edits += self._children(sheet, formula, frame)
        new = escape(text).encode()
        if rule == "shared":
            element = b"<%bf>%b</%bf>" % (sheet.prefix, new, sheet.prefix)
            edits.append((formula.f_start, formula.f_end, element))
        else:
            edits.append((formula.text_start, formula.text_end, new))
        return edits

    def _own_text(self, number: int, formula: FormulaCell) -> None:
        """Give a cell of a shared formula its own text: the engine moves texts inside quoted sheet names too."""
        key = number, formula.rule.get("si", "")
        if formula.text:
            if "ref" in formula.rule or key not in self.masters:
                self.masters[key] = formula
        elif key in self.masters:
            master = self.masters[key]
            formula.text = shifted(master.text, formula.row - master.row, formula.column - master.column)

    def _children(self, sheet: Sheet, formula: FormulaCell, frame: Area) -> Iterator[tuple[int, int, bytes]]:
        """Take the other cells of an array formula out: the engine would see them as being in the way."""
        for ref in frame_cells(frame):
            found = sheet.cell(ref)
            if ref == formula.ref or found is None:
                continue
            start = found[0]
            end = tag_end(sheet.data, start)
            if sheet.data[end - 2 : end] != b"/>":
                end = sheet.data.index(b">", sheet.data.index(b"</" + sheet.prefix + b"c", end)) + 1
            if b"<!" in sheet.data[start:end] or sheet.data.find(b"<" + sheet.prefix + b"f", start, end) > 0:
                raise self._refused(sheet, formula, f"the array formula overlaps the formula of {ref}", "")
            yield start, end, b""

    def _refused(self, sheet: Sheet, formula: FormulaCell, reason: str, remedy: str = "") -> FormulaRefused:
        return FormulaRefused(reason, sheet=sheet.name, cell=formula.ref, formula=formula.text, remedy=remedy)

    def _check(self, sheet: Sheet, formula: FormulaCell, analysis: Analysis, *, plain: bool) -> None:
        for function in analysis.functions:
            if function not in self.checked:
                if function in WEAK_FUNCTIONS:
                    raise self._refused(sheet, formula, f"the engine does not offer {function} in every form")
                if not self.engine.knows(function):
                    raise self._unknown(sheet, formula, function)
                self.checked.add(function)
        if analysis.refusal:
            raise self._refused(sheet, formula, analysis.refusal)
        for use in analysis.uses:
            if use.named:
                target = self._area_of(sheet, formula, use.where, use.text)
                block = target is not None and size(target) != (1, 1)
            else:
                block = ":" in use.text
                if use.where and sheet_of(use.where).lower() not in self.tabs:
                    reason = f"there is no sheet called {sheet_of(use.where)!r}"
                    raise self._refused(sheet, formula, reason)
            if block:
                self._block(sheet, formula, use.text, use.element, single=plain and use.single)
        for call in analysis.calls:
            self.prepared.used.add(call.name)
        for _, _, call in analysis.nested:
            self.prepared.used.add(call.name)

    def _block(self, sheet: Sheet, formula: FormulaCell, text: str, element: str, *, single: bool) -> None:
        """Refuse a range where a spreadsheet would take the cell of its own row, or where the engine errs."""
        if single:
            reason = f"the range {text} stands where one value is needed"
            raise self._refused(sheet, formula, reason, "Pick one cell, use SUMPRODUCT or an array formula")
        if element:
            reason = f"the engine cannot work out {element} for each cell of {text}"
            raise self._refused(sheet, formula, reason, "Work it out in a column of its own")

    def _unknown(self, sheet: Sheet, formula: FormulaCell, function: str) -> UnknownFunction:
        pool = list(self.ours) if function.startswith("RB") else [*self.ours, *_COMMON]
        close = difflib.get_close_matches(canonical(function), pool, n=1, cutoff=0.6)
        remedy = f"Did you mean {close[0]}?" if close else ""
        return UnknownFunction(
            f"there is no function {function}",
            sheet=sheet.name,
            cell=formula.ref,
            formula=formula.text,
            remedy=remedy,
        )

    def _find(self, sheet: Sheet, formula: FormulaCell, where: str, name: str) -> DefinedName:
        found = self.book.named(name, sheet_of(where) if where else sheet.name)
        if found is None:
            known = [one.name for one in self.book.names if one.name.lower() not in ("", name.lower())]
            close = difflib.get_close_matches(name, known, n=1, cutoff=0.6)
            raise UnknownFunction(
                f"there is no cell or function named {name}",
                sheet=sheet.name,
                cell=formula.ref,
                formula=formula.text,
                remedy=f"Did you mean {close[0]}?" if close else "",
            )
        return found

    def _area_of(self, sheet: Sheet, formula: FormulaCell, where: str, name: str) -> Area | None:
        target = target_of(self._find(sheet, formula, where, name))
        return target[1] if target else None

    def _meaning(self, sheet: Sheet, formula: FormulaCell, where: str, name: str) -> str:
        """Return what a name stands for as formula text: one fixed area or one literal, nothing else."""
        found = self._find(sheet, formula, where, name)
        target = _ABSOLUTE.match(found.text)
        if target is not None and sheet_of(target["where"]).lower() in self.tabs:
            return found.text
        if _LITERAL.match(found.text):
            return found.text if found.text[0] not in "+-" else f"({found.text})"
        if "#REF!" in found.text:
            return "#REF!"
        raise self._refused(
            sheet,
            formula,
            f"the name {name} stands for a formula ({found.text[:60]})",
            "Put the formula into a cell and let the name point to that cell",
        )


def _without_error(sheet: Sheet, formula: FormulaCell) -> list[tuple[int, int, bytes]]:
    """Take an old error out: the engine does not load a file with an error text that it has not heard of."""
    if formula.attributes.get("t") != "e":
        return []
    tag = typed_tag(sheet.data[formula.start : formula.tag_end], b"")
    return [(formula.start, formula.tag_end, tag), (formula.v_start, formula.v_end, b"")][
        : 2 if formula.v_start >= 0 else 1
    ]


# What people mean most often when they mistype a built-in function.
_COMMON: Final = (
    "SUM",
    "SUMPRODUCT",
    "AVERAGE",
    "ROUND",
    "SQRT",
    "INDEX",
    "MATCH",
    "VLOOKUP",
    "IFERROR",
    "COUNT",
    "COUNTA",
    "RADIANS",
    "DEGREES",
    "CHOOSE",
    "CONCATENATE",
    "POWER",
    "ATAN2",
)


def frame_cells(frame: Area) -> Iterator[str]:
    """Yield the addresses of an area, row by row."""
    top, left, bottom, right = frame
    for row in range(top, bottom + 1):
        for column in range(left, right + 1):
            yield cell_name(row, column)


def _package(prepared: Prepared, parts: list[bytes]) -> bytes:
    """Return the smallest package the engine reads: the sheets and the shared strings."""
    target = io.BytesIO()
    tabs, relations = [], []
    with zipfile.ZipFile(target, "w", zipfile.ZIP_STORED) as archive:
        for number, (sheet, data) in enumerate(zip(prepared.sheets, parts, strict=True)):
            name = quoteattr(sheet.name)
            tabs.append(f'<sheet name={name} sheetId="{number + 1}" r:id="s{number}"/>')
            relations.append(_relation(f"s{number}", "worksheet", f"worksheets/s{number}.xml"))
            archive.writestr(f"xl/worksheets/s{number}.xml", data)
        if prepared.book.shared_strings is not None:
            relations.append(_relation("strings", "sharedStrings", "sharedStrings.xml"))
            archive.writestr("xl/sharedStrings.xml", prepared.book.shared_strings)
        dates = '<workbookPr date1904="1"/>' if prepared.book.date1904 else ""
        archive.writestr(
            "xl/workbook.xml",
            f'<workbook xmlns="{SPACE}" xmlns:r="{_OFFICE}">{dates}'
            f"<sheets>{''.join(tabs)}</sheets></workbook>",
        )
        archive.writestr("xl/_rels/workbook.xml.rels", _relations_text("".join(relations)))
        archive.writestr("_rels/.rels", _relations_text(_relation("w", "officeDocument", "xl/workbook.xml")))
        archive.writestr(
            "[Content_Types].xml",
            f'<Types xmlns="{_PACKAGE}/content-types">'
            '<Default Extension="rels" ContentType='
            '"application/vnd.openxmlformats-package.relationships+xml"/>'
            '<Default Extension="xml" ContentType="application/xml"/></Types>',
        )
    return target.getvalue()


def _relation(key: str, kind: str, target: str) -> str:
    return f'<Relationship Id="{key}" Type="{_OFFICE}/{kind}" Target="{target}"/>'


def _relations_text(inner: str) -> str:
    return f'<Relationships xmlns="{_PACKAGE}/relationships">{inner}</Relationships>'
