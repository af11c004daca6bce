"""Bin tipper: a tilting table that tips fruit bins into the flume, driven by a cylinder or a gearbox.

x points along the level table away from the flume, y up, z along the hinge axis, which passes through the
origin; the tilt counts counter-clockwise from the level table.
"""

from __future__ import annotations

from pathlib import Path

from . import bin_tipper_checks as checks
from . import bin_tipper_position as positions
from . import bin_tipper_sketch as sketches
from . import bin_tipper_tables as tables
from . import bin_tipper_working as sheet
from .bin_tipper_inputs import LINE, TITLE, inputs
from .kit import Book


def write(path: Path, blank: bool) -> None:
    """Write the workbook; with `blank` the cells that a person fills in are empty."""
    book = Book(TITLE, LINE, blank)
    given, page = inputs(book)
    work = sheet.working(book, given)
    tilt = tables.tilt_table(book, given, work)
    hinges = tables.hinge_table(book, given, work, tilt)
    looked = positions.position(book, given, work, tilt, hinges)
    checks.checks(book, given, work, tilt, hinges, looked.gaps)
    sketches.sketch(book, given, work, tilt, looked, page, row=7)
    book.save(path)
