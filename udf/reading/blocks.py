"""Reading blocks of cells as vectors, rows of vectors and tensors."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from itertools import chain
from typing import Final

import numpy as np

from ...core.errors import InputError
from ..cells import Block, Value
from ..units import kinds
from ..units.kinds import Kind
from ..units.quantities import (
    Array,
    asked,
    beside_unit,
    blank_unit,
    is_unit_text,
    numbers,
    quantity,
    quantity_parts,
    shown,
    unit_factor,
    wrong,
)

DECIMAL_COMMA: Final = re.compile(r"\d,\d")  # '(0,4, 1)' could be two numbers or three


def single(cell: float) -> Value:
    """Return how one number is named where several are asked."""
    return f"the single number {cell:.6g}" if math.isfinite(cell) else cell


def vector_text(argument: str, kind: Kind, text: str, rule: str) -> Array:
    """Read '(0.4, 0, -0.2) m', the way a vector is written in one cell."""
    inside, closed, unit = text.strip()[1:].partition(")")
    if DECIMAL_COMMA.search(inside):
        raise wrong(
            argument,
            rule,
            text,
            remedy="Write a blank after each comma, and decimals with a point: '(0.4, 0.25) m'",
        )
    parts = [p.strip() for p in inside.split(",")]
    if not closed or len(parts) not in (2, 3) or any(not p for p in parts):
        raise wrong(argument, rule, text, remedy=f"Write '(0.4, 0.25) {kind.si}' when it stands in one cell")
    f = unit_factor(argument, kind, unit.strip()) if unit.strip() else 1.0
    values = []
    for p in parts:
        number, own = quantity_parts(argument, kind, p, "")
        if own and unit.strip():
            raise wrong(argument, rule, text, remedy="Write the unit once, after the bracket")
        values.append(number * (unit_factor(argument, kind, own) if own else f))
    return np.array(values)


def vectors(argument: str, kind: Kind, cell: Block, rule: str) -> Array:
    """Read a block as one vector or as n vectors."""
    rows, columns = len(cell), len(cell[0])
    if rows == 1:
        return line(argument, kind, cell[0], rule)
    if columns == 1:
        return line(argument, kind, [r[0] for r in cell], rule)
    # numbers beside their units (downward), or numbers over their units: one vector, a unit for each part
    if columns == 2 and rows in (2, 3) and all(is_unit_text(r[1]) for r in cell):
        return parts_with_units(argument, kind, [r[0] for r in cell], [str(r[1]) for r in cell])
    if columns == 2 and rows in (2, 3) and type(cell[0][0]) is float:
        blank_unit(argument, kind, cell)
    if rows == 2 and columns in (2, 3) and all(map(is_unit_text, cell[1])):
        return parts_with_units(argument, kind, cell[0], [str(u) for u in cell[1]])
    return many_vectors(argument, kind, cell, rule)


def many_vectors(argument: str, kind: Kind, cell: Block, rule: str) -> Array:
    """Read n x 2 or n x 3 numbers, with units in a first or last row or in a last column."""
    start = 1
    units: list[str] | None = None
    if all(map(is_unit_text, cell[-1])):
        units, cell = [str(u) for u in cell[-1]], cell[:-1]
    elif all(map(is_unit_text, cell[0])):
        units, cell, start = [str(u) for u in cell[0]], cell[1:], 2
    columns = len(cell[0])
    if units is None and columns in (2, 3) and kind is not kinds.ANGLE:
        flat = list(chain.from_iterable(cell))
        if set(map(type, flat)) == {float}:
            plain = np.array(flat, dtype=float)
            if np.isfinite(plain).all():
                return plain.reshape(-1, columns)
    if units is None and columns in (3, 4) and all(is_unit_text(r[-1]) for r in cell):
        body = [line(argument, kind, r, rule, f"row {i}") for i, r in enumerate(cell, 1)]
        return np.array(body)
    if units is None and columns in (3, 4):
        blank_unit(argument, kind, cell)
    if columns not in (2, 3) or not cell:
        raise wrong(argument, rule, cell)
    out = np.empty((len(cell), columns))
    for j in range(columns):
        f = unit_factor(argument, kind, units[j]) if units else 1.0
        out[:, j] = f * numbers(argument, kind, [r[j] for r in cell], start, united=units is not None)
    return out


def line(argument: str, kind: Kind, cells: Sequence[Value], rule: str, where: str = "") -> Array:
    """Read two or three numbers, then perhaps the unit, as one vector."""
    count = len(cells)
    unit = str(cells[-1]) if count in (3, 4) and is_unit_text(cells[-1]) else None
    body = cells[:-1] if unit is not None else cells
    if len(body) == 2 and unit is None and type(cells[0]) is float and is_unit_text(cells[1]):
        raise wrong(argument, rule, single(cells[0]), where=where)
    if len(body) not in (2, 3):
        raise wrong(argument, rule, [list(cells)], where=where)
    if is_unit_text(body[0]):
        raise InputError(
            argument,
            f"a vector with the unit after the numbers; got {shown(body[0])} first",
            remedy="Put the numbers first and the unit after them",
            where=where,
        )
    if unit is None:
        if type(body[0]) is float and type(body[1]) is float and (len(body) == 2 or type(body[2]) is float):
            values = np.array(body, dtype=float)
            if math.isfinite(body[0] + body[1] + (body[2] if len(body) == 3 else 0.0)):  # type: ignore[operator]
                return values
        return np.array(
            [quantity(argument, kind, c, where or f"component {'xyz'[i]}") for i, c in enumerate(body)]
        )
    f = unit_factor(argument, kind, unit, where)
    if all(type(c) is float for c in body):
        values = np.array(body, dtype=float) * f
        if np.isfinite(values).all():
            return values
    return np.array(
        [beside_unit(argument, kind, c, unit, where or f"component {'xyz'[i]}") for i, c in enumerate(body)]
    )


def parts_with_units(argument: str, kind: Kind, cells: Sequence[Value], units: Sequence[str]) -> Array:
    return np.array(
        [
            beside_unit(argument, kind, c, u, f"component {'xyz'[i]}")
            for i, (c, u) in enumerate(zip(cells, units, strict=True))
        ]
    )


def numbers_in(cell: Block) -> int:
    """Return how many numbers a column holds, perhaps with their unit first or last."""
    return len(cell) - (is_unit_text(cell[-1][0]) or is_unit_text(cell[0][0]))


def along_x(distances: Array) -> Array:
    return np.stack((distances, np.zeros_like(distances), np.zeros_like(distances)), axis=-1)


def lifted(vector: Array) -> Array:
    """Return a vector or rows of vectors with z = 0 where only x y was given."""
    if vector.shape[-1] == 3:
        return vector
    return np.concatenate((vector, np.zeros((*vector.shape[:-1], 1))), axis=-1)


def tensor(argument: str, kind: Kind, cell: Block) -> Array:
    """Read 3 x 3, 3 x 4, 4 x 3, or 4 x 4 with the unit in the corner; refuse what is not symmetric."""
    rule = f"{asked(kind)} tensor: three rows of three numbers, then the unit"
    rows, columns = len(cell), len(cell[0])
    units: list[Value] = []
    if (rows, columns) == (3, 4):
        units, body = [r[3] for r in cell], [r[:3] for r in cell]
    elif (rows, columns) == (4, 3):
        units, body = list(cell[3]), cell[:3]
    elif (rows, columns) == (4, 4):
        units, body = [cell[0][0]], [r[1:] for r in cell[1:]]
    elif (rows, columns) == (3, 3):
        body = cell
    else:
        raise wrong(argument, rule, cell)
    words = {str(u).strip() for u in units if u is not None and u != ""}
    if units and (len(words) != 1 or not is_unit_text(next(iter(words)))):
        raise InputError(
            argument, f"{asked(kind)} tensor with one unit; got {len(words)} units in the extra cells"
        )
    f = unit_factor(argument, kind, words.pop()) if words else 1.0
    out = np.empty((3, 3))
    for i, r in enumerate(body):
        for j, c in enumerate(r):
            if type(c) is not float or c - c != 0.0:
                raise wrong(argument, "nine numbers", c, where=f"term {'xyz'[i]}{'xyz'[j]}")
            out[i, j] = c * f
    gap = np.abs(out - out.T)
    if gap.max() > 1e-6 * np.abs(out).max():
        i, j = divmod(int(gap.argmax()), 3)
        a, b = "xyz"[i] + "xyz"[j], "xyz"[j] + "xyz"[i]
        raise InputError(argument, f"symmetric; got {a} = {out[i, j] / f:.6g} but {b} = {out[j, i] / f:.6g}")
    return 0.5 * (out + out.T)
