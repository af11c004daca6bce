"""Hoist arm: an arm on a carriage that lifts fruit crates while its pivot accelerates.

x points along the level track, forward, y up, z along the pivot; the arm's angle counts counter-clockwise from
the arm level and pointing forward. The pivot B is the origin; it moves with the carriage.
"""

from __future__ import annotations

from pathlib import Path

from . import hoist_arm_checks as checks
from . import hoist_arm_position as positions
from . import hoist_arm_sketch as sketches
from . import hoist_arm_working as sheets
from .hoist_arm_inputs import LINE, TITLE, inputs
from .kit import Book


def write(path: Path, blank: bool) -> None:
    """Write the workbook; with `blank` the cells that a person fills in are empty."""
    book = Book(TITLE, LINE, blank)
    given, page, row = inputs(book)
    work = sheets.working(book, given)
    table = sheets.angle_table(book, given, work)
    looked = positions.position(book, given, work, table)
    checks.checks(book, given, work, table, looked)
    sketches.sketch(book, given, work, looked, page, row)
    book.save(path)
