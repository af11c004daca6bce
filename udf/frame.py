"""The frame of a call: planar or spatial, one row or many."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from ..core.errors import InputError
from .declaration import Arg, Role


@dataclass(frozen=True, slots=True)
class Upright:
    """Numbers below each other: x y z (of an offset x y too), or a column if the call has as many rows.

    `column` is what they are as a column: (3, 1) for a spin, (n, 3) along x for distances.
    """

    array: Any
    column: Any


class Frame:
    """Brings what the readers gave to one frame, so that kernels only see (..., 3) vectors.

    A call is planar when every vector came with two numbers and every spin as one number about z.
    Columns must have equal length; a single value serves every row.
    """

    def __init__(self, arguments: tuple[Arg, ...]) -> None:
        self._names = [a.name for a in arguments]
        self._roles = [a.shape.role for a in arguments]
        self._vectors = [i for i, r in enumerate(self._roles) if r is Role.VECTOR]
        self._spins = [i for i, r in enumerate(self._roles) if r is Role.SPIN]
        self._tensors = [i for i, r in enumerate(self._roles) if r is Role.INERTIA]
        self._scalars = [i for i, r in enumerate(self._roles) if r in (Role.SCALAR, Role.INERTIA)]
        self._offsets = [i for i, r in enumerate(self._roles) if r is Role.OFFSET]
        self._bundles = [i for i, r in enumerate(self._roles) if r is Role.BUNDLE]
        self._plain = not (self._vectors or self._spins)
        self._lone = not (self._offsets or self._bundles)

    def align(self, values: list[Any]) -> tuple[list[Any], bool]:
        """Return the values with vectors and spins lifted to x y z, and whether the call is planar."""
        if self._plain:
            if set(map(type, values)) == {float}:
                return values, False
            if not self._lone or any(type(values[i]) is np.ndarray for i in self._scalars):
                rows = self._rows(values)
                for i in self._offsets:
                    if type(values[i]) is Upright:
                        values[i] = self._offset(values, i, rows)
            return values, False
        spins, vectors = self._spins, self._vectors
        upright = [i for i in spins if type(values[i]) is Upright]
        rows = self._rows(values)
        if upright and rows != 3:
            self._tell_apart(values, upright[0])
        for i in upright:
            values[i] = values[i].column if rows == 3 else values[i].array
        # a tensor couples the axes: what it gives is never one number about z
        spatial = any(type(values[i]) is np.ndarray and values[i].shape == (3, 3) for i in self._tensors)
        planar = (
            not spatial
            and all(values[i].shape[-1] == 2 for i in vectors if type(values[i]) is np.ndarray)
            and not any(type(values[i]) is np.ndarray and values[i].shape[-1] == 3 for i in spins)
        )
        for i in vectors:
            v = values[i]
            if type(v) is np.ndarray and v.shape[-1] == 2:
                if v.ndim == 1:
                    values[i] = np.array((v[0], v[1], 0.0))
                else:
                    values[i] = np.concatenate((v, np.zeros((len(v), 1))), axis=1)
        for i in spins:
            v = values[i]
            if type(v) is float:
                values[i] = np.array((0.0, 0.0, v))
            elif type(v) is np.ndarray and v.shape[-1] == 1:
                values[i] = np.concatenate((np.zeros((len(v), 2)), v), axis=1)
        return values, planar

    def _tell_apart(self, values: list[Any], position: int) -> None:
        """Refuse three spins below each other where all else is planar: x y z would be a guess."""
        if any(_is_tensor(values[i]) for i in self._tensors):
            return
        vectors = [values[i].shape[-1] for i in self._vectors if type(values[i]) is np.ndarray]
        spins = [values[i] for i in self._spins]
        spatial = 3 in vectors or any(type(s) is np.ndarray and s.shape[-1] == 3 for s in spins)
        about_z = any(type(s) is float and s != 0.0 for s in spins)
        if not spatial and (vectors or about_z):
            raise InputError(
                self._names[position],
                "clear; three cells below each other are x y z or three cases",
                remedy="Write x y z side by side, or hand in three rows of the other arguments too",
            )

    def _offset(self, values: list[Any], position: int, rows: int) -> Any:
        """Return two or three offsets below each other as what the other arguments say they are."""
        upright: Upright = values[position]
        if any(_is_tensor(values[i]) for i in self._tensors):
            return upright.array
        if rows == len(upright.column):
            return upright.column
        count, axes = ("three", "x y z") if len(upright.column) == 3 else ("two", "x y")
        raise InputError(
            self._names[position],
            f"clear; {count} cells below each other are {axes} or {count} distances",
            remedy=f"Write {axes} side by side, or hand in {count} rows of the other arguments too",
        )

    def has_columns(self, values: list[Any]) -> bool:
        """Say whether the call has several rows."""
        return self._rows(values) > 1

    def _rows(self, values: list[Any]) -> int:
        """Return the number of rows of the call; refuse columns of different length."""
        rows, first = 1, ""
        for i, (value, role) in enumerate(zip(values, self._roles, strict=True)):
            if type(value) is float:
                continue
            for count in _lengths(value, role):
                if count == 1:
                    continue
                if rows == 1:
                    rows, first = count, self._names[i]
                elif count != rows:
                    raise InputError(
                        self._names[i],
                        f"a column as long as `{first}`, {rows} rows, or one value; got {count} rows",
                    )
        return rows

    def first_row(self, values: list[Any]) -> tuple[list[Any], int]:
        """Return the aligned values of the first row alone, and how many rows there were."""
        rows = self._rows(values)
        if rows == 1:
            return values, 1
        return [_first(v, role) for v, role in zip(values, self._roles, strict=True)], rows


def _is_tensor(value: Any) -> bool:
    return type(value) is np.ndarray and value.shape == (3, 3)


def _lengths(value: Any, role: Role) -> Sequence[int]:
    """Return the number of rows of each column that an argument holds."""
    if role is Role.BUNDLE:
        inner = value.values() if isinstance(value, dict) else (getattr(value, "number", None),)
        return [len(v) for v in inner if type(v) is np.ndarray and v.ndim]
    if type(value) is not np.ndarray or role is Role.OTHER:
        return ()
    if value.ndim == 1:
        return () if role in (Role.VECTOR, Role.SPIN, Role.OFFSET) else (len(value),)
    return () if role is Role.INERTIA and value.shape == (3, 3) else (len(value),)


def _first(value: Any, role: Role) -> Any:
    """Return the first row of what an argument holds."""
    if role is Role.BUNDLE:
        if isinstance(value, dict):
            return {k: _first(v, Role.SCALAR) for k, v in value.items()}
        return replace(value, number=_first(value.number, Role.SCALAR))
    if not any(_lengths(value, role)):
        return value
    return float(value[0]) if value.ndim == 1 else value[0]
