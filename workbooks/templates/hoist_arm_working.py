"""The hoist arm's working: roll-up, motion, load cases, and the table over the arm's angle in plain numbers."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from openpyxl.styles import Border, Font, Side
from openpyxl.utils import get_column_letter

from rigidsheet.udf.reading.states import STANDARD_GRAVITY
from rigidsheet.udf.units import kinds

from .hoist_arm_inputs import CASES, LOWER, NAMES, STOP_LOWERING, Case, Inputs
from .kit import Book, Page, Place
from .kit_look import HAIR, INDENT, INK, SANS

WORK_COLUMNS: Final = (2.5, 34.0, 10.0, 12.5, 10.0, 12.5, 9.0, 17.0, 9.5, 9.5, 9.5, 9.5, 9.0)
STEPS: Final = 40
ANGLE, R_X, R_Y, TORQUE = 1, 2, 3, 4
FIXED = TORQUE + len(CASES)  # drive torque of the stop while lowering with the pivot treated as fixed
EFFORT, PIN = FIXED + 1, FIXED + 1 + len(CASES)
OMEGA, ALPHA, A_X, A_Y = 4, 5, 6, 7  # columns of the load cases on the sheet of working


@dataclass(frozen=True, slots=True)
class Work:
    """Places on the sheet of working."""

    page: Page
    mass: Place
    x: Place
    y: Place
    own: Place  # moment of inertia about the mass center
    inertia: Place  # about the pivot
    gravity: Place
    ramp: Place
    case_row: int  # of the first load case

    def case(self, column: int, k: int) -> str:
        """Return the cell of a load case: its omega, alpha, or acceleration of the pivot."""
        return self.page.at(column, self.case_row + k)

    def cases(self, column: int) -> str:
        return self.page.span((self.case_row, column), (self.case_row + len(CASES) - 1, column))


def working(book: Book, given: Inputs) -> Work:
    """Write roll-up, motion and load cases."""
    page = book.page("Working", WORK_COLUMNS, landscape=True)
    page.title_block()
    rolled = _rolled_up(page, given)
    gravity, ramp, stop, carriage = _motion(page, given)
    row = _cases(page, given, ramp, stop, carriage)
    return Work(
        page, rolled["mass"], rolled["x"], rolled["y"], rolled["own"], rolled["inertia"], gravity, ramp, row
    )


def _rolled_up(page: Page, given: Inputs) -> dict[str, Place]:
    page.section("Arm with crate, level, rolled up", page.INPUT_WORDS)
    inertia, length = kinds.INERTIA, kinds.LENGTH
    rows: tuple[tuple[str, str, str, str, str, Any, str, str], ...] = (
        ("mass", "mass", "Mass", "m", "", kinds.MASS, "kg", "RB_ROLLUP of the parts list"),
        ("x", "x", "Mass center from the pivot, along x", "x_G", "", length, "mm", "arm level"),
        ("y", "y", "Mass center from the pivot, along y", "y_G", "", length, "mm", ""),
        ("own", "Izz", "Moment of inertia about the mass center", "I_G", "", inertia, "kg*m^2", ""),
        ("inertia", "Izz", "Moment of inertia about the pivot", "I_B", "origin", inertia, "kg*m^2",
         "I_B = I_G + m (x_G² + y_G²)"),
    )  # fmt: skip
    got = {}
    for key, field, label, symbol, about, kind, unit, note in rows:
        point = f',"{about}"' if about else ","
        formula = f'RB_ROLLUP({given.body},"{field}"{point},{{unit}})'
        first = key == "mass"
        got[key] = page.result(
            label, symbol, formula, kind, unit, f"arm_{key}", note=note, strong=first, needed=first
        )
    alone = f'RB_ROLLUP({given.arm},"mass",,{{unit}})'
    page.result(
        "Mass of the arm alone", "", alone, kinds.MASS, "kg", "arm_mass_empty", note="without the crate"
    )
    mass = got["mass"].si
    page.put(page.LABEL, f'=IF(ISERROR({mass}),RB_WHY("RB_ROLLUP",{given.body},"mass"),"")', "RS line")
    page.row += 1
    return got


def _motion(page: Page, given: Inputs) -> tuple[Place, ...]:
    """Write gravity and the accelerations of ramp, emergency stop of the arm, and of the carriage."""
    page.section("Accelerations", page.INPUT_WORDS)
    speed, travel, turning = given.si("arm_speed"), given.si("travel_speed"), kinds.ANGULAR_ACCELERATION
    by_distance = f"{travel}^2/(2*{given.si('stop_distance')})"
    by_time = f"{travel}/{given.si('stop_time')}"
    rows: tuple[tuple[str, str, str, Any, str, str, str], ...] = (
        ("Standard gravity", "g", f"{STANDARD_GRAVITY}", kinds.ACCELERATION, "m/s^2", "", ""),
        ("Arm: speeding up and slowing down", "α_r", f"{speed}/{given.si('ramp_time')}", turning, "deg/s^2",
         "ramp_acceleration", "α_r = ω_0 / t_r"),
        ("Arm: emergency stop", "α_s", f"{speed}/{given.si('arm_stop_time')}", turning, "deg/s^2",
         "arm_stop_deceleration", "α_s = ω_0 / t_s"),
        ("Carriage: emergency stop", "a_s", f"IF({given.si('stop_by')}=1,{by_distance},{by_time})",
         kinds.ACCELERATION, "m/s^2", "carriage_stop_deceleration",
         "a_s = v² / (2 s) within a distance, v / t_c within a time"),
    )  # fmt: skip
    return tuple(page.derived(*row, note=note) for *row, note in rows)


def _cases(page: Page, given: Inputs, ramp: Place, stop: Place, carriage: Place) -> int:
    """Write what each load case means in numbers; give its first row."""
    page.section("Load cases: signs of the motion, in SI")
    heads = ("Load case", "", "ω [rad/s]", "α [rad/s²]", "a of B, x [m/s²]", "y [m/s²]", "what happens")
    for column in range(2, page.columns + 1):
        page.put(column, heads[column - 2] if column - 2 < len(heads) else None, "RS head")
    page.sheet.row_dimensions[page.row].height = 16.0
    page.row += 1
    first = page.row
    stopped = f"CHOOSE({given.si('in_stop')},0,-{carriage.si},{carriage.si})"
    alphas = {"ramp": ramp.si, "stop +": stop.si, "stop -": f"-{stop.si}", "none": "0"}
    pivots = {
        "none": "0",
        "travel": given.si("travel_acceleration"),
        "forward": f"-{carriage.si}",
        "backward": carriage.si,
        "with arm": stopped,
    }
    for case in CASES:
        page.put(2, case.name, "RS text")
        page.put(3, None, "RS text")
        for column, formula in (
            (OMEGA, f"{case.direction}*{given.si('arm_speed')}"),
            (ALPHA, alphas[case.alpha]),
            (A_X, pivots[case.carriage]),
            (A_Y, "0"),
        ):
            form = '"±"0.0000' if column == ALPHA and case.alpha == "ramp" else "0.0000"
            page.put(column, page.book.guarded(formula), "RS number", form=form)
        for column in range(8, page.columns + 1):
            text = page.put(column, case.text if column == 8 else None, "RS text")
            text.alignment = INDENT
        page.row += 1
    page.prose(
        (
            "ω, α counter-clockwise +: lifting. a of B: acceleration of the pivot, forward +. "
            "±: the side that asks more of the drive.",
        )
    )
    return first


@dataclass(frozen=True, slots=True)
class Table:
    """The table over the arm's angle: its page, first and last row, the row of the position looked at."""

    page: Page
    first: int
    last: int
    look: int

    def column(self, column: int) -> str:
        return self.page.span((self.first, column), (self.last, column))

    def cell(self, column: int, row: int) -> str:
        return f"{self.page.name}!${get_column_letter(column)}{row}"

    def looked(self, column: int, number: str) -> str:
        """Return the value of a load case, given by its number, at the position looked at."""
        cells = self.page.span((self.look, column), (self.look, column + len(CASES) - 1))
        return f"INDEX({cells},1,{number})"


