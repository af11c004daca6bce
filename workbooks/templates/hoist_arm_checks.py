"""The hoist arm's load cases, what a fixed pivot would lose in each, checks and charts."""

from __future__ import annotations

from collections.abc import Callable
from copy import copy
from typing import Final

from .hoist_arm_inputs import BACKWARD, BY_MOTOR, CASES, FORWARD, HOLD, NAMES, STOP_LOWERING, Inputs
from .hoist_arm_position import FIXED_PIVOT, Looked
from .hoist_arm_working import (
    A_X,
    A_Y,
    ALPHA,
    ANGLE,
    EFFORT,
    FIXED,
    OMEGA,
    PIN,
    R_Y,
    STEPS,
    TORQUE,
    Table,
    Work,
    given_back,
)
from .kit import Book, Page
from .kit_charts import Curve, line_chart
from .kit_checks import COLUMNS, CaseTable, Check, Checks
from .kit_look import INK, RULE, SOFT

LARGEST_STEP: Final = 3.0  # deg: a peak between two rows is then at most 0.04 % higher, 1 - cos(1.5 deg)
AT: Final = "at angle [deg]"
TORQUE_AT, EFFORT_AT, PIN_AT = 4, 6, 8  # columns of the load cases; the angle stands right of each
GREEN, WARM = RULE, "A5622A"


def checks(book: Book, given: Inputs, work: Work, table: Table, looked: Looked) -> None:
    """Write load cases, what is lost, checks and charts."""
    page = book.page("Checks", COLUMNS, landscape=True)
    page.title_block()
    head = page.row
    page.sheet.row_dimensions[head].height = 20.0
    page.row += 1
    page.section("Load cases: largest over the arm's angle")
    cases = _load_cases(book, page, table)
    page.section("What is lost when the pivot is treated as fixed")
    gaps = _lost(book, page, work, table, looked)
    page.section("Checks")
    made = Checks(book, page, AT)
    for check in (*_drive(given, table, cases), *_calculation(given, f"{looked.gaps},{gaps}")):
        made.add(check)
    sentence = made.end()
    book.name("verdict", page.at(2, head))
    text = f'=IF({book.ready_ref}=1,{sentence},"Not checked yet: inputs are missing or refused.")'
    page.put(2, text, "RS status", row=head)
    page.page_break()
    _charts(page, table)


def _load_cases(book: Book, page: Page, table: Table) -> CaseTable:
    heads = (
        "Load case",
        "What happens",
        "Drive torque [N*m]",
        AT,
        "Motor or brake [N*m]",
        AT,
        "Pivot pin [N]",
        AT,
    )
    made = CaseTable(book, page, heads)
    for k, case in enumerate(CASES):
        values: list[tuple[str, str]] = []
        for column, form in ((TORQUE, "#,##0"), (EFFORT, "0.0"), (PIN, "#,##0")):
            cells, here = table.column(column + k), page.at(4 + len(values))
            either = f"IF(MAX({cells})>=-MIN({cells}),MAX({cells}),MIN({cells}))"
            values += [(either, form), (f"INDEX({table.column(ANGLE)},MATCH({here},{cells},0))", "0.0")]
        made.add(case.name, case.text, values)
    return made


