"""The bin tipper's working: roll-up, motion, the tables over the tilt, one position through the functions."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from openpyxl.utils import get_column_letter

from rigidsheet.udf import kinds
from rigidsheet.udf.states import STANDARD_GRAVITY

from .bin_tipper import CASES, Case, Inputs
from .kit import Book, Page, Place
from .kit_look import SOFT, rich

WORK_COLUMNS: Final = (2.5, 36.0, 8.0, 12.5, 10.0, 12.5, 9.0, *([9.0] * 6))
RAMP_STEPS, STEADY_STEPS = 8, 40
STATES: Final = ("empty", "fruit", "whole")
LOOK: Final = "position"


@dataclass(frozen=True, slots=True)
class Body:
    """Sums about the hinge axis in SI, as references, for one state of the bin."""

    mass: str
    x: str  # first moments of mass
    y: str
    inertia: str
    share_1: tuple[str, str, str]  # mass and first moments that count for hinge 1
    share_2: tuple[str, str, str]


@dataclass(frozen=True, slots=True)
class Work:
    """Places on the sheet of working."""

    page: Page
    gravity: Place
    speed: Place
    acceleration: Place
    ramp_angle: Place
    stop: Place
    bodies: dict[str, Body]
    masses: dict[str, Place]
    centers: dict[str, tuple[Place, Place]]


def working(book: Book, given: Inputs) -> Work:
    """Write roll-up, sums about the hinge and motion."""
    page = book.page("Working", WORK_COLUMNS, landscape=True)
    page.title_block()
    rolled = {
        "empty": _rolled_up(page, given.table, "Table with the empty bin", "empty"),
        "whole": _rolled_up(page, given.whole, "Table and bin with all fruit", "full"),
    }
    gravity, speed, acceleration, ramp, stop = _motion(page, given)
    page.page_break()
    bodies = _sums(page, given, rolled)
    return Work(
        page,
        gravity,
        speed,
        acceleration,
        ramp,
        stop,
        bodies,
        {state: rows["mass"] for state, rows in rolled.items()},
        {state: (rows["x"], rows["y"]) for state, rows in rolled.items()},
    )


def _rolled_up(page: Page, parts: str, title: str, word: str) -> dict[str, Place]:
    page.section(title, {**page.INPUT_WORDS})
    rows: tuple[tuple[str, str, str, str, Any, str, str], ...] = (
        ("mass", "Mass", "m", "", kinds.MASS, "kg", "RB_ROLLUP of the parts list"),
        ("x", "Mass center from the hinge, along x", "x_G", "", kinds.LENGTH, "mm", "table level"),
        ("y", "Mass center from the hinge, along y", "y_G", "", kinds.LENGTH, "mm", ""),
        ("z", "Mass center along the hinge", "z_G", "", kinds.LENGTH, "mm", ""),
        ("Izz", "Moment of inertia about the mass center", "I_G", "", kinds.INERTIA, "kg*m^2", ""),
        (
            "Izz",
            "Moment of inertia about the hinge",
            "I_O",
            "origin",
            kinds.INERTIA,
            "kg*m^2",
            "I_O = I_G + m (x_G² + y_G²)",
        ),
        (
            "Izx",
            "Product of inertia about the hinge",
            "I_{zx}",
            "origin",
            kinds.INERTIA,
            "kg*m^2",
            "tensor term, = minus the sum of z x m",
        ),
        (
            "Iyz",
            "Product of inertia about the hinge",
            "I_{yz}",
            "origin",
            kinds.INERTIA,
            "kg*m^2",
            "tensor term, = minus the sum of y z m",
        ),
    )
    got = {}
    for field, label, symbol, about, kind, unit, note in rows:
        key = f"{field}_hinge" if about else field
        point = f',"{about}"' if about else ","
        got[key] = page.result(
            label,
            symbol,
            f'RB_ROLLUP({parts},"{field}"{point},{{unit}})',
            kind,
            unit,
            f"{key.lower()}_{word}",
            note=note,
            strong=field == "mass",
            needed=field == "mass",
        )
    page.put(page.LABEL, "Whether a body can have this tensor", "RS label")
    page.put(page.VALUE, page.book.guarded(f'RB_TENSOR_CHECK(RB_ROLLUP({parts},"inertia"))'), "RS value")
    page.book.name(f"tensor_{word}", page.at(page.VALUE))
    page.row += 1
    mass = got["mass"].si
    page.put(page.LABEL, f'=IF(ISERROR({mass}),RB_WHY("RB_ROLLUP",{parts},"mass"),"")', "RS line")
    page.row += 1
    return got


def _motion(page: Page, given: Inputs) -> tuple[Place, Place, Place, Place, Place]:
    page.section("Motion over the tilt", page.INPUT_WORDS)
    end, whole, ramp = given.tilt_end.si, given.tilt_time.si, given.ramp_time.si
    gravity = page.derived("Standard gravity", "g", f"{STANDARD_GRAVITY}", kinds.ACCELERATION, "m/s^2")
    speed = page.derived(
        "Steady speed",
        "ω_0",
        f"{end}/({whole}-{ramp})",
        kinds.ANGULAR_VELOCITY,
        "deg/s",
        "steady_speed",
        note="ω_0 = φ_1 / (T − t_r)",
    )
    acceleration = page.derived(
        "Acceleration while speeding up and slowing down",
        "α",
        f"{speed.si}/{ramp}",
        kinds.ANGULAR_ACCELERATION,
        "deg/s^2",
        "ramp_acceleration",
        note="α = ω_0 / t_r",
    )
    angle = page.derived(
        "Tilt taken to speed up",
        "φ_r",
        f"{speed.si}*{ramp}/2",
        kinds.ANGLE,
        "deg",
        "ramp_angle",
        note="φ_r = ω_0 t_r / 2",
    )
    stop = page.derived(
        "Deceleration of an emergency stop",
        "α_s",
        f"IF({given.stop_by.si}=1,{speed.si}^2/(2*{given.stop_angle.si}),{speed.si}/{given.stop_time.si})",
        kinds.ANGULAR_ACCELERATION,
        "deg/s^2",
        "stop_deceleration",
        note="α_s = ω_0² / (2 φ_s) within an angle, ω_0 / t_s within a time",
    )
    return gravity, speed, acceleration, angle, stop


def _sums(page: Page, given: Inputs, rolled: dict[str, dict[str, Place]]) -> dict[str, Body]:
    """Write what the tables over the tilt use: sums about the hinge axis for each state of the bin."""
    page.section("Sums about the hinge in SI, table level: what the tables over the tilt use")
    for column, word in ((2, ""), (3, ""), (4, "empty"), (5, "fruit"), (6, "all fruit"), (7, ""), (8, "")):
        page.put(column, word, "RS head")
    for column in range(9, page.columns + 1):
        page.put(column, None, "RS head")
    page.row += 1
    z1, z2 = given.hinge_1.si, given.hinge_2.si
    rows = []
    e, w = rolled["empty"], rolled["whole"]

    def sums(r: dict[str, Place]) -> tuple[str, ...]:
        m, x, y, z = r["mass"].si, r["x"].si, r["y"].si, r["z"].si
        return (
            m,
            f"{m}*{x}",
            f"{m}*{y}",
            r["Izz_hinge"].si,
            f"{m}*{z}",
            f"-{r['Izx_hinge'].si}",
            f"-{r['Iyz_hinge'].si}",
        )

    texts = (
        ("Mass", "m", "kg", ""),
        ("First moment of mass along x", "S_x", "kg*m", "S_x = m x_G"),
        ("First moment of mass along y", "S_y", "kg*m", "S_y = m y_G"),
        ("Moment of inertia about the hinge", "I_O", "kg*m^2", "fruit: all fruit less empty"),
        ("First moment of mass along the hinge", "S_z", "kg*m", "S_z = m z_G"),
        ("Sum of z x m", "K_x", "kg*m^2", "K_x = −I_{zx} about the hinge"),
        ("Sum of z y m", "K_y", "kg*m^2", "K_y = −I_{yz} about the hinge"),
    )
    for text, empty, whole in zip(texts, sums(e), sums(w), strict=True):
        rows.append(_sum_row(page, text, empty, whole))
    for name, other, span in (("1", z2, f"({z1}-{z2})"), ("2", z1, f"({z2}-{z1})")):
        for label, symbol, across, along, unit in (
            ("Mass", "m", 4, 0, "kg"),
            ("First moment along x", "S_x", 5, 1, "kg*m"),
            ("First moment along y", "S_y", 6, 2, "kg*m"),
        ):
            cells = [f"({rows[across][k]}-{other}*{rows[along][k]})/{span}" for k in (0, 2)]
            far = "z_2" if name == "1" else "z_1"
            sign = "(z_1 − z_2)" if name == "1" else "(z_2 − z_1)"
            rule = {
                "m": f"(S_z − {far} m) / {sign}",
                "S_x": f"(K_x − {far} S_x) / {sign}",
                "S_y": f"(K_y − {far} S_y) / {sign}",
            }
            text = (
                f"{label} that counts for hinge {name}",
                f"{symbol.replace('_', '_{')}{',' if '_' in symbol else '_{'}h{name}}}",
                unit,
                rule[symbol],
            )
            rows.append(_sum_row(page, text, *cells))
    return {
        state: Body(
            rows[0][k],
            rows[1][k],
            rows[2][k],
            rows[3][k],
            (rows[7][k], rows[8][k], rows[9][k]),
            (rows[10][k], rows[11][k], rows[12][k]),
        )
        for k, state in enumerate(STATES)
    }


def _sum_row(page: Page, text: tuple[str, str, str, str], empty: str, whole: str) -> tuple[str, str, str]:
    label, symbol, unit, note = text
    page.put(2, label, "RS label")
    page.put(3, rich(symbol, 10, italic=True, serif=True), "RS symbol")
    cells = page.at(4), page.at(5), page.at(6)
    for column, formula in ((4, empty), (5, f"{cells[2]}-{cells[0]}"), (6, whole)):
        page.put(column, page.book.guarded(formula), "RS number")
    page.put(7, unit, "RS unit fixed")
    page.put(8, rich(note, 8, italic=True, color=SOFT) or None, "RS note")
    page.row += 1
    return cells


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
EFFORT, HINGE_1, HINGE_2 = 2, 2 + len(CASES), 2 + 2 * len(CASES)
ENERGY_CASE: Final = next(case for case in CASES if case.stuck and case.run and case.direction > 0)


def alpha_of(case: Case, tilt: Table, work: Work, row: int) -> str:
    """Return the angular acceleration of a case: that of the run, or of the stop against the motion."""
    if case.run:
        return tilt.cell(ACCELERATION, row)
    return work.stop.si if case.stop > 0 else f"-{work.stop.si}"


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
            "Table over the tilt in SI (tilt in degrees). The ends of speeding up and slowing down stand twice, once on each side.",
            "T = I_O α + g (S_x cos φ − S_y sin φ); work = sum of (T + T before) Δφ / 2; energy = g (S_x sin φ + S_y cos φ − S_y) + I_O ω² / 2, for "
            + f"{ENERGY_CASE.name}.",
            "Cylinder: L from eye to eye, arm about the hinge, u its direction on the table. Fruit: what is left while it pours.",
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
        page.put(column, rich(word, 8), "RS head")
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
    }
    cells |= _cylinder(given, table, row, phi)
    for k, case in enumerate(CASES):
        cells[TORQUE + k] = _torque(case, table, work, row, phi)
    if i is not None:
        cells |= _energy(table, work, row, phi, i)
    forms = {TILT: "0.00", TIME: "0.00", SPEED: "0.000", ACCELERATION: "0.000;-0.000;0", FRUIT_LEFT: "0.00"}
    forms |= dict.fromkeys((LENGTH, ARM, ALONG_X, ALONG_Y), "0.000")
    for column, formula in cells.items():
        page.put(
            column, page.book.guarded(formula), "RS number", row=row, form=forms.get(column, "#,##0;-#,##0;0")
        )
    if i is not None:
        page.sheet.cell(row, GAP).number_format = "0.0"


def _cylinder(given: Inputs, table: Table, row: int, phi: str) -> dict[int, str]:
    c = {name: place.si for name, place in given.cylinder.items()}
    x = f"({c['eye_x']}*COS({phi})-{c['eye_y']}*SIN({phi}))"
    y = f"({c['eye_x']}*SIN({phi})+{c['eye_y']}*COS({phi}))"
    length = table.cell(LENGTH, row)
    formulas = {
        LENGTH: f"SQRT(({x}-{c['anchor_x']})^2+({y}-{c['anchor_y']})^2)",
        ARM: f"({y}*{c['anchor_x']}-{x}*{c['anchor_y']})/{length}",
        ALONG_X: f"({x}-{c['anchor_x']})/{length}",
        ALONG_Y: f"({y}-{c['anchor_y']})/{length}",
    }
    return {column: f'IF({given.by_cylinder},{formula},"")' for column, formula in formulas.items()}


def _torque(case: Case, table: Table, work: Work, row: int, phi: str) -> str:
    def pick(part: str) -> str:
        return sums_of(case, table, work, row, lambda body: getattr(body, part))

    alpha = alpha_of(case, table, work, row)
    return f"{pick('inertia')}*{alpha}+{work.gravity.si}*({pick('x')}*COS({phi})-{pick('y')}*SIN({phi}))"


def _energy(table: Table, work: Work, row: int, phi: str, i: int) -> dict[int, str]:
    body, g = work.bodies["whole"], work.gravity.si
    torque = TORQUE + CASES.index(ENERGY_CASE)
    if i == 0:
        done = "0"
    else:
        mean = f"({table.cell(torque, row)}+{table.cell(torque, row - 1)})/2"
        done = f"{table.cell(WORK_DONE, row - 1)}+{mean}*({phi}-RADIANS($A{row - 1}))"
    rise = f"{g}*({body.x}*SIN({phi})+{body.y}*COS({phi})-{body.y})"
    return {
        WORK_DONE: done,
        ENERGY: f"{rise}+{body.inertia}*{table.cell(SPEED, row)}^2/2",
        GAP: f"{table.cell(WORK_DONE, row)}-{table.cell(ENERGY, row)}",
    }


def hinge_table(book: Book, given: Inputs, work: Work, tilt: Table) -> Table:
    """Write the table of the drive's effort and of the two hinges."""
    page = book.page("Hinges", (7.0, *([6.9] * 18)), lead=1)
    page.title_block(repeat_rows=10)
    page.prose(
        (
            "Cylinder: F = T / arm, + pushes. Motor: T / (i η) while it drives, T η / i while the table drives it, and J i α for its rotor.",
            "Hinge n: R_x = −α S_y − ω² S_x − c F u_x,  R_y = α S_x − ω² S_y + g m − c F u_y with S turned by φ, all that count for hinge n;",
            "c = (z_d − z of the other hinge) / (z of this − z of the other); R is the size. Allowance for uneven bearing: on the sheet Checks.",
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
            for column, formula, form in (
                (EFFORT + k, _effort(case, k, given, work, tilt, row), "#,##0.0"),
                (HINGE_1 + k, _hinge(case, k, given, work, tilt, table, row, 1), "#,##0"),
                (HINGE_2 + k, _hinge(case, k, given, work, tilt, table, row, 2), "#,##0"),
            ):
                page.put(column, book.guarded(formula), "RS number", row=row + shift, form=form)
    page.row = table.last + 1
    _extremes(table, range(EFFORT, HINGE_2 + len(CASES)))
    page.row = table.look + 1
    return table


def _effort(case: Case, k: int, given: Inputs, work: Work, tilt: Table, row: int) -> str:
    torque, g = tilt.cell(TORQUE + k, row), {name: place.si for name, place in given.gearbox.items()}
    drives = f"{torque}>=0" if case.direction > 0 else f"{torque}<=0"
    rotor = f"{g['rotor']}*{g['ratio']}*{alpha_of(case, tilt, work, row)}"
    motor = f"IF({drives},{torque}/{g['efficiency']},{torque}*{g['efficiency']})/{g['ratio']}+{rotor}"
    return f"IF({given.by_cylinder},{torque}/{tilt.cell(ARM, row)},{motor})"


def _hinge(
    case: Case, k: int, given: Inputs, work: Work, tilt: Table, table: Table, row: int, hinge: int
) -> str:
    def pick(part: int) -> str:
        return sums_of(case, tilt, work, row, lambda body: (body.share_1, body.share_2)[hinge - 1][part])

    phi, omega, alpha = (
        f"RADIANS({tilt.cell(TILT, row)})",
        tilt.cell(SPEED, row),
        alpha_of(case, tilt, work, row),
    )
    m, x0, y0 = pick(0), pick(1), pick(2)
    x, y = f"({x0}*COS({phi})-{y0}*SIN({phi}))", f"({x0}*SIN({phi})+{y0}*COS({phi}))"
    this, other = (given.hinge_1.si, given.hinge_2.si) if hinge == 1 else (given.hinge_2.si, given.hinge_1.si)
    push = f"{table.cell(EFFORT + k, row + table.first - tilt.first)}*({given.cylinder['cylinder_z'].si}-{other})/({this}-{other})"
    parts = []
    for inertial, along in (
        (f"-({alpha})*{y}-{omega}^2*{x}", ALONG_X),
        (f"({alpha})*{x}-{omega}^2*{y}+{work.gravity.si}*{m}", ALONG_Y),
    ):
        parts.append(f"({inertial}-IF({given.by_cylinder},{push}*{tilt.cell(along, row)},0))^2")
    return f"SQRT({'+'.join(parts)})"
