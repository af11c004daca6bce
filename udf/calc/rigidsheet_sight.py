"""Sees what Calc hides from an add-in: a single blank cell arrives as 0, a boolean as 1 or 0.

The formulas of the open documents are read as text, and with them what the cells they refer to hold. A call
whose arguments can only come from formulas that refer to a blank or a boolean cell gets it back. Where
another formula could have made the same call with real numbers the call is left as it came. Runs in the
Python of the office.
"""

from __future__ import annotations

import re
import time
from typing import Any

import unohelper
from com.sun.star.util import XModifyListener

BLANK = ()  # stands for a blank cell on the line to the worker
GAP_SECONDS = 0.03  # a recalculation calls without such a pause; after one the documents are read again
LARGEST_SHEET = 400_000  # cells of the used area; above, a sheet is not looked at
CONTENT = 1 | 2 | 4 | 16  # com.sun.star.sheet.CellFlags: numbers, dates, texts, formulas
LARGEST_AREA = 400  # cells of an argument
REMEMBERED = 100_000  # formula texts
BOOLEANS = {"TRUE": True, "FALSE": False, "=TRUE()": True, "=FALSE()": False}

_TOKEN = re.compile(r'"(?:[^"]|"")*"' + r"|'(?:[^']|'')*'|[(){};]")
_SHEET = r"(?:\$?('(?:[^']|'')+'|[^'!.\s$:;(){}\"]+)\.)?"
_CELLS = re.compile(rf"{_SHEET}\$?([A-Z]{{1,3}})\$?([0-9]+)(?::{_SHEET}\$?([A-Z]{{1,3}})\$?([0-9]+))?")
_NAME = re.compile(r"[^\W\d][\w.]*")


def column_number(letters: str) -> int:
    """Return the position of a column, A being 0."""
    number = 0
    for letter in letters:
        number = number * 26 + ord(letter) - 64
    return number - 1


def key_of(value: Any) -> str:
    """Return a constant as it is compared: Calc shows numbers in a formula text to 15 digits."""
    return "%.12g" % value if isinstance(value, float) else "'" + value  # noqa: UP031, faster than an f-string


def constant_key(text: str) -> str | None:
    """Return the key of a cell that holds no formula; None when its number cannot be read."""
    if text.startswith("'"):
        return text
    try:
        return key_of(float(text))
    except ValueError:
        return "'" + text


def cells_of(text: str) -> tuple[Any, ...] | None:
    """Return a reference as (sheet or None, column, row, last column, last row, whether single)."""
    found = _CELLS.fullmatch(text)
    if found is None or found[4] is not None:
        return None
    sheet = found[1]
    if sheet is not None:
        sheet = sheet[1:-1].replace("''", "'") if sheet.startswith("'") else sheet
    column, row = column_number(found[2]), int(found[3]) - 1
    if found[5] is None:
        return sheet, column, row, column, row, True
    return sheet, column, row, column_number(found[5]), int(found[6]) - 1, False


def argument_of(text: str) -> tuple[str, Any]:
    """Return what an argument is: a constant's key, cells, a name, or something that is worked out."""
    if text.startswith('"') and text.endswith('"') and '"' not in text[1:-1].replace('""', ""):
        return "key", "'" + text[1:-1].replace('""', '"')
    cells = cells_of(text)
    if cells is not None:
        return "cells", cells
    try:
        return "key", key_of(float(text))
    except ValueError:
        return ("name", text.lower()) if _NAME.fullmatch(text) else ("other", None)


def calls_in(text: str, opening: Any) -> list[tuple[str, list[tuple[str, Any]]]]:
    """Return the calls of our functions in a formula: method and arguments."""
    out = []
    for found in opening.finditer(text):
        arguments, depth, start = [], 0, found.end()
        for token in _TOKEN.finditer(text, start):
            sign = token[0]
            if sign in "({":
                depth += 1
            elif depth == 0 and sign in ");":
                arguments.append(text[start : token.start()].strip())
                start = token.end()
                if sign == ")":
                    break
            elif sign in ")}":
                depth -= 1
        while arguments and not arguments[-1]:
            arguments.pop()
        out.append((found[1].lower(), [argument_of(a) for a in arguments]))
    return out