def _lost(book: Book, page: Page, work: Work, table: Table, looked: Looked) -> str:
    """Write true and fixed-pivot torque where they differ most; give the cells that compare with the table."""
    heights = table.column(R_Y)
    highest = f"IF(MAX({heights})>=-MIN({heights}),MAX({heights}),MIN({heights}))"
    heads = (
        *("Load case", "Acceleration of the pivot", AT, "True torque [N*m]", "Pivot as fixed", "Error [N*m]"),
        *("of the true", "Table: gap"),
    )
    made = CaseTable(book, page, heads, height=25.0)
    arm = page.span((made.first, 15), (made.first, 16))  # beside the printed page, for all rows
    angle = page.at(4, made.first)
    for column, field in ((15, "x"), (16, "y")):
        move = f'RB_MOVE({looked.level},"z",RADIANS({angle}),"origin","{field}","m")'
        page.put(column, book.guarded(move), "RS si", row=made.first, form="0.0000")
    body = f"{work.own.pair},{work.mass.pair},{arm}"
    held = f"RB_MOMENT({looked.force},{arm})"
    gaps = []
    for k, case in enumerate(CASES):
        at = f"INDEX({table.column(ANGLE)},MATCH({highest},{heights},0))" if k == 0 else angle
        listed = f"INDEX({table.column(TORQUE + k)},MATCH({highest},{heights},0))"
        alpha = work.case(ALPHA, k)
        if case.alpha == "ramp":
            alpha = f"IF({listed}<0,-1,1)*{alpha}"
        pivot = f"{work.case(A_X, k)}:{work.case(A_Y, k).partition('!')[2]}"
        call = f"RB_MOMENT_SUM({body},{work.case(OMEGA, k)},{alpha}"
        true, fixed, error = page.at(5), page.at(6), page.at(7)
        made.add(
            case.name,
            "",
            (
                (at, "0.0"),
                (f"{call},{pivot})-{held}", "#,##0"),
                (f"{call},{FIXED_PIVOT})-{held}", "#,##0"),
                (f"{fixed}-{true}", "+#,##0;-#,##0;0"),
                (f'IF(ABS({error})>10*ABS({true}),"over 10 x",{error}/ABS({true}))', "+0%;-0%;0%"),
                (f"ABS({true}-{listed})/MAX(1E-6,ABS({listed}))", "0E+00"),
            ),
        )
        row = page.row - 1
        text = f'=IF({book.ready_ref}=1,ROUND({work.case(A_X, k)},3)&" m/s² along x","")'
        page.put(3, text, "RS text", row=row)
        gaps.append(page.at(9, row))
    row = made.last + 1
    errors = page.span((made.first, 7), (made.last, 7))
    true, fixed, share = (page.at(column, made.first + FORWARD) for column in (5, 6, 8))
    sentence = (
        f'"{NAMES[FORWARD]}: a fixed pivot gives "&ROUND({fixed},0)&" N*m in place of "&ROUND({true},0)'
        f'&" N*m, "&IF(ISNUMBER({share}),ROUND(100*{share},0)&" %",{share})&"."'
    )
    page.put(2, book.guarded(sentence), "RS status", row=row)
    page.put(6, "largest", "RS total", row=row)
    largest = f"MAX(MAX({errors}),-MIN({errors}))"
    page.put(7, book.guarded(largest), "RS total", row=row, form="#,##0")
    page.put(8, "N*m", "RS unit fixed", row=row)
    book.name("fixed_pivot_error", page.at(7, row))
    page.row += 1
    return ",".join(gaps)


def _governing(cases: CaseTable, column: int) -> dict[str, str]:
    return {"case": cases.envelope(column, "governing"), "at": cases.beside(column, "governing", column + 1)}


def _part(cases: CaseTable, first: int, last: int) -> CaseTable:
    """Return the same table of load cases, narrowed to some of its rows."""
    narrow = copy(cases)
    narrow.first, narrow.last = cases.first + first, cases.first + last
    return narrow


