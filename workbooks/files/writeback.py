"""Results go back into the file: cached values are spliced in, all else stays as it was."""

from __future__ import annotations

import re
from bisect import bisect_right
from collections.abc import Iterable, Mapping
from typing import Final

from rigidsheet.udf.cells import CellError, Value

from ..addresses import row_column
from ..errors import FileRefused
from ..evaluation.enginecopy import Prepared, frame_cells
from .book import Book
from .cellxml import plain_text, typed_tag, value_xml
from .package import write
from .sheetxml import FormulaCell, Sheet, element_end, splice, tag_end, unescape
from .xmlparts import elements, truth

# Sheet number and address of a formula or array cell -> what it holds now.
Values = Mapping[tuple[int, str], Value]
_Edit = tuple[int, int, bytes]

_CALC: Final = re.compile(rb"<(?:[\w.-]+:)?calcPr\b[^<>]*>")
_LOAD: Final = re.compile(rb"\s+fullCalcOnLoad\s*=\s*(?:\"[^\"]*\"|'[^']*')")
_VERSION: Final = re.compile(rb"(\scalcId\s*=\s*[\"'])(\d+)([\"'])")
CALC_VERSION: Final = 191029  # the calculation version that current programs write


def written(prepared: Prepared, values: Values) -> bytes:
    """Return the package with the values in it; the very same bytes when nothing changes."""
    book = prepared.book
    changed: dict[str, bytes] = {}
    for number, sheet in enumerate(prepared.sheets):
        edits: list[_Edit] = []
        for formula in sheet.formulas:
            edits.extend(_cell_edits(sheet, formula, values[number, formula.ref]))
            frame = formula.array
            if frame is not None:
                edits.extend(_frame_edits(number, sheet, formula, values))
        data = splice(sheet.data, edits) if edits else sheet.data  # inputs may be set in it already
        if data != book.package.parts[sheet.part]:
            changed[sheet.part] = data
    workbook = without_load_flag(book)
    if workbook is not None:
        changed[book.part] = workbook
    return write(book.package, changed)


def without_load_flag(book: Book) -> bytes | None:
    """Return the workbook part without the order to recalculate on load; None when there is none.

    The order would make a program without these functions show #NAME? at once in place of the values.
    An old calculation version has the same effect and is raised for the same reason.
    """
    data = book.package.parts[book.part]
    if not any(
        tag == "calcPr" and (truth(a.get("fullCalcOnLoad")) or _old(a.get("calcId")))
        for tag, a, _, _ in elements(data, book.part)
    ):
        return None

    def cleaned(found: re.Match[bytes]) -> bytes:
        tag = _LOAD.sub(b"", found[0])
        return _VERSION.sub(lambda v: v[1] + str(max(int(v[2]), CALC_VERSION)).encode() + v[3], tag)

    new = _CALC.sub(cleaned, data)
    return new if new != data else None


def _old(version: str | None) -> bool:
    return version is not None and version.isdigit() and int(version) < CALC_VERSION


def _cached(data: bytes, kind: str, start: int, end: int) -> Value:
    if start < 0:
        return None
    text = cached_text(data, start, end)
    if kind == "str":
        return plain_text(text)
    if kind == "e":
        return CellError(text)
    if kind == "b":
        return text.strip() == "1"
    if kind != "n":
        return None
    try:
        return float(text) if text.strip() else None
    except ValueError:
        return None


def cached_text(data: bytes, start: int, end: int) -> str:
    """Return the text of a value element."""
    inner = tag_end(data, start)
    if data[inner - 2 : inner] == b"/>":
        return ""
    return unescape(data[inner : data.index(b"</", inner, end)])


def _same(old: Value, new: Value, kind: str) -> bool:
    """Tell whether a cell already holds the value, whatever digits the program wrote it with."""
    if kind not in ("n", "str", "e", "b") or type(old) is not type(new):
        return False
    return old == new


def _cell_edits(sheet: Sheet, formula: FormulaCell, value: Value) -> Iterable[_Edit]:
    kind = formula.attributes.get("t", "n")
    data = sheet.data
    if _same(_cached(data, kind, formula.v_start, formula.v_end), value, kind):
        return
    new_kind, element = value_xml(value, sheet.prefix)
    tag = data[formula.start : formula.tag_end]
    if new_kind.decode() != ("" if kind == "n" else kind) or b"vm" in tag:
        yield formula.start, formula.tag_end, typed_tag(tag, new_kind)
    if formula.v_start >= 0:
        yield formula.v_start, formula.v_end, element
    else:
        yield formula.f_end, formula.f_end, element


