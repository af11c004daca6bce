"""Swing gate: the yard gate of the co-operative on two hinges, opened by a drive or by hand.

z is the hinge axis, pointing up from yard level, and passes through the origin; x points along the leaf toward
its tip, y square to the leaf. The axes go with the leaf, so that results hold at every opening angle; the angle
counts counter-clockwise, and opening is positive.
"""

from __future__ import annotations

from pathlib import Path

from . import swing_gate_cases as cases
from . import swing_gate_checks as checks
from . import swing_gate_sketch as sketches
from . import swing_gate_working as workings
from .kit import Book
from .swing_gate_inputs import LINE, TITLE, inputs


def write(path: Path, blank: bool) -> None:
    """Write the workbook; with `blank` the cells that a person fills in are empty."""
    book = Book(TITLE, LINE, blank)
    given, page, second = inputs(book)
    work = workings.working(book, given)
    solved = cases.cases(book, given, work)
    looked = workings.by_hand(given, work, solved)
    checks.checks(book, given, work, solved, looked.gaps)
    sketches.elevation(given, work, looked, page, row=7)
    sketches.plan(given, work, looked, page, row=second)
    book.save(path)
