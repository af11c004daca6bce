"""Readers for tables with a header and for records of label, value and unit."""

from __future__ import annotations

import difflib
import functools
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from types import NoneType
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ...core.errors import InputError
from ..cells import Block, Cell, Value
from ..declaration import Reader, Role
from ..limits import Limit
from ..units.kinds import Kind
from ..units.quantities import asked, check_limit, folded, is_unit_text, quantity, shown, unit_factor, wrong
from .memory import remembered
from .slips import DECISIVE, kinds_of
from .words import hint, nearest

HEADER: Final = re.compile(r"\s*(.*?)\s*(?:\[\s*(.*?)\s*\])?\s*\Z")
ROUND: Final = re.compile(r"\s*(.*?)\s*\(\s*([^()]*(?:\([^()]*\)[^()]*)*?)\s*\)\s*\Z")
TOTAL: Final = re.compile(r"(grand |sub)?-?\s*(total|sum)s?\b[\s:=]*\Z", re.IGNORECASE)


@functools.lru_cache(maxsize=4096)
def label_and_unit(text: str) -> tuple[str, str | None]:
    """Split 'mass [kg]' or 'mass (kg)' into the label and the unit text, None where there is no unit."""
    found = ROUND.match(text) or HEADER.match(text)
    assert found is not None  # HEADER matches every text
    return found[1], found[2]


@dataclass(frozen=True, slots=True)
class Column:
    """A column of a table: found by its label, whatever the order.

    `kind` None means text. A blank in an optional number column is given as NaN, in a text column as ''.
    """

    label: str
    kind: Kind | None
    help: str
    also: tuple[str, ...] = ()
    required: bool = False
    limit: Limit | None = None
    blanks: bool = True


@dataclass(frozen=True, slots=True)
class TableData:
    """A table as read: one array (numbers, SI) or list (texts) a column that was there, and row names."""

    columns: Mapping[str, Any]
    rows: tuple[int, ...]  # row of the block (header is row 1) of each line
    labels: tuple[str, ...]  # text of the naming column, '' where there is none

    def __len__(self) -> int:
        return len(self.rows)

    def only(self, indices: Sequence[int]) -> TableData:
        """Return the table with some of its lines."""
        columns = {
            k: v[list(indices)] if isinstance(v, np.ndarray) else [v[i] for i in indices]
            for k, v in self.columns.items()
        }
        labels = tuple(self.labels[i] for i in indices) if self.labels else ()
        return TableData(columns, tuple(self.rows[i] for i in indices), labels)

    def where(self, index: int) -> str:
        """Name a line in a refusal: its row of the block and what it is called."""
        label = self.labels[index] if self.labels else ""
        return f"row {self.rows[index]}" + (f", '{label}'" if label else "")

    def numbers(self, label: str) -> NDArray[np.float64]:
        """Return a number column, NaN where blank or when the column is not there."""
        found = self.columns.get(label)
        if found is None:
            return np.full(len(self.rows), np.nan)
        return found  # type: ignore[no-any-return]

    def texts(self, label: str) -> Sequence[str]:
        """Return a text column, '' where blank or when the column is not there."""
        found = self.columns.get(label)
        if found is None:
            return [""] * len(self.rows)
        return found  # type: ignore[no-any-return]


