"""Shaker arm: a crank-driven arm of the sorting line with a vibration sensor, a fruit tray and a pusher.

The crank turns about the origin, x points along the level guide of the far end B, y up; crank angles count
counter-clockwise from x. Places on the arm are given along the arm from crank pin A to B (u), and across it (v).
"""

from __future__ import annotations

from pathlib import Path

from . import shaker_arm_checks as checks
from . import shaker_arm_position as positions
from . import shaker_arm_sketch as sketches
from . import shaker_arm_tables as tables
from . import shaker_arm_working as sheet
from .kit import Book
from .shaker_arm_inputs import LINE, TITLE, inputs


def write(path: Path, blank: bool) -> None:
    """Write the workbook; with `blank` the cells that a person fills in are empty."""
    book = Book(TITLE, LINE, blank)
    given, page = inputs(book)
    work = sheet.working(book, given)
    arm, tray = tables.tables(book, given, work)
    looked = positions.position(book, given, work, arm, tray)
    checks.checks(book, given, work, arm, tray, looked)
    sketches.sketch(given, looked, page, row=7)
    book.save(path)
