"""One pass over the XML of a sheet: where each cell stands in the bytes, and which hold formulas."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Final

from ..addresses import Area, area, cell_name, row_column
from ..errors import FileRefused
from .xmlparts import SHEET_SPACES, parse, parser, whole

_TAG: Final = re.compile(rb"<[^\"'>]*(?:\"[^\"]*\"[^\"'>]*|'[^']*'[^\"'>]*)*>")
_NAME: Final = re.compile(rb"<([^\s/>:]+:)?")
_ENTITY: Final = re.compile(rb"&(#x[0-9A-Fa-f]+|#[0-9]+|lt|gt|amp|quot|apos);")
_NAMED: Final = {b"lt": b"<", b"gt": b">", b"amp": b"&", b"quot": b'"', b"apos": b"'"}
_WORDS: Final = {
    f"{space}|{word}": word for space in SHEET_SPACES for word in ("c", "f", "v", "is", "row", "sheetData")
}


@dataclass(slots=True)
class FormulaCell:
    """A cell with a formula and the byte ranges of its pieces; -1 where a piece is missing."""

    ref: str
    row: int
    column: int
    attributes: dict[str, str]
    rule: dict[str, str]  # the attributes of the formula element
    start: int
    tag_end: int
    f_start: int
    f_end: int
    text: str
    text_start: int
    text_end: int
    v_start: int
    v_end: int

    @property
    def array(self) -> Area | None:
        """The frame of an array formula, None for other formulas."""
        return area(self.rule.get("ref", self.ref)) if self.rule.get("t") == "array" else None

    @property
    def dynamic(self) -> bool:
        """Whether the frame follows the size of the result."""
        return self.rule.get("t") == "array" and "cm" in self.attributes


@dataclass(slots=True)
class Sheet:
    """The cells of one sheet part."""

    name: str
    part: str
    data: bytes
    formulas: list[FormulaCell]
    cells: list[tuple[int, dict[str, str]]]
    rows: list[tuple[int, int]]
    data_start: int  # where the sheetData element starts
    end: int  # where its closing tag starts; -1 when it has none
    prefix: bytes
    _by_ref: dict[str, tuple[int, dict[str, str]]] = field(default_factory=dict)

    def cell(self, ref: str) -> tuple[int, dict[str, str]] | None:
        """Return (byte offset, attributes) of a cell that the sheet holds."""
        if not self._by_ref and self.cells:
            self._by_ref = {attributes["r"]: (start, attributes) for start, attributes in self.cells}
        return self._by_ref.get(ref)


def tag_end(data: bytes, start: int) -> int:
    """Return the byte after the tag that begins at `start`; quotes may hold a greater-than sign."""
    found = _TAG.match(data, start)
    if found is None:
        raise FileRefused("a sheet holds a tag that does not end")
    return found.end()


def element_end(data: bytes, start: int, prefix: bytes, word: bytes) -> int:
    """Return the byte after an element without comments inside that begins at `start`."""
    end = tag_end(data, start)
    if data[end - 2 : end] == b"/>":
        return end
    close = data.index(b"</" + prefix + word, end)
    return data.index(b">", close) + 1


def unescape(text: bytes) -> str:
    """Return the characters that a piece of XML text stands for."""
    if b"&" not in text:
        return text.decode()

    def one(found: re.Match[bytes]) -> bytes:
        word = found[1]
        if word[:1] != b"#":
            return _NAMED[word]
        number = int(word[2:], 16) if word[1:2] in b"xX" else int(word[1:])
        return chr(number).encode()

    return _ENTITY.sub(one, text).decode()


def scan(name: str, part: str, data: bytes) -> Sheet:
    """Read a sheet part; everything is found by byte offset so that the rest can be copied as it is."""
    cells: list[tuple[int, dict[str, str]]] = []
    rows: list[tuple[int, int]] = []
    found: list[tuple[int, int, dict[str, str]]] = []
    data_start: list[int] = []
    inner: dict[int, int] = {}  # index of a formula's cell: where its value starts
    owner = -1  # index of the cell whose formula was seen last
    reader = parser(part)
    words = _WORDS

    def start(tag: str, attributes: dict[str, str]) -> None:
        nonlocal owner
        word = words.get(tag)
        if word is None:
            return
        if word == "c":
            if "r" not in attributes:
                attributes["r"] = _next_ref(cells, rows)
            cells.append((reader.CurrentByteIndex, attributes))
        elif word == "v" or word == "is":
            if owner == len(cells) - 1:
                inner[owner] = reader.CurrentByteIndex
        elif word == "f":
            owner = len(cells) - 1
            found.append((owner, reader.CurrentByteIndex, attributes))
        elif word == "sheetData":
            data_start.append(reader.CurrentByteIndex)
        else:
            number = whole(attributes["r"]) if "r" in attributes else (rows[-1][0] + 1 if rows else 1)
            rows.append((number, reader.CurrentByteIndex))

    reader.StartElementHandler = start
    parse(reader, data, part)
    formulas = [_formula(data, cells[i], at, rule, inner.get(i, -1)) for i, at, rule in found]
    if len(data_start) != 1:
        raise FileRefused(f"the sheet {name} has no cells part, or two of them")
    mark = _NAME.match(data, data_start[0])
    prefix = (mark[1] if mark else None) or b""
    end = data.rfind(b"</" + prefix + b"sheetData")
    if len({attributes["r"] for _, attributes in cells}) != len(cells):
        raise FileRefused(f"the sheet {name} holds a cell twice")
    return Sheet(name, part, data, formulas, cells, rows, data_start[0], end, prefix)


def _next_ref(cells: list[tuple[int, dict[str, str]]], rows: list[tuple[int, int]]) -> str:
    """Return the address of a cell that does not state it: the one after its left neighbor."""
    row, offset = rows[-1] if rows else (1, 0)
    if cells and cells[-1][0] > offset:
        place = row_column(cells[-1][1]["r"])
        if place is not None:
            return cell_name(row, place[1] + 1)
    return cell_name(row, 1)


def _formula(
    data: bytes, cell: tuple[int, dict[str, str]], f_start: int, rule: dict[str, str], inner: int
) -> FormulaCell:
    start, attributes = cell
    place = row_column(attributes["r"])
    if place is None:
        raise FileRefused(f"a sheet holds a cell with the odd address {attributes['r'][:20]!r}")
    found = _NAME.match(data, f_start)
    prefix = (found[1] if found else None) or b""
    text_start = tag_end(data, f_start)
    if data[text_start - 2 : text_start] == b"/>":
        text, text_end, f_end = "", text_start, text_start
        text_start = text_end = f_end
    else:
        text_end = data.index(b"<", text_start)
        if data[text_end : text_end + 2] != b"</":
            raise FileRefused(f"the formula of cell {attributes['r']} holds a comment or a literal section")
        f_end = data.index(b">", text_end) + 1
        text = unescape(data[text_start:text_end])
    v_end = -1
    if inner >= 0:
        word = b"is" if data[inner + 1 + len(prefix) : inner + 3 + len(prefix)] == b"is" else b"v"
        v_end = element_end(data, inner, prefix, word)
        if b"<!" in data[inner:v_end]:
            raise FileRefused(f"the value of cell {attributes['r']} holds a comment or a literal section")
    return FormulaCell(
        attributes["r"],
        place[0],
        place[1],
        attributes,
        rule,
        start,
        tag_end(data, start),
        f_start,
        f_end,
        text,
        text_start,
        text_end,
        inner,
        v_end,
    )


def splice(data: bytes, edits: Iterable[tuple[int, int, bytes]]) -> bytes:
    """Return `data` with byte ranges replaced; edits at one place keep their order."""
    pieces: list[bytes] = []
    position = 0
    for start, end, new in sorted(edits, key=lambda edit: (edit[0], edit[1])):
        pieces.append(data[position:start])
        pieces.append(new)
        position = end
    pieces.append(data[position:])
    return b"".join(pieces)
