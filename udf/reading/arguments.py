"""Readers for numbers, vectors and tensors: what a cell or a small block of cells means."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from ...core.errors import InputError
from ..cells import Block, Cell
from ..declaration import Reader, Role
from ..frame import Upright
from ..limits import NOT_NEGATIVE, Limit
from ..units import kinds
from ..units.kinds import Kind
from ..units.quantities import (
    Array,
    asked,
    beside_unit,
    blank_unit,
    check_limit,
    column,
    folded,
    is_unit_text,
    quantity,
    shown,
    unit_factor,
    unit_leads,
    wrong,
)
from .blocks import along_x, lifted, numbers_in, single, tensor, vector_text, vectors
from .memory import remembered


@dataclass(frozen=True, slots=True)
class Scalar:
    """One quantity, or a column of them: float or (n,)."""

    kind: Kind
    role: Role = Role.SCALAR

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        kind, spellings = self.kind, self.kind.spellings
        angle = kind is kinds.ANGLE
        texts = remembered(lambda cell: quantity(argument, kind, cell))  # type: ignore[arg-type]

        def read(cell: Cell) -> float | Array:
            t = type(cell)
            if t is float:
                if cell - cell == 0.0 and not angle and limit is None:  # type: ignore[operator]
                    return cell  # type: ignore[return-value]
                value: float | Array = quantity(argument, kind, cell)  # type: ignore[arg-type]
            elif t is str:
                value = texts(cell)
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
        texts = remembered(lambda cell: vector_text(argument, kind, cell, rule))  # type: ignore[arg-type]

        def read(cell: Cell) -> Array | str:
            if type(cell) is list:
                return vectors(argument, kind, cell, rule)
            if known and type(cell) is str and folded(cell) in known:
                return known[folded(cell)]
            if type(cell) is str and cell.lstrip().startswith("("):
                return texts(cell)  # type: ignore[no-any-return]
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

        texts = remembered(lambda cell: in_space(vector_text(argument, kind, cell, rule)))  # type: ignore[arg-type]

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
                return texts(cell)  # type: ignore[no-any-return]
            value = one(cell)
            if type(value) is float:
                return value
            return value[:, None]  # type: ignore[no-any-return]

        return read

    def words(self) -> str:
        return f"{self.kind.name} [{self.kind.si}], about z or x y z"

    def sample(self) -> Cell:
        return 1.25


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
            if type(cell) is list and len(cell[0]) == 1 and numbers_in(cell) in (2, 3):
                upright = Scalar(kind).reader(argument, None)(cell)
                return Upright(lifted(upright), along_x(upright))
            value = distance(cell)
            return value if type(value) is float else along_x(value)

        return read

    def words(self) -> str:
        return f"{self.kind.name} [{self.kind.si}], a distance or x y z"

    def sample(self) -> Cell:
        return [[0.3, -0.4, 0.5]]


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
