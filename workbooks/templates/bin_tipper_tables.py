"""The bin tipper's tables over the tilt: motion, torque and energy; effort of the drive and both hinges."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from openpyxl.formatting.rule import Rule
from openpyxl.styles.differential import DifferentialStyle
from openpyxl.styles.numbers import NumberFormat
from openpyxl.utils import get_column_letter

from .bin_tipper_inputs import CASES, Case, Inputs
from .bin_tipper_working import Work
from .kit import Book, Page
from .kit_look import rich

RAMP_STEPS, STEADY_STEPS = 8, 40


@dataclass(frozen=True, slots=True)
class Table:
    """A table over the tilt: its page, first and last row, the row of the position looked at."""

    page: Page
    first: int
    last: int
    look: int

    def column(self, column: int) -> str:
        return self.page.span((self.first, column), (self.last, column))

    def cell(self, column: int, row: int) -> str:
        return f"{self.page.name}!${get_column_letter(column)}{row}"


TILT, TIME, SPEED, ACCELERATION, FRUIT_LEFT, LENGTH, ARM, ALONG_X, ALONG_Y, TORQUE = range(1, 11)
WORK_DONE, ENERGY, GAP = TORQUE + len(CASES), TORQUE + len(CASES) + 1, TORQUE + len(CASES) + 2
COSINE, SINE, SPEED_SQUARED = GAP + 2, GAP + 3, GAP + 4  # right of the printed part
EFFORT, HINGE_1, HINGE_2 = 2, 2 + len(CASES), 2 + 2 * len(CASES)
ENERGY_CASE: Final = next(case for case in CASES if case.stuck and case.run and case.direction > 0)


def alpha_of(case: Case, tilt: Table, work: Work, row: int) -> str:
    """Return the angular acceleration of a case: that of the run, or of the stop against the motion."""
    if case.run:
        return tilt.cell(ACCELERATION, row)
    return work.stop.si if case.stop > 0 else f"-{work.stop.si}"


def same_but_direction(case: Case) -> int | None:
    """Return the place of an earlier case of the same body and acceleration: same torque, same hinge forces."""
    keys = [(one.stuck, one.pours, one.run, one.stop) for one in CASES]
    first = keys.index(keys[CASES.index(case)])
    return first if first < CASES.index(case) else None


def sums_of(case: Case, tilt: Table, work: Work, row: int, pick: Any) -> str:
    """Return one of the sums about the hinge for a case; pouring fruit counts by what is left."""
    if case.pours:
        left = tilt.cell(FRUIT_LEFT, row)
        return f"({pick(work.bodies['empty'])}+{left}*{pick(work.bodies['fruit'])})"
    return str(pick(work.bodies["whole" if case.stuck else "empty"]))


def tilt_table(book: Book, given: Inputs, work: Work) -> Table:
    """Write the table of motion, torque and energy."""
    page = book.page(
        "Tilt", (7.0, 6.2, 7.2, 7.8, 6.2, 7.0, 7.0, 6.8, 6.8, *([8.2] * 6), 8.0, 8.0, 7.0), lead=1
    )
    page.title_block(repeat_rows=10)
    page.prose(
        (
            "In SI, tilt in degrees. The ends of speeding up and slowing down stand twice, once on each side.",
            f"T = I_O α + g (S_x cos φ − S_y sin φ). For {ENERGY_CASE.name}: work = sum of (T + T before) Δφ / 2, "
            "energy = g (S_x sin φ + S_y cos φ − S_y) + I_O ω² / 2.",
            "Cylinder: length from eye to eye, arm about the hinge, u its direction in the table's own axes. "
            "Fruit: what is left while it pours.",
        )
    )
    heads = ("tilt", "time", "speed", "accel.", "fruit", "length", "arm", "u_x", "u_y")
    energy = ("work", "energy", "gap")
    units = ("deg", "s", "rad/s", "rad/s²", "-", "m", "m", "-", "-", *(["N*m"] * len(CASES)), "J", "J", "J")
    _heads(
        page,
        (*heads, *(case.name for case in CASES), *energy),
        units,
        [("Drive torque at the hinge", TORQUE)],
    )
    for column, word in ((COSINE, "cos"), (SINE, "sin"), (SPEED_SQUARED, "speed^2")):
        page.put(column, word, "RS column", row=page.row - 1)
    first = page.row
    count = 2 * RAMP_STEPS + STEADY_STEPS + 3
    table = Table(page, first, first + count - 1, first + count + 3)
    for i in range(count):
        _tilt_row(given, work, table, first + i, i)
    page.row = table.last + 1
    _extremes(table, range(TORQUE, GAP + 1))
    _tilt_row(given, work, table, table.look, None)
    page.row = table.look + 1
    return table


def _heads(page: Page, words: tuple[str, ...], units: tuple[str, ...], groups: list[tuple[str, int]]) -> None:
    for column in range(1, len(words) + 1):
        page.put(column, None, "RS column")
    for group, start in groups:
        page.put(start, group, "RS status")
    page.row += 1
    page.sheet.row_dimensions[page.row].height = 46.0
    for column, (word, unit) in enumerate(zip(words, units, strict=True), 1):
        page.put(column, rich(word.replace(": ", ":\n"), 8), "RS head")
        page.put(column, unit, "RS column", row=page.row + 1)
    page.row += 2
    page.sheet.freeze_panes = page.sheet.cell(page.row, 2)


def _extremes(table: Table, columns: range) -> None:
    page = table.page
    for name, word in (("MAX", "largest"), ("MIN", "smallest")):
        for column in range(1, page.columns + 1):
            page.put(column, None, "RS total")
        page.put(1, word, "RS total")
        for column in columns:
            form = page.sheet.cell(table.first, column).number_format
            page.put(column, page.book.guarded(f"{name}({table.column(column)})"), "RS total", form=form)
        page.row += 1
    page.put(1, "The position looked at, by the same formulas", "RS line", row=table.look - 1)


def _phase(given: Inputs, work: Work, i: int) -> tuple[str, str, str]:
    """Return tilt [rad], acceleration and phase (up, steady, down) of row i."""
    end, ramp, a = given.tilt_end.si, work.ramp_angle.si, work.acceleration.si
    if i <= RAMP_STEPS:
        return f"{ramp}*{i}/{RAMP_STEPS}", a, "up"
    i -= RAMP_STEPS + 1
    if i <= STEADY_STEPS:
        return f"{ramp}+({end}-2*{ramp})*{i}/{STEADY_STEPS}", "0", "steady"
    i -= STEADY_STEPS + 1
    return f"{end}-{ramp}*{RAMP_STEPS - i}/{RAMP_STEPS}", f"-{a}", "down"


def _tilt_row(given: Inputs, work: Work, table: Table, row: int, i: int | None) -> None:
    """Write a row of the table; `i` is None for the position looked at."""
    page = table.page
    end, ramp, a = given.tilt_end.si, work.ramp_angle.si, work.acceleration.si
    speed, t_ramp, whole = work.speed.si, given.ramp_time.si, given.tilt_time.si
    phi = f"RADIANS($A{row})"
    times = {
        "up": f"SQRT(2*{phi}/{a})",
        "steady": f"{t_ramp}+({phi}-{ramp})/{speed}",
        "down": f"{whole}-SQRT(2*MAX(0,{end}-{phi})/{a})",
    }
    speeds = {"up": f"SQRT(2*{a}*{phi})", "steady": speed, "down": f"SQRT(2*{a}*MAX(0,{end}-{phi}))"}
    if i is None:
        angle, phase = given.look_tilt.si, ""
        chosen = [
            f"IF({phi}<={ramp},{c['up']},IF({phi}<{end}-{ramp},{c['steady']},{c['down']}))"
            for c in (times, speeds, {"up": a, "steady": "0", "down": f"-{a}"})
        ]
    else:
        angle, alpha, phase = _phase(given, work, i)
        chosen = [times[phase], speeds[phase], alpha]
    fall = f"MAX(0,MIN(1,({given.pour_to.si}-{phi})/({given.pour_to.si}-{given.pour_from.si})))"
    cells = {
        TILT: f"DEGREES({angle})",
        TIME: chosen[0],
        SPEED: chosen[1],
        ACCELERATION: chosen[2],
        FRUIT_LEFT: fall,
        COSINE: f"COS({phi})",
        SINE: f"SIN({phi})",
        SPEED_SQUARED: f"{table.cell(SPEED, row)}^2",
    }
    cells |= _cylinder(given, table, row)
    for k, case in enumerate(CASES):
        cells[TORQUE + k] = _torque(case, table, work, row)
    if i is not None:
        cells |= _energy(table, work, row, phi, i)
    forms = {TILT: "0.00", TIME: "0.00", SPEED: "0.000", ACCELERATION: "0.000;-0.000;0", FRUIT_LEFT: "0.00"}
    forms |= dict.fromkeys((LENGTH, ARM, ALONG_X, ALONG_Y), "0.000;-0.000;")
    forms |= dict.fromkeys((COSINE, SINE, SPEED_SQUARED), "0.0000")
    for column, formula in cells.items():
        page.put(
            column, page.book.guarded(formula), "RS number", row=row, form=forms.get(column, "#,##0;-#,##0;0")
        )
    if i is not None:
        page.sheet.cell(row, GAP).number_format = "0.0"


def _cylinder(given: Inputs, table: Table, row: int) -> dict[int, str]:
    """Return length, arm and direction of the cylinder in the table's own axes, where its eye stands still."""
    c = {name: place.si for name, place in given.cylinder.items()}
    cos, sin = table.cell(COSINE, row), table.cell(SINE, row)
    x = f"{c['eye_x']}-{c['anchor_x']}*{cos}-{c['anchor_y']}*{sin}"
    y = f"{c['eye_y']}-{c['anchor_y']}*{cos}+{c['anchor_x']}*{sin}"
    length, ux, uy = (table.cell(column, row) for column in (LENGTH, ALONG_X, ALONG_Y))
    formulas = {
        LENGTH: (f"SQRT(({x})^2+({y})^2)", '""'),
        ARM: (f"{c['eye_x']}*{uy}-{c['eye_y']}*{ux}", '""'),
        ALONG_X: (f"({x})/{length}", "0"),
        ALONG_Y: (f"({y})/{length}", "0"),
    }
    return {
        column: f"IF({given.by_cylinder},{formula},{otherwise})"
        for column, (formula, otherwise) in formulas.items()
    }


