"""What the cells of a file hold, read straight from the sheet parts."""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from functools import cached_property
from typing import Final, TypeVar

from rigidsheet.udf.cells import CellError, Value

from .addresses import Area, area, cell_name, row_column
from .evaluation.enginecopy import Prepared, sheet_of, target_of
from .evaluation.formulas import Use
from .files.book import Book
from .files.cellxml import plain_text
from .files.sheetxml import Sheet, element_end, tag_end, unescape
from .files.writeback import cached_text
from .files.xmlparts import elements, whole

_DATES: Final = frozenset([*range(14, 23), *range(27, 37), *range(45, 48), *range(50, 59)])
_NOT_CODE: Final = re.compile(r'"[^"]*"|\\.|_.|\*.|\[(?!h+\]|m+\]|s+\])[^\]]*\]', re.IGNORECASE)

Held = TypeVar("Held", bound=Value)

# Sheet number, row, column.
Place = tuple[int, int, int]


class Reading:
    """Values of any cell: the results of the run where there are some, else what the file holds."""

    def __init__(self, prepared: Prepared, results: dict[tuple[int, str], Value]) -> None:
        self.prepared = prepared
        self.book: Book = prepared.book
        self.results = results
        self.numbers = {sheet.name.lower(): i for i, sheet in enumerate(prepared.sheets)}

    def value(self, number: int, ref: str) -> Value:
        """Return what a cell holds, None when it is blank or not there."""
        if (number, ref) in self.results:
            return self.results[number, ref]
        sheet = self.prepared.sheets[number]
        found = sheet.cell(ref)
        return None if found is None else self._raw(sheet, *found)

    def _raw(self, sheet: Sheet, start: int, attributes: dict[str, str]) -> Value:
        data, prefix = sheet.data, sheet.prefix
        inner = tag_end(data, start)
        if data[inner - 2 : inner] == b"/>":
            return None
        stop = data.find(b"</" + prefix + b"c", inner)
        kind = attributes.get("t", "n")
        if kind == "inlineStr":
            fragment = data[inner:stop]
            texts = re.findall(rb"<(?:[\w.-]+:)?t(?:\s[^>]*)?>([^<]*)<", fragment)
            return plain_text("".join(unescape(text) for text in texts))
        v_start = data.find(b"<" + prefix + b"v", inner, stop)
        if v_start < 0:
            return None
        text = cached_text(data, v_start, element_end(data, v_start, prefix, b"v"))
        return self._typed(kind, text)

    def _typed(self, kind: str, text: str) -> Value:
        if kind == "s":
            number = int(text) if text.strip().isdigit() else -1
            return self.strings[number] if 0 <= number < len(self.strings) else None
        if kind == "e":
            return CellError(text)
        if kind == "b":
            return text.strip() in ("1", "true")
        if kind in ("str", "d"):
            return plain_text(text)
        try:
            return float(text) if text.strip() else None
        except ValueError:
            return None

    @cached_property
    def strings(self) -> list[str]:
        """The shared strings, without phonetic hints."""
        data = self.book.shared_strings
        texts: list[list[str]] = []
        phonetic = False
        for tag, _, text, depth in elements(data, "xl/sharedStrings.xml") if data else ():
            if tag == "si":
                texts.append([])
            elif depth == 2:
                phonetic = tag == "rPh"
            if tag == "t" and texts and not (phonetic and depth == 3):
                texts[-1].append(text)
        return [plain_text("".join(pieces)) for pieces in texts]

    @cached_property
    def date_styles(self) -> frozenset[str]:
        """The style numbers, as texts, whose cells show their number as a date or a time."""
        data = self.book.styles
        if data is None:
            return frozenset()
        own: set[int] = set()
        styles: set[str] = set()
        in_cells = False
        count = 0
        for tag, attributes, _, depth in elements(data, "xl/styles.xml"):
            if depth == 1:
                in_cells = tag == "cellXfs"
            elif tag == "numFmt" and shows_date(attributes.get("formatCode", "")):
                own.add(whole(attributes.get("numFmtId", "0")))
            elif tag == "xf" and in_cells and depth == 2:
                number = whole(attributes.get("numFmtId", "0"))
                if number in own or number in _DATES:
                    styles.add(str(count))
                count += 1
        return frozenset(styles)

    def has_date_format(self, number: int, ref: str) -> bool:
        """Tell whether a cell shows its number as a date or a time."""
        found = self.prepared.sheets[number].cell(ref)
        return found is not None and found[1].get("s", "0") in self.date_styles

    def texts(self, number: int) -> Iterator[tuple[str, str]]:
        """Yield the cells of a sheet that hold a text."""
        for start, attributes in self.prepared.sheets[number].cells:
            ref = attributes["r"]
            if (number, ref) in self.results or attributes.get("t") in ("s", "str", "inlineStr"):
                value = self.results.get((number, ref)) or self._raw(
                    self.prepared.sheets[number], start, attributes
                )
                if isinstance(value, str):
                    yield ref, value

    def failed(self) -> dict[int, dict[str, CellError]]:
        """Return the cells of each sheet that show an error now, constants included."""
        found: dict[int, dict[str, CellError]] = {}
        for (number, ref), value in self.results.items():
            if isinstance(value, CellError):
                found.setdefault(number, {})[ref] = value
        for number, sheet in enumerate(self.prepared.sheets):
            for start, attributes in sheet.cells:
                if attributes.get("t") == "e" and (number, attributes["r"]) not in self.results:
                    value = self._raw(sheet, start, attributes)
                    if isinstance(value, CellError):
                        found.setdefault(number, {})[attributes["r"]] = value
        return found

    def within(self, place: tuple[int, Area], cells: Mapping[str, Held]) -> Iterator[tuple[str, Held]]:
        """Yield those of some cells that lie in an area."""
        top, left, bottom, right = place[1]
        if top == bottom and left == right:
            ref = cell_name(top, left)
            if ref in cells:
                yield ref, cells[ref]
            return
        for ref, value in cells.items():
            row, column = row_column(ref) or (0, 0)
            if top <= row <= bottom and left <= column <= right:
                yield ref, value

    def place_of(self, number: int, use: Use) -> tuple[int, Area] | None:
        """Return the sheet number and area that a reference or a name in a formula stands for."""
        if not use.named:
            block = area(use.text)
            other = self.numbers.get(sheet_of(use.where).lower()) if use.where else number
            return (other, block) if block is not None and other is not None else None
        sheet = sheet_of(use.where) if use.where else self.prepared.sheets[number].name
        name = self.book.named(use.text, sheet)
        target = target_of(name) if name is not None else None
        if target is None:
            return None
        other = self.numbers.get(target[0].lower())
        return (other, target[1]) if other is not None else None


def shows_date(code: str) -> bool:
    """Tell whether a number format shows a date or a time."""
    bare = _NOT_CODE.sub("", code.partition(";")[0])
    return bare.strip().lower() != "general" and re.search("[dmyhs]", bare, re.IGNORECASE) is not None
