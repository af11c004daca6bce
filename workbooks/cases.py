"""Load cases from a CSV: one row of inputs each, the workbook loaded once, one row of results out."""

from __future__ import annotations

import csv
import io
import marshal
import re
from collections.abc import Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Final, TypeAlias

from rigidsheet.core.errors import InputError, RigidsheetError
from rigidsheet.udf.cells import OMITTED, CellError, Refusal, Value

from .addresses import row_column
from .errors import FileRefused, InputRefused, address
from .evaluation.calls import Function
from .evaluation.engine import Sheets
from .evaluation.formulas import OMITTED_MARK
from .files import saving
from .inputs import Filled, input_cell, input_value
from .quantities import converted, quantity, unit_in
from .reading import Place
from .recalc import Finder, Run, collector_paused, located
from .report import Check, NamedResult, Report

MARKS: Final = ",;\t"
_UNIT: Final = re.compile(r"\s*(?P<name>.*?)\s*\[(?P<unit>[^\]]*)\]\s*\Z", re.DOTALL)
MEMORY: Final = 20_000  # calls of one function that are remembered
_BY_VALUE: Final = 2  # the marshal format that writes floats as bits and no references
_LABELS: Final = ("case", "load case")


@dataclass(frozen=True)
class Column:
    """An input column: the name or address in its header, and the unit when one stands there."""

    name: str
    unit: str


# The label of a load case and the texts of its inputs.
Row: TypeAlias = tuple[str, tuple[str, ...]]


@dataclass(frozen=True)
class Table:
    """The load cases of a file: a label and the texts of the inputs for each, and where the row stands."""

    columns: tuple[Column, ...]
    rows: tuple[Row, ...]


@dataclass(frozen=True)
class Answer:
    """What one load case gives."""

    case: str
    results: Mapping[str, tuple[Value, str]]  # by name: value and unit
    verdicts: Mapping[str, str]  # by the name of the check
    error: str = ""

    @property
    def fails(self) -> list[str]:
        """The checks that do not hold."""
        return [name for name, verdict in self.verdicts.items() if verdict != "OK"]


def read(path: Path) -> Table:
    """Read load cases from a CSV with commas, semicolons or tabs; refuse a table with doubtful rows.

    Parameters
    ----------
    path : Path
        The file. Its first row names an input for each column, as `arm`, `arm [mm]` or `Inputs!B3`; a column
        headed `case` gives each row its label, else the rows are numbered.
    """
    data = saving.load(path).data
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise FileRefused("the load cases are not a text in UTF-8", where=path.name) from None
    if "\0" in text:
        raise FileRefused("the load cases are not a text", remedy="Save them as CSV", where=path.name)
    try:
        lines = list(csv.reader(io.StringIO(text, newline=""), delimiter=_mark(text), strict=True))
    except csv.Error as error:
        raise FileRefused(f"the CSV cannot be read: {error}", where=path.name) from None
    numbered = [
        (i + 1, [cell.strip() for cell in line]) for i, line in enumerate(lines) if any(map(str.strip, line))
    ]
    if len(numbered) < 2:
        raise FileRefused("the load cases need a header and at least one row of inputs", where=path.name)
    return _table(path, numbered)


def _mark(text: str) -> str:
    """Return what separates the columns of the header."""
    bare = re.sub(r'"[^"]*"', "", text.lstrip().partition("\n")[0])
    return max(MARKS, key=bare.count)


def _table(path: Path, numbered: list[tuple[int, list[str]]]) -> Table:
    header = numbered[0][1]
    label = next((i for i, name in enumerate(header) if name.lower() in _LABELS), None)
    inputs = [i for i in range(len(header)) if i != label]
    columns = []
    for i in inputs:
        found = _UNIT.match(header[i])
        name = found["name"] if found else header[i]
        if not name:
            raise FileRefused(f"column {i + 1} of the load cases has no name", where=path.name)
        columns.append(Column(name, found["unit"].strip() if found else ""))
    if not columns:
        raise FileRefused("the load cases have no input column", where=path.name)
    rows = []
    for count, (line, cells) in enumerate(numbered[1:], start=1):
        if len(cells) != len(header):
            raise FileRefused(
                f"line {line} has {len(cells)} cells under {len(header)} headers",
                remedy="A decimal comma splits a number; write 0.4",
                where=path.name,
            )
        name = cells[label] if label is not None else ""
        rows.append((name or str(count), tuple(cells[i] for i in inputs)))
    return Table(tuple(columns), tuple(rows))


def remembering(find: Finder) -> Finder:
    """Return the cell functions with a memory: from case to case most calls get the same cells again.

    A cell function depends on nothing but its cells. They are compared bit by bit, so that TRUE is not 1
    and minus zero is not zero.
    """

    def found(name: str) -> Function | None:
        function = find(name)
        return _remembering(function) if function is not None else None

    return found


def _remembering(function: Function) -> Function:
    memory: dict[bytes, Any] = {}

    def called(*cells: Any) -> Any:
        given = cells
        if OMITTED in cells:
            given = tuple(OMITTED_MARK if cell is OMITTED else cell for cell in cells)
        try:
            key = marshal.dumps(given, _BY_VALUE)
        except ValueError:  # an error among the cells
            return function(*cells)
        answer = memory.get(key)
        if answer is None:
            if len(memory) >= MEMORY:
                memory.clear()
            answer = memory[key] = function(*cells)
        return answer

    return called