def _torque(case: Case, table: Table, work: Work, row: int) -> str:
    same = same_but_direction(case)
    if same is not None:
        return table.cell(TORQUE + same, row)

    def pick(part: str) -> str:
        return sums_of(case, table, work, row, lambda body: getattr(body, part))

    alpha = alpha_of(case, table, work, row)
    cos, sin = table.cell(COSINE, row), table.cell(SINE, row)
    return f"{pick('inertia')}*{alpha}+{work.gravity.si}*({pick('x')}*{cos}-{pick('y')}*{sin})"


def _energy(table: Table, work: Work, row: int, phi: str, i: int) -> dict[int, str]:
    body, g = work.bodies["whole"], work.gravity.si
    torque = TORQUE + CASES.index(ENERGY_CASE)
    if i == 0:
        done = "0"
    else:
        mean = f"({table.cell(torque, row)}+{table.cell(torque, row - 1)})/2"
        done = f"{table.cell(WORK_DONE, row - 1)}+{mean}*({phi}-RADIANS($A{row - 1}))"
    cos, sin = table.cell(COSINE, row), table.cell(SINE, row)
    rise = f"{g}*({body.x}*{sin}+{body.y}*{cos}-{body.y})"
    return {
        WORK_DONE: done,
        ENERGY: f"{rise}+{body.inertia}*{table.cell(SPEED_SQUARED, row)}/2",
        GAP: f"{table.cell(WORK_DONE, row)}-{table.cell(ENERGY, row)}",
    }


