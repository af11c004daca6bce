"""The bin tipper's position looked at, its load cases and checks, and the sketch."""

from __future__ import annotations

from rigidsheet.udf import kinds

from .bin_tipper import CASES, WHOLE, Inputs
from .bin_tipper_sheets import (
    ACCELERATION,
    ALONG_X,
    ALONG_Y,
    ARM,
    EFFORT,
    ENERGY,
    GAP,
    HINGE_1,
    HINGE_2,
    LENGTH,
    SPEED,
    TILT,
    TORQUE,
    Table,
    Work,
)
from .kit import Book, Page
from .kit_charts import LINES, Curve, line_chart, sketch_chart
from .kit_checks import COLUMNS as CHECK_COLUMNS
from .kit_checks import Check, Checks
from .kit_look import SOFT
from .kit_sketch import Points

TERMS = ("Ixx", "Iyy", "Izz", "Ixy", "Iyz", "Izx")
SUPPORT_HEADS = (
    "support", "type", "x [m]", "y [m]", "z [m]", "along x", "along y", "along z", "to x [m]", "to y [m]", "to z [m]", "holds",
)  # fmt: skip
STEPS = {"RB_DRIVE_TORQUE": 7, "RB_REACTIONS_3D": 12}
ENERGY_TOLERANCE = 0.005  # of the largest energy over the tilt: what a sum of trapezoids leaves
LARGEST_STEP = 3.0  # deg, so that no peak falls between two rows


def _case_number(given: Inputs) -> str:
    """Return the formula of the position of the case looked at among all load cases."""
    text = "0"
    for k, case in enumerate(CASES, 1):
        if case.name in WHOLE:
            text = f'IF({given.look_case.ref}="{case.name}",{k},{text})'
    return text


def position(book: Book, given: Inputs, work: Work, tilt: Table, hinges: Table) -> dict[str, str]:
    """Write one position through the functions, independent of the tables, and compare."""
    page = work.page
    page.page_break()
    page.section("The position looked at, through the functions")
    number = page.at(page.SI)
    page.put(2, f'=IF({book.ready_ref}=1,{given.look_case.ref},"")', "RS status")
    page.put(page.VALUE, book.guarded(tilt.cell(TILT, tilt.look)), "RS value", form="0.0")
    page.put(page.UNIT, "deg", "RS unit fixed")
    page.put(page.SI, book.guarded(_case_number(given)), "RS si", form='"load case "0')
    page.row += 1
    first = page.row
    level = _body(page, given)
    turned = _turned(page, given, first, level)
    motion = _motion(page, work, tilt, first, number)
    page.row = first + 12
    supports = _supports(page, given, turned)
    calls = {
        "torque": f'RB_DRIVE_TORQUE({turned},{motion},"none","(0, 0) m"',
        "hinges": f'RB_REACTIONS_3D({turned},{motion},"none",{supports}',
    }
    results = _compare(page, given, tilt, hinges, number, calls)
    _steps(page, "Working of the drive torque", calls["torque"], STEPS["RB_DRIVE_TORQUE"])
    _steps(page, "Working of the reactions", calls["hinges"], STEPS["RB_REACTIONS_3D"])
    return results


def _body(page: Page, given: Inputs) -> str:
    """Write the record of the body with the table level; give its range."""
    empty = f'{given.look_case.ref}="{CASES[0].name}"'
    top = page.row
    page.put(2, "Body, table level", "RS head")
    page.put(3, None, "RS head")
    page.put(4, None, "RS head")
    for i, field in enumerate(("mass", "x", "y", "z", *TERMS), 1):
        unit = "kg" if field == "mass" else ("m" if field in "xyz" else "kg*m^2")
        calls = (f'RB_ROLLUP({parts},"{field}",,"{unit}")' for parts in (given.table, given.whole))
        _record(page, top + i, 2, field, f"IF({empty},{','.join(calls)})", unit)
    _record(page, top + 11, 2, "products", '"tensor terms"', "")
    return page.span((top + 1, 2), (top + 11, 4))


