"""Outlines of plates at the cell boundary: corners in a block, or a table that also holds the holes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ...core.errors import InputError
from ...core.plates import Section, plate_section
from ..cells import Cell
from ..declaration import Reader, Role
from ..limits import POSITIVE, Limit
from ..units import kinds
from ..units.quantities import folded, wrong
from .arguments import Vector
from .memory import remembered
from .tables import Column, Table, TableData

Array = NDArray[np.float64]
OUTLINE: Final = "outline"

LOOPS: Final = Table(
    columns=(
        Column(
            "loop", None, "outline, or the name of a cut-out or round hole", also=("name",), required=True
        ),
        Column("x", kinds.LENGTH, "corner, or center of a round hole", required=True),
        Column("y", kinds.LENGTH, "corner, or center of a round hole", required=True),
        Column("D", kinds.LENGTH, "diameter of a round hole", also=("dia", "diameter"), limit=POSITIVE),
    ),
    what="plate outline",
    example=(
        ("loop", "x [mm]", "y [mm]"),
        ("outline", 0.0, 0.0),
        ("outline", 600.0, 0.0),
        ("outline", 0.0, 400.0),
    ),
)


@dataclass(frozen=True, eq=False, slots=True)
class OutlineRead:
    """Corners (n, 2) [m], cut-outs by name as corners (m, 2) [m], round holes (k, 3) as x, y, D [m]."""

    corners: Array
    holes: dict[str, Array]
    round_holes: Array
    section: Section


def outline_of(corners: Array, holes: dict[str, Array], round_holes: Array) -> OutlineRead:
    """Return an outline with its section, refused when no plate can be cut to it."""
    section = plate_section(corners, list(holes.values()), round_holes)
    return OutlineRead(corners, holes, round_holes, section)


@dataclass(frozen=True, slots=True)
class Outline:
    """Corners in order as rows of x y, or a table with loop, x, y and D."""

    role: Role = Role.OTHER

    def reader(self, argument: str, limit: Limit | None) -> Reader:
        corners = Vector(kinds.LENGTH).reader(argument, None)
        table = LOOPS.reader(argument, None)

        def read(cell: Cell) -> OutlineRead:
            if type(cell) is list and len(cell) > 1:
                head = [folded(c) for c in cell[0] if type(c) is str]
                if any(h.startswith(("loop", "x [", "x", "name")) for h in head):
                    return from_table(argument, table(cell))
                found = corners(cell)
                if found.ndim == 2 and found.shape[1] == 2:
                    return outline_of(found, {}, np.empty((0, 3)))
            raise wrong(argument, "three or more corners in order, a row of x y each, then the unit", cell)

        return remembered(read)

    def words(self) -> str:
        return "corners x y in rows [m], or a table loop, x [mm], y [mm], D [mm]"

    def sample(self) -> Cell:
        return [[0.0, 0.0], [0.6, 0.0], [0.6, 0.25], [0.0, 0.4]]


def from_table(argument: str, data: TableData) -> OutlineRead:
    """Sort the rows of the table into the outline, cut-outs and round holes."""
    x, y, d = data.numbers("x"), data.numbers("y"), data.numbers("D")
    loops: dict[str, list[int]] = {}
    rounds: list[Any] = []
    last = ""
    for i, label in enumerate(data.labels):
        if not np.isnan(d[i]):
            rounds.append((x[i], y[i], d[i]))
            last = ""
            continue
        key = folded(label)
        if key in loops and key != last:
            raise InputError(
                argument, "an outline with the corners of each loop below each other", where=data.where(i)
            )
        loops.setdefault(key, []).append(i)
        last = key
    if OUTLINE not in loops:
        raise InputError(argument, "an outline whose outer corners are named 'outline' in the column loop")
    points = {k: np.stack([x[rows], y[rows]], axis=-1) for k, rows in loops.items()}
    outer = points.pop(OUTLINE)
    return outline_of(outer, points, np.array(rounds).reshape(-1, 3))
