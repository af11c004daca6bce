"""The hoist arm at one position through the functions: balance about the moving pivot, and what a fixed one loses."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Final, NamedTuple

from rigidsheet.udf.units import kinds

from .hoist_arm_inputs import CASES, Inputs
from .hoist_arm_working import A_X, A_Y, ALPHA, EFFORT, OMEGA, PIN, TORQUE, Table, Work
from .kit import Book, Page, Place

TERMS: Final = ("Ixx", "Iyy", "Izz", "Ixy", "Iyz", "Izx")
FIXED_PIVOT: Final = '"(0, 0) m/s^2"'
SUPPORTS: Final = (
    ("support", "type", "x [m]", "y [m]"),
    ("pivot", "pin", "0", "0"),
    ("drive", "drive", "", ""),
)


@dataclass(frozen=True, slots=True)
class Looked:
    """References to what the functions say about the position looked at, in SI."""

    x: str  # mass center
    y: str
    weight: str
    torque: str
    pin_x: str
    pin_y: str
    pivot: str  # acceleration of the pivot
    level: str  # record of the level body
    force: str  # vector of the weight
    gaps: str  # differences between functions and tables, as parts of the values
    error: Place


@dataclass(frozen=True, slots=True)
class Records:
    """Ranges that the functions take, and single cells."""

    level: str
    turned: str
    arm: str
    force: str
    motion: str
    pivot: str
    omega: str
    alpha: str
    supports: str
    number: str
    x: str
    y: str


def position(book: Book, given: Inputs, work: Work, table: Table) -> Looked:
    """Write one position through the functions, independent of the table, and compare."""
    page = work.page
    records = _records(book, page, given, work, table)
    return _results(book, page, given, work, table, records)


def _records(book: Book, page: Page, given: Inputs, work: Work, table: Table) -> Records:
    page.section("The position looked at: what the functions are given")
    number = page.at(page.SI)
    page.put(2, book.guarded(given.ref("look_case")), "RS status")
    page.put(page.VALUE, book.guarded(f"DEGREES({given.si('look_angle')})"), "RS value", form="0.0")
    page.put(page.UNIT, "deg", "RS unit fixed")
    page.put(page.SI, book.guarded(given.si("look_case")), "RS si", form='"load case "0')
    page.row += 1
    top = page.row
    for column, text in ((2, "Body, arm level"), (5, "Body, turned by RB_MOVE"), (8, "Motion")):
        for c in range(column, column + (3 if column < 8 else 4)):
            page.put(c, text if c == column else None, "RS head")
    for first, last in ((2, 4), (5, 7), (8, 11)):
        page.sheet.merge_cells(start_row=top, start_column=first, end_row=top, end_column=last)
    level = _level(page, given, top)
    for i, field in enumerate(("mass", "x", "y", "Izz"), 1):
        move = f'RB_MOVE({level},"z",{given.given["look_angle"].pair},"origin","{field}","{_unit(field)}")'
        _line(page, top + i, 5, field, (move,), _unit(field))
    _line(page, top + 6, 5, "arm r [m]", (page.at(6, top + 2), page.at(6, top + 3)), "")
    _line(page, top + 7, 5, "weight [N]", ("0", f"-{page.at(6, top + 1)}*{work.gravity.si}"), "")
    motion = _motion(page, work, table, top, number)
    supports = _supports(page, top + 7)
    page.row = top + 12
    return Records(
        level,
        page.span((top + 1, 5), (top + 4, 7)),
        page.span((top + 6, 6), (top + 6, 7)),
        page.span((top + 7, 6), (top + 7, 7)),
        motion,
        page.span((top + 5, 9), (top + 5, 10)),
        page.at(9, top + 1),
        page.at(9, top + 2),
        supports,
        number,
        page.at(6, top + 2),
        page.at(6, top + 3),
    )


def _unit(field: str) -> str:
    return "kg" if field == "mass" else ("m" if field in "xyz" else "kg*m^2")


def _line(page: Page, row: int, column: int, label: str, formulas: tuple[str, ...], unit: str) -> None:
    page.put(column, label, "RS label", row=row)
    for i, formula in enumerate(formulas, 1):
        page.put(column + i, page.book.guarded(formula), "RS number", row=row, form="0.0000;-0.0000;0")
    if unit:
        page.put(column + len(formulas) + 1, unit, "RS unit fixed", row=row)


def _level(page: Page, given: Inputs, top: int) -> str:
    """Write the record of arm and crate with the arm level; give its range."""
    for i, field in enumerate(("mass", "x", "y", "z", *TERMS), 1):
        _line(
            page, top + i, 2, field, (f'RB_ROLLUP({given.body},"{field}",,"{_unit(field)}")',), _unit(field)
        )
    _line(page, top + 11, 2, "products", ('"tensor terms"',), "")
    return page.span((top + 1, 2), (top + 11, 4))


def _motion(page: Page, work: Work, table: Table, top: int, number: str) -> str:
    omega, a_x, a_y = (f"INDEX({work.cases(column)},{number},1)" for column in (OMEGA, A_X, A_Y))
    ramps = "+".join(f"({number}={k})" for k, case in enumerate(CASES, 1) if case.alpha == "ramp")
    side = f"IF({ramps}>0,IF({table.looked(TORQUE, number)}<0,-1,1),1)"
    for i, (label, formulas, unit) in enumerate(
        (
            ("omega", (omega,), "rad/s"),
            ("alpha", (f"{side}*INDEX({work.cases(ALPHA)},{number},1)",), "rad/s^2"),
            ("gravity", ('"down"',), ""),
            ("point", ("0", "0"), "m"),
            ("point acceleration", (a_x, a_y), "m/s^2"),
        ),
        1,
    ):
        _line(page, top + i, 8, label, formulas, unit)
    return page.span((top + 1, 8), (top + 5, 11))


def _supports(page: Page, top: int) -> str:
    for i, row in enumerate(SUPPORTS):
        for column, text in enumerate(row, 8):
            if i == 0:
                page.put(column, text, "RS head", row=top)
            elif column < 10:
                page.put(column, text, "RS text", row=top + i)
            else:
                page.put(column, float(text) if text else None, "RS number", row=top + i, form="0")
    return page.span((top, 8), (top + 2, 11))


def _results(book: Book, page: Page, given: Inputs, work: Work, table: Table, r: Records) -> Looked:
    """Lay out the balance, then gearbox, motor and pin, then the workings of one position."""
    calls = _Calls(
        f"RB_MOMENT_SUM({work.own.pair},{work.mass.pair},{r.arm},{r.omega},{r.alpha}",
        f'RB_DRIVE_TORQUE({r.turned},{r.motion},"none","(0, 0) m"',
        f'RB_REACTIONS({r.turned},{r.motion},"none",{r.supports}',
    )
    page.page_break()
    gaps: list[str] = []
    total, error = _balance(book, page, table, r, calls, gaps)
    motor_call = _drive_train(book, page, given, work, table, r, calls, total, gaps)
    pins = _pins(page, table, r, calls, total, gaps)
    _steps(
        page,
        (f"{calls.sum_about},{r.pivot}", range(1, 7)),
        (calls.drive, (4, 5, 6)),
        (
            f'{motor_call},"N*m",{r.omega}',
            (f'IF({r.omega}=0,"At rest the brake holds: eta = 1",{{step}})', 2),
        ),
        (calls.solved, range(2, 10)),
    )
    return Looked(
        r.x, r.y, f"{work.mass.si}*{work.gravity.si}", total.si, pins[0].si, pins[1].si,
        r.pivot.partition(":")[0], r.level, r.force, ",".join(gaps), error,
    )  # fmt: skip


class _Calls(NamedTuple):
    """The functions asked about the position, up to the argument that differs."""

    sum_about: str
    drive: str
    solved: str


def _balance(
    book: Book, page: Page, table: Table, r: Records, calls: _Calls, gaps: list[str]
) -> tuple[Place, Place]:
    """Write the moment balance and what a fixed pivot would miss; give the torque and the error."""
    torque = kinds.TORQUE
    page.section("Balance about the moving pivot", {**page.INPUT_WORDS, 9: "table", 10: "difference"})
    moment = page.result(
        "Moments that the motion asks for, about B", "M_B", f"{calls.sum_about},{r.pivot},{{unit}})", torque, "N*m",
        "look_moment_sum", note="RB_MOMENT_SUM",
    )  # fmt: skip
    weight = page.result(
        "Moment of the weight about B", "M_W", f"RB_MOMENT({r.force},{r.arm},{{unit}})", torque, "N*m",
        "look_weight_moment", note="RB_MOMENT",
    )  # fmt: skip
    total = page.result(
        "Drive torque, weight included", "T", f'{calls.drive},"total",{{unit}})', torque, "N*m",
        "look_torque", note="RB_DRIVE_TORQUE", strong=True,
    )  # fmt: skip
    gaps.append(_compare(page, total, table.looked(TORQUE, r.number)))
    gaps.append(_gap(page, moment, f"{total.si}+{weight.si}"))
    fixed = page.derived(
        "Drive torque if the pivot is treated as fixed", "T_f",
        f"{calls.sum_about},{FIXED_PIVOT})-({weight.si})", torque, "N*m", "look_torque_fixed",
        note="RB_MOMENT_SUM, a_B = 0",
    )  # fmt: skip
    error = page.derived(
        "Error of the fixed pivot", "T_f − T", f"{fixed.si}-{total.si}", torque, "N*m", "look_error",
        note=book.guarded(f'IF(ABS({fixed.si})<ABS({total.si}),"the drive would be undersized","")'), strong=True,
    )  # fmt: skip
    share = page.derived(
        "Error as a part of the true torque", "", f'IF(ABS({total.si})<1E-9,0,{error.si}/ABS({total.si}))',
        kinds.RATIO, "-", "look_error_share", strong=True,
    )  # fmt: skip
    for column in (page.VALUE, page.SI):
        page.sheet.cell(share.row, column).number_format = "+0.0%;-0.0%;0.0%"
    return total, error


def _drive_train(
    book: Book, page: Page, given: Inputs, work: Work, table: Table, r: Records, calls: _Calls, total: Place,
    gaps: list[str],
) -> str:  # fmt: skip
    """Write power, motor torque and reflected inertia; give the call for the motor torque."""
    torque, inertia = kinds.TORQUE, kinds.INERTIA
    page.section("Gearbox, motor and pin", {**page.INPUT_WORDS, 9: "table", 10: "difference"})
    page.result(
        "Power of the drive", "P", f'{calls.drive},"power",{{unit}})', kinds.POWER, "kW", "look_power",
        note=book.guarded(
            f'IF({r.omega}=0,"at rest: the brake holds",'
            f'IF({total.si}*{r.omega}<0,"the load drives: overhauling","the motor drives"))'
        ),
    )  # fmt: skip
    eta = f"IF({r.omega}=0,1,{given.si('efficiency')})"
    motor_call = f"RB_MOTOR_TORQUE({total.pair},{given.si('ratio')},{eta}"
    geared = page.result(
        "Torque at the motor shaft, through the gearbox", "", f"{motor_call},{{unit}},{r.omega})", torque, "N*m",
        "look_geared", note="RB_MOTOR_TORQUE",
    )  # fmt: skip
    rotor = page.result(
        "Torque for rotor and brake", "J i α",
        f"RB_TORQUE({given.given['rotor'].pair},{given.si('ratio')}*{r.alpha},{{unit}})", torque, "N*m",
        "look_rotor_torque", note="RB_TORQUE",
    )  # fmt: skip
    motor = page.derived(
        "Motor or brake, in all", "T_m", f"{geared.si}+{rotor.si}", torque, "N*m", "look_motor", strong=True
    )
    gaps.append(_compare(page, motor, table.looked(EFFORT, r.number)))
    seen = page.result(
        "Inertia of arm and crate at the motor shaft", "I_B / i²",
        f"RB_REFLECTED_INERTIA({work.inertia.pair},{given.si('ratio')},{{unit}})", inertia, "kg*m^2",
        "reflected_inertia", note="RB_REFLECTED_INERTIA",
    )  # fmt: skip
    page.derived(
        "Its ratio to rotor and brake", "", f"IF({given.si('rotor')}=0,0,{seen.si}/{given.si('rotor')})",
        kinds.RATIO, "-", "inertia_ratio",
    )  # fmt: skip
    return motor_call


def _pins(page: Page, table: Table, r: Records, calls: _Calls, total: Place, gaps: list[str]) -> list[Place]:
    """Write the pin's load and the torque by the reactions; give the parts of the load and its size."""
    force, torque = kinds.FORCE, kinds.TORQUE
    pins = [
        page.result(
            f"Pin on the arm: {words}", symbol, f'{calls.solved},"pivot {what}",{{unit}})', force, "N",
            f"look_pin_{what}", note="RB_REACTIONS", strong=what == "force",
        )
        for words, symbol, what in (
            ("along x", "R_x", "fx"), ("along y", "R_y", "fy"), ("size", "R", "force"),
        )
    ]  # fmt: skip
    gaps.append(_compare(page, pins[2], table.looked(PIN, r.number)))
    solved_torque = page.result(
        "Drive torque by the reactions", "", f'{calls.solved},"drive mz",{{unit}})', torque, "N*m",
        "look_torque_solved", note="RB_REACTIONS",
    )  # fmt: skip
    gaps.append(_gap(page, solved_torque, total.si))
    return pins


