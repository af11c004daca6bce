"""Readers for records: rows of label, value and unit, or one text."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

from ...core.errors import InputError, RigidsheetError
from ..cells import Block, Cell, Value
from ..declaration import Reader, Role, Shape
from ..limits import Limit
from ..units.quantities import folded, is_unit_text, shown, wrong
from .memory import remembered
from .tables import label_and_unit
from .words import hint


@dataclass(frozen=True, slots=True)
class Entry:
    """A line of a record: a label, what its value may look like, or one of some words."""

    label: str
    shape: Shape | None
    help: str
    also: tuple[str, ...] = ()
    limit: Limit | None = None
    words: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Record:
    """Rows of label, value and unit, or one text like 'OD 114.3 mm; L 520 mm'.

    Gives a dict from label to what the entry's reader returns. `finish` turns it into what a kernel takes.
    """

    entries: tuple[Entry, ...]
    what: str
    example: tuple[tuple[Value, ...], ...]
    finish: Callable[[str, dict[str, Any]], Any] | None = None
    role: Role = Role.OTHER
    readers: Mapping[str, Reader] = field(default_factory=dict)

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        known = {folded(n): e for e in self.entries for n in (e.label, *e.also)}
        readers = {
            e.label: e.shape.reader(argument, e.limit) if e.shape is not None else None for e in self.entries
        }

        def read(cell: Cell) -> Any:
            if type(cell) is str and cell.strip():
                lines = text_lines(argument, cell, self.what, known)
            elif type(cell) is list and len(cell[0]) >= 2:
                lines = block_lines(argument, cell, self.what)
            else:
                raise wrong(argument, f"a {self.what}: rows of label, value and unit", cell)
            out: dict[str, Any] = {}
            for label, value, where in lines:
                e = known.get(folded(label))
                if e is None:
                    raise InputError(
                        argument,
                        f"a {self.what} with known labels; got {shown(label)}",
                        remedy=hint(label, [x.label for x in self.entries]),
                        where=where,
                    )
                if e.label in out:
                    raise InputError(
                        argument, f"a {self.what} with each label once; '{e.label}' stands twice", where=where
                    )
                out[e.label] = entry_value(argument, e, readers[e.label], value, where)
            return out if self.finish is None else self.finish(argument, out)

        return remembered(read)

    def words(self) -> str:
        return f"{self.what}: label, value, unit (" + ", ".join(e.label for e in self.entries[:8]) + ")"

    def sample(self) -> Cell:
        return [list(row) for row in self.example]


def entry_value(argument: str, e: Entry, reader: Reader | None, value: Cell, where: str) -> Any:
    """Read the value of one record line, naming the label in a refusal."""
    if type(value) is str and e.words:
        word = {folded(w): w for w in e.words}.get(folded(value))
        if word is not None:
            return word
    if reader is None:
        place = f"{argument}, {where}" if where else argument
        raise wrong(e.label, f"one of the words {', '.join(repr(w) for w in e.words)}", value, where=place)
    try:
        return reader(value)
    except RigidsheetError as refused:
        place = f"{argument}, {where}" if where else argument
        remedy = refused.remedy
        if e.words and not remedy:
            remedy = "Or write " + " or ".join(f"'{w}'" for w in e.words)
        raise type(refused)(e.label, refused.rule, refused.value, remedy=remedy, where=place) from None


def block_lines(argument: str, cell: Block, what: str) -> list[tuple[str, Cell, str]]:
    """Return (label, value cell or block, where) of each filled row; a header row 'label | value' is passed over."""
    out: list[tuple[str, Cell, str]] = []
    for i, row in enumerate(cell, 1):
        filled = [j for j, c in enumerate(row) if c is not None and c != ""]
        if not filled:
            continue
        label = row[0]
        where = f"row {i}"
        if type(label) is not str or not label.strip():
            raise InputError(
                argument, f"a {what} with the label in the first column; got {shown(label)}", where=where
            )
        label, unit = label_and_unit(label)
        if i == 1 and folded(label) in ("label", "item", "name") and type(row[1]) is str:
            continue
        values = list(row[1 : filled[-1] + 1])
        if not values:
            values = [row[1]]
        if len(filled) == 3 and filled[1] == 1 and is_unit_text(values[-1]):
            values = [values[0], values[-1]]  # one number, its unit in the column of units
        if unit:  # 'omega [rpm] | 30': the unit stands with the label
            if len(values) > 1 and is_unit_text(values[-1]):
                raise InputError(
                    argument,
                    f"a {what} with one unit a row; got '{unit}' and {shown(values[-1])}",
                    where=where,
                )
            values.append(unit)
        out.append((label, values[0] if len(values) == 1 else [values], where))
    if not out:
        raise InputError(argument, f"a {what}: rows of label, value and unit; all cells are blank")
    return out


def text_lines(
    argument: str, text: str, what: str, known: Mapping[str, Entry]
) -> list[tuple[str, Cell, str]]:
    """Split 'OD 114.3 mm; L 520 mm' into lines, the label being the longest known one that leads."""
    out: list[tuple[str, Cell, str]] = []
    for piece in text.split(";"):
        piece = piece.strip()
        if not piece:
            continue
        tokens = piece.replace("=", " ", 1).split()
        for n in range(len(tokens) - 1, 0, -1):
            label = " ".join(tokens[:n])
            if folded(label) in known:
                break
        else:
            n = next((k for k, t in enumerate(tokens) if not t[0].isalpha()), min(1, len(tokens) - 1)) or 1
            label = " ".join(tokens[:n])
        value = " ".join(tokens[n:])
        if not value:
            raise InputError(
                argument, f"a {what} like 'OD 114.3 mm; L 520 mm'; got {shown(piece)} without a value"
            )
        out.append((label, value, ""))
    return out
