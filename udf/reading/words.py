"""Readers for words: choices, free text, quantities of any kind, and the cells of another call."""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from typing import Any, Final

import numpy as np

from ...core.errors import InputError
from ..cells import Cell, Value
from ..declaration import Reader, Role
from ..limits import Limit
from ..units.numbers import split_quantity
from ..units.quantities import folded, is_unit_text, shown, wrong


def nearest(word: str, known: Iterable[str]) -> str | None:
    """Return the known word a typing slip probably meant, or None."""
    table = {folded(k): k for k in known}
    hits = difflib.get_close_matches(folded(word), list(table), n=1, cutoff=0.75)
    return table[hits[0]] if hits else None


def hint(word: str, known: Iterable[str]) -> str:
    """Return 'Did you mean ...?' or the list of what is known."""
    known = list(known)
    close = nearest(word, known)
    if close is not None:
        return f"Did you mean '{close}'?"
    text = "Known: " + ", ".join(known)
    return text if len(text) <= 150 else text[: text.rfind(",", 0, 140)] + ", ..."


@dataclass(frozen=True, slots=True)
class Choice:
    """One of a few words; `also` maps further spellings to them."""

    options: tuple[str, ...]
    also: Mapping[str, str] = field(default_factory=dict)
    role: Role = Role.OTHER

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        table = {folded(o): o for o in self.options}
        table.update({folded(a): o for a, o in self.also.items()})
        rule = "one of the words " + ", ".join(f"'{o}'" for o in self.options)
        options = self.options

        def read(cell: Cell) -> str:
            if type(cell) is str:
                found = table.get(cell) or table.get(folded(cell))
                if found is not None:
                    return found
                if cell.strip():
                    if len(rule) > 120:
                        raise InputError(argument, "a known word", cell, remedy=hint(cell, options))
                    raise wrong(argument, rule, cell)
            raise wrong(argument, rule if len(rule) <= 120 else "a known word", cell)

        return read

    def words(self) -> str:
        return " / ".join(self.options)

    def sample(self) -> Cell:
        return self.options[0]


@dataclass(frozen=True, slots=True)
class Text:
    """Any text that is not empty."""

    role: Role = Role.OTHER
    example: str = "arm"

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        def read(cell: Cell) -> str:
            if type(cell) is str and cell.strip():
                return cell.strip()
            raise wrong(argument, "a text", cell)

        return read

    def words(self) -> str:
        return "text"

    def sample(self) -> Cell:
        return self.example


@dataclass(frozen=True, slots=True)
class Amount:
    """A quantity of whatever kind: the number (or a column) as written and its unit text, '' without one.

    Numbers that came without a unit stay as they are; what the unit means is settled by the function.
    """

    number: Any
    unit: str


@dataclass(frozen=True, slots=True)
class AnyQuantity:
    """One quantity of whatever kind, or a column of numbers with one unit."""

    role: Role = Role.BUNDLE

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        def read(cell: Cell) -> Amount:
            if type(cell) is not list:
                return one_amount(argument, cell)
            flat = [c for row in cell for c in row]
            if len(flat) == 2 and is_unit_text(flat[0]) and type(flat[1]) is float:
                raise InputError(
                    argument,
                    f"{AMOUNT}; got the unit {shown(flat[0])} first",
                    remedy="Put the number first and the unit beside or below it",
                )
            if len(flat) == 2 and is_unit_text(flat[1]):
                amount = one_amount(argument, flat[0])
                if amount.unit:
                    raise InputError(argument, f"{AMOUNT}; got two units, '{amount.unit}' and '{flat[1]}'")
                return Amount(amount.number, str(flat[1]).strip())
            if len(flat) == 2 and len(cell) == 1 and flat[1] in (None, ""):
                raise InputError(argument, f"{AMOUNT}; the unit cell beside {shown(flat[0])} is blank")
            if len(cell[0]) == 1:
                return amounts(argument, flat)
            if len(cell[0]) == 2 and all(is_unit_text(unit) for unit in flat[1::2]):
                if len({str(unit).strip() for unit in flat[1::2]}) > 1:
                    raise InputError(argument, "a column in one unit; the units beside the numbers differ")
                return amounts(argument, [*flat[::2], flat[1]])
            raise wrong(argument, AMOUNT, cell)

        return read

    def words(self) -> str:
        return "number with its unit"

    def sample(self) -> Cell:
        return "400 mm"


AMOUNT: Final = "a number with its unit, as '400 mm' or in two cells"


def one_amount(argument: str, cell: Any, where: str = "") -> Amount:
    """Read one cell as a number and the unit text behind it."""
    if type(cell) is float and cell - cell == 0.0:
        return Amount(cell, "")
    if type(cell) is str and cell.strip():
        try:
            return Amount(*split_quantity(cell))
        except InputError as refused:
            raise InputError(
                argument, f"{AMOUNT}; got {shown(cell)}", remedy=refused.remedy, where=where
            ) from None
    raise wrong(argument, AMOUNT, cell, where=where)


def amounts(argument: str, cells: list[Value]) -> Amount:
    """Read a column: numbers with the unit first or last, or texts that all carry the same unit."""
    unit, start = "", 1
    if is_unit_text(cells[-1]):
        unit, cells = str(cells[-1]).strip(), cells[:-1]
    elif is_unit_text(cells[0]):
        unit, cells, start = str(cells[0]).strip(), cells[1:], 2
    if set(map(type, cells)) == {float}:
        plain = np.array(cells, dtype=float)
        if np.isfinite(plain).all():
            return Amount(plain, unit)
    read = [one_amount(argument, c, f"row {i}") for i, c in enumerate(cells, start)]
    units = {a.unit for a in read}
    if len(units) > 1 or (unit and units != {""}):
        raise InputError(argument, "a column in one unit", remedy="Write the unit once, below the numbers")
    return Amount(np.array([a.number for a in read]), unit or units.pop())


@dataclass(frozen=True, slots=True)
class Rest:
    """The arguments of another function, passed on as they are (always the last argument)."""

    role: Role = Role.OTHER

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        return lambda cell: cell

    def words(self) -> str:
        return "the same arguments"

    def sample(self) -> Cell:
        return 1.0
