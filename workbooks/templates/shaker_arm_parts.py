"""What depends on the crank angle only, once a row: accelerations as parts of speed squared and of acceleration.

The columns stand right of the printed table of the arm. Every load case scales them by its own ω² and α.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Final

from openpyxl.utils import get_column_letter

from .kit import Page
from .shaker_arm_inputs import CASES, STOPPING, Given, block
from .shaker_arm_working import Work

LOST: Final = (
    99  # stands where a foot carries nothing even at rest, or the tray has left the arm; and at most
)
AT_END: Final = CASES[-1]  # the crank has come to rest and still slows down
COMPARED: Final = CASES.index("jam stop begins")  # both speed and acceleration count in it
FIRST: Final = 28  # column
POINTS: Final = {"S": "sensor", "P": "pusher", "G": "tray"}
WAYS: Final = ("along", "across")
TURNS: Final = tuple((point, way) for point in POINTS for way in WAYS)  # compared with the functions by turns
EVERY: Final = 5  # in each of so many rows one: every 30 deg
NAMES: Final = (
    *(f"{point} {way} {part}" for point, way in TURNS for part in ("ω²", "α")),
    *(f"foot {foot} {part}" for foot in (1, 2) for part in ("ω²", "α")),
    *("no load", "function", "table", "gap"),
)


def cell(name: str, row: int) -> str:
    """Return the cell of a part in a row."""
    return f"Arm!${get_column_letter(FIRST + NAMES.index(name))}{row}"


def scaled(work: Work, k: int, name: str, row: int) -> str:
    """Return what the two parts of a name come to in a case; a part that its motion does not have is left out."""
    squared, rise = (cell(f"{name} {part}", row) for part in ("ω²", "α"))
    parts = [f"{work.squares[k]}*{squared}"] if CASES[k] != AT_END else []
    parts += [f"{work.accelerations[k]}*{rise}"] if CASES[k] in STOPPING else []
    return "+".join(parts)


def span(name: str, first: int, last: int) -> str:
    """Return the cells of a part from row to row."""
    return f"{cell(name, first)}:{cell(name, last).partition('!')[2]}"


def heads(page: Page, row: int) -> None:
    """Write the names over the columns."""
    for column, name in enumerate(NAMES, FIRST):
        page.put(column, name, "RS column", row=row)


def write(page: Page, given: Given, work: Work, row: int) -> None:
    """Write the parts of a row."""
    _put(page, row, {**_points(given, row), **_feet(work, row)})


def _put(page: Page, row: int, formulas: dict[str, str]) -> None:
    for name, formula in formulas.items():
        page.put(FIRST + NAMES.index(name), page.book.guarded(formula), "RS number", row=row, form="0.0000")


def _points(given: Given, row: int) -> dict[str, str]:
    """Return the parts of a = a_A + α_a × r − ω_a² r, seen from the arm, for each point."""
    along, across, turn, bend = (f"${letter}{row}" for letter in "CDEF")
    parts: dict[str, str] = {}
    for point, name in POINTS.items():
        u, v = given[f"{name}_u"].si, given[f"{name}_v"].si
        parts |= {
            f"{point} along ω²": f"-{along}-{bend}*{v}-{turn}^2*{u}",
            f"{point} along α": f"-{across}-{turn}*{v}",
            f"{point} across ω²": f"-{across}+{bend}*{u}-{turn}^2*{v}",
            f"{point} across α": f"{along}+{turn}*{u}",
        }
    return parts


def _feet(work: Work, row: int) -> dict[str, str]:
    """Return the parts of the share that the motion takes off each foot, from moments about the other foot.

    A foot without weight at rest has none; it shows in a column of its own.
    """
    parts: dict[str, str] = {}
    rests = []
    h, j = work.lever.si, work.spin.si
    for foot, share, sign, other in ((1, work.share_1.si, "+", "-"), (2, work.share_2.si, "-", "+")):
        rest = f"({share}*$H{row}{sign}{h}*$G{row})"
        rests.append(rest)
        for part, spin in (("ω²", f"$F{row}"), ("α", f"$E{row}")):
            along, across = (cell(f"G {way} {part}", row) for way in WAYS)
            load = f"({share}*{across}{sign}{h}*{along}{other}{j}*{spin})"
            parts[f"foot {foot} {part}"] = f"IF({positive(rest)},-{load}/{rest},0)"
    parts["no load"] = f"IF({positive(f'MIN({rests[0]},{rests[1]})')},0,{LOST})"
    return parts


def positive(number: str) -> str:
    """Return a condition that holds for a number above nought: IF takes any other number than 0 for true."""
    return f"MAX(0,{number})"


def compare(
    page: Page, given: Given, work: Work, rows: range, tray: Mapping[str, Callable[[int], str]]
) -> tuple[str, str, str]:
    """Write accelerations by the functions beside those of the tables, another component in each row compared.

    `tray` gives the cells of the tray's table along and across. Return formulas for the root mean square by the
    functions and by the tables, and for the largest gap.
    """
    compared = rows[::EVERY]
    omega, alpha = work.speeds[COMPARED], work.accelerations[COMPARED]
    for i, row in enumerate(compared):
        point, way = TURNS[i % len(TURNS)]
        crank = f'RB_ACCELERATION_AT("(0, 0) m/s^2",{omega},{alpha},$C{row}:$D{row})'
        spin = f"$E{row}*{omega},$E{row}*{alpha}+$F{row}*{omega}^2"
        place = block(given[f"{POINTS[point]}_u"], given[f"{POINTS[point]}_v"])
        formulas = {
            "function": f"INDEX(RB_ACCELERATION_AT({crank},{spin},{place}),1,{1 + WAYS.index(way)})",
            "table": tray[way](row) if point == "G" else scaled(work, COMPARED, f"{point} {way}", row),
            "gap": f"ABS({cell('function', row)}-{cell('table', row)})",
        }
        _put(page, row, formulas)
    spans = [span(name, rows[0], rows[-1]) for name in ("function", "table", "gap")]
    sizes = [f"SQRT(SUMSQ({cells})/{len(compared)})" for cells in spans[:2]]
    return sizes[0], sizes[1], f"MAX({spans[2]})"