def angle_table(book: Book, given: Inputs, work: Work) -> Table:
    """Write drive torque, torque of motor or brake, and pin load over the arm's angle."""
    page = book.page(
        "Angles", (6.4, 6.4, 6.4, *([6.6] * (PIN + len(CASES) - TORQUE))), landscape=True, lead=1
    )
    page.title_block(repeat_rows=9)
    page.prose(
        (
            "T = I_B α + m (g r_x − r_y a_{Bx}).  Motor: T / (i η) while it drives, T η / i while the load drives, "
            "+ J i α; brake at rest: T / i.   Pin: m (a_{Bx} − α r_y − ω² r_x, g + α r_x − ω² r_y), its size.",
        )
    )
    _heads(page)
    table = Table(page, page.row, page.row + STEPS, page.row + STEPS + 2)
    low, high = given.si("angle_from"), given.si("angle_to")
    for i in range(STEPS + 1):
        _row(book, given, work, table, table.first + i, f"{low}+({high}-{low})*{i}/{STEPS}")
    page.put(1, "The position looked at, by the same formulas", "RS line", row=table.look - 1)
    _row(book, given, work, table, table.look, given.si("look_angle"))
    page.row = table.look + 1
    return table


def _heads(page: Page) -> None:
    groups = {
        TORQUE: "Drive torque at the pivot",
        EFFORT: "Motor or brake, at the motor shaft",
        PIN: "Load of the pivot pin",
    }
    for column, text in groups.items():
        page.put(column, text, "RS status")
    page.row += 1
    page.sheet.row_dimensions[page.row].height = 38.0
    words = (
        *("angle", "x of G", "y of G"), *NAMES, "stop while lowering, pivot as fixed", *NAMES, *NAMES,
    )  # fmt: skip
    units = ("deg", "m", "m", *(["N*m"] * (2 * len(CASES) + 1)), *(["N"] * len(CASES)))
    for column, (word, unit) in enumerate(zip(words, units, strict=True), 1):
        cell = page.put(column, word.replace(" ", "\n") if word in NAMES else word, "RS head")
        cell.font = Font(name=SANS, size=7, bold=True, color=INK)
        page.put(column, unit, "RS column", row=page.row + 1)
    page.row += 2
    page.sheet.freeze_panes = page.sheet.cell(page.row, 2)


