"""Load cases with one value each: names in the first column, the value in the last number column."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ...core.errors import InputError
from ..cells import Block, Cell, Value
from ..declaration import Reader, Role
from ..limits import Limit
from ..units.amounts import shared_kind
from ..units.factors import readings
from ..units.quantities import is_unit_text, shown, wrong
from .memory import remembered
from .tables import TOTAL, label_and_unit
from .words import one_amount

# Texts that stand where a value is missing or was mistyped: signs, numbers, spreadsheet errors, 'n/a'.
NO_LABEL: Final = re.compile(
    r"[\W_]*\d|[-−–—.?*/ ]+\Z|#|=|(n\.? ?/? ?a\.?|nan|none|nil|inf|tb[acd]|pending|ok|fail|true|false)\Z",
    re.IGNORECASE,
)


@dataclass(frozen=True, eq=False, slots=True)
class CaseValues:
    """Names of the cases, their values (n,) in one unit, and that unit as text."""

    names: tuple[str, ...]
    values: NDArray[np.float64]
    unit: str


@dataclass(frozen=True, slots=True)
class Cases:
    """Rows of name ... value, perhaps with the unit in a header `torque [N*m]`, in a last column, or in the texts."""

    role: Role = Role.OTHER

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        rule = "load cases: names in the first column, values in the last number column"

        def read(cell: Cell) -> CaseValues:
            if type(cell) is not list or len(cell[0]) < 2:
                raise wrong(argument, rule, cell)
            return read_cases(argument, cell)

        return remembered(read)

    def words(self) -> str:
        return "rows of case name and value"

    def sample(self) -> Cell:
        return [["case", "torque [N*m]"], ["empty", 410.0], ["full", 1320.0], ["fruit stuck", -1490.0]]


def read_cases(argument: str, cell: Block) -> CaseValues:
    rows = [(i, r) for i, r in enumerate(cell, 1) if any(c is not None and c != "" for c in r)]
    if not rows:
        raise InputError(argument, "load cases with rows; all cells are blank")
    unit = ""
    if _is_header(rows[0][1]):
        head = rows[0][1]
        rows = rows[1:]
        last = next((c for c in reversed(head) if type(c) is str and c.strip()), "")
        unit = label_and_unit(str(last))[1] or ""
    if not rows:
        raise InputError(argument, "load cases with rows; only the header is filled in")
    beside = all(is_unit_text(r[-1]) for _, r in rows) and len(rows[0][1]) > 2
    names, numbers, units = [], [], []
    for i, r in rows:
        body = r[:-1] if beside else r
        name, value = r[0], body[-1]
        where = f"row {i}" + (f", '{name}'" if type(name) is str else "")
        if type(name) is not str or not name.strip():
            raise InputError(
                argument, f"load cases with a name in the first column; got {shown(name)}", where=where
            )
        if TOTAL.match(name):
            raise InputError(argument, "load cases without a total row", where=where)
        amount = one_amount(argument, value, where)
        names.append(name.strip())
        numbers.append(amount.number)
        units.append(_unit(argument, amount.unit, r[-1] if beside else None, where))
    twice = next((n for k, n in enumerate(names) if n in names[:k]), None)
    if twice is not None:
        raise InputError(argument, f"load cases with different names; '{twice}' stands twice")
    return in_one_unit(argument, tuple(names), np.array(numbers), units, unit)


def _is_header(row: Sequence[Value]) -> bool:
    """Say whether a first row names its columns; a case whose value is no number must not pass for one."""
    if any(c is not None and type(c) is not str for c in row):
        return False
    labels = [c.strip() for c in row[1:] if type(c) is str and c.strip()]
    return bool(labels) and not any(NO_LABEL.match(c) for c in labels)


def _unit(argument: str, own: str, beside: Value, where: str) -> str:
    if own and beside is not None:
        raise InputError(argument, "load cases with one unit a value", where=where)
    return own or (str(beside).strip() if beside is not None else "")


def in_one_unit(
    argument: str, names: tuple[str, ...], values: Any, units: list[str], header: str
) -> CaseValues:
    """Bring all values to the unit of the header, or of the first case."""
    given = [u for u in units if u]
    target = header or (given[0] if given else "")
    if given and len(given) < len(units) and not header:
        raise InputError(
            argument, "load cases that all have a unit, or none", where=f"'{names[units.index('')]}'"
        )
    if target:
        readings(target)
    for k, u in enumerate(units):
        if u and u != target:
            _, f, g = shared_kind(argument, target, u)
            values[k] *= g / f
    return CaseValues(names, values, target)
