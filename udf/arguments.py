"""Readers for numbers, vectors and tensors: what a cell or a small block of cells means."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ..core.errors import InputError, KindError
from . import kinds
from .cells import Block, Cell, CellError, Value
from .declaration import Reader, Role
from .frame import Upright
from .kinds import Kind
from .limits import NOT_NEGATIVE, Limit
from .numbers import split_quantity
from .units import factor

Array = NDArray[np.float64]
TURN: Final = 2.0 * math.pi
DECIMAL_COMMA: Final = re.compile(r"\d,\d")  # '(0,4, 1)' could be two numbers or three


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


@dataclass(frozen=True, slots=True)
class Scalar:
    """One quantity, or a column of them: float or (n,)."""

    kind: Kind
    role: Role = Role.SCALAR

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        kind, spellings = self.kind, self.kind.spellings
        angle = kind is kinds.ANGLE

        def read(cell: Cell) -> float | Array:
            t = type(cell)
            if t is float:
                if cell - cell == 0.0 and not angle and limit is None:  # type: ignore[operator]
                    return cell  # type: ignore[return-value]
                value: float | Array = quantity(argument, kind, cell)  # type: ignore[arg-type]
            elif t is str:
                value = quantity(argument, kind, cell)  # type: ignore[arg-type]
            elif t is list:
                value = self._block(argument, cell, spellings)  # type: ignore[arg-type]
            else:
                value = quantity(argument, kind, cell)  # type: ignore[arg-type]
            if limit is not None:
                check_limit(argument, kind, limit, value)
            return value

        return read

    def _block(self, argument: str, cell: Block, spellings: Any) -> float | Array:
        rows, columns = len(cell), len(cell[0])
        if rows * columns == 2:
            first, second = (cell[0][0], cell[0][1]) if columns == 2 else (cell[0][0], cell[1][0])
            if type(first) is float and type(second) is str and second != "":
                f = spellings.get(second)
                if f is not None or second.strip() in ("-", "1"):
                    f = unit_factor(argument, self.kind, second) if f is None else f
                    if first - first != 0.0:
                        raise wrong(argument, "a finite number", first)
                    return float(first * f)
            if is_unit_text(second):
                return beside_unit(argument, self.kind, first, str(second))
            if is_unit_text(first):
                raise unit_leads(argument, self.kind, cell)
            if columns == 2 and (second is None or second == ""):
                quantity(argument, self.kind, first)
                raise InputError(
                    argument,
                    f"{asked(self.kind)} with its unit; the unit cell beside {shown(first)} is blank",
                    remedy=f"Type the unit, like '{self.kind.si}'",
                )
        if columns == 1 or (columns == 2 and all(is_unit_text(row[1]) for row in cell)):
            return column(argument, self.kind, cell)
        if columns == 2:
            blank_unit(argument, self.kind, cell)
        raise wrong(argument, f"{asked(self.kind)}: one cell, a number beside its unit, or a column", cell)

    def words(self) -> str:
        unit = "" if self.kind.si in ("", "-", "1") else f" [{self.kind.si}]"
        return f"{self.kind.name}{unit}"

    def sample(self) -> Cell:
        return 0.5


def column(argument: str, kind: Kind, cell: Block) -> Array:
    """Read n x 1 cells (first or last may be the unit), or n x 2 of numbers beside units, as (n,)."""
    if len(cell[0]) == 2:
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


@dataclass(frozen=True, slots=True)
class Vector:
    """A vector in x y or x y z, or n of them: (2,), (3,), (n, 2) or (n, 3).

    `words` are read in place of numbers and given as they stand, like 'origin'.
    """

    kind: Kind
    words_for: tuple[str, ...] = ()
    example: tuple[tuple[float, ...], ...] = ((0.3, -0.4, 0.5),)
    role: Role = Role.VECTOR

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        kind = self.kind
        known = {folded(w): w for w in self.words_for}
        rule = f"{asked(kind)} vector: x y or x y z in two or three cells, then the unit"

        if known:
            rule += ", or " + " / ".join(f"'{w}'" for w in self.words_for)

        def read(cell: Cell) -> Array | str:
            if type(cell) is list:
                return vectors(argument, kind, cell, rule)
            if known and type(cell) is str and folded(cell) in known:
                return known[folded(cell)]
            if type(cell) is str and cell.lstrip().startswith("("):
                return vector_text(argument, kind, cell, rule)
            if type(cell) is float:
                raise wrong(argument, rule, single(cell))
            raise wrong(argument, rule, cell)

        return read

    def words(self) -> str:
        also = "".join(f" / {w}" for w in self.words_for)
        return f"{self.kind.name} vector [{self.kind.si}], x y or x y z{also}"

    def sample(self) -> Cell:
        return [list(row) for row in self.example]


@dataclass(frozen=True, slots=True)
class Spin:
    """An angular velocity, angular acceleration or couple: one number about z, or x y z.

    Gives a float or (n, 1) about z, (3,) or (n, 3) in space.
    """

    kind: Kind
    role: Role = Role.SPIN

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        kind = self.kind
        one = Scalar(kind).reader(argument, limit)
        rule = f"{asked(kind)}: one number about z, or x y z in three cells, then the unit"

        def in_space(spin: Array) -> Array:
            if spin.shape[-1] != 3:
                raise InputError(argument, f"{rule}; got two numbers")
            return spin

        def read(cell: Cell) -> float | Array | Upright:
            if type(cell) is list:
                rows, columns = len(cell), len(cell[0])
                if rows == 1 and columns in (3, 4) and not is_unit_text(cell[0][2]):
                    return vectors(argument, kind, cell, rule)
                if (
                    columns == 1
                    and (rows == 3 or (rows == 4 and is_unit_text(cell[-1][0])))
                    and not (is_unit_text(cell[0][0]) or is_unit_text(cell[2][0]))
                ):
                    spin = vectors(argument, kind, cell, rule)
                    return Upright(spin, spin[:, None])
                if columns in (3, 4):
                    return in_space(vectors(argument, kind, cell, rule))
            elif type(cell) is str and cell.lstrip().startswith("("):
                return in_space(vector_text(argument, kind, cell, rule))
            value = one(cell)
            if type(value) is float:
                return value
            return value[:, None]  # type: ignore[no-any-return]

        return read

    def words(self) -> str:
        return f"{self.kind.name} [{self.kind.si}], about z or x y z"

    def sample(self) -> Cell:
        return 1.25


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


@dataclass(frozen=True, slots=True)
class Offset:
    """A distance (or a column of them), or a vector x y / x y z: float, (3,), (n, 3).

    A column of distances is given along x, which is the same distance from the z axis.
    """

    kind: Kind
    role: Role = Role.OFFSET

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        kind = self.kind
        distance = Scalar(kind).reader(argument, NOT_NEGATIVE)
        vector = Vector(kind).reader(argument, limit)

        def read(cell: Cell) -> float | Array | Upright:
            if type(cell) is list:
                rows, columns = len(cell), len(cell[0])
                plain = all(type(c) is float for row in cell for c in row[:2])
                if columns > 1 and (rows > 1 or columns > 2 or plain):
                    return lifted(vector(cell))
            elif type(cell) is str and cell.lstrip().startswith("("):
                return lifted(vector(cell))
            if type(cell) is list and len(cell[0]) == 1 and three_numbers(cell):
                upright = Scalar(kind).reader(argument, None)(cell)
                return Upright(upright, along_x(upright))
            value = distance(cell)
            return value if type(value) is float else along_x(value)

        return read

    def words(self) -> str:
        return f"{self.kind.name} [{self.kind.si}], a distance or x y z"

    def sample(self) -> Cell:
        return [[0.3, -0.4, 0.5]]


def three_numbers(cell: Block) -> bool:
    """Say whether a column holds three numbers, perhaps with their unit first or last."""
    return len(cell) == 3 + (is_unit_text(cell[-1][0]) or is_unit_text(cell[0][0]))


def along_x(distances: Array) -> Array:
    return np.stack((distances, np.zeros_like(distances), np.zeros_like(distances)), axis=-1)


def lifted(vector: Array) -> Array:
    """Return a vector or rows of vectors with z = 0 where only x y was given."""
    if vector.shape[-1] == 3:
        return vector
    return np.concatenate((vector, np.zeros((*vector.shape[:-1], 1))), axis=-1)


@dataclass(frozen=True, slots=True)
class Tensor:
    """A symmetric 3 x 3 tensor with its unit in one extra row or column; `planar` lets one number pass."""

    kind: Kind
    planar: bool = False
    role: Role = Role.INERTIA

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        kind = self.kind
        one = Scalar(kind).reader(argument, limit)
        planar = self.planar

        def read(cell: Cell) -> float | Array:
            if type(cell) is list and min(len(cell), len(cell[0])) >= 3:
                return tensor(argument, kind, cell)
            if planar:
                return one(cell)  # type: ignore[no-any-return]
            raise wrong(argument, f"{asked(kind)} tensor: three rows of three numbers, then the unit", cell)

        return read

    def words(self) -> str:
        either = "about the axis, or " if self.planar else ""
        return f"{self.kind.name} [{self.kind.si}], {either}tensor 3 x 3"

    def sample(self) -> Cell:
        if self.planar:
            return 2.5
        return [[2.0, -0.1, 0.0], [-0.1, 3.0, 0.2], [0.0, 0.2, 4.0]]


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