def hinge_table(book: Book, given: Inputs, work: Work, tilt: Table) -> Table:
    """Write the table of the drive's effort and of the two hinges."""
    page = book.page("Hinges", (7.0, *([6.9] * 18)), lead=1)
    page.title_block(repeat_rows=10)
    page.prose(
        (
            "Cylinder: F = T / arm, + pushes. Motor: T / (i η) while it drives, T η / i while the table drives it; "
            "J i α for its rotor on top.",
            "Hinge, in the table's own axes: R_x = −α S_y − ω² S_x + g m sin φ − c F u_x,  "
            "R_y = α S_x − ω² S_y + g m cos φ − c F u_y; R is their size.",
            "m, S and c are the parts that count for this hinge (sheet Working). "
            "The allowance for uneven bearing comes on the sheet Checks.",
        )
    )
    unit = f'=IF({given.by_cylinder},"N","N*m")'
    names = tuple(case.name for case in CASES)
    groups = [("Hinge 1", HINGE_1), ("Hinge 2", HINGE_2)]
    _heads(page, ("tilt", *names, *names, *names), ("deg", *([unit] * 6), *(["N"] * 12)), groups)
    page.put(
        EFFORT,
        f'=IF({given.by_cylinder},"Force of the cylinder","Torque of the motor")',
        "RS status",
        row=page.row - 3,
    )
    table = Table(page, page.row, page.row + tilt.last - tilt.first, page.row + tilt.look - tilt.first)
    shift = table.first - tilt.first
    for row in [*range(tilt.first, tilt.last + 1), tilt.look]:
        page.put(1, book.guarded(tilt.cell(TILT, row)), "RS number", row=row + shift, form="0.00")
        for k, case in enumerate(CASES):
            effort = f"${get_column_letter(EFFORT + k)}{row + shift}"
            for column, formula, form in (
                (EFFORT + k, _effort(case, k, given, work, tilt, row), "#,##0"),
                (HINGE_1 + k, _hinge(case, work, tilt, row, effort, 1), "#,##0"),
                (HINGE_2 + k, _hinge(case, work, tilt, row, effort, 2), "#,##0"),
            ):
                same = same_but_direction(case)
                if same is not None and column > EFFORT + k:
                    formula = table.cell(column - k + same, row + shift)
                page.put(column, book.guarded(formula), "RS number", row=row + shift, form=form)
    page.row = table.last + 1
    _extremes(table, range(EFFORT, HINGE_2 + len(CASES)))
    _tenths(table)
    page.row = table.look + 1
    return table