class Book:
    """The texts of all cells of one document."""

    def __init__(self, document: Any) -> None:
        self.sheets: dict[str, tuple[int, int, Any]] = {}
        self.booleans = False
        for i in range(document.Sheets.Count):
            sheet = document.Sheets.getByIndex(i)
            # a cursor would know the used area, but asking it makes Calc work out cells out of turn
            filled = sheet.queryContentCells(CONTENT).RangeAddresses
            if not filled:
                self.sheets[sheet.Name] = 0, 0, (("",),)
                continue
            left, top = min(f.StartColumn for f in filled), min(f.StartRow for f in filled)
            right, bottom = max(f.EndColumn for f in filled), max(f.EndRow for f in filled)
            if (right - left + 1) * (bottom - top + 1) <= LARGEST_SHEET:
                rows = sheet.getCellRangeByPosition(left, top, right, bottom).getFormulaArray()
                self.sheets[sheet.Name] = left, top, rows
                self.booleans = self.booleans or any(not BOOLEANS.keys().isdisjoint(row) for row in rows)
        names = document.NamedRanges
        self.names = {}
        for i in range(names.Count):
            named = names.getByIndex(i)
            self.names[named.Name.lower()] = cells_of(named.Content)

    def text(self, sheet: str, column: int, row: int) -> str | None:
        """Return the text of one cell, empty when it is blank, None when the sheet was not read."""
        found = self.sheets.get(sheet)
        if found is None:
            return None
        left, top, rows = found
        if row < top or column < left or row - top >= len(rows) or column - left >= len(rows[0]):
            return ""
        return rows[row - top][column - left]  # type: ignore[no-any-return]


