"""The bin tipper at one position through the functions, and how far the tables agree with them."""

from __future__ import annotations

from dataclasses import dataclass

from .bin_tipper_inputs import CASES, WHOLE, Inputs
from .bin_tipper_tables import ACCELERATION, EFFORT, HINGE_1, HINGE_2, SPEED, TILT, TORQUE, Table
from .bin_tipper_working import Work
from .kit import Book, Page
from .kit_look import LEFT

TERMS = ("Ixx", "Iyy", "Izz", "Ixy", "Iyz", "Izx")
SUPPORT_HEADS = (
    *("support", "type", "x [m]", "y [m]", "z [m]", "along x", "along y", "along z"),
    *("to x [m]", "to y [m]", "to z [m]", "holds"),
)
STEPS = {"RB_DRIVE_TORQUE": 7, "RB_REACTIONS_3D": 12}


def _case_number(given: Inputs) -> str:
    """Return the formula of the position of the case looked at among all load cases."""
    text = "0"
    for k, case in enumerate(CASES, 1):
        if case.name in WHOLE:
            text = f'IF({given.look_case.ref}="{case.name}",{k},{text})'
    return text


@dataclass(frozen=True, slots=True)
class Looked:
    """References to what the functions say about the position looked at, in SI."""

    x: str  # mass center
    y: str
    weight: str
    torque: str
    effort: str  # of the cylinder, + pushes
    hinge_x: str  # both hinges together
    hinge_y: str
    gaps: str  # differences between functions and tables, as parts of the values


def position(book: Book, given: Inputs, work: Work, tilt: Table, hinges: Table) -> Looked:
    """Write one position through the functions, independent of the tables, and compare."""
    page = work.page
    page.section("The position looked at, through the functions")
    number = page.at(page.SI)
    page.put(2, f'=IF({book.ready_ref}=1,{given.look_case.ref},"")', "RS status")
    page.put(page.VALUE, book.guarded(tilt.cell(TILT, tilt.look)), "RS value", form="0.0")
    page.put(page.UNIT, "deg", "RS unit fixed")
    page.put(page.SI, book.guarded(_case_number(given)), "RS si", form='"load case "0')
    page.row += 1
    first = page.row
    level = _body(page, given, work)
    turned = _turned(page, given, first, level)
    motion = _motion(page, work, tilt, first, number)
    page.row = first + 12
    supports = _supports(page, given, turned)
    calls = {
        "torque": f'RB_DRIVE_TORQUE({turned},{motion},"none","(0, 0) m"',
        "hinges": f'RB_REACTIONS_3D({turned},{motion},"none",{supports}',
    }
    page.page_break()
    center = page.at(6, first + 2), page.at(6, first + 3)
    weight = f"{page.at(6, first + 1)}*{work.gravity.si}"
    looked = _compare(page, given, tilt, hinges, number, calls, (*center, weight))
    page.steps("Working of the drive torque", calls["torque"], STEPS["RB_DRIVE_TORQUE"])
    page.steps("Working of the reactions", calls["hinges"], STEPS["RB_REACTIONS_3D"])
    return looked


def _body(page: Page, given: Inputs, work: Work) -> str:
    """Write the record of the body with the table level; give its range."""
    empty = f'{given.look_case.ref}="{CASES[0].name}"'
    top = page.row
    page.put(2, "Body, table level", "RS head")
    page.put(3, None, "RS head")
    page.put(4, None, "RS head")
    for i, field in enumerate(("mass", "x", "y", "z", *TERMS), 1):
        unit = "kg" if field == "mass" else ("m" if field in "xyz" else "kg*m^2")
        known = [rows[field].si for rows in work.rolled.values() if field in rows]
        calls = [f'RB_ROLLUP({parts},"{field}",,"{unit}")' for parts in (given.table, given.whole)]
        _record(page, top + i, 2, field, f"IF({empty},{','.join(known or calls)})", unit)
    _record(page, top + 11, 2, "products", '"tensor terms"', "")
    return page.span((top + 1, 2), (top + 11, 4))


def _record(page: Page, row: int, column: int, label: str, formula: str, unit: str) -> None:
    page.put(column, label, "RS label", row=row)
    cell = page.put(column + 1, page.book.guarded(formula), "RS number", row=row, form="0.0000;-0.0000;0")
    if formula.startswith('"'):
        cell.alignment = LEFT
    page.put(column + 2, unit or None, "RS unit fixed", row=row)


def _turned(page: Page, given: Inputs, top: int, level: str) -> str:
    for column, text in ((5, "Body, turned by RB_MOVE"), (6, None), (7, None)):
        page.put(column, text, "RS head", row=top)
    page.sheet.merge_cells(start_row=top, start_column=5, end_row=top, end_column=7)
    for i, field in enumerate(("mass", "x", "y", "z", *TERMS), 1):
        unit = "kg" if field == "mass" else ("m" if field in "xyz" else "kg*m^2")
        move = f'RB_MOVE({level},"z",{given.look_tilt.pair},"origin","{field}","{unit}")'
        _record(page, top + i, 5, field, move, unit)
    _record(page, top + 11, 5, "products", '"tensor terms"', "")
    return page.span((top + 1, 5), (top + 11, 7))


