"""What a recalculated workbook says: errors with reasons, named results, checks."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Final, TypeAlias

from rigidsheet.udf.cells import CellError, Refusal, Value

from .addresses import cell_name, row_column, size
from .errors import address
from .evaluation.enginecopy import target_of
from .evaluation.formulas import Argument
from .files.sheetxml import FormulaCell, Sheet
from .quantities import common_unit_in, unit_in
from .reading import Place, Reading


@dataclass(frozen=True)
class CellFailure:
    """A formula cell that shows an error."""

    sheet: str
    cell: str
    error: str
    reason: str
    formula: str
    source: tuple[str, str] | None = None  # the cell that the error came from

    def __str__(self) -> str:
        return f"{address(self.sheet, self.cell)} shows {self.error}: {self.reason}"


@dataclass(frozen=True)
class NamedResult:
    """A formula cell that has a name."""

    name: str
    value: Value
    unit: str
    sheet: str
    cell: str
    checks: bool = False  # the formula asks RB_CHECK: a check, which may say that it is not used


@dataclass(frozen=True)
class Check:
    """A verdict, and its numbers: what RB_CHECK was given, else what the headers of its columns say."""

    name: str
    verdict: str
    sheet: str
    cell: str
    demand: Value = None
    capacity: Value = None
    margin: Value = None
    demand_unit: str = ""
    capacity_unit: str = ""


# Sheet number: address: the error that the cell shows.
Failed: TypeAlias = Mapping[int, Mapping[str, CellError]]

_WHY: Final = {
    "#DIV/0!": "something is divided by zero",
    "#N/A": "what was looked for is not there",
    "#NUM!": "the number has no answer here or is too large",
    "#REF!": "a reference leads nowhere",
    "#NAME?": "a name is not known",
    "#NULL!": "two ranges do not meet",
    "#VALUE!": "a value is of the wrong kind",
}
_HEADERS: Final = {
    "demand": re.compile(r"\s*demand\b", re.IGNORECASE),
    "capacity": re.compile(r"\s*(capacity|limit|allowed|rated)\b", re.IGNORECASE),
    "margin": re.compile(r"\s*margin\b", re.IGNORECASE),
}
_VERDICTS: Final = ("OK", "FAIL")


class Report:
    """Reads errors, results and checks out of a finished run."""

    def __init__(self, reading: Reading, reasons: Mapping[Place, tuple[str, Refusal]]) -> None:
        self.reading = reading
        self.reasons = reasons
        self.tabs = [sheet.name for sheet in reading.prepared.sheets]

    def errors(self) -> tuple[CellFailure, ...]:
        """Return every formula cell that shows an error, in the order of the sheets."""
        return tuple(self._errors())

    def _errors(self) -> Iterator[CellFailure]:
        results = self.reading.results
        failed = self.reading.failed()
        for number, sheet, formula in self.reading.prepared.formulas():
            value = results[number, formula.ref]
            if isinstance(value, CellError):
                reason, source = self._reason(number, formula, value, failed)
                yield CellFailure(sheet.name, formula.ref, value.text, reason, formula.text, source)

    def _reason(
        self, number: int, formula: FormulaCell, value: CellError, failed: Failed
    ) -> tuple[str, tuple[str, str] | None]:
        known = self.reasons.get((number, formula.row, formula.column))
        source = self._source(number, formula, value, failed)
        if source is not None:
            where = self.tabs[source[0]], source[1]
            return f"the error comes from {address(*where)}", where
        if known is not None and known[1].error == value.text:
            return known[1].reason, None
        return _WHY.get(value.text, "the formula gives an error"), None

    def _source(
        self, number: int, formula: FormulaCell, value: CellError, failed: Failed
    ) -> tuple[int, str] | None:
        """Return the first cell that the formula refers to and that shows the same error."""
        analysis = self.reading.prepared.analyses[number, formula.ref]
        for use in analysis.uses:
            place = self.reading.place_of(number, use)
            if place is None:
                continue
            for ref, held in self.reading.within(place, failed.get(place[0], {})):
                if held == value and (place[0], ref) != (number, formula.ref):
                    return place[0], ref
        return None

    @cached_property
    def _names(self) -> list[tuple[str, int, str]]:
        """(name, sheet number, address) of every visible name that points to a single cell."""
        found = []
        for name in self.reading.book.names:
            target = target_of(name)
            number = self.reading.numbers.get(target[0].lower()) if target else None
            hidden = name.hidden or name.name.lower().startswith("_xlnm.")
            if target and number is not None and not hidden and size(target[1]) == (1, 1):
                found.append((name.name, number, cell_name(target[1][0], target[1][1])))
        return found

    def results(self) -> tuple[NamedResult, ...]:
        """Return every formula cell that has a name, in the order of the names."""
        found = []
        for name, number, ref in self._names:
            if (number, ref) in self.reading.results:
                value = self.reading.results[number, ref]
                unit = self.unit_beside(number, ref) if isinstance(value, float) else ""
                asks = (number, ref) in self._asking
                found.append(NamedResult(name, value, unit, self.tabs[number], ref, asks))
        return tuple(found)

    def unit_beside(self, number: int, ref: str) -> str:
        """Return the unit right of a cell, or a common one left of it, where a single letter is a symbol."""
        place = row_column(ref)
        assert place is not None
        row, column = place
        unit = unit_in(self.reading.value(number, cell_name(row, column + 1)))
        if unit or column == 1:
            return unit
        left = common_unit_in(self.reading.value(number, cell_name(row, column - 1)))
        return left if len(left) > 1 else ""

    def checks(self) -> tuple[Check, ...]:
        """Return every cell with a verdict."""
        names = {(number, ref): name for name, number, ref in self._names}
        found = []
        results = self.reading.results
        for number, sheet, formula, asks in self._formulas:
            value = results[number, formula.ref]
            if asks or value in _VERDICTS:
                verdict = value.text if isinstance(value, CellError) else str(value)
                name = names.get((number, formula.ref)) or self._label(number, formula) or formula.ref
                numbers = self._numbers(number, formula)
                check = Check(
                    name,
                    verdict,
                    sheet.name,
                    formula.ref,
                    numbers.get("demand"),
                    numbers.get("capacity"),
                    numbers.get("margin"),
                )
                calls = self.reading.prepared.analyses[number, formula.ref].calls
                call = next((c for c in calls if c.name == "RB_CHECK"), None)
                found.append(self._with_given(number, check, call.arguments if call is not None else []))
        return tuple(found)

    @cached_property
    def _asking(self) -> frozenset[tuple[int, str]]:
        """Every cell whose formula calls RB_CHECK."""
        calls = ((place, one.calls) for place, one in self.reading.prepared.analyses.items())
        return frozenset(place for place, ours in calls if any(call.name == "RB_CHECK" for call in ours))

    @cached_property
    def _formulas(self) -> list[tuple[int, Sheet, FormulaCell, bool]]:
        """Every formula cell, and whether it is a call of RB_CHECK and no more."""
        prepared = self.reading.prepared
        wholes = ((n, s, f, prepared.analyses[n, f.ref].whole) for n, s, f in prepared.formulas())
        return [(n, s, f, whole is not None and whole.name == "RB_CHECK") for n, s, f, whole in wholes]

    def _label(self, number: int, formula: FormulaCell) -> str:
        """Return the first text in the row, left of the verdict."""
        for column in range(1, formula.column):
            value = self.reading.value(number, cell_name(formula.row, column))
            if isinstance(value, str) and value.strip():
                return value.strip()
        return ""

    def _with_given(self, number: int, check: Check, given: Sequence[Argument]) -> Check:
        """Return the check with demand and capacity as the first two arguments of its formula hold them."""
        for word, argument in zip(("demand", "capacity"), given, strict=False):
            place = self.reading.place_of(number, argument.use) if argument.use is not None else None
            if place is None:
                continue
            sheet, (top, left, bottom, right) = place
            value = self.reading.value(sheet, cell_name(top, left))
            beside = (bottom, right) if (bottom - top, right - left) in ((0, 1), (1, 0)) else None
            unit = unit_in(self.reading.value(sheet, cell_name(*beside))) if beside else ""
            if beside or (top, left) == (bottom, right):
                check = replace(check, **{word: value, f"{word}_unit": unit})  # type: ignore[arg-type]
        return check

    def _numbers(self, number: int, formula: FormulaCell) -> dict[str, Value]:
        """Return demand, capacity and margin of the row, by the nearest header above that says so."""
        found: dict[str, Value] = {}
        for row, column, word in self._headers(number):
            if row < formula.row and column != formula.column:
                value = self.reading.value(number, cell_name(formula.row, column))
                if value is not None and not (isinstance(value, str) and value in _VERDICTS):
                    found[word] = value  # headers come from top to bottom: the nearest wins
        return found

    def _headers(self, number: int) -> list[tuple[int, int, str]]:
        kept: dict[int, list[tuple[int, int, str]]] = self.__dict__.setdefault("_kept_headers", {})
        if number not in kept:
            found = []
            for _, attributes in self.reading.prepared.sheets[number].cells:
                ref = attributes["r"]
                place = row_column(ref)
                value = self.reading.value(number, ref)
                if place is None or not isinstance(value, str) or len(value) > 40:
                    continue
                found += [(*place, word) for word, pattern in _HEADERS.items() if pattern.match(value)]
            # One such word alone in its row is a label, not the header of a column.
            words = Counter(row for row, _, _ in found)
            kept[number] = sorted(
                (h for h in found if words[h[0]] > 1), key=lambda header: (header[0], -header[1])
            )
        return kept[number]