@dataclass(frozen=True, slots=True)
class Table:
    """Rows under a header; the first column of `columns` names the rows.

    Gives a `TableData`; `finish` turns it into what a kernel takes.
    """

    columns: tuple[Column, ...]
    what: str  # 'parts list', 'loads', ...
    example: tuple[tuple[Value, ...], ...]
    none_word: bool = False  # the word 'none' stands for no rows
    more: Mapping[str, Column] = field(default_factory=dict)  # further columns by their exact label
    # Folded headers that must not be passed over: the column that makes them harmless, and the remedy.
    slips: Mapping[str, tuple[str, str]] = field(default_factory=dict)
    finish: Callable[[str, TableData], Any] | None = None
    role: Role = Role.OTHER

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        known = {folded(n): c for c in self.columns for n in (c.label, *c.also)}
        empty = TableData({}, (), ())
        finish = self.finish

        def read(cell: Cell) -> Any:
            if self.none_word and type(cell) is str and folded(cell) == "none":
                return empty if finish is None else finish(argument, empty)
            if type(cell) is not list or len(cell) < 2:
                none = ", or the word 'none'" if self.none_word else ""
                raise wrong(argument, f"a {self.what}: a header row and rows below it{none}", cell)
            data = self._table(argument, cell, known)
            return data if finish is None else finish(argument, data)

        return remembered(read)

    def _table(self, argument: str, cell: Block, known: Mapping[str, Column]) -> TableData:
        heads = self._heads(argument, cell[0], known)
        body = cell[1:]
        first = 2
        if body and any(is_unit_text(c) for c in body[0]) and all(type(c) is not float for c in body[0]):
            united = {j for j, (c, u) in heads.items() if c.kind is not None and u is None}
            if united and all(j in united or body[0][j] in (None, "") for j in range(len(body[0]))):
                heads = {
                    j: (c, str(body[0][j]) if j in united and body[0][j] else u)
                    for j, (c, u) in heads.items()
                }
                body, first = body[1:], 3
        used = [i for i, row in enumerate(body) if not all(c is None or c == "" for c in row)]
        if not used:
            raise InputError(argument, f"a {self.what} with rows; only the header is filled in")
        rows = [body[i] for i in used]
        where = tuple(i + first for i in used)
        naming = next((j for j, (c, _) in heads.items() if c is self.columns[0]), None)
        labels = (
            tuple(str(r[naming]).strip() if r[naming] is not None else "" for r in rows)
            if naming is not None
            else ()
        )
        for i, text in enumerate(labels):
            if TOTAL.match(text):
                raise InputError(
                    argument,
                    f"a {self.what} without a total row; it would be counted as one more entry",
                    remedy="End the range above the total",
                    where=f"row {where[i]}, '{text}'",
                )
        out: dict[str, Any] = {}
        data = TableData(out, where, labels)
        transposed = list(zip(*rows, strict=True))
        for j, (c, unit) in heads.items():
            out[c.label] = self._column(argument, c, unit, transposed[j], data)
        return data

    def _heads(
        self, argument: str, header: Sequence[Value], known: Mapping[str, Column]
    ) -> dict[int, tuple[Column, str | None]]:
        heads: dict[int, tuple[Column, str | None]] = {}
        taken: dict[str, str] = {}
        passed: list[str] = []
        for j, head in enumerate(header):
            if head is None or head == "":
                continue
            if type(head) is not str:
                raise InputError(
                    argument,
                    f"a {self.what} whose first row is the header; got {shown(head)} in it",
                    where="row 1",
                )
            label, unit = label_and_unit(head)
            c = known.get(folded(label)) or self._further(label)
            if c is None:
                self._lookalike(argument, head, label)
                close = nearest(label, [*(n for k in self.columns for n in (k.label, *k.also)), *self.more])
                if close is not None:
                    raise InputError(
                        argument,
                        f"a {self.what} with known columns; got {shown(head)}",
                        remedy=f"Did you mean '{close}'?",
                        where="row 1",
                    )
                passed.append(head)
                continue
            if c.label in taken:
                raise InputError(
                    argument,
                    f"a {self.what} with each column once; got '{taken[c.label]}' and '{head}'",
                    where="row 1",
                )
            taken[c.label] = head
            heads[j] = (c, unit)
        missing = [c.label for c in self.columns if c.required and c.label not in taken]
        if missing:
            raise InputError(
                argument,
                f"a {self.what} with a column '{missing[0]}'",
                remedy=hint("?", [header_of(c) for c in self.columns]),
                where="row 1",
            )
        for head in passed:
            self._counts(argument, head, taken)
        return heads

    def _counts(self, argument: str, head: str, taken: Mapping[str, str]) -> None:
        """Refuse an unknown header of what would change the result: a count, an angle, a force, a place."""
        label, unit = label_and_unit(head)
        known, meant = self.slips.get(folded(label).rstrip("."), ("", ""))
        if known in taken:
            return
        if meant:
            meant += ". Rename a column that is only a remark"
        elif unit:
            asked_for = [c for c in self.columns if c.kind in kinds_of(unit) and c.label not in taken]
            unplaced = not any(k in taken for k in "xyz")
            if any(c.kind in DECISIVE or (unplaced and c.label in ("x", "y", "z")) for c in asked_for):
                meant = hint("?", [c.label for c in asked_for]) + ". A remark stands without a unit"
        if meant:
            raise InputError(
                argument,
                f"a {self.what} with known columns; got {shown(head)}",
                remedy=meant,
                where="row 1",
            )

    def _lookalike(self, argument: str, head: str, label: str) -> None:
        """Refuse an unknown header that begins like a column of numbers, which must not be passed over."""
        first = folded(re.split(r"[\s,;:/(]", label.strip(), maxsplit=1)[0])
        if first in ("weight", "wt", "wt.") and any(c.label == "mass" for c in self.columns):
            raise InputError(
                argument,
                f"a {self.what} with known columns; got {shown(head)}",
                remedy="Write 'mass', with kg or lb; a weight in N is to be divided by g first",
                where="row 1",
            )
        alike = [
            n
            for c in (*self.columns, *self.more.values())
            for n in (c.label, *c.also)
            if c.kind is not None and folded(n).split()[0] == first
        ]
        if alike:
            close = difflib.get_close_matches(label, alike, n=1, cutoff=0.0)[0]
            raise InputError(
                argument,
                f"a {self.what} with known columns; got {shown(head)}",
                remedy=f"Write '{close}' and its unit in square brackets, or rename what is only a remark",
                where="row 1",
            )

    def _further(self, label: str) -> Column | None:
        """Return a further column by its exact label, or by the only one that differs in case."""
        if label in self.more:
            return self.more[label]
        loose = [c for n, c in self.more.items() if folded(n) == folded(label)]
        return loose[0] if len(loose) == 1 else None

    def _column(
        self, argument: str, c: Column, unit: str | None, cells: Sequence[Value], data: TableData
    ) -> Any:
        if c.kind is None:
            return self._texts(argument, c, cells, data)
        dimensionless = c.kind.si in ("", "-", "1")
        f = 1.0
        if unit:
            f = unit_factor(c.label, c.kind, unit, f"{argument}, row 1")
        types = set(map(type, cells))
        if types == {float} and (unit or dimensionless):
            values: NDArray[np.float64] = np.array(cells, dtype=float)
            if not np.isfinite(values).all():
                i = int(np.flatnonzero(~np.isfinite(values))[0])
                raise wrong(c.label, "a finite number", cells[i], where=f"{argument}, {data.where(i)}")
            values = values * f
        elif types == {float, NoneType} and (unit or dimensionless) and c.blanks and not c.required:
            values = np.array(cells, dtype=float) * f  # a blank becomes NaN
            if np.isnan(values).sum() != cells.count(None) or np.isinf(values).any():
                values = self._numbers(argument, c, unit, f, cells, data)
        else:
            values = self._numbers(argument, c, unit, f, cells, data)
        self._limited(argument, c, values, data)
        return values

    def _numbers(
        self, argument: str, c: Column, unit: str | None, f: float, cells: Sequence[Value], data: TableData
    ) -> NDArray[np.float64]:
        """Read a column cell by cell, naming the row of a bad one."""
        values = np.empty(len(cells))
        for i, v in enumerate(cells):
            values[i] = self._number(argument, c, unit, f, v, f"{argument}, {data.where(i)}")
        return values

    def _number(self, argument: str, c: Column, unit: str | None, f: float, v: Value, place: str) -> float:
        kind = c.kind
        assert kind is not None
        if v is None or v == "":
            if c.required or not c.blanks:
                raise wrong(c.label, asked(kind), v, where=place)
            return float("nan")
        if type(v) is float and v - v == 0.0:
            if unit or kind.si in ("", "-", "1"):
                return v * f
            raise InputError(
                argument,
                f"a {self.what} with units; column '{c.label}' has none",
                remedy=f"Write the header as '{header_of(c)}'",
                where=place.removeprefix(f"{argument}, "),
            )
        if type(v) is str and unit:
            value = quantity(c.label, kind, v, place)
            if v.strip()[-1] in "0123456789.":  # a number kept as text: in the column's unit
                value *= f
            return value
        return quantity(c.label, kind, v, place)

    def _limited(self, argument: str, c: Column, values: NDArray[np.float64], data: TableData) -> None:
        if c.limit is None:
            return
        there = values[~np.isnan(values)]
        if not there.size or (c.limit.allows(float(there.min())) and c.limit.allows(float(there.max()))):
            return  # a limit is an interval (zero apart, which no table column excludes)
        for i in np.flatnonzero(~np.isnan(values)):
            if not c.limit.allows(float(values[i])):
                assert c.kind is not None
                place = f"{argument}, {data.where(int(i))}"
                check_limit(c.label, c.kind, c.limit, float(values[i]), place)

    def _texts(self, argument: str, c: Column, cells: Sequence[Value], data: TableData) -> list[str]:
        out = []
        for i, v in enumerate(cells):
            if v is None:
                v = ""
            if type(v) is float:
                v = f"{v:.10g}"
            if type(v) is not str or (c.required and not v.strip()):
                raise wrong(
                    argument, f"a {self.what} with a text in column '{c.label}'", v, where=data.where(i)
                )
            out.append(v.strip())
        return out

    def words(self) -> str:
        return f"{self.what}: columns " + ", ".join(header_of(c) for c in self.columns if c.required)

    def sample(self) -> Cell:
        return [list(row) for row in self.example]


def header_of(c: Column) -> str:
    """Return the header cell of a column, with its SI unit."""
    if c.kind is None or c.kind.si in ("", "-", "1"):
        return c.label
    return f"{c.label} [{c.kind.si}]"
