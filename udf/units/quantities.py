"""Reading one quantity or a column of them: a number, its unit, and the sentence when it is neither."""

from __future__ import annotations

import functools
import math
from collections.abc import Sequence
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ...core.errors import InputError, KindError
from ..cells import Block, CellError, Value
from ..limits import Limit
from . import kinds
from .factors import factor
from .kinds import Kind
from .numbers import split_quantity

Array = NDArray[np.float64]


TURN: Final = 2.0 * math.pi


@functools.lru_cache(maxsize=4096)
def folded(word: str) -> str:
    """Return a word as it is compared: lower case, single blanks, US spelling."""
    return " ".join(word.replace("_", " ").split()).casefold().replace("centre", "center")


def shown(cell: object) -> str:
    """Return how a cell that is not what was asked is named in a refusal."""
    if cell is None or cell == "":
        return "a blank cell"
    if isinstance(cell, bool):
        return f"the boolean {str(cell).upper()}"
    if isinstance(cell, CellError):
        return f"the error {cell.text}"
    if isinstance(cell, list):
        rows, columns = len(cell), len(cell[0]) if cell else 0
        return f"a block of {rows} x {columns} cells"
    if isinstance(cell, float):
        if cell != cell:
            return "NaN, which is not a number"
        return f"{cell:.10g}" if abs(cell) != math.inf else "a number beyond all bounds"
    text = str(cell)
    if text.startswith("the single number "):
        return text
    return f"'{text if len(text) <= 40 else text[:37] + '...'}'"


def wrong(argument: str, rule: str, cell: object, remedy: str = "", where: str = "") -> InputError:
    """Return the refusal of a cell that holds something else than was asked."""
    return InputError(argument, f"{rule}; got {shown(cell)}", remedy=remedy, where=where)


def asked(kind: Kind, limit: Limit | None = None) -> str:
    """Word what is asked: 'a length greater than zero [m]'."""
    name = kind.name
    text = f"{'an' if name[0] in 'aeiou' else 'a'} {name}"
    if limit is not None:
        text += f" {limit.words}"
    return text


def check_bare_angle(argument: str, value: float) -> None:
    if abs(value) > TURN:
        raise InputError(
            argument,
            f"an angle; got {value:.6g} without a unit, which is more than one turn in radians",
            remedy=f"Write the unit, like '{value:.6g} deg'",
        )


def check_limit(argument: str, kind: Kind, limit: Limit | None, value: Any, where: str = "") -> None:
    """Raise when `value` (SI float or array) lies outside `limit`."""
    if limit is None or limit.allows(value):
        return
    position, bad = limit.first_outside(value)
    if not where and type(value) is not float and value.size > 1:
        where = f"row {position + 1}"
    unit = "" if kind.si in ("", "-", "1") else f" {kind.si}"
    raise InputError(argument, f"{asked(kind, limit)}; got {bad:.6g}{unit}", where=where)


def quantity(argument: str, kind: Kind, cell: Value, where: str = "") -> float:
    """Read one cell as a number of `kind` in SI: a number, or a text of number and unit."""
    t = type(cell)
    if t is float:
        value = cell
        if value - value != 0.0:  # type: ignore[operator]
            raise wrong(argument, "a finite number", cell, where=where)
        if kind is kinds.ANGLE:
            check_bare_angle(argument, value)  # type: ignore[arg-type]
        return value  # type: ignore[return-value]
    if t is str and cell != "":
        try:
            number, unit = split_quantity(cell)  # type: ignore[arg-type]
        except InputError as refused:
            raise InputError(
                argument, f"{asked(kind)}; got {shown(cell)}", remedy=refused.remedy, where=where
            ) from None
        if not unit:
            if kind is kinds.ANGLE:
                check_bare_angle(argument, number)
            return number
        value = number * unit_factor(argument, kind, unit, where)
        if value - value != 0.0:
            raise wrong(argument, "a finite number", cell, where=where)
        return value
    raise wrong(argument, f"{asked(kind)}, as a number or with its unit", cell, where=where)


def unit_factor(argument: str, kind: Kind, unit: str, where: str = "") -> float:
    """Return the factor to SI of a unit text of `kind`, refusing with the place where it stood."""
    try:
        return factor(unit, kind, argument)
    except (KindError, InputError) as refused:
        if where:
            refused = type(refused)(
                refused.argument, refused.rule, refused.value, remedy=refused.remedy, where=where
            )
        raise refused from None


