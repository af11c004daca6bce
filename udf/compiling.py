"""From a declaration to a function ready to be called: readers compiled once, errors turned into refusals."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import chain
from types import MappingProxyType
from typing import Any, Final

import numpy as np

from ..core.errors import AbsentError, InputError, KindError, PhysicsError, RigidsheetError
from . import frame, results
from .cells import Answer, Cell, CellError, Omitted, Refusal
from .declaration import UNIT, WHAT, Arg, CellFunction, Reader
from .reading.words import Choice, Rest, Text
from .working import NOT_FINITE, for_rows

# One table from error class to what the cell shows.
CELL_ERRORS: Final = MappingProxyType(
    {InputError: "#VALUE!", KindError: "#VALUE!", PhysicsError: "#NUM!", AbsentError: "#N/A"}
)

KEPT: Final = 16  # answers of a kernel that gives several results

UNIT_HELP: Final = "unit of the result; SI when omitted"


def arguments_of(f: CellFunction) -> tuple[Arg, ...]:
    """Return every argument in order, the derived `what` and `unit` included."""
    return tuple(a for a, _ in placed_arguments(f))


def placed_arguments(f: CellFunction) -> list[tuple[Arg, bool]]:
    """Return every argument in order, each with whether the kernel takes it (else it is derived)."""
    derived: dict[str, Arg] = {}
    what = what_argument(f)
    if what is not None:
        derived[WHAT] = what
    if results.has_unit(f.result):
        derived[UNIT] = Arg(UNIT, Text(example=results.sample_unit(f.result)), UNIT_HELP, default=None)
    out = [(a, True) if isinstance(a, Arg) else (derived.pop(a), False) for a in f.args]
    return out + [(a, False) for a in derived.values()]


def what_argument(f: CellFunction) -> Arg | None:
    """Return the derived argument that chooses one result, or None where there is only one."""
    names = results.names(f.result)
    if f.result.open:
        return Arg(
            WHAT, Text(example=names[0]), "which result, by its label; all rows when omitted", default=None
        )
    if len(names) == 1:
        return None
    given = f.result.default or results.ALL
    return Arg(WHAT, Choice((*names, results.ALL)), f"which result; {given} when omitted", default=None)


class Compiled:
    """A function ready to be called: readers compiled once, positions of vectors known."""

    def __init__(self, f: CellFunction) -> None:
        self.function = f
        placed = placed_arguments(f)
        self.arguments = tuple(a for a, _ in placed)
        self.readers: tuple[Reader, ...] = tuple(a.shape.reader(a.name, a.limit) for a in self.arguments)
        self.rest = bool(self.arguments) and isinstance(self.arguments[-1].shape, Rest)
        self.own = tuple(i for i, (_, own) in enumerate(placed) if own)
        self.frame = frame.Frame(tuple(a for a in f.args if isinstance(a, Arg)))
        self.express = results.Expression(f.result)
        derived = {a.name: i for i, (a, own) in enumerate(placed) if not own}
        self._what = derived.get(WHAT)
        self._unit = derived.get(UNIT)
        self._kept: dict[tuple[int, ...], tuple[Sequence[Any], Any]] = {}

    def read(self, cells: Sequence[Cell]) -> list[Any]:
        """Return what the readers make of the cells, defaults filled in."""
        arguments, readers = self.arguments, self.readers
        if self.rest:
            last = len(arguments) - 1
            if len(cells) > last:
                passed: Any = [list(cells[last:])]
                cells = [*cells[:last], passed]
        elif len(cells) > len(arguments):
            raise InputError(
                "", f"{self.function.name} takes at most {len(arguments)} arguments; got {len(cells)}"
            )
        values: list[Any] = []
        for reader, cell in zip(readers, cells, strict=False):
            values.append(left_out(arguments[len(values)]) if type(cell) is Omitted else reader(cell))
        for a in arguments[len(values) :]:
            values.append(left_out(a))
        return values

    def answer(self, cells: Sequence[Cell]) -> Answer:
        """Return the answer, or raise one of the project's errors."""
        values = self.read(cells)
        what = values[self._what] if self._what is not None else None
        unit = values[self._unit] if self._unit is not None else None
        own, planar = self.frame.align([values[i] for i in self.own])
        self.express.check(what, unit, lambda: self.frame.has_columns(own))
        return self.express(self._answer_of(own), what, unit, planar)

    def _answer_of(self, own: Sequence[Any]) -> Any:
        """Return the kernel's answer: a recent one again when only `what` or the unit differs.

        Readings of the same cells are the same objects, which nobody can write to; they are kept beside the
        answer, so that no other object can get their identity.
        """
        if self._what is None or np.ndarray in set(map(type, own)):  # vectors and columns are read anew
            return self.function.kernel(*own)
        key = tuple(map(id, own))
        kept = self._kept.get(key)
        if kept is None:
            if len(self._kept) >= KEPT:
                self._kept.clear()
            kept = self._kept[key] = own, self.function.kernel(*own)
        return kept[1]

    def working(self, cells: Sequence[Cell]) -> list[str]:
        """Return the lines of the working, or raise as `answer` does."""
        self.answer(cells)  # what is refused has no working
        values = self.read(cells)
        own, planar = self.frame.align([values[i] for i in self.own])
        own, rows = (own, 1) if self.function.result.gathers else self.frame.first_row(own)
        answer = self._answer_of(own)
        lines = list(self.function.working(tuple(own), answer))
        unit = values[self._unit] if self._unit is not None else None
        if unit is not None:
            what = values[self._what] if self._what is not None else None
            lines += united(self.express(answer, what, unit, planar), unit)
        return for_rows(lines, rows)