def _drive(given: Inputs, table: Table, cases: CaseTable) -> list[Check]:
    g = given.given
    drive = given.si("factor_drive")
    motor = _part(cases, 0, BY_MOTOR - 1)
    brake = _part(cases, BY_MOTOR, len(CASES) - 1)
    return [
        Check.against(
            "Gearbox: torque at the pivot", cases.envelope(TORQUE_AT, "magnitude"), "N*m", g["gear_rating"],
            "gearbox_torque", required=drive, **_governing(cases, TORQUE_AT),
        ),
        Check.against(
            "Motor: torque", motor.envelope(EFFORT_AT, "magnitude"), "N*m", g["motor_rating"],
            "motor_torque", required=drive, **_governing(motor, EFFORT_AT),
        ),
        Check.against(
            "Motor: speed", f"{given.si('arm_speed')}*{given.si('ratio')}", "rad/s", g["motor_speed"], "motor_speed"
        ),
        Check.against(
            "Overhauling: power given back, lowering", given_back(given, table), "W", g["return_rating"],
            "power_back", required=drive,
        ),
        Check.against(
            "Brake: torque", brake.envelope(EFFORT_AT, "magnitude"), "N*m", g["brake_rating"],
            "brake_torque", required=given.si("factor_brake"), **_governing(brake, EFFORT_AT),
        ),
        Check.against(
            "Pivot pin: load", cases.envelope(PIN_AT, "magnitude"), "N", g["pin_rating"],
            "pin", required=given.si("factor_pin"), **_governing(cases, PIN_AT),
        ),
    ]  # fmt: skip


def _calculation(given: Inputs, gaps: str) -> list[Check]:
    """Return the checks of the calculation itself."""
    low, high, look = given.si("angle_from"), given.si("angle_to"), given.si("look_angle")
    outside = f"DEGREES(MAX(0,{low}-{look},{look}-{high}))"
    span = f"DEGREES({high}-{low})"
    return [
        Check(
            "Table against the functions: gap", f"100*MAX({gaps})", '"%"', "0.001", "agreement", plain=True
        ),
        Check("Largest step of the table", f"{span}/{STEPS}", '"deg"', f"{LARGEST_STEP}", "step", plain=True),
        Check("Position looked at: outside the range", outside, '"deg"', "0.001", "look", plain=True),
    ]


def _charts(page: Page, table: Table) -> None:
    page.section("Over the arm's angle")
    sheet, anchor = table.page.sheet, page.row

    def curve(name: str, column: int, *look: str | float) -> Curve:
        dash, width, color = look
        x, y = (sheet, ANGLE, table.first, table.last), (sheet, column, table.first, table.last)
        return Curve(name, x, y, str(dash), float(width), str(color))

    curves = [
        curve(NAMES[FORWARD], TORQUE + FORWARD, "solid", 2.25, GREEN),
        curve(NAMES[BACKWARD], TORQUE + BACKWARD, "solid", 1.25, GREEN),
        curve("both, pivot as fixed (= hold)", TORQUE + HOLD, "sysDash", 1.5, GREEN),
        curve(NAMES[STOP_LOWERING], TORQUE + STOP_LOWERING, "solid", 2.25, WARM),
        curve("the same, pivot as fixed", FIXED, "sysDash", 1.5, WARM),
    ]
    title = "Drive torque with the pivot's acceleration, and with the pivot treated as fixed"
    for chart, (shown, name, unit) in enumerate(
        (
            (curves, title, "N*m"),
            (_effort_curves(curve), "Torque of motor or brake at the motor shaft", "N*m"),
        )
    ):
        made = line_chart(
            page, f"B{anchor + 18 * chart}", shown, size=(284.0, 82.0), title=name, x_title="angle of the arm [deg]",
            y_title=unit,
        )  # fmt: skip
        made.y_axis.crosses = "min"  # the angles may be negative: the axis of torque stays at the left
    page.row = anchor + 36


def _effort_curves(curve: Callable[..., Curve]) -> list[Curve]:
    looks = (
        ("solid", 1.25, SOFT),
        ("sysDash", 1.25, SOFT),
        ("sysDot", 1.75, INK),
        ("solid", 2.25, GREEN),
        ("dash", 1.25, GREEN),
        ("solid", 2.25, WARM),
        ("lgDashDot", 1.25, WARM),
    )
    return [curve(case.name, EFFORT + k, *looks[k]) for k, case in enumerate(CASES)]