def _record(page: Page, row: int, column: int, label: str, formula: str, unit: str) -> None:
    page.put(column, label, "RS label", row=row)
    page.put(column + 1, page.book.guarded(formula), "RS number", row=row, form="0.0000;-0.0000;0")
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
    page: Page, given: Inputs, tilt: Table, hinges: Table, number: str, calls: dict[str, str]
) -> dict[str, str]:
    """Write what the functions give beside what the tables give."""
    page.skip()
    for column, word in enumerate(("", "", "function", "unit", "table", "unit", "difference"), 2):
        page.put(column, word, "RS head")
    page.row += 1

    def picked(table: Table, column: int) -> str:
        cells = page.book, table.page.span((table.look, column), (table.look, column + len(CASES) - 1))
        return f"INDEX({cells[1]},1,{number})"

    cylinder = given.by_cylinder
    effort = picked(hinges, EFFORT)
    link = f'-{calls["hinges"]},"drive tension")'
    rows = (
        ("Drive torque", f'{calls["torque"]},"total")', '"N*m"', picked(tilt, TORQUE)),
        (
            "Drive, from the balance in space",
            f'IF({cylinder},{link},{calls["hinges"]},"drive torque"))',
            f'IF({cylinder},"N","N*m")',
            f"IF({cylinder},{effort},{picked(tilt, TORQUE)})",
        ),
        ("Force of hinge 1", f'{calls["hinges"]},"hinge 1 force")', '"N"', picked(hinges, HINGE_1)),
        ("Force of hinge 2", f'{calls["hinges"]},"hinge 2 force")', '"N"', picked(hinges, HINGE_2)),
    )
    top = page.row
    for label, function, unit, table in rows:
        page.put(2, label, "RS label")
        for column, formula, style in (
            (4, function, "RS value"),
            (5, unit, "RS unit fixed"),
            (6, table, "RS value"),
            (7, unit, "RS unit fixed"),
        ):
            page.put(column, page.book.guarded(formula), style)
        gap = f"ABS({page.at(4)}-{page.at(6)})/MAX(1E-9,ABS({page.at(6)}))"
        page.put(8, page.book.guarded(gap), "RS value", form="0.0%")
        page.row += 1
    page.put(2, "Balance about a second point: residual moment", "RS label")
    page.put(4, page.book.guarded(f'{calls["hinges"]},"residual moment")'), "RS value", form="0.0E+00")
    page.put(5, "N*m", "RS unit fixed")
    page.row += 1
    page.book.name("look_torque", page.at(4, top))
    page.book.name("look_hinge_1", page.at(4, top + 2))
    page.book.name("look_hinge_2", page.at(4, top + 3))
    return {"gaps": page.span((top, 8), (top + 3, 8))}


def _steps(page: Page, title: str, call: str, count: int) -> None:
    page.section(title)
    function, _, rest = call.partition("(")
    for k in range(1, count + 1):
        step = f'INDEX(RB_WORKING("{function}",{rest}),{k},1)'
        page.put(2, page.book.guarded(f'IFERROR({step},"")'), "RS step")
        page.row += 1


def checks(book: Book, given: Inputs, work: Work, tilt: Table, hinges: Table, gaps: str) -> None:
    """Write load cases, checks and charts."""
    page = book.page("Checks", CHECK_COLUMNS, landscape=True)
    page.title_block()
    head = page.row
    page.sheet.row_dimensions[head].height = 20.0
    page.row += 1
    page.section("Load cases: largest over the tilt")
    cases = _load_cases(book, page, given, tilt, hinges)
    page.section("Checks")
    table = Checks(book, page, "at tilt [deg]")
    for check in _checks(book, page, given, work, tilt, hinges, cases, gaps):
        table.add(check)
    sentence = table.end()
    book.name("verdict", page.at(2, head))
    page.put(
        2,
        f'=IF({book.ready_ref}=1,{sentence},"Not checked yet: inputs are missing or refused.")',
        "RS status",
        row=head,
    )
    page.page_break()
    page.section("Over the tilt")
    sheet = tilt.page.sheet
    anchor = page.row
    for chart, (table_page, start, title, y_title, corner) in enumerate(
        (
            (tilt, TORQUE, "Drive torque at the hinge", "N*m", f"B{anchor}"),
            (hinges, HINGE_1, "Force of hinge 1", "N", f"B{anchor + 22}"),
        )
    ):
        sheet = table_page.page.sheet
        curves = [
            Curve(
                case.name,
                (sheet, TILT, table_page.first, table_page.last),
                (sheet, start + k, table_page.first, table_page.last),
                *LINES[k],
            )
            for k, case in enumerate(CASES)
        ]
        line_chart(
            page,
            corner,
            curves,
            size=(285.0, 104.0 if chart == 0 else 92.0),
            title=title,
            x_title="tilt [deg]",
            y_title=y_title,
        )
    page.row = anchor + 40


