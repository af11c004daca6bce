"""Inputs set from outside: by name or address, into cells that hold no formula, in the unit of the cell."""

from __future__ import annotations

import difflib
import math
from collections.abc import Iterable, Mapping

from rigidsheet.udf.cells import Value

from .addresses import cell_name, row_column, size
from .errors import InputRefused, address
from .evaluation.enginecopy import Prepared, sheet_of, target_of
from .files.book import Book
from .files.sheetxml import Sheet, scan, splice
from .files.writeback import insertions, plain_cell_edits
from .quantities import converted, quantity, unit_in
from .reading import Reading


class Filled(Reading):
    """A workbook as it reads with some cells filled in."""

    def __init__(self, prepared: Prepared, results: dict[tuple[int, str], Value]) -> None:
        super().__init__(prepared, results)
        self.given: dict[tuple[int, str], Value] = {}

    def value(self, number: int, ref: str) -> Value:
        """Return what was filled in, else what the cell holds."""
        if (number, ref) in self.given:
            return self.given[number, ref]
        return super().value(number, ref)

    def fill(self, inputs: Iterable[tuple[str, object, tuple[int, str]]]) -> None:
        """Judge and fill in inputs given by name, content and place.

        Words go first, because a unit cell rules the number beside it.
        """
        self.given.clear()
        numbers = []
        for one in inputs:
            held = (one[1], self.value(*one[2]))
            if any(isinstance(text, str) and quantity(text) is None for text in held):
                self.given[one[2]] = input_value(self, one[0], one[1], *one[2])
            else:
                numbers.append(one)
        self.given.update({place: input_value(self, name, given, *place) for name, given, place in numbers})


def with_inputs(book: Book, sheets: tuple[Sheet, ...], inputs: Mapping[str, object]) -> tuple[Sheet, ...]:
    """Return the sheets with input cells changed; every input is judged before the first is set."""
    reading = Filled(Prepared(book, sheets), {})
    places: dict[tuple[int, str], tuple[str, object]] = {}
    for name, given in inputs.items():
        place = input_cell(reading, name)
        if place in places:
            raise InputRefused(name, "given once; another input sets the same cell", remedy="Leave one out")
        places[place] = name, given
    reading.fill((name, given, place) for place, (name, given) in places.items())
    changed = list(sheets)
    for number in {number for number, _ in reading.given}:
        values = {ref: value for (where, ref), value in reading.given.items() if where == number}
        changed[number] = _set(sheets[number], values)
    return tuple(changed)


def input_cell(reading: Reading, name: str) -> tuple[int, str]:
    """Return the sheet number and address of the one input cell that a name or an address means."""
    where, mark, cell = name.rpartition("!")
    place = row_column(cell.strip()) if mark else None
    if mark and place is not None:
        number = reading.numbers.get(sheet_of(where.strip()).lower())
        if number is None:
            raise InputRefused("", f"There is no sheet called {sheet_of(where)!r}", remedy=_sheets(reading))
    else:
        number, place = _named(reading, name)
    ref = cell_name(*place)
    sheet = reading.prepared.sheets[number]
    shown = address(sheet.name, ref)
    for formula in sheet.formulas:
        frame = formula.array
        inside = frame is not None and frame[0] <= place[0] <= frame[2] and frame[1] <= place[1] <= frame[3]
        if formula.ref == ref or inside:
            raise InputRefused(
                name, "an input cell; a formula stands there", f"={formula.text[:60]}", where=shown
            )
    return number, ref


def _named(reading: Reading, name: str) -> tuple[int, tuple[int, int]]:
    where, _, bare = name.rpartition("!")
    found = reading.book.named(bare.strip(), sheet_of(where) if where else None)
    if found is None:
        local = [one for one in reading.book.names if one.name.lower() == name.strip().lower()]
        found = local[0] if len(local) == 1 and not where else None
    target = target_of(found) if found is not None else None
    if found is None:
        known = [one.name for one in reading.book.names if not one.name.startswith("_xlnm.")]
        close = difflib.get_close_matches(name, known, n=1, cutoff=0.6)
        raise InputRefused(
            "",
            f"There is no cell named {name!r}",
            remedy=f"Did you mean {close[0]}?" if close else "Type Sheet!B3 or a name",
        )
    number = reading.numbers.get(target[0].lower()) if target is not None else None
    if target is None or number is None or size(target[1]) != (1, 1):
        raise InputRefused(name, "the name of a single cell", found.text[:60])
    return number, (target[1][0], target[1][1])


def _sheets(reading: Reading) -> str:
    return "Sheets: " + ", ".join(sheet.name for sheet in reading.prepared.sheets)[:120]


def input_value(reading: Reading, name: str, given: object, number: int, ref: str) -> Value:
    """Return what goes into the cell: converted to the unit beside it, of the type that it holds now."""
    if isinstance(given, bool):
        return given
    if isinstance(given, (int, float)):
        if not math.isfinite(given):
            raise InputRefused(name, "a finite number", float(given))
        now = reading.value(number, ref)
        held = quantity(now) if isinstance(now, str) else None
        if held is not None and held[1]:
            raise InputRefused(name, f"a number with its unit, because the cell holds '{now}'", float(given))
        return float(given)
    if not isinstance(given, str):
        raise InputRefused(name, "a number, a text or TRUE or FALSE", type(given).__name__)
    place = row_column(ref)
    assert place is not None
    unit = unit_in(reading.value(number, cell_name(place[0], place[1] + 1)))
    return _text_value(name, given, unit, reading.value(number, ref))


def _text_value(name: str, given: str, unit: str, now: Value) -> Value:
    if isinstance(now, bool) and given.strip().upper() in ("TRUE", "FALSE"):
        return given.strip().upper() == "TRUE"
    held = quantity(now) if isinstance(now, str) else None
    if isinstance(now, str) and held is None and now.strip():
        return given  # a word or a text stays one
    if isinstance(now, str) and held is not None and held[1]:
        typed = quantity(given)
        if typed is None or not typed[1]:
            raise InputRefused(name, f"a number with its unit, because the cell holds '{now}'", given)
        return given
    if unit:
        return converted(name, given, unit)
    typed = quantity(given)
    if typed is not None and not typed[1]:
        return typed[0]
    if now is None and typed is None:
        return given
    if typed is not None:
        raise InputRefused(name, "a bare number, because no unit stands beside the cell", given)
    raise InputRefused(name, "a number, because the cell holds one", given)


def _set(sheet: Sheet, values: Mapping[str, Value]) -> Sheet:
    edits: list[tuple[int, int, bytes]] = []
    absent: dict[int, list[tuple[str, Value]]] = {}
    for ref, value in values.items():
        found = sheet.cell(ref)
        if found is not None:
            edits.extend(plain_cell_edits(sheet, *found, value))
        else:
            place = row_column(ref)
            assert place is not None
            absent.setdefault(place[0], []).append((ref, value))
    for row, cells in absent.items():
        cells.sort(key=lambda cell: row_column(cell[0]) or (0, 0))
        edits.extend(insertions(sheet, row, cells))
    return scan(sheet.name, sheet.part, splice(sheet.data, edits))
