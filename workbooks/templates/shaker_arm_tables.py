"""The shaker arm's tables over one turn of the crank, along and across the arm."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from openpyxl.utils import get_column_letter

from . import shaker_arm_parts as parts
from .kit import Book, Page
from .kit_look import rich
from .shaker_arm_inputs import CASES, Given
from .shaker_arm_parts import LOST
from .shaker_arm_working import Work

STEP: Final = 6  # deg: a peak between two rows is next to nothing higher
ROWS: Final = 360 // STEP + 1
ANGLE, ARM_ANGLE, CRANK_ALONG, CRANK_ACROSS, TURN, BEND, WEIGHT_ALONG, WEIGHT_ACROSS = range(1, 9)
HEADS: Final = tuple(case.replace("overspeed", "over- speed") for case in CASES)
COUNT: Final = len(CASES)


@dataclass(frozen=True, slots=True)
class Table:
    """A table over the turn: where its columns start by key, first and last row, the row of the position looked at."""

    page: Page
    starts: dict[str, int]
    first: int
    last: int

    @property
    def look(self) -> int:
        return self.last + 4

    def column(self, column: int) -> str:
        return self.page.span((self.first, column), (self.last, column))

    def case(self, key: str, k: int) -> str:
        """Return the column of a case."""
        return self.column(self.starts[key] + k)

    def cell(self, key: str, k: int, row: int) -> str:
        """Return the cell of a case in a row."""
        return f"{self.page.name}!${get_column_letter(self.starts[key] + k)}{row}"

    def looked(self, key: str) -> str:
        """Return the cells of all cases for the position looked at."""
        start = self.starts[key]
        return self.page.span((self.look, start), (self.look, start + COUNT - 1))


def tables(book: Book, given: Given, work: Work) -> tuple[Table, Table]:
    """Write both tables: the arm with sensor and pusher; the tray."""
    arm = _table(book, "Arm", 5.6, ("sensor", "side", "thrust"), WEIGHT_ACROSS)
    tray = _table(book, "Tray", 5.8, ("along", "across", "lift", "slip"), ANGLE)
    _head(
        arm,
        (
            "r: crank as seen from the arm. ω_a = (ω_a/ω) ω; α_a = (ω_a/ω) α + (α_a/ω²) ω². Pusher: "
            "side m_P (|across| + 2 |ω_a w|), thrust m_P (|along| + b).",
            "Acceleration at (u, v): along −ω² r_{along} − α r_{across} − α_a v − ω_a² u, across "
            "α r_{along} − ω² r_{across} + α_a u − ω_a² v; g adds as weight does.",
        ),
        ("crank angle", "arm angle", "r along", "r across", "ω_a/ω", "α_a/ω²", "g along", "g across"),
        ("deg", "deg", "m", "m", "-", "-", "m/s²", "m/s²"),
        (
            ("Sensor", "sensor", "g"),
            ("Pusher: side load of its guide", "side", "N"),
            ("Pusher: thrust", "thrust", "N"),
        ),
    )
    _head(
        tray,
        (
            "Acceleration a of the mass center G along and across the arm: formula on sheet Arm. Foot load / m_T: "
            "foot 1 s_1 a_{across} + h a_{along} − j α_a, foot 2 s_2 a_{across} − h a_{along} + j α_a;",
            "the share taken off is minus this, over the same with g for a and no α_a; the worse foot lifts off at 1. "
            f"{LOST}: no load to take.",
        ),
        ("crank angle",),
        ("deg",),
        (
            ("G along the arm", "along", "m/s²"),
            ("G across the arm", "across", "m/s²"),
            ("Taken off the worse foot", "lift", "-"),
            ("Friction coefficient needed", "slip", "-"),
        ),
    )
    parts.heads(arm.page, arm.first - 1)
    for row, angle in ((row, (row - arm.first) * STEP) for row in range(arm.first, arm.last + 1)):
        _rows(book, given, work, arm, tray, row, str(angle))
    _rows(book, given, work, arm, tray, arm.look, f"DEGREES({given['look_angle'].si})")
    for table in (arm, tray):
        _extremes(table)
    return arm, tray


def _table(book: Book, name: str, width: float, keys: tuple[str, ...], fixed: int) -> Table:
    starts = {key: fixed + 1 + COUNT * k for k, key in enumerate(keys)}
    widths = (6.0, *([6.8] * (fixed - 1)), *([width] * (COUNT * len(keys))))
    page = book.page(name, widths, lead=1)
    page.title_block(repeat_rows=9)
    return Table(page, starts, 10, 9 + ROWS)


def _head(
    table: Table,
    lines: tuple[str, ...],
    words: tuple[str, ...],
    units: tuple[str, ...],
    groups: tuple[tuple[str, str, str], ...],
) -> None:
    page = table.page
    page.prose(lines)
    page.row = table.first - 3
    for title, key, _ in groups:
        page.put(table.starts[key], title, "RS status")
    page.row += 1
    page.sheet.row_dimensions[page.row].height = 34.0
    heads = [*zip(words, units, strict=True), *((case, unit) for _, _, unit in groups for case in HEADS)]
    for column, (word, unit) in enumerate(heads, 1):
        page.put(column, rich(word, 8), "RS head")
        page.put(column, unit, "RS column", row=page.row + 1)
    page.sheet.freeze_panes = page.sheet.cell(table.first, 2)


def _extremes(table: Table) -> None:
    page = table.page
    page.row = table.last + 1
    for name, word in (("MAX", "most"), ("MIN", "least")):
        for column in range(1, page.columns + 1):
            first = min(table.starts.values())
            text = page.book.guarded(f"{name}({table.column(column)})") if column >= first else None
            form = page.sheet.cell(table.first, column).number_format
            page.put(column, word if column == 1 else text, "RS total", form=form)
        page.row += 1
    page.put(1, "The position looked at, by the same formulas", "RS line", row=table.look - 1)
    page.row = table.look + 1


def _rows(book: Book, given: Given, work: Work, arm: Table, tray: Table, row: int, angle: str) -> None:
    """Write a row of both tables; a number for the angle, or a formula for the position looked at."""
    constant = angle.isdigit()
    for table in (arm, tray):
        table.page.sheet.row_dimensions[row].height = 12.4  # so that a whole turn stands on one page
        text = int(angle) if constant else book.guarded(angle)
        table.page.put(ANGLE, text, "RS number", row=row, form="0" if constant else "0.0")
    for column, formula, form in _linkage(given, work, row):
        arm.page.put(column, book.guarded(formula), "RS number", row=row, form=form)
    for k in range(COUNT):
        cells = {
            "sensor": (arm, _sensor(work, row, k), "0.000"),
            "side": (arm, _side(given, work, row, k), "0.0"),
            "thrust": (arm, _thrust(given, work, row, k), "0.0"),
            "along": (tray, parts.scaled(work, k, "G along", row), "0.000"),
            "across": (tray, parts.scaled(work, k, "G across", row), "0.000"),
            "lift": (tray, _lift(work, row, k), "0.000"),
            "slip": (tray, _slip(tray, row, k), "0.000"),
        }
        for key, (table, formula, form) in cells.items():
            table.page.put(table.starts[key] + k, book.guarded(formula), "RS number", row=row, form=form)
    parts.write(arm.page, given, work, row)


def _linkage(given: Given, work: Work, row: int) -> tuple[tuple[int, str, str], ...]:
    r, length, e = (given[name].si for name in ("crank", "arm", "guide"))
    theta, phi, g = f"RADIANS($A{row})", f"RADIANS($B{row})", work.gravity.si
    return (
        (ARM_ANGLE, f"DEGREES(ASIN(({e}-{r}*SIN({theta}))/{length}))", "0.00"),
        (CRANK_ALONG, f"{r}*COS({theta}-{phi})", "0.0000"),
        (CRANK_ACROSS, f"{r}*SIN({theta}-{phi})", "0.0000"),
        (TURN, f"-{r}*COS({theta})/({length}*COS({phi}))", "0.0000"),
        (BEND, f"({r}*SIN({theta})+{length}*$E{row}^2*SIN({phi}))/({length}*COS({phi}))", "0.0000"),
        (WEIGHT_ALONG, f"{g}*SIN({phi})", "0.000"),
        (WEIGHT_ACROSS, f"{g}*COS({phi})", "0.000"),
    )


def _sensor(work: Work, row: int, k: int) -> str:
    along, across = (
        f"({parts.scaled(work, k, f'S {way}', row)}+{work.felt}*${g}{row})"
        for way, g in zip(parts.WAYS, "GH", strict=True)
    )
    return f"SQRT({along}^2+{across}^2)/{work.gravity.si}"


def _side(given: Given, work: Work, row: int, k: int) -> str:
    """Return the side load of the pusher: the Coriolis part counts in the worse direction of sliding."""
    coriolis = f"ABS(2*$E{row}*{work.speeds[k]}*{given['slide_speed'].si})"
    return f"{given['pusher_mass'].si}*(ABS({parts.scaled(work, k, 'P across', row)}+$H{row})+{coriolis})"


def _thrust(given: Given, work: Work, row: int, k: int) -> str:
    slide = f"ABS({given['slide_rise'].si})"
    return f"{given['pusher_mass'].si}*(ABS({parts.scaled(work, k, 'P along', row)}+$G{row})+{slide})"


def _lift(work: Work, row: int, k: int) -> str:
    """Return the larger share of a foot's weight that the motion takes off."""
    shares = ",".join(parts.scaled(work, k, f"foot {foot}", row) for foot in (1, 2))
    return f"MIN({LOST},MAX({shares})+{parts.cell('no load', row)})"


def _slip(tray: Table, row: int, k: int) -> str:
    along, across = (f"{get_column_letter(tray.starts[key] + k)}{row}" for key in ("along", "across"))
    press = f"({across}+Arm!$H{row})"
    return f"IF({parts.positive(press)},MIN(ABS({along}+Arm!$G{row})/{press},{LOST}),{LOST})"