CASE_VALUES = ("torque", "effort", "hinge_1", "hinge_2")


def _load_cases(
    book: Book, page: Page, given: Inputs, tilt: Table, hinges: Table
) -> dict[str, tuple[str, str]]:
    """Write the largest values of each case; give (range for RB_ENVELOPE, range of tilts) of each value."""
    effort = f'=IF({given.by_cylinder},"Cylinder force [N]","Motor torque [N*m]")'
    heads = (
        "Load case",
        "Fruit in the bin",
        "Drive torque [N*m]",
        "at tilt [deg]",
        effort,
        "at tilt [deg]",
        "Hinge 1 [N]",
        "at tilt [deg]",
        "Hinge 2 [N]",
        "at tilt [deg]",
    )
    for column, word in enumerate(heads, 2):
        page.put(column, word, "RS head")
    page.put(12, None, "RS head")
    page.sheet.row_dimensions[page.row].height = 36.0
    page.row += 1
    top = page.row
    for k, case in enumerate(CASES):
        fruit = "all, to the end" if case.stuck else ("pours out" if case.pours else "none")
        page.put(2, case.name, "RS text")
        page.put(3, fruit, "RS text")
        for i, (table, start) in enumerate(
            ((tilt, TORQUE), (hinges, EFFORT), (hinges, HINGE_1), (hinges, HINGE_2))
        ):
            values, tilts = table.column(start + k), table.column(TILT)
            largest = f"IF(MAX({values})>=-MIN({values}),MAX({values}),MIN({values}))"
            column = 4 + 2 * i
            form = "[>=1000]#,##0;[<=-1000]-#,##0;0.0" if i == 1 else "#,##0;-#,##0"
            page.put(column, book.guarded(largest), "RS value", form=form)
            at = f"INDEX({tilts},MATCH({page.at(column)},{values},0))"
            page.put(column + 1, book.guarded(at), "RS value", form="0.0")
        page.row += 1
    last = page.row - 1
    return {
        name: (page.span((top, 2), (last, 4 + 2 * i)), page.span((top, 5 + 2 * i), (last, 5 + 2 * i)))
        for i, name in enumerate(CASE_VALUES)
    }


