"""Patterns of a parts list: several pieces of one row, in one place, on a circle or on a line."""

from __future__ import annotations

from typing import Final

import numpy as np

from ...core.errors import InputError
from ...core.tensors import turned
from ...core.vectors import rotation_matrix
from ..units.quantities import Array, folded, shown
from .tables import TableData

ONE_PLACE, CIRCLE, LINE = "one place", "circle", "line"
XYZ: Final = ("x", "y", "z")


def pattern_of(
    data: TableData, i: int, count: int, mass: float, center: Array, tensor: Array
) -> tuple[Array, Array]:
    """Return mass center and tensor of all pieces of a row together."""
    where = data.where(i)
    text = folded(data.texts("pattern")[i])
    kind, _, axis = text.partition(" ")
    point = np.array([data.numbers(f"pattern {k}")[i] for k in XYZ])
    filled = np.where(np.isnan(point), 0.0, point)
    if text in (ONE_PLACE, "same place"):
        return center, tensor * count
    if kind == CIRCLE and axis.removeprefix("about ") in XYZ:
        direction = np.eye(3)["xyz".index(axis[-1])]
        turns = rotation_matrix(direction, 2.0 * np.pi * np.arange(count) / count)
        centers = filled + (turns @ (center - filled)[:, None])[..., 0]
        tensors = turned(tensor, turns)
    elif text == LINE:
        if not np.any(filled != 0.0):
            raise InputError(
                "pattern", "a line with its step in pattern x, pattern y or pattern z", where=where
            )
        centers = center + np.arange(count)[:, None] * filled
        tensors = np.repeat(tensor[None], count, axis=0)
    else:
        raise InputError(
            "pattern",
            f"told when qty is {count}: 'one place', 'circle x', 'circle y', 'circle z' or 'line'"
            + (f"; got {shown(data.texts('pattern')[i])}" if text else ""),
            where=where,
        )
    middle = centers.mean(axis=0)
    arms = centers - middle
    square = (arms * arms).sum(axis=1)
    spread = mass * (square.sum() * np.eye(3) - arms.T @ arms)
    return middle, tensors.sum(axis=0) + spread
