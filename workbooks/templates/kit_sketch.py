"""Points of a sketch: columns of formulas beside the printed part of a page, drawn by a chart of equal scale."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from .kit import Page
from .kit_charts import Curve
from .kit_look import INK
from .kit_parts import PartsTable


@dataclass(frozen=True, slots=True)
class Outlines:
    """Boxes and tubes of a parts list in SI, in cells beside its printed part: place, half sides, radius, turn."""

    parts: PartsTable
    column: int

    @classmethod
    def beside(cls, parts: PartsTable, column: int) -> Outlines:
        """Write the cells: a box has sides and no radius, a tube, seen along its axis, a radius and no sides."""
        made, page = cls(parts, column), parts.page
        for row in range(parts.first, parts.last + 1):
            x, y, length, width, od, turn = (
                parts.si(label, row) for label in ("x", "y", "L", "W", "OD", "turn z")
            )
            half = f"IF(ISNUMBER({parts.cell('W', row)}),{length},0)/2"
            for k, formula in enumerate((x, y, half, f"({width})/2", f"({od})/2", turn)):
                page.put(column + k, page.book.guarded(formula), "RS si", row=row, form="0.000")
            a, b, u, v, r, _ = made.cells(row)
            far = f"SQRT({a}^2+{b}^2)+SQRT({u}^2+{v}^2)+{r}"
            page.put(column + 6, page.book.guarded(far), "RS si", row=row, form="0.000")
        cells = page.span((parts.first, column + 6), (parts.last, column + 6))
        reach = page.book.guarded(f"MAX(0.001,MAX({cells}))")
        page.put(column + 6, reach, "RS si", row=parts.last + 1, form="0.000")
        return made

    def cells(self, row: int) -> tuple[str, ...]:
        """Return x, y, half length, half width, radius and turn of a part."""
        return tuple(self.parts.page.at(self.column + k, row) for k in range(6))

    @property
    def reach(self) -> str:
        """The cell that tells how far the parts reach from the origin."""
        return self.parts.page.at(self.column + 6, self.parts.last + 1)


class Points:
    """Writes curves of a sketch as pairs of columns; x and y are formulas in SI, divided by the reach."""

    def __init__(self, page: Page, column: int, row: int, reach: str) -> None:
        self.page, self.column, self.row, self.reach = page, column, row, reach
        self.curves: list[Curve] = []

    def add(self, name: str, points: Sequence[tuple[str, str]], *, scaled: bool = False, **look: Any) -> None:
        """Add a curve through points given as formula texts; `scaled` when they are parts of the reach already."""
        page, book = self.page, self.page.book
        page.put(self.column, name, "RS column", row=self.row)
        first = self.row + 1
        for i, point in enumerate(points):
            for k, formula in enumerate(point):
                text = book.guarded(formula if scaled else f"({formula})/{self.reach}")
                page.put(self.column + k, text, "RS si", row=first + i, form="0.0000")
        last = first + len(points) - 1
        sheet = page.sheet
        x, y = (sheet, self.column, first, last), (sheet, self.column + 1, first, last)
        self.curves.append(Curve(name, x, y, **look))
        self.column += 2

    def shared(self, formulas: Sequence[str], below: int) -> list[str]:
        """Write numbers that the points of the next curve share, so many rows below; give their cells."""
        cells = []
        for k, formula in enumerate(formulas):
            column, row = self.column + k % 2, self.row + 2 + below + k // 2
            self.page.put(column, self.page.book.guarded(formula), "RS si", row=row, form="0.0000")
            cells.append(self.page.at(column, row))
        return cells

    def part(self, outlines: Outlines, row: int, turn: str, **look: Any) -> None:
        """Add the outline of a box or a tube of a parts list, the whole list turned about the origin."""
        x, y, u, v, r, own = outlines.cells(row)
        angle = f"({own}+{turn})"
        corners = []
        for k in range(13):
            sx, sy = ((1, 1), (-1, 1), (-1, -1), (1, -1), (1, 1))[k // 3]
            along = f"({sx}*{u}+{r}*{math.cos(math.radians(30 * k)):.6f})"
            across = f"({sy}*{v}+{r}*{math.sin(math.radians(30 * k)):.6f})"
            corners.append(
                (
                    f"{x}*COS({turn})-{y}*SIN({turn})+{along}*COS({angle})-{across}*SIN({angle})",
                    f"{x}*SIN({turn})+{y}*COS({turn})+{along}*SIN({angle})+{across}*COS({angle})",
                )
            )
        self.add(f"part {row - outlines.parts.first + 1}", corners, **look)

    def label(self, text: str, point: tuple[str, str], **look: Any) -> None:
        """Add a text beside a point; `text` is a formula, so that it can hold a number of the sheet."""
        place = self.page.at(self.column, self.row)
        self.add("", [point], **{"width": 0.0, "label": place, **look})
        self.page.put(self.column - 2, self.page.book.guarded(text), "RS column", row=self.row)

    def arrow(self, name: str, tail: tuple[str, str], step: tuple[str, str], **look: Any) -> None:
        """Add an arrow from a point by a step; its head keeps its proportions."""
        (x, y), (dx, dy) = tail, step
        tip = (f"({x})+({dx})", f"({y})+({dy})")
        barbs = [
            (f"({tip[0]})-0.22*({dx})+{s}0.09*({dy})", f"({tip[1]})-0.22*({dy})-{s}0.09*({dx})")
            for s in ("", "-")
        ]
        self.add(name, [tail, tip, barbs[0], tip, barbs[1]], **{"color": INK, "width": 2.0, **look})