def _compare(page: Page, place: Place, table: str) -> str:
    """Write the table's number beside a result, and the difference; give the cell of the difference."""
    page.put(9, page.book.guarded(table), "RS value", row=place.row)
    return _gap(page, place, page.at(9, place.row))


def _gap(page: Page, place: Place, other: str) -> str:
    """Write how far a result is from a number in SI, as a part of that; give the cell."""
    gap = f"ABS({place.si}-({other}))/MAX(1E-6,ABS({other}))"
    page.put(10, page.book.guarded(gap), "RS value", row=place.row, form="0.0E+00")
    return page.at(10, place.row)


def _steps(page: Page, *calls: tuple[str, Iterable[int | str]]) -> None:
    """Write lines of the working of several calls; a text is a formula around the line of its place."""
    page.section("Working with numbers")
    for call, lines in calls:
        function, _, rest = call.partition("(")
        for place, line in enumerate(lines, 1):
            k = line if isinstance(line, int) else place
            step = f'INDEX(RB_WORKING("{function}",{rest}),{k},1)'
            if isinstance(line, str):
                step = line.format(step=step)
            page.put(2, page.book.guarded(f'IFERROR({step},"")'), "RS step")
            page.sheet.merge_cells(
                start_row=page.row, start_column=2, end_row=page.row, end_column=page.columns
            )
            page.sheet.row_dimensions[page.row].height = 12.0
            page.row += 1
        page.skip(height=4.0)