def _tenths(table: Table) -> None:
    """Show the torque of a motor, which is small, with one more digit than the force of a cylinder."""
    left, right = (get_column_letter(column) for column in (EFFORT, EFFORT + len(CASES) - 1))
    more = DifferentialStyle(numFmt=NumberFormat(numFmtId=164, formatCode="#,##0.0"))
    rule = Rule(type="expression", dxf=more, formula=[f'${left}${table.first - 1}="N*m"'])
    cells = f"{left}{table.first}:{right}{table.look}"
    table.page.sheet.conditional_formatting.add(cells, rule)


def _effort(case: Case, k: int, given: Inputs, work: Work, tilt: Table, row: int) -> str:
    torque, g = tilt.cell(TORQUE + k, row), {name: place.si for name, place in given.gearbox.items()}
    drives, driven = ("MAX", "MIN") if case.direction > 0 else ("MIN", "MAX")
    eta, rotor = g["efficiency"], f"{g['rotor']}*{g['ratio']}*{alpha_of(case, tilt, work, row)}"
    motor = f"({drives}(0,{torque})/{eta}+{driven}(0,{torque})*{eta})/{g['ratio']}+{rotor}"
    return f"IF({given.by_cylinder},{torque}/{tilt.cell(ARM, row)},{motor})"


def _hinge(case: Case, work: Work, tilt: Table, row: int, effort: str, hinge: int) -> str:
    """Return the size of a hinge's force, from its components in the table's own axes."""

    def pick(part: int) -> str:
        return sums_of(case, tilt, work, row, lambda body: body.shares[hinge - 1][part])

    cos, sin, squared = (tilt.cell(column, row) for column in (COSINE, SINE, SPEED_SQUARED))
    alpha, weight = alpha_of(case, tilt, work, row), f"{work.gravity.si}*{pick(0)}"
    push = f"{work.drive_shares[hinge - 1]}*{effort}"
    x = f"-{alpha}*{pick(2)}-{squared}*{pick(1)}+{weight}*{sin}-{push}*{tilt.cell(ALONG_X, row)}"
    y = f"{alpha}*{pick(1)}-{squared}*{pick(2)}+{weight}*{cos}-{push}*{tilt.cell(ALONG_Y, row)}"
    return f"SQRT(({x})^2+({y})^2)"