def _checks(
    book: Book,
    page: Page,
    given: Inputs,
    work: Work,
    tilt: Table,
    hinges: Table,
    cases: dict[str, tuple[str, str]],
    gaps: str,
) -> list[Check]:
    c, g = given.cylinder, given.gearbox
    cylinder, gearbox = given.by_cylinder, given.by_gearbox
    drive, pins = given.factor_drive.si, given.factor_pins.si

    def governing(value: str) -> dict[str, str]:
        names, tilts = cases[value]
        name = f'RB_ENVELOPE({names},"governing")'
        first = names.partition(":")[0] + ":" + "$B$" + names.rpartition("$")[2]
        return {"case": name, "at": f"INDEX({tilts},MATCH({name},{first},0))"}

    def size(value: str, si: str, unit: str) -> str:
        return f'RB_ENVELOPE({cases[value][0]},"magnitude")*RB_CONVERT("1 {si}",{unit})'

    def side(function: str) -> str:
        ranges = [hinges.column(EFFORT + k) for k in range(len(CASES))]
        return f"{function}({','.join(ranges)})"

    uneven = given.unevenness.si
    made = [
        Check(
            "Gearbox: torque at the hinge",
            size("torque", "N*m", g["gear_rating"].unit),
            g["gear_rating"].unit,
            g["gear_rating"].ref,
            "gearbox_torque",
            drive,
            when=gearbox,
            **governing("torque"),
        ),
        Check(
            "Motor: torque",
            size("effort", "N*m", g["motor_rating"].unit),
            g["motor_rating"].unit,
            g["motor_rating"].ref,
            "motor_torque",
            drive,
            when=gearbox,
            **governing("effort"),
        ),
        Check(
            "Motor: speed",
            f'{work.speed.si}*{g["ratio"].si}*RB_CONVERT("1 rad/s",{g["motor_speed"].unit})',
            g["motor_speed"].unit,
            g["motor_speed"].ref,
            "motor_speed",
            when=gearbox,
        ),
        Check(
            "Cylinder: push",
            f'MAX(0,{side("MAX")})*RB_CONVERT("1 N",{c["push_rating"].unit})',
            c["push_rating"].unit,
            c["push_rating"].ref,
            "push",
            drive,
            when=cylinder,
        ),
        Check(
            "Cylinder: pull",
            f'MAX(0,-{side("MIN")})*RB_CONVERT("1 N",{c["pull_rating"].unit})',
            c["pull_rating"].unit,
            c["pull_rating"].ref,
            "pull",
            drive,
            when=cylinder,
        ),
        Check(
            "Cylinder: shortest length",
            f'MIN({tilt.column(LENGTH)})*RB_CONVERT("1 m",{c["closed_length"].unit})',
            c["closed_length"].unit,
            c["closed_length"].ref,
            "shortest",
            sense="at least",
            when=cylinder,
        ),
        Check(
            "Cylinder: longest length",
            f'MAX({tilt.column(LENGTH)})*RB_CONVERT("1 m",{c["open_length"].unit})',
            c["open_length"].unit,
            c["open_length"].ref,
            "longest",
            when=cylinder,
        ),
        Check(
            "Cylinder: smallest arm",
            f'MAX(0,MIN({tilt.column(ARM)}))*RB_CONVERT("1 m",{c["least_arm"].unit})',
            c["least_arm"].unit,
            c["least_arm"].ref,
            "arm",
            sense="at least",
            when=cylinder,
        ),
    ]
    for n in ("1", "2"):
        demand = f"{uneven}*{size(f'hinge_{n}', 'N', given.pin_rating.unit)}"
        made.append(
            Check(
                f"Hinge {n}: bearing load, with allowance",
                demand,
                given.pin_rating.unit,
                given.pin_rating.ref,
                f"hinge_{n}",
                pins,
                **governing(f"hinge_{n}"),
            )
        )
    energy, gap = tilt.column(ENERGY), tilt.column(GAP)
    largest = f"MAX(MAX({energy}),-MIN({energy}))"
    steps = f"MAX(({given.tilt_end.si}-2*{work.ramp_angle.si})/40,{work.ramp_angle.si}/8)"
    made += [
        Check(
            "Work of the drive against energy: gap",
            f"MAX(MAX({gap}),-MIN({gap}))",
            '"J"',
            f"{ENERGY_TOLERANCE}*{largest}",
            "energy",
        ),
        Check("Tables against the functions: gap", f"100*MAX({gaps})", '"%"', "0.001", "agreement"),
        Check("Largest step of the tables", f"DEGREES({steps})", '"deg"', f"{LARGEST_STEP}", "step"),
        Check(
            "Speeding up and slowing down fit",
            f'2*{given.ramp_time.si}*RB_CONVERT("1 s",{given.tilt_time.unit})',
            given.tilt_time.unit,
            given.tilt_time.ref,
            "ramps",
        ),
        Check(
            "Position looked at: within the tilt",
            f'{given.look_tilt.si}*RB_CONVERT("1 rad",{given.tilt_end.unit})',
            given.tilt_end.unit,
            given.tilt_end.ref,
            "look",
        ),
    ]
    return made


