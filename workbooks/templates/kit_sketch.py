"""Points of a sketch: columns of formulas beside the printed part of a page, drawn by a chart of equal scale."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from .kit import Page
from .kit_charts import Curve
from .kit_look import INK
from .kit_parts import PartsTable


def parts_reach(parts: PartsTable, column: int) -> str:
    """Write, beside the printed part of a parts list, how far its parts reach from the origin; give that cell."""
    page = parts.page
    for row in range(parts.first, parts.last + 1):
        x, y, length, width, od = (parts.si(label, row) for label in ("x", "y", "L", "W", "OD"))
        half = f"SQRT((({length})*({width}>0))^2+({width})^2+({od})^2)/2"
        page.put(column, page.book.guarded(f"SQRT(({x})^2+({y})^2)+{half}"), "RS si", row=row, form="0.000")
    cells = page.span((parts.first, column), (parts.last, column))
    page.put(column, page.book.guarded(f"MAX(0.001,MAX({cells}))"), "RS si", row=parts.last + 1, form="0.000")
    return page.at(column, parts.last + 1)


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

    def part(self, parts: PartsTable, row: int, turn: str, **look: Any) -> None:
        """Add the outline of a box or a tube of a parts list, the whole list turned about the origin."""
        x, y, length, width, od = (parts.si(label, row) for label in ("x", "y", "L", "W", "OD"))
        angle, box = f"({parts.si('turn z', row)}+{turn})", f'{parts.cell("W", row)}<>""'
        corners = []
        for k in range(13):
            sx, sy = ((1, 1), (-1, 1), (-1, -1), (1, -1), (1, 1))[k // 3]
            u = f"IF({box},{sx}*({length})/2,({od})/2*COS({k}*PI()/6))"
            v = f"IF({box},{sy}*({width})/2,({od})/2*SIN({k}*PI()/6))"
            corners.append(
                (
                    f"({x})*COS({turn})-({y})*SIN({turn})+{u}*COS({angle})-{v}*SIN({angle})",
                    f"({x})*SIN({turn})+({y})*COS({turn})+{u}*SIN({angle})+{v}*COS({angle})",
                )
            )
        self.add(f"part {row - parts.first + 1}", corners, **look)

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