def _motion(page: Page, work: Work, tilt: Table, top: int, number: str) -> str:
    for column in range(8, 11):
        page.put(column, "Motion" if column == 8 else None, "RS head", row=top)
    page.sheet.merge_cells(start_row=top, start_column=8, end_row=top, end_column=10)
    backward = "+".join(f"({number}={k})" for k, case in enumerate(CASES, 1) if case.direction < 0)
    alpha = "0"
    for k, case in enumerate(CASES, 1):
        if case.name in WHOLE:
            value = tilt.cell(ACCELERATION, tilt.look) if case.run else f"{case.stop}*{work.stop.si}"
            alpha = f"IF({number}={k},{value},{alpha})"
    speed = tilt.cell(SPEED, tilt.look)
    _record(page, top + 1, 8, "omega", f"IF({backward}>0,-1,1)*{speed}", "rad/s")
    _record(page, top + 2, 8, "alpha", alpha, "rad/s^2")
    _record(page, top + 3, 8, "gravity", '"down"', "")
    _record(page, top + 4, 8, "fixed point", '"(0, 0) m"', "")
    return page.span((top + 1, 8), (top + 4, 10))


def _supports(page: Page, given: Inputs, turned: str) -> str:
    top = page.row + 1
    c = {name: place.si for name, place in given.cylinder.items()}
    phi = given.look_tilt.si
    x = f"{c['eye_x']}*COS({phi})-{c['eye_y']}*SIN({phi})"
    y = f"{c['eye_x']}*SIN({phi})+{c['eye_y']}*COS({phi})"
    cylinder = given.by_cylinder
    for column, word in enumerate(SUPPORT_HEADS, 2):
        page.put(column, word, "RS head", row=top)
    for row, (name, z, holds) in enumerate(
        (("hinge 1", given.hinge_1.si, "fx fy fz"), ("hinge 2", given.hinge_2.si, "fx fy")), top + 1
    ):
        cells = {2: f'"{name}"', 3: '"held"', 4: "0", 5: "0", 6: z, 13: f'"{holds}"'}
        _support_row(page, row, cells)
    drive = {
        2: '"drive"',
        3: f'IF({cylinder},"link","drive")',
        4: f"IF({cylinder},{x},0)",
        5: f"IF({cylinder},{y},0)",
        6: f"IF({cylinder},{c['cylinder_z']},0)",
        **{column: f'IF({cylinder},"",{value})' for column, value in ((7, 0), (8, 0), (9, 1))},
        **{
            column: f'IF({cylinder},{c[name]},"")'
            for column, name in ((10, "anchor_x"), (11, "anchor_y"), (12, "cylinder_z"))
        },
    }
    _support_row(page, top + 3, drive)
    page.row = top + 4
    return page.span((top, 2), (top + 3, 13))


def _support_row(page: Page, row: int, cells: dict[int, str]) -> None:
    for column in range(2, 14):
        formula = cells.get(column)
        text = page.book.guarded(formula) if formula else None
        page.put(column, text, "RS number", row=row, form="0.0000;-0.0000;0")
        if column in (2, 3, 13):
            page.sheet.cell(row, column).style = "RS text"


def _compare(
    page: Page,
    given: Inputs,
    tilt: Table,
    hinges: Table,
    number: str,
    calls: dict[str, str],
    body: tuple[str, str, str],
) -> Looked:
    """Write what the functions give beside what the tables give."""
    page.section("The functions against the tables")
    for column, word in enumerate(("", "", "function", "unit", "table", "unit", "difference"), 2):
        page.put(column, word, "RS head")
    page.row += 1

    def picked(table: Table, column: int) -> str:
        cells = table.page.span((table.look, column), (table.look, column + len(CASES) - 1))
        return f"INDEX({cells},1,{number})"

    def solved(what: str) -> str:
        return f'{calls["hinges"]},"{what}")'

    cylinder, torque = given.by_cylinder, picked(tilt, TORQUE)
    effort = picked(hinges, EFFORT)
    rows = (
        ("Drive torque", f'{calls["torque"]},"total")', '"N*m"', torque),
        (
            "Drive, from the balance in space",
            f"IF({cylinder},-{solved('drive tension')},{solved('drive torque')})",
            f'IF({cylinder},"N","N*m")',
            f"IF({cylinder},{effort},{torque})",
        ),
        ("Force of hinge 1", solved("hinge 1 force"), '"N"', picked(hinges, HINGE_1)),
        ("Force of hinge 2", solved("hinge 2 force"), '"N"', picked(hinges, HINGE_2)),
        ("Both hinges along x", f"{solved('hinge 1 fx')}+{solved('hinge 2 fx')}", '"N"', ""),
        ("Both hinges along y", f"{solved('hinge 1 fy')}+{solved('hinge 2 fy')}", '"N"', ""),
        ("Balance about a second point: residual moment", solved("residual moment"), '"N*m"', ""),
    )
    top = page.row
    for label, function, unit, table in rows:
        page.put(2, label, "RS label")
        page.put(4, page.book.guarded(function), "RS value")
        page.put(5, page.book.guarded(unit), "RS unit fixed")
        if table:
            page.put(6, page.book.guarded(table), "RS value")
            page.put(7, page.book.guarded(unit), "RS unit fixed")
            gap = f"ABS({page.at(4)}-{page.at(6)})/MAX(1E-9,ABS({page.at(6)}))"
            page.put(8, page.book.guarded(gap), "RS value", form="0.0000%")
        page.row += 1
    page.sheet.cell(page.row - 1, 4).number_format = "0.0E+00"
    for i, name in enumerate(("look_torque", "look_drive", "look_hinge_1", "look_hinge_2")):
        page.book.name(name, page.at(4, top + i))
    value = [page.at(4, top + i) for i in range(6)]
    return Looked(*body, value[0], value[1], value[4], value[5], page.span((top, 8), (top + 3, 8)))