class Sight:
    """What the formulas of the open documents refer to, read again when a document has changed."""

    def __init__(self, context: Any, service: str) -> None:
        self._models = context.getValueByName("/singletons/com.sun.star.frame.theGlobalEventBroadcaster")
        self._opening = re.compile(re.escape(service.upper()) + r"\.(\w+)\s*\(")
        self._needle = service.upper()
        self._parsed: dict[str, Any] = {}
        self._listeners: dict[str, Any] = {}
        self._groups: dict[str, Any] = {}
        self._used = 0.0
        self.stale = True

    def restored(self, method: str, arguments: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return the arguments with the blank and boolean cells that Calc turned into numbers."""
        if not doubtful(arguments):
            return arguments
        if self.stale or time.monotonic() - self._used > GAP_SECONDS:
            self.stale = False
            self._read()
        groups = self._groups.get(method.lower())
        if groups:
            arguments = looked_up(groups, arguments)
        self._used = time.monotonic()
        return arguments

    def forget(self, uid: str) -> None:
        """Drop the listener of a document that was closed."""
        self._listeners.pop(uid, None)
        self.stale = True

    def _documents(self) -> list[Any]:
        out = []
        models = self._models.createEnumeration()
        while models.hasMoreElements():
            model = models.nextElement()
            if model.supportsService("com.sun.star.sheet.SpreadsheetDocument"):
                out.append(model)
        return out

    def _read(self) -> None:
        """Read the open documents and note the calls that refer to blank or boolean cells."""
        if len(self._parsed) > REMEMBERED:
            self._parsed.clear()
        calls = []
        for document in self._documents():
            uid = document.RuntimeUID
            if uid not in self._listeners:
                self._listeners[uid] = Changed(self, uid)
                document.addModifyListener(self._listeners[uid])
            book = Book(document)
            for sheet, (_, _, rows) in book.sheets.items():
                for row in rows:
                    for text in row:
                        if self._needle in text:
                            calls += [(m, a, book, sheet) for m, a in self._calls(text)]
        odd = {method for method, arguments, book, sheet in calls if is_odd(arguments, book, sheet)}
        self._groups = {}
        for method, arguments, book, sheet in calls:
            if method in odd:
                positions, keys, restored = known(arguments, book, sheet)
                tables = self._groups.setdefault(method, {})
                table = tables.setdefault((len(arguments), positions), {})
                table.setdefault(keys, set()).add(restored)

    def _calls(self, text: str) -> Any:
        found = self._parsed.get(text)
        if found is None:
            found = self._parsed[text] = calls_in(text, self._opening)
        return found


class Changed(unohelper.Base, XModifyListener):
    """Notes that a document has changed or was closed."""

    def __init__(self, sight: Sight, uid: str) -> None:
        self._sight = sight
        self._uid = uid

    def modified(self, event: Any) -> None:
        self._sight.stale = True

    def disposing(self, event: Any) -> None:
        self._sight.forget(self._uid)


def doubtful(arguments: tuple[Any, ...]) -> bool:
    """Say whether a 0 or 1 among the arguments may have been a blank or a boolean cell."""
    for a in arguments:
        if type(a) is tuple:
            if len(a) <= LARGEST_AREA and any(0.0 in row or 1.0 in row for row in a):
                return True
        elif a == 0.0 or a == 1.0:
            return True
    return False


def referred(argument: tuple[str, Any], book: Book) -> Any:
    """Return the cells an argument refers to, by address or by name, or None."""
    kind, what = argument
    if kind == "cells":
        return what
    return book.names.get(what) if kind == "name" else None


def is_odd(arguments: list[tuple[str, Any]], book: Book, home: str) -> bool:
    """Say whether a call refers to a single blank cell or to a boolean one."""
    for argument in arguments:
        cells = referred(argument, book)
        if cells is None:
            continue
        sheet, column, row, last_column, last_row, single = cells
        sheet = sheet or home
        if single:
            text = book.text(sheet, column, row)
            if text == "" or text in BOOLEANS:
                return True
        elif book.booleans and (last_column - column + 1) * (last_row - row + 1) <= LARGEST_AREA:
            for r in range(row, last_row + 1):
                if any(book.text(sheet, c, r) in BOOLEANS for c in range(column, last_column + 1)):
                    return True
    return False


def known(arguments: list[tuple[str, Any]], book: Book, home: str) -> tuple[Any, Any, Any]:
    """Return what the texts tell of a call: positions, the keys of what stands there, and what is hidden."""
    positions: list[tuple[int, int, int]] = []
    keys: list[str] = []
    hidden: list[tuple[tuple[int, int, int], Any]] = []
    for i, argument in enumerate(arguments):
        if argument[0] == "key":
            positions.append((i, -1, -1))
            keys.append(argument[1])
        cells = referred(argument, book)
        if cells is None:
            continue
        sheet, column, row, last_column, last_row, single = cells
        if (last_column - column + 1) * (last_row - row + 1) > LARGEST_AREA:
            continue
        for r in range(row, last_row + 1):
            for c in range(column, last_column + 1):
                text = book.text(sheet or home, c, r)
                place = (i, -1, -1) if single else (i, r - row, c - column)
                key = None
                if text in BOOLEANS:
                    hidden.append((place, BOOLEANS[text]))
                    key = "1" if BOOLEANS[text] else "0"
                elif text == "":
                    key = "0" if single else "'"
                    if single:
                        hidden.append((place, BLANK))
                elif text is not None and not text.startswith(("=", "{=")):
                    key = constant_key(text)
                if key is not None:
                    positions.append(place)
                    keys.append(key)
    return tuple(positions), tuple(keys), tuple(hidden)


def looked_up(groups: dict[Any, Any], arguments: tuple[Any, ...]) -> tuple[Any, ...]:
    """Return the arguments with what is hidden in them when every formula they can come from hides it."""
    chosen: tuple[Any, ...] = ()
    for (count, positions), table in groups.items():
        if count != len(arguments):
            continue
        try:
            keys = tuple([key_of(arguments[i] if r < 0 else arguments[i][r][c]) for i, r, c in positions])
        except (TypeError, IndexError):
            continue
        for hidden in table.get(keys, ()):
            if not hidden:
                return arguments
            chosen = hidden
    return overlaid(arguments, chosen) if chosen else arguments


def overlaid(arguments: tuple[Any, ...], hidden: tuple[Any, ...]) -> tuple[Any, ...]:
    """Return the arguments with some values replaced."""
    out = list(arguments)
    for (i, r, c), value in hidden:
        if r < 0:
            out[i] = value
        else:
            rows = [list(row) for row in out[i]]
            rows[r][c] = value
            out[i] = tuple(map(tuple, rows))
    return tuple(out)
