"""The frame of a call: planar or spatial, one row or many."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..core.errors import InputError
from .declaration import Arg, Role


@dataclass(frozen=True, slots=True)
class Upright:
    """Three numbers below each other where a spin is asked: x y z, or a column if the call has three rows."""

    array: Any

    def as_column(self) -> Any:
        return self.array[:, None]


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
        self._plain = not (self._vectors or self._spins)

    def align(self, values: list[Any]) -> tuple[list[Any], bool]:
        """Return the values with vectors and spins lifted to x y z, and whether the call is planar."""
        if self._plain:
            if any(type(values[i]) is np.ndarray for i in self._scalars):
                self._rows(values)
            return values, False
        spins, vectors = self._spins, self._vectors
        upright = [i for i in spins if type(values[i]) is Upright]
        rows = self._rows(values)
        for i in upright:
            values[i] = values[i].as_column() if rows == 3 else values[i].array
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

    def _rows(self, values: list[Any]) -> int:
        """Return the number of rows of the call; refuse columns of different length."""
        rows, first = 1, ""
        for i in (*self._vectors, *self._spins, *self._scalars):
            v = values[i]
            if type(v) is not np.ndarray or (self._roles[i] is Role.INERTIA and v.shape == (3, 3)):
                continue
            if self._roles[i] in (Role.VECTOR, Role.SPIN) and v.ndim == 1:
                continue
            if len(v) == 1:
                continue
            if rows == 1:
                rows, first = len(v), self._names[i]
            elif len(v) != rows:
                raise InputError(
                    self._names[i],
                    f"a column as long as `{first}`, {rows} rows, or one value; got {len(v)} rows",
                )
        return rows

    def first_row(self, values: list[Any]) -> tuple[list[Any], int]:
        """Return the aligned values of the first row alone, and how many rows there were."""
        rows = self._rows(values)
        if rows == 1:
            return values, 1
        out = list(values)
        for i in (*self._vectors, *self._spins):
            if type(out[i]) is np.ndarray and out[i].ndim == 2:
                out[i] = out[i][0]
        for i in self._scalars:
            if type(out[i]) is np.ndarray and out[i].ndim == 1:
                out[i] = float(out[i][0])
        return out, rows
