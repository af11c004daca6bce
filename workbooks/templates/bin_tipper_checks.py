"""The bin tipper's load cases, checks and charts."""

from __future__ import annotations

from typing import Final

from .bin_tipper_inputs import CASES, Inputs
from .bin_tipper_tables import (
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
)
from .bin_tipper_working import Work
from .kit import Book, Page
from .kit_charts import LINES, Curve, line_chart
from .kit_checks import COLUMNS as CHECK_COLUMNS
from .kit_checks import CaseTable, Check, Checks

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
    for check in (
        *_gearbox(given, work, cases),
        *_cylinder(given, tilt, cases),
        *_hinges(given, cases),
        *_calculation(given, work, tilt, gaps),
    ):
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


# Columns of the table of load cases; the tilt of each value stands right of it.
TORQUE_AT, MOST_AT, LEAST_AT, HINGE_1_AT, HINGE_2_AT = 4, 6, 8, 10, 12


def _load_cases(book: Book, page: Page, given: Inputs, tilt: Table, hinges: Table) -> CaseTable:
    """Write the largest values of each load case and where over the tilt they come."""
    word = f'IF({given.by_cylinder},"Cylinder, ","Motor, ")'
    unit = f'IF({given.by_cylinder}," [N]"," [N*m]")'
    at = "at tilt [deg]"
    most, least = (f'={word}&"{side}"&{unit}' for side in ("largest", "smallest"))
    heads = ("Load case", "Fruit in the bin", "Drive torque [N*m]", at, most, at, least, at)
    table = CaseTable(book, page, (*heads, "Hinge 1 [N]", at, "Hinge 2 [N]", at))
    for k, case in enumerate(CASES):
        values: list[tuple[str, str]] = []
        for source, start, what in (
            (tilt, TORQUE, "either"),
            (hinges, EFFORT, "MAX"),
            (hinges, EFFORT, "MIN"),
            (hinges, HINGE_1, "MAX"),
            (hinges, HINGE_2, "MAX"),
        ):
            cells, here = source.column(start + k), page.at(4 + len(values))
            either = f"IF(MAX({cells})>=-MIN({cells}),MAX({cells}),MIN({cells}))"
            values.append(
                (
                    either if what == "either" else f"{what}({cells})",
                    "#,##0.0" if start == EFFORT else "#,##0",
                )
            )
            values.append((f"INDEX({source.column(TILT)},MATCH({here},{cells},0))", "0.0"))
        fruit = "all, to the end" if case.stuck else ("pours out" if case.pours else "none")
        table.add(case.name, fruit, values)
    return table


def _governing(cases: CaseTable, column: int, what: str = "governing") -> dict[str, str]:
    return {"case": cases.envelope(column, what), "at": cases.beside(column, what, column + 1)}


def _gearbox(given: Inputs, work: Work, cases: CaseTable) -> list[Check]:
    g, factor = given.gearbox, given.factor_drive.si
    most, least = cases.envelope(MOST_AT, "largest"), cases.envelope(LEAST_AT, "smallest")
    sides = _governing(cases, MOST_AT, "largest case"), _governing(cases, LEAST_AT, "smallest case")
    either = {key: f"IF({most}>=-{least},{sides[0][key]},{sides[1][key]})" for key in ("case", "at")}
    turns = f"{work.speed.si}*{g['ratio'].si}"
    torque = cases.envelope(TORQUE_AT, "magnitude")
    rest = {"required": factor, "when": given.by_gearbox}
    return [
        Check.against(
            "Gearbox: torque at the hinge", torque, "N*m", g["gear_rating"], "gearbox_torque",
            **rest, **_governing(cases, TORQUE_AT),
        ),
        Check.against(
            "Motor: torque", f"MAX({most},-{least})", "N*m", g["motor_rating"], "motor_torque", **rest, **either
        ),
        Check.against("Motor: speed", turns, "rad/s", g["motor_speed"], "motor_speed", when=given.by_gearbox),
    ]  # fmt: skip


def _cylinder(given: Inputs, tilt: Table, cases: CaseTable) -> list[Check]:
    c, when = given.cylinder, given.by_cylinder
    push, pull = cases.envelope(MOST_AT, "largest"), cases.envelope(LEAST_AT, "smallest")
    length, arm = tilt.column(LENGTH), tilt.column(ARM)
    rest = {"required": given.factor_drive.si, "when": when}
    return [
        Check.against(
            "Cylinder: push", f"MAX(0,{push})", "N", c["push_rating"], "push",
            **rest, **_governing(cases, MOST_AT, "largest case"),
        ),
        Check.against(
            "Cylinder: pull", f"MAX(0,-{pull})", "N", c["pull_rating"], "pull",
            **rest, **_governing(cases, LEAST_AT, "smallest case"),
        ),
        Check.against(
            "Cylinder: shortest length", f"MIN({length})", "m", c["closed_length"], "shortest",
            when=when, sense="at least",
        ),
        Check.against("Cylinder: longest length", f"MAX({length})", "m", c["open_length"], "longest", when=when),
        Check.against(
            "Cylinder: smallest arm", f"MAX(0,MIN({arm}))", "m", c["least_arm"], "arm", when=when, sense="at least"
        ),
    ]  # fmt: skip


def _hinges(given: Inputs, cases: CaseTable) -> list[Check]:
    made = []
    for n, column in (("1", HINGE_1_AT), ("2", HINGE_2_AT)):
        load = f"{given.unevenness.si}*{cases.envelope(column, 'magnitude')}"
        rest = {"required": given.factor_pins.si, **_governing(cases, column)}
        label = f"Hinge {n}: bearing load, with allowance"
        made.append(Check.against(label, load, "N", given.pin_rating, f"hinge_{n}", **rest))
    return made


def _calculation(given: Inputs, work: Work, tilt: Table, gaps: str) -> list[Check]:
    """Return the checks of the calculation itself."""
    energy, gap = tilt.column(ENERGY), tilt.column(GAP)
    allowed = f"{ENERGY_TOLERANCE}*MAX(MAX({energy}),-MIN({energy}))"
    end, ramp = given.tilt_end.si, work.ramp_angle.si
    step = f"DEGREES(MAX(({end}-2*{ramp})/{STEADY_STEPS},{ramp}/{RAMP_STEPS}))"
    largest = f"MAX(MAX({gap}),-MIN({gap}))"
    ramps, look = f"2*{given.ramp_time.si}", given.look_tilt.si
    return [
        Check("Work of the drive against energy: gap", largest, '"J"', allowed, "energy", plain=True),
        Check(
            "Tables against the functions: gap", f"100*MAX({gaps})", '"%"', "0.001", "agreement", plain=True
        ),
        Check("Largest step of the tables", step, '"deg"', f"{LARGEST_STEP}", "step", plain=True),
        Check.against("Speeding up and slowing down fit", ramps, "s", given.tilt_time, "ramps", plain=True),
        Check.against("Position looked at: within the tilt", look, "rad", given.tilt_end, "look", plain=True),
    ]
