"""Points of a sketch: columns of formulas beside the printed part of a page, drawn by a chart of equal scale."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from .kit import Page
from .kit_charts import Curve
from .kit_look import INK


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