class Cases:
    """A workbook loaded once; iterating works the load cases out one after the other in this process."""

    def __init__(self, data: bytes, table: Table, inputs: Mapping[str, object]) -> None:
        self.table = table
        self.data = data
        self.inputs = inputs
        self.loaded: Sheets | None = None
        self.run = Run(data, inputs, None, None)
        self.run.functions = remembering(self.run.functions)
        self.reading = Filled(self.run.prepared, self.run.results)
        self.reasons: dict[Place, tuple[str, Refusal]] = {}
        self.report = Report(self.reading, self.reasons)
        self.places = self._places()
        self.sheets = [sheet.name for sheet in self.run.prepared.sheets]

    def _places(self) -> list[tuple[int, str]]:
        """Return the input cell of each column, with every header judged before the first case runs."""
        places: list[tuple[int, str]] = []
        for column in self.table.columns:
            number, ref = input_cell(self.reading, column.name)
            if (number, ref) in places:
                raise InputRefused(column.name, "given in one column; another sets the same cell")
            if column.unit and not unit_in(column.unit):
                raise InputRefused(column.name, "headed with a known unit in brackets", column.unit)
            if column.unit:
                input_value(self.reading, column.name, f"1 {column.unit}", number, ref)
            places.append((number, ref))
        return places

    def __iter__(self) -> Iterator[Answer]:
        return map(self.answer, self.table.rows)

    def answer(self, row: Row) -> Answer:
        """Work out one load case, which need not be one of the table."""
        label, texts = row
        if self.loaded is None:
            self.loaded = self.run.open()
        try:
            self._work_out(self.loaded, self._inputs(texts))
        except RigidsheetError as refusal:
            return Answer(label, {}, {}, str(refusal))
        return self._answer(label)

    def _work_out(self, loaded: Sheets, given: Mapping[tuple[int, str], Value]) -> None:
        for (number, ref), value in given.items():
            place = row_column(ref)
            assert place is not None
            assert isinstance(value, (float, str, bool))
            loaded.put(self.sheets[number], *place, value)
        calls = self.run.calls
        before = dict(calls.reasons)
        calls.clear()
        try:
            self.run.work_out(loaded)
        finally:  # a cell that did not have to be worked out again keeps its reason
            calls.reasons.update(before | calls.reasons)
            self.reasons.clear()
            self.reasons.update(calls.reasons)

    def _inputs(self, texts: Sequence[str]) -> dict[tuple[int, str], Value]:
        """Return what goes into each cell in one case."""
        inputs = []
        for column, text, place in zip(self.table.columns, texts, self.places, strict=True):
            if not text:
                raise InputRefused(column.name, "given in every case; the cell is empty")
            bare = quantity(text) if column.unit else None
            whole = f"{text} {column.unit}" if bare is not None and not bare[1] else text
            inputs.append((column.name, whole, place))
        self.reading.fill(inputs)
        return self.reading.given

    def _answer(self, label: str) -> Answer:
        checks = self.report.checks()
        return Answer(
            label,
            _named(self.report.results(), checks),
            _verdicts(checks),
            self._error(),
        )

    def _error(self) -> str:
        if not any(type(value) is CellError for value in self.run.results.values()):
            return ""
        errors = self.report.errors()
        if not errors:
            return ""
        first = next((one for one in errors if one.source is None), errors[0])
        more = f" (and {len(errors) - 1} more)" if len(errors) > 1 else ""
        return f"{first}{more}"


@contextmanager
def opened(path: Path, table: Table, inputs: Mapping[str, object]) -> Iterator[Cases]:
    """Load a workbook for the load cases; refusals say which file is meant."""
    seen = saving.load(path)
    with located(seen), collector_paused():
        yield Cases(seen.data, table, inputs)


def _named(results: Sequence[NamedResult], checks: Sequence[Check]) -> dict[str, tuple[Value, str]]:
    verdicts = {(check.sheet, check.cell) for check in checks}
    named: dict[str, tuple[Value, str]] = {}
    for one in results:
        if one.checks or (one.sheet, one.cell) in verdicts:
            continue
        name = one.name if one.name not in named else f"{one.name} ({address(one.sheet, one.cell)})"
        named[name] = (one.value, one.unit)
    return named


def _verdicts(checks: Sequence[Check]) -> dict[str, str]:
    names = [check.name for check in checks]
    return {
        check.name
        if names.count(check.name) == 1
        else f"{check.name} ({address(check.sheet, check.cell)})": check.verdict
        for check in checks
    }


def as_csv(answers: Sequence[Answer]) -> str:
    """Return the answers as CSV: case, every named result with its unit, each check, the reason of an error."""
    units: dict[str, str] = {}
    checks: dict[str, None] = {}
    for answer in answers:
        for name, (_, unit) in answer.results.items():
            units[name] = units.get(name) or unit
        checks.update(dict.fromkeys(answer.verdicts))
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    heads = [f"{name} [{unit}]" if unit else name for name, unit in units.items()]
    writer.writerow(["case", *heads, *checks, "error"])
    for answer in answers:
        values = [_text(name, answer.results.get(name), unit) for name, unit in units.items()]
        verdicts = [answer.verdicts.get(name, "") for name in checks]
        writer.writerow([answer.case, *values, *verdicts, answer.error])
    return out.getvalue()


def _text(name: str, result: tuple[Value, str] | None, unit: str) -> Any:
    """Return a result in the unit of its column, with all its digits."""
    if result is None:
        return ""
    value, own = result
    if isinstance(value, CellError):
        return value.text
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    if isinstance(value, float):
        return repr(converted(name, f"{value!r} {own}", unit) if own and own != unit else value)
    return "" if value is None else value


def save(text: str, path: Path) -> None:
    """Write the results of the cases in one step."""
    if path.is_dir():
        raise InputError("", f"{path} is a folder", remedy="Name a file")
    saving.save(text.encode("utf-8"), path, None)
