"""Headless recalculation: a workbook in, every formula worked out, the values written back."""

from __future__ import annotations

import gc
import os
import signal
import threading
from collections.abc import Callable, Collection, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass, replace
from functools import cache, cached_property, partial
from pathlib import Path
from types import FrameType, MappingProxyType
from typing import Any, Final, TypeAlias

from rigidsheet.udf.cells import CellError, Value

from .addresses import Area, size
from .cautions import Caution, cautions, open_elsewhere
from .errors import FileRefused, FormulaRefused
from .evaluation.calls import TEXT_LIMIT, Calls, Function
from .evaluation.engine import Engine, Formualizer, Sheets
from .evaluation.enginecopy import Preparation, Prepared, frame_cells
from .evaluation.formulas import resolver
from .files import package as packages
from .files import saving
from .files.book import describe
from .files.sheetxml import FormulaCell, Sheet, scan
from .files.writeback import written
from .inputs import with_inputs
from .reading import Reading
from .report import CellFailure, Check, NamedResult, Report

# Returns one of the cell functions by its name.
Finder: TypeAlias = Callable[[str], "Function | None"]

_NONE: Final[Mapping[str, object]] = MappingProxyType({})


@dataclass(frozen=True)
class Recalculation:
    """A recalculated workbook.

    Parameters
    ----------
    values : Mapping[tuple[str, str], float | str | bool | CellError]
        What every formula cell holds now, by sheet name and address; cells of array formulas included.
    errors : tuple of CellFailure
        Formula cells that show an error, each with its reason.
    results : tuple of NamedResult
        Formula cells that have a name, with the unit that stands beside them.
    checks : tuple of Check
        Cells with a verdict, OK or FAIL.
    warnings : tuple of Caution
        What is allowed but looks like a slip.
    package : bytes
        The whole new file; the very bytes of the old one when nothing changed.
    changed : bool
        Whether the new file differs from the old one.
    path : Path or None
        Where the file was written; None when it was not.
    """

    values: Mapping[tuple[str, str], Value]
    errors: tuple[CellFailure, ...]
    results: tuple[NamedResult, ...]
    checks: tuple[Check, ...]
    warnings: tuple[Caution, ...]
    package: bytes
    changed: bool
    path: Path | None = None

    @property
    def holds(self) -> bool:
        """Whether no cell shows an error and every check says OK."""
        return not self.errors and all(check.verdict == "OK" for check in self.checks)


def recalculate(
    source: str | os.PathLike[str] | bytes,
    *,
    inputs: Mapping[str, object] = _NONE,
    to: str | os.PathLike[str] | None = None,
    write: bool | None = None,
    functions: Mapping[str, Function] | None = None,
    engine: Engine | None = None,
) -> Recalculation:
    """Work out every formula of an .xlsx or .xlsm workbook and write the values into the file.

    Parameters
    ----------
    source : path or bytes
        The workbook.
    inputs : Mapping[str, object]
        New contents of input cells, by defined name or by address such as ``Inputs!B3``. A number is in the
        unit of its cell; a text such as ``400 mm`` is converted to the unit that stands beside the cell.
    to : path, optional
        Another file to write to; the source then stays as it is.
    write : bool, optional
        Whether to write; when omitted, written when there is a path to write to.
    functions : Mapping[str, Callable], optional
        The cell functions that formulas may call; those of Rigidsheet when omitted.
    engine : Engine, optional
        What works the formulas out.

    Returns
    -------
    Recalculation
        Values, errors with reasons, named results, checks, warnings and the new file.

    Raises
    ------
    FileRefused
        When the file cannot be read, worked out or written without risk; it is then left untouched.
    InputRefused
        When an input cannot be set.
    """
    seen = None if isinstance(source, bytes) else saving.load(Path(source))
    data = source if isinstance(source, bytes) else (seen.data if seen is not None else b"")
    with located(seen), collector_paused():
        target = Path(to) if to is not None else (seen.path if seen is not None else None)
        writes = (target is not None) if write is None else write
        if writes and target is None:
            raise FileRefused("there is no path to write to", remedy="Give one with `to`")
        run = Run(data, inputs, functions, engine)
        in_place = writes and seen is not None and target is not None and _same_file(target, seen.path)
        if run.prepared.book.package.signed and in_place:
            raise FileRefused(
                "the file carries a digital signature, which writing would break",
                remedy="Write to another file",
            )
        result = run.result()
        warnings = result.warnings
        if writes and target is not None:
            warnings += open_elsewhere(target)
            saving.save(result.package, target, seen)
        path = target if writes else None
    return replace(result, warnings=warnings, path=path)


def _same_file(one: Path, other: Path) -> bool:
    return os.path.realpath(one) == os.path.realpath(other)


@contextmanager
def located(seen: saving.Seen | None) -> Iterator[None]:
    """Add the file's name to a refusal that does not say where."""
    try:
        yield
    except FileRefused as refusal:
        if seen is not None and not refusal.where:
            refusal.where = seen.path.name
            refusal.args = (refusal.sentence(),)
        raise


