"""The bin tipper's load cases, checks and charts."""

from __future__ import annotations

from typing import Final

from .bin_tipper import CASES, Inputs
from .bin_tipper_sheets import (
    ARM,
    EFFORT,
    ENERGY,
    GAP,
    HINGE_1,
    HINGE_2,
    LENGTH,
    RAMP_STEPS,
    STEADY_STEPS,
    TILT,
    TORQUE,
    Table,
    Work,
)
from .kit import Book, Page
from .kit_charts import LINES, Curve, line_chart
from .kit_checks import COLUMNS as CHECK_COLUMNS
from .kit_checks import Check, Checks

ENERGY_TOLERANCE: Final = 0.005  # of the largest energy over the tilt: what a sum of trapezoids leaves
LARGEST_STEP: Final = 3.0  # deg, so that no peak falls between two rows


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
    anchor = page.row
    for table_page, start, title, y_title, corner in (
        (tilt, TORQUE, "Drive torque at the hinge", "N*m", f"B{anchor}"),
        (hinges, HINGE_1, "Force of hinge 1", "N", f"B{anchor + 18}"),
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
            size=(284.0, 82.0),
            title=title,
            x_title="tilt [deg]",
            y_title=y_title,
        )
    page.row = anchor + 36


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
            form = "#,##0.0" if i == 1 else "#,##0;-#,##0"
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
    steps = (
        f"MAX(({given.tilt_end.si}-2*{work.ramp_angle.si})/{STEADY_STEPS},{work.ramp_angle.si}/{RAMP_STEPS})"
    )
    made += [
        Check(
            "Work of the drive against energy: gap",
            f"MAX(MAX({gap}),-MIN({gap}))",
            '"J"',
            f"{ENERGY_TOLERANCE}*{largest}",
            "energy",
            plain=True,
        ),
        Check(
            "Tables against the functions: gap", f"100*MAX({gaps})", '"%"', "0.001", "agreement", plain=True
        ),
        Check(
            "Largest step of the tables", f"DEGREES({steps})", '"deg"', f"{LARGEST_STEP}", "step", plain=True
        ),
        Check(
            "Speeding up and slowing down fit",
            f'2*{given.ramp_time.si}*RB_CONVERT("1 s",{given.tilt_time.unit})',
            given.tilt_time.unit,
            given.tilt_time.ref,
            "ramps",
            plain=True,
        ),
        Check(
            "Position looked at: within the tilt",
            f'{given.look_tilt.si}*RB_CONVERT("1 rad",{given.tilt_end.unit})',
            given.tilt_end.unit,
            given.tilt_end.ref,
            "look",
            plain=True,
        ),
    ]
    return made