def beside_unit(argument: str, kind: Kind, cell: Value, unit: str, where: str = "") -> float:
    """Read a number whose unit stands in a cell of its own, refusing a second unit in the number's cell."""
    f = unit_factor(argument, kind, unit, where)
    if type(cell) is str and cell.strip():
        number, own = quantity_parts(argument, kind, cell, where)
        if own:
            raise InputError(
                argument,
                f"{asked(kind)} with one unit; got two units, {shown(cell)} beside {shown(unit)}",
                where=where,
            )
        return number * f
    if type(cell) is float and cell - cell == 0.0:
        value = cell * f
        return value if value - value == 0.0 else quantity(argument, kind, value, where)
    raise wrong(argument, f"a number in {unit.strip()}", cell, where=where)


def blank_unit(argument: str, kind: Kind, cell: Block) -> None:
    """Refuse numbers beside units where one of the unit cells is blank."""
    if any(is_unit_text(row[-1]) for row in cell):
        for i, row in enumerate(cell, 1):
            if row[-1] is None or row[-1] == "":
                raise InputError(
                    argument,
                    f"{asked(kind)} with a unit in each row; the unit cell is blank",
                    remedy=f"Type the unit, like '{kind.si}'",
                    where=f"row {i}",
                )


def is_unit_text(cell: Value) -> bool:
    """Say whether a cell can only be a unit text: text that does not begin like a number."""
    if type(cell) is not str:
        return False
    text = cell.strip()
    return text != "" and (text[0] not in "0123456789+-−.,(" or text.startswith("1/"))


def unit_leads(argument: str, kind: Kind, cell: Block) -> InputError:
    return InputError(
        argument,
        f"{asked(kind)} with the unit after the number; got the unit {shown(cell[0][0])} first",
        remedy="Put the number first and the unit beside or below it",
    )


def column(argument: str, kind: Kind, cell: Block) -> Array:
    """Read n x 1 cells (first or last may be the unit), or n x 2 of numbers beside units, as (n,)."""
    if len(cell[0]) == 2:
        units = {row[1] for row in cell}
        given = [row[0] for row in cell]
        if len(units) == 1 and set(map(type, given)) == {float}:
            same: Array = np.array(given, dtype=float) * unit_factor(argument, kind, str(cell[0][1]), "row 1")
            if np.isfinite(same).all():
                return same
        values = [
            beside_unit(argument, kind, row[0], str(row[1]), f"row {i}") for i, row in enumerate(cell, 1)
        ]
        return np.array(values)
    cells = [row[0] for row in cell]
    f = 1.0
    start = 1
    if len(cells) > 1 and is_unit_text(cells[-1]):
        f = unit_factor(argument, kind, str(cells[-1]))
        cells = cells[:-1]
    elif len(cells) > 1 and is_unit_text(cells[0]):
        if len(cells) == 2:
            raise unit_leads(argument, kind, cell)
        f = unit_factor(argument, kind, str(cells[0]))
        cells, start = cells[1:], 2
    return f * numbers(argument, kind, cells, start, united=len(cells) < len(cell))


def numbers(argument: str, kind: Kind, cells: Sequence[Value], start: int = 1, united: bool = False) -> Array:
    """Read a sequence of cells as (n,), each a number or a text with unit; names the row of a bad one."""
    if set(map(type, cells)) == {float} and (united or kind is not kinds.ANGLE):
        values = np.array(cells, dtype=float)
        if np.isfinite(values).all():
            return values
    out = np.empty(len(cells))
    for i, c in enumerate(cells):
        where = f"row {i + start}"
        if united and type(c) is float and c - c == 0.0:
            out[i] = c
            continue
        if united and type(c) is str and c != "":
            number, unit = quantity_parts(argument, kind, c, where)
            if unit:
                raise InputError(
                    argument, f"numbers in one unit; got {shown(c)} in a column with a unit", where=where
                )
            out[i] = number
            continue
        out[i] = quantity(argument, kind, c, where)
    return out


def quantity_parts(argument: str, kind: Kind, text: str, where: str) -> tuple[float, str]:
    """Split a text into number and unit, wording a refusal for `argument`."""
    try:
        return split_quantity(text)
    except InputError as refused:
        raise InputError(
            argument, f"{asked(kind)}; got {shown(text)}", remedy=refused.remedy, where=where
        ) from None