def _frame_edits(number: int, sheet: Sheet, formula: FormulaCell, values: Values) -> Iterable[_Edit]:
    frame = formula.array
    assert frame is not None
    absent: dict[int, list[str]] = {}
    for ref in frame_cells(frame):
        if ref == formula.ref:
            continue
        found = sheet.cell(ref)
        if found is None:
            place = row_column(ref)
            assert place is not None
            absent.setdefault(place[0], []).append(ref)
        else:
            yield from plain_cell_edits(sheet, found[0], found[1], values[number, ref])
    for row, refs in absent.items():
        yield from insertions(sheet, row, [(ref, values[number, ref]) for ref in refs])


def plain_cell_edits(
    sheet: Sheet, start: int, attributes: Mapping[str, str], value: Value
) -> Iterable[_Edit]:
    """Give a cell without formula another value."""
    data, prefix = sheet.data, sheet.prefix
    end = tag_end(data, start)
    closed = data[end - 2 : end] == b"/>"
    stop = end if closed else data.index(b">", data.index(b"</" + prefix + b"c", end)) + 1
    kind = attributes.get("t", "n")
    if b"<!" in data[start:stop]:
        raise FileRefused(f"cell {attributes['r']} holds a comment or a literal section inside its value")
    v_start = data.find(b"<" + prefix + b"v", end, stop)
    v_end = element_end(data, v_start, prefix, b"v") if v_start >= 0 else -1
    if _same(_cached(data, kind, v_start, v_end), value, kind):
        return
    new_kind, element = value_xml(value, prefix)
    tag = typed_tag(data[start:end], new_kind)
    if not element:
        yield start, stop, tag[:-1].rstrip() + b"/>" if not closed else tag
        return
    if closed:
        tag = tag[:-2].rstrip() + b">"
    yield start, stop, tag + element + b"</" + prefix + b"c>"


def insertions(sheet: Sheet, row: int, cells: list[tuple[str, Value]]) -> Iterable[_Edit]:
    """Insert cells that the sheet does not hold yet, in column order, the row too when it is missing."""
    prefix = sheet.prefix
    made: list[tuple[int, bytes]] = []
    for ref, value in cells:
        kind, element = value_xml(value, prefix)
        if element:
            tag = typed_tag(b'<%bc r="%b">' % (prefix, ref.encode()), kind)
            made.append((_column(ref), tag + element + b"</" + prefix + b"c>"))
    if not made:
        return
    numbers = [number for number, _ in sheet.rows]
    if sorted(numbers) != numbers:
        raise FileRefused(f"the rows of sheet {sheet.name} are not in order")
    at = bisect_right(numbers, row) - 1
    if at < 0 or numbers[at] != row:
        whole = b'<%brow r="%d">%b</%brow>' % (prefix, row, b"".join(piece for _, piece in made), prefix)
        if sheet.end < 0:
            start = sheet.data_start
            element = b"<%bsheetData>%b</%bsheetData>" % (prefix, whole, prefix)
            yield start, tag_end(sheet.data, start), element
            return
        place = sheet.rows[at + 1][1] if at + 1 < len(numbers) else sheet.end
        yield place, place, whole
        return
    start = sheet.rows[at][1]
    inside = tag_end(sheet.data, start)
    limit = sheet.rows[at + 1][1] if at + 1 < len(numbers) else sheet.end
    if sheet.data[inside - 2 : inside] == b"/>":
        inner = b"".join(piece for _, piece in made)
        yield inside - 2, inside, b">" + inner + b"</" + prefix + b"row>"
        return
    close = sheet.data.rfind(b"</" + prefix + b"row", start, limit)
    left = bisect_right(sheet.cells, start, key=lambda cell: cell[0])
    there = [(_column(a["r"]), begin) for begin, a in sheet.cells[left:] if begin < limit]
    for column, piece in made:
        place = next((begin for other, begin in there if other > column), close)
        yield place, place, piece


def _column(ref: str) -> int:
    place = row_column(ref)
    assert place is not None
    return place[1]