def sketch(book: Book, given: Inputs, work: Work, tilt: Table, page: Page) -> None:
    """Draw parts, mass centers, hinge, drive and forces at the position looked at."""
    parts, where = given.parts, page.columns + 3
    phi = given.look_tilt.si
    rows = range(parts.first, parts.last + 1)
    size_column = where
    for row in rows:  # how far each part reaches from the hinge
        x, y, length, width, od = (parts.si(label, row) for label in ("x", "y", "L", "W", "OD"))
        reach = f"SQRT(({x})^2+({y})^2)+SQRT((({length})*({width}>0))^2+({width})^2+({od})^2)/2"
        page.put(size_column, book.guarded(reach), "RS si", row=row, form="0.000")
    reach = page.at(size_column, parts.last + 1)
    cells = page.span((parts.first, size_column), (parts.last, size_column))
    page.put(size_column, book.guarded(f"MAX(0.001,MAX({cells}))"), "RS si", row=parts.last + 1, form="0.000")
    points = Points(page, where + 1, 6, reach)
    _outlines(points, given, phi)
    arc = [
        (f"{reach}*COS({given.tilt_end.si}*{k}/24)", f"{reach}*SIN({given.tilt_end.si}*{k}/24)")
        for k in range(25)
    ]
    points.add("sweep", arc, dash="sysDash", width=0.75, color=SOFT)
    _forces(points, given, work, tilt, phi, reach)
    sketch_chart(page, "K6", points.curves, size=88.0, title="Position looked at")


def _outlines(points: Points, given: Inputs, phi: str) -> None:
    parts = given.parts
    for row in range(parts.first, parts.last + 1):
        x, y, length, width, od, turn = (
            parts.si(label, row) for label in ("x", "y", "L", "W", "OD", "turn z")
        )
        corners = []
        angle = f"({turn}+{phi})"
        box = f'{parts.cell("W", row)}<>""'
        for k in range(13):
            sx, sy = ((1, 1), (-1, 1), (-1, -1), (1, -1), (1, 1))[k // 3]
            u = f"IF({box},{sx}*({length})/2,({od})/2*COS({k}*PI()/6))"
            v = f"IF({box},{sy}*({width})/2,({od})/2*SIN({k}*PI()/6))"
            corners.append(
                (
                    f"({x})*COS({phi})-({y})*SIN({phi})+{u}*COS({angle})-{v}*SIN({angle})",
                    f"({x})*SIN({phi})+({y})*COS({phi})+{u}*SIN({angle})+{v}*COS({angle})",
                )
            )
        fruit = row == parts.last
        points.add(
            f"part {row - parts.first + 1}",
            corners,
            dash="sysDot" if fruit else "solid",
            width=1.0,
            color=SOFT if fruit else "2E4A3D",
        )


def _forces(points: Points, given: Inputs, work: Work, tilt: Table, phi: str, reach: str) -> None:
    centers = {}
    for state, (x, y) in work.centers.items():
        centers[state] = (f"({x.si}*COS({phi})-{y.si}*SIN({phi}))", f"({x.si}*SIN({phi})+{y.si}*COS({phi}))")
        points.add(
            f"mass center {state}",
            [centers[state]],
            width=0.0,
            marker="circle" if state == "whole" else "diamond",
            size=8,
            color="A5622A",
        )
    points.add("hinge", [("0", "0")], width=0.0, marker="circle", size=10, color="1B1F1D")
    points.arrow("weight", centers["whole"], ("0", f"-0.3*{reach}"), color="A5622A")
    c = {name: place.si for name, place in given.cylinder.items()}
    cylinder, row = given.by_cylinder, tilt.look
    x = f"IF({cylinder},{c['eye_x']}*COS({phi})-{c['eye_y']}*SIN({phi}),0)"
    y = f"IF({cylinder},{c['eye_x']}*SIN({phi})+{c['eye_y']}*COS({phi}),0)"
    points.add(
        "cylinder",
        [(f"IF({cylinder},{c['anchor_x']},0)", f"IF({cylinder},{c['anchor_y']},0)"), (x, y)],
        width=3.0,
        color="2E4A3D",
        marker="circle",
        size=5,
    )
    ux, uy = (f"IF({cylinder},{tilt.cell(column, row)},0)*0.25*{reach}" for column in (ALONG_X, ALONG_Y))
    points.arrow("drive force", (x, y), (ux, uy))
    turn = [
        (
            f"IF({cylinder},0,0.16*{reach}*COS(RADIANS({a})))",
            f"IF({cylinder},0,0.16*{reach}*SIN(RADIANS({a})))",
        )
        for a in range(150, 391, 15)
    ]
    points.add("drive torque", turn, width=2.0)