def _row(book: Book, given: Inputs, work: Work, table: Table, row: int, angle: str) -> None:
    page, turn = table.page, f"RADIANS($A{row})"
    x, y, g, m, inertia = work.x.si, work.y.si, work.gravity.si, work.mass.si, work.inertia.si
    rx, ry = f"$B{row}", f"$C{row}"
    cells: dict[int, tuple[str, str]] = {
        ANGLE: (f"DEGREES({angle})", "0.00"),
        R_X: (f"{x}*COS({turn})-{y}*SIN({turn})", "0.000"),
        R_Y: (f"{x}*SIN({turn})+{y}*COS({turn})", "0.000"),
    }
    for k, case in enumerate(CASES):
        torque = f"{get_column_letter(TORQUE + k)}{row}"
        alpha, pull = work.case(ALPHA, k), f"{m}*({g}*{rx}-{ry}*{work.case(A_X, k)})"
        side = f"IF({pull}<0,-1,1)*" if case.alpha == "ramp" else ""
        cells[TORQUE + k] = (f"{inertia}*{side}{alpha}+{pull}", "#,##0")
        cells[EFFORT + k] = (_effort(case, given, torque, _alpha(case, work, k, torque)), "0.0")
        cells[PIN + k] = (_pin(work, k, _alpha(case, work, k, torque), rx, ry), "#,##0")
    cells[FIXED] = (f"{inertia}*{work.case(ALPHA, STOP_LOWERING)}+{m}*{g}*{rx}", "#,##0")
    page.sheet.row_dimensions[row].height = 12.0
    for column, (formula, form) in cells.items():
        cell = page.put(column, book.guarded(formula), "RS number", row=row, form=form)
        if column in (TORQUE, FIXED, EFFORT, PIN):
            cell.border = Border(left=Side("thin", color=HAIR), bottom=Side("hair", color=HAIR))


def _alpha(case: Case, work: Work, k: int, torque: str) -> str:
    """Return the angular acceleration of a case; that of a ramp has the sign of the torque it adds to."""
    alpha = work.case(ALPHA, k)
    return f"IF({torque}<0,-1,1)*{alpha}" if case.alpha == "ramp" else alpha


def _effort(case: Case, given: Inputs, torque: str, alpha: str) -> str:
    ratio, eta = given.si("ratio"), given.si("efficiency")
    if case.direction == 0:
        return f"{torque}/{ratio}"
    drives = f"{torque}{'>' if case.direction > 0 else '<'}=0"
    return f"IF({drives},{torque}/{eta},{torque}*{eta})/{ratio}+{given.si('rotor')}*{ratio}*{alpha}"


def _pin(work: Work, k: int, alpha: str, rx: str, ry: str) -> str:
    spin = f"{work.case(OMEGA, k)}^2"
    along = f"{work.case(A_X, k)}-({alpha})*{ry}-{spin}*{rx}"
    up = f"{work.gravity.si}+({alpha})*{rx}-{spin}*{ry}"
    return f"{work.mass.si}*SQRT(({along})^2+({up})^2)"


def given_back(given: Inputs, table: Table) -> str:
    """Return the largest power [W] that the lowered load gives back behind the gearbox, as formula text."""
    torque = table.column(TORQUE + LOWER)
    return f"{given.si('efficiency')}*{given.si('arm_speed')}*MAX(0,MAX({torque}))"