class Run:
    """One recalculation in memory."""

    def __init__(
        self,
        data: bytes,
        inputs: Mapping[str, object],
        functions: Mapping[str, Function] | None,
        engine: Engine | None,
    ) -> None:
        self.source = data
        own = _own_functions() if functions is None else (functions.get, functions.keys(), _no_unit)
        self.functions, names, self.unit_position = own
        self.resolve = resolver(tuple(names))
        self.engine = engine if engine is not None else Formualizer()
        book = describe(packages.read(data))
        sheets = tuple(scan(tab.name, tab.part, book.package.parts[tab.part]) for tab in book.sheets)
        if inputs:
            sheets = with_inputs(book, sheets, inputs)
        self.prepared: Prepared = Preparation(book, sheets, self.engine, self.resolve, list(names)).run()
        self.calls = Calls()
        self.results: dict[tuple[int, str], Value] = {}

    def open(self) -> Sheets:
        """Load the prepared workbook into the engine."""
        used = {name: function for name in self.prepared.used if (function := self.functions(name))}
        return self.engine.open(
            self.prepared.engine_package, self.calls.bind(used), date1904=self.prepared.book.date1904
        )

    def work_out(self, loaded: Sheets) -> None:
        """Run the engine and collect the value of every formula cell."""
        with _interrupts_kept(self.calls):
            loaded.run()
        if self.calls.interrupted is not None:
            raise self.calls.interrupted
        results, held = self.results, loaded.value
        for key, sheet, name, formula, row, column, frame in self._formulas:
            if frame is not None:
                self._collect_frame(loaded, key[0], sheet, formula, frame)
                continue
            value = held(name, row, column)
            finite = type(value) is float and value - value == 0.0
            results[key] = value if finite else self._lawful(sheet, formula, value)

    @cached_property
    def _formulas(self) -> list[tuple[tuple[int, str], Sheet, str, FormulaCell, int, int, Area | None]]:
        """What reading a result needs of each formula: listed once, for load cases read all again and again."""
        return [
            ((n, f.ref), sheet, sheet.name, f, f.row, f.column, f.array)
            for n, sheet, f in self.prepared.formulas()
        ]

    def result(self) -> Recalculation:
        """Work the workbook out and make the new file."""
        self.work_out(self.open())
        new = written(self.prepared, self.results)
        reading = Reading(self.prepared, self.results)
        report = Report(reading, self.calls.reasons)
        names = [sheet.name for sheet in self.prepared.sheets]
        values = {(names[number], ref): value for (number, ref), value in self.results.items()}
        return Recalculation(
            MappingProxyType(values),
            report.errors(),
            report.results(),
            report.checks(),
            cautions(reading, self.unit_position, signed=self.prepared.book.package.signed),
            new,
            new != self.source,
        )

    def _collect_frame(
        self, loaded: Sheets, number: int, sheet: Sheet, formula: FormulaCell, frame: Area
    ) -> None:
        found = self.calls.sizes.get((number, formula.row, formula.column), size(frame))
        if formula.dynamic and found != size(frame):
            raise FormulaRefused(
                f"the result has changed its size to {found[0]} x {found[1]} cells, and only a spreadsheet"
                " program can move it",
                sheet=sheet.name,
                cell=formula.ref,
                formula=formula.text,
                remedy="Open and save the file there, or use an array formula with a fixed frame",
            )
        top, left, _, _ = frame
        columns = size(frame)[1]
        for i, ref in enumerate(frame_cells(frame)):
            value = loaded.value(sheet.name, top + i // columns, left + i % columns)
            if value is None and i and isinstance(self.results[number, formula.ref], CellError):
                value = self.results[number, formula.ref]  # the engine puts an error into the anchor only
            self.results[number, ref] = self._lawful(sheet, formula, value)

    def _lawful(self, sheet: Sheet, formula: FormulaCell, value: Value) -> Value:
        if type(value) is float:
            return value if value - value == 0.0 else CellError("#NUM!")
        reason = ""
        if value is None:
            reason = "the engine gave no value for this formula"
        elif isinstance(value, CellError) and value.text.startswith("?"):
            reason = _UNLAWFUL.get(value.text[1:], f"the engine cannot work this out ({value.text[1:]})")
        elif isinstance(value, str) and len(value) > TEXT_LIMIT:
            reason = "the text is longer than a cell can hold"
        if reason:
            raise FormulaRefused(reason, sheet=sheet.name, cell=formula.ref, formula=formula.text)
        return value


_UNLAWFUL: Final = {
    "Circ": "the formula depends on its own result (circular reference)",
    "Spill": "the result is a block that does not fit into its place, or is larger than the engine takes",
    "Array": "the result is a block in a single cell",
    "Error": "the formula cannot be read",
    "NImpl": "the engine does not offer this form of a function",
    "Calc": "the result is an empty block",
    "Cancelled": "the calculation was stopped",
}


def _own_functions() -> tuple[Finder, Collection[str], Callable[[str], int | None]]:
    """Return our cell functions as positional callables, their names, and where their unit argument is."""
    from rigidsheet.udf import calling, catalogue

    def find(name: str) -> Function:
        return partial(_call, calling.call, name)

    @cache
    def unit_position(name: str) -> int | None:
        arguments = catalogue.find(name).arguments
        return next((i for i, argument in enumerate(arguments) if argument.name == "unit"), None)

    return find, calling.names(), unit_position


def _call(call: Callable[[str, tuple[Any, ...]], Any], name: str, *cells: Any) -> Any:
    return call(name, cells)


def _no_unit(name: str) -> int | None:
    return None


@contextmanager
def collector_paused() -> Iterator[None]:
    """Pause the search for reference cycles: it takes half the time of a large file and finds nothing."""
    if not gc.isenabled():
        yield
        return
    gc.disable()
    try:
        yield
    finally:
        gc.enable()


@contextmanager
def _interrupts_kept(calls: Calls) -> Iterator[None]:
    """Keep Ctrl-C until the engine has returned: raised inside it, it would become one wrong cell."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = signal.getsignal(signal.SIGINT)

    def keep(number: int, frame: FrameType | None) -> None:
        calls.interrupted = calls.interrupted or KeyboardInterrupt()

    if before is signal.SIG_IGN or before is None:
        yield
        return
    signal.signal(signal.SIGINT, keep)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
