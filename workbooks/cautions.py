"""Warnings: what is allowed but looks like a slip, always with the cells it is about."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Final

from rigidsheet.udf import catalogue
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.reading.arguments import Scalar
from rigidsheet.udf.reading.words import AnyQuantity

from .addresses import Area, cell_name, row_column, size
from .errors import address
from .evaluation.builtins import VERIFIED_FUNCTIONS
from .evaluation.enginecopy import frame_cells
from .evaluation.formulas import Analysis, Argument, Call
from .files.sheetxml import FormulaCell
from .quantities import common_unit_in, is_si_unit, quantity
from .reading import Reading

FARTHEST: Final = 10_000  # rows of a range looked at for a second number
FEW: Final = 16  # cells of a block that are looked at one by one; a longer one has its units in a header


@dataclass(frozen=True)
class Caution:
    """A warning: its kind in a word or two, the sentence, and the cells as (sheet, address)."""

    kind: str
    sentence: str
    cells: tuple[tuple[str, str], ...] = ()

    def __str__(self) -> str:
        return self.sentence


def cautions(
    reading: Reading, unit_position: Callable[[str], int | None], *, signed: bool = False
) -> tuple[Caution, ...]:
    """Return every warning about a recalculated workbook.

    Parameters
    ----------
    reading : Reading
        The workbook after the run.
    unit_position : Callable
        Gives the place of the argument that chooses the unit of a function's result, None without one.
    signed : bool
        Whether the file carried a digital signature.
    """
    found = list(_Search(reading, unit_position).run())
    if signed:
        found.append(Caution("signature", "The digital signature of the file no longer holds for the copy."))
    return tuple(found)


def open_elsewhere(path: Path) -> tuple[Caution, ...]:
    """Return a warning when an office program has left its mark that it holds the file open."""
    for mark in (f"~${path.name}", f".~lock.{path.name}#"):
        if path.with_name(mark).exists():
            return (
                Caution(
                    "open",
                    f"{path.name[:80]} seems to be open in an office program. Close it there without saving, "
                    "or the values written here are lost.",
                ),
            )
    return ()


@cache
def takes_columns(name: str, position: int) -> bool:
    """Tell whether numbers below each other are so many cases of this argument, and never one vector."""
    function = catalogue.FUNCTIONS.get(name)
    arguments = arguments_of(function) if function is not None else ()
    return position < len(arguments) and isinstance(arguments[position].shape, (Scalar, AnyQuantity))


class _Search:
    def __init__(self, reading: Reading, unit_position: Callable[[str], int | None]) -> None:
        self.unit_position = unit_position
        self.reading = reading
        self.prepared = reading.prepared
        self.reported: set[str] = set()
        self.texts: dict[int, dict[str, str]] = {}
        self.tabs = [sheet.name for sheet in reading.prepared.sheets]
        self.units: dict[tuple[int, str], str] = {}  # cells whose number is in a unit that is not SI
        self.unit_cells: dict[int, dict[str, str]] = {}  # cells that hold such a unit, by sheet

    def run(self) -> Iterator[Caution]:
        self._non_si_results()
        seen: set[tuple[int, Area]] = set()
        dates = bool(self.reading.date_styles)
        for number, sheet, formula in self.prepared.formulas():
            analysis = self.prepared.analyses[number, formula.ref]
            yield from self._unverified(sheet.name, formula, analysis)
            if analysis.calls:
                yield from self._calls(number, sheet.name, formula, dates)
            if analysis.whole is not None and formula.array is None:
                yield from self._columns(number, sheet.name, formula, analysis.whole)
            if analysis.collected:
                yield from self._skipped(number, sheet.name, formula, seen)

    def _unverified(self, sheet: str, formula: FormulaCell, analysis: Analysis) -> Iterator[Caution]:
        for function in analysis.functions:
            if function not in VERIFIED_FUNCTIONS and function not in self.reported:
                self.reported.add(function)
                yield Caution(
                    "function",
                    f"{address(sheet, formula.ref)} calls {function}, which is worked out here but has not "
                    "been compared with a spreadsheet program's value.",
                    ((sheet, formula.ref),),
                )

    def _non_si_results(self) -> None:
        for number, _, formula in self.prepared.formulas():
            whole = self.prepared.analyses[number, formula.ref].whole
            unit = self._unit(number, whole) if whole is not None else ""
            if not unit:
                continue
            for ref in frame_cells(formula.array) if formula.array is not None else (formula.ref,):
                if isinstance(self.reading.results.get((number, ref)), float):
                    self.units[number, ref] = unit

    def _unit(self, number: int, call: Call) -> str:
        """Return the unit that a call asks its result in, when it is not SI."""
        position = self.unit_position(call.name)
        if position is None or position >= len(call.arguments):
            return ""
        unit = call.arguments[position]
        text = unit.text if unit.kind == "text" else self._held(number, unit)
        return text if text and not is_si_unit(text) else ""

    def _held(self, number: int, argument: Argument) -> str:
        cell = self._cell(number, argument)
        value = self.reading.value(*cell) if cell is not None else None
        return value if isinstance(value, str) else ""

    def _cell(self, number: int, argument: Argument) -> tuple[int, str] | None:
        """Return the single cell that an argument refers to."""
        cells = self._cells(number, argument)
        return cells[0] if len(cells) == 1 else None

    def _cells(self, number: int, argument: Argument) -> list[tuple[int, str]]:
        """Return the cell or the few cells (a vector, a tensor) that an argument refers to."""
        place = self.reading.place_of(number, argument.use) if argument.use is not None else None
        if place is None or size(place[1])[0] * size(place[1])[1] > FEW:
            return []
        return [(place[0], ref) for ref in frame_cells(place[1])]

    def _bare(self, cells: list[tuple[int, str]]) -> bool:
        """Tell whether the cells of an argument go on as numbers alone: no unit stands among them."""
        return len(cells) == 1 or not any(isinstance(self.reading.value(*cell), str) for cell in cells)

    def _calls(self, number: int, sheet: str, formula: FormulaCell, dates: bool) -> Iterator[Caution]:
        analysis = self.prepared.analyses[number, formula.ref]
        here = sheet, formula.ref
        for outer in (*analysis.calls, *(inner for _, _, inner in analysis.nested)):
            crossed: list[tuple[str, Argument, tuple[str, str]]] = []
            for position, argument in enumerate(outer.arguments):
                if position == self.unit_position(outer.name):
                    continue
                if argument.kind == "call" and argument.call is not None:
                    unit, source = self._unit(number, argument.call), here
                else:
                    cells = self._cells(number, argument)
                    if dates:
                        yield from self._dates(outer, here, cells)
                    found = ((self.units.get(c) or self._beside(*c), c) for c in cells)
                    unit, cell = next((each for each in found if each[0]), ("", (number, "")))
                    source = self.tabs[cell[0]], cell[1]
                    if unit and not self._bare(cells):
                        continue
                if unit:
                    crossed.append((unit, argument, source))
            yield from self._crossings(outer, here, crossed)

    def _beside(self, number: int, ref: str) -> str:
        """Return the unit, not an SI one, that stands to the right of a number handed over without it."""
        found = self.unit_cells.get(number)
        if found is None:
            found = self.unit_cells[number] = {
                at: text
                for at, text in self.reading.texts(number)
                if common_unit_in(text) and not is_si_unit(text)
            }
        if not found:
            return ""
        row, column = row_column(ref) or (0, 0)
        unit = found.get(cell_name(row, column + 1), "")
        return unit if unit and isinstance(self.reading.value(number, ref), float) else ""

    def _columns(self, number: int, sheet: str, formula: FormulaCell, call: Call) -> Iterator[Caution]:
        """Warn of a cell that shows the first answer alone of a column."""
        for position, argument in enumerate(call.arguments):
            place = self.reading.place_of(number, argument.use) if argument.use is not None else None
            if place is None or size(place[1])[0] == 1 or not takes_columns(call.name, position):
                continue
            top, left, bottom, _ = place[1]
            rows = range(top, min(bottom, top + FARTHEST) + 1)
            numbers = [r for r in rows if isinstance(self.reading.value(place[0], cell_name(r, left)), float)]
            if len(numbers) > 1:
                first = self.tabs[place[0]], cell_name(numbers[0], left)
                yield Caution(
                    "column",
                    f"{address(sheet, formula.ref)} shows {call.name} of {address(*first)} alone, the first of "
                    f"{len(numbers)} numbers it is given. Use one cell for each row, or an array formula.",
                    ((sheet, formula.ref), first),
                )
                return

    def _crossings(
        self, outer: Call, here: tuple[str, str], crossed: list[tuple[str, Argument, tuple[str, str]]]
    ) -> Iterator[Caution]:
        """Warn of bare numbers in a unit that is not SI; two numbers in one unit may be compared."""
        compares = outer.name in ("RB_MARGIN", "RB_CHECK")
        if compares and len(crossed) == 2 and crossed[0][0] == crossed[1][0]:
            return
        for unit, argument, source in crossed:
            inner = (
                f"{argument.call.name} in the same cell" if argument.call is not None else address(*source)
            )
            asked = argument.call is not None or (self.tabs.index(source[0]), source[1]) in self.units
            remedy = "Leave the unit out there, or h" if asked else "H"
            yield Caution(
                "unit",
                f"{address(*here)} hands a number in {unit} from {inner} to {outer.name} as if it were SI. "
                f"{remedy}and over the value and its unit cell together.",
                (here, source),
            )

    def _dates(self, outer: Call, here: tuple[str, str], cells: list[tuple[int, str]]) -> Iterator[Caution]:
        """Warn of the first date among the cells of one argument."""
        for cell in cells:
            if (
                self.reading.has_date_format(*cell)
                and isinstance(self.reading.value(*cell), float)
                and self._bare(cells)
            ):
                source = self.tabs[cell[0]], cell[1]
                yield Caution(
                    "date",
                    f"{address(*here)} hands the date in {address(*source)} to {outer.name} as a plain number.",
                    (here, source),
                )
                return

    def _skipped(
        self, number: int, sheet: str, formula: FormulaCell, seen: set[tuple[int, Area]]
    ) -> Iterator[Caution]:
        for use in self.prepared.analyses[number, formula.ref].collected:
            place = self.reading.place_of(number, use)
            if place is None or place in seen:
                continue
            seen.add(place)
            texts = self._numeric_texts(place[0])
            for ref, value in list(self.reading.within(place, texts)):
                del texts[ref]  # each is named once, however many sums skip it
                source = self.tabs[place[0]], ref
                yield Caution(
                    "text",
                    f"{address(sheet, formula.ref)} skips {address(*source)}: '{value[:40]}' is a text, "
                    "not a number.",
                    ((sheet, formula.ref), source),
                )

    def _numeric_texts(self, number: int) -> dict[str, str]:
        """Return the cells of a sheet whose text reads as a number and that are not named yet."""
        found = self.texts.get(number)
        if found is None:
            found = self.texts[number] = {
                ref: value
                for ref, value in self.reading.texts(number)
                if value[:1] in "+-.0123456789\u2212 " and quantity(value) is not None
            }
        return found