def left_out(a: Arg) -> Any:
    """Return what stands for an argument that was left out."""
    if not a.optional:
        raise InputError(a.name, f"given: {a.help}; the argument is missing"[:200])
    return a.default


def united(answer: Answer, unit: str) -> list[str]:
    """Return the lines that tell a result in the unit asked for."""
    if not isinstance(answer, list):
        return [f"In the unit asked for: {answer:.6g} {unit}" if isinstance(answer, float) else answer]
    rows = [", ".join(c if isinstance(c, str) else f"{c:.6g}" for c in row) for row in answer]
    if len(rows) == 1:
        return [f"In the unit asked for: ({rows[0]}) {unit}"]
    return [f"In the unit asked for, {unit}:", *(f"  [{row}]" for row in rows)]


PLAIN: Final = frozenset({float, str, bool, type(None), Omitted})


def settled(cells: Sequence[Cell]) -> tuple[Sequence[Cell], tuple[int, CellError] | None]:
    """Return the cells with whole numbers as floats and 1 x 1 blocks collapsed, and the first error among them.

    One pass over the types: what a careful host hands over comes back untouched.
    """
    out: list[Any] | None = None
    for i, c in enumerate(cells):
        t = type(c)
        if t in PLAIN:
            continue
        if t is CellError:
            return cells, (i, c)  # type: ignore[return-value]
        if t is list and c and set(map(type, c)) == {list}:  # type: ignore[arg-type]
            types = set(map(type, chain.from_iterable(c)))  # type: ignore[arg-type]
            if CellError in types:
                return cells, (i, next(v for row in c for v in row if type(v) is CellError))  # type: ignore[union-attr]
            if types <= PLAIN and (len(c) > 1 or len(c[0]) > 1) and len(set(map(len, c))) == 1:  # type: ignore[arg-type,index]
                continue
        out = list(cells) if out is None else out
        out[i] = plain(c)
    return cells if out is None else out, None


def plain(cell: Any) -> Any:
    """Return what a careless host handed over as a cell: ints as floats, tuples as lists, 1 x 1 collapsed."""
    if isinstance(cell, (list, tuple, np.ndarray)):
        if isinstance(cell, np.ndarray):
            cell = cell.tolist()  # Python's own numbers and texts
            if not isinstance(cell, list):
                return plain(cell)
        rows = [
            [plain(v) for v in row] if isinstance(row, (list, tuple, np.ndarray)) else [plain(row)]
            for row in cell
        ]
        if any(isinstance(v, list) for row in rows for v in row):
            raise InputError("", "A block of cells must have rows and columns only")
        if not rows or not rows[0] or len({len(r) for r in rows}) != 1:
            raise InputError("", "A block of cells must be rectangular and not empty")
        return rows[0][0] if len(rows) == 1 and len(rows[0]) == 1 else rows
    if isinstance(cell, (bool, np.bool_)):
        return bool(cell)
    if isinstance(cell, (int, float, np.number)) and not isinstance(cell, np.complexfloating):
        try:
            return float(cell)
        except OverflowError:
            return math.inf
    return str(cell) if isinstance(cell, str) else cell


def refusal_of(error: RigidsheetError) -> Refusal:
    """Turn an error into what the cell shows and the sentence."""
    for kind, text in CELL_ERRORS.items():
        if isinstance(error, kind):
            return Refusal(text, short(str(error)))
    return Refusal("#VALUE!", short(str(error)))


def short(text: str, most: int = 255) -> str:
    """Cut a text to what every host can show in a cell of an array."""
    return text if len(text) <= most else text[: most - 3] + "..."


def guarded(compiled: Compiled, act: Callable[[Sequence[Cell]], Any], cells: Sequence[Cell]) -> Any:
    """Run `act`, turning errors that enter and errors that are raised into refusals."""
    try:
        if not compiled.rest or type(cells[0] if cells else None) is CellError:
            cells, entering = settled(cells)
            if entering is not None:
                position, error = entering
                names = [a.name for a in compiled.arguments]
                where = f"`{names[position]}`" if position < len(names) else "an argument"
                return Refusal(error.text, f"{where} holds the error {error.text}, which passes through.")
        with np.errstate(all="ignore"):  # the gate in results.py judges what came out
            return act(cells)
    except RigidsheetError as error:
        return refusal_of(error)
    except (ArithmeticError, np.linalg.LinAlgError):  # where arrays would give what the gate refuses
        return refusal_of(PhysicsError("", NOT_FINITE))
    except Exception as error:  # a host must get a cell, whatever went wrong inside
        text = f"{compiled.function.name} could not answer these cells ({type(error).__name__}: {error})."
        return Refusal("#VALUE!", short(text))


def answered(ready: Compiled, cells: Sequence[Cell]) -> Answer | Refusal:
    """Return the answer to one call, or its refusal. Never raises."""
    return guarded(ready, ready.answer, cells)  # type: ignore[no-any-return]


def worked(ready: Compiled, cells: Sequence[Cell]) -> list[str] | Refusal:
    """Return the lines of the working, each of at most 255 characters, or the refusal. Never raises."""
    lines = guarded(ready, ready.working, cells)
    return lines if isinstance(lines, Refusal) else [short(x) for x in lines]
