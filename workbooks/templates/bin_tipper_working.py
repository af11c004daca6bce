"""The bin tipper's working: roll-up, motion, the tables over the tilt, one position through the functions."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final, TypeAlias

from rigidsheet.udf.reading.states import STANDARD_GRAVITY
from rigidsheet.udf.units import kinds

from .bin_tipper_inputs import Inputs
from .kit import Book, Page, Place
from .kit_look import SOFT, rich

WORK_COLUMNS: Final = (2.5, 36.0, 8.0, 12.5, 10.0, 12.5, 9.0, *([9.0] * 6))
STATES: Final = ("empty", "fruit", "whole")
LOOK: Final = "position"
# Field of RB_ROLLUP, label, symbol, about, kind, unit, note.
ROLLED: Final[tuple[tuple[str, str, str, str, Any, str, str], ...]] = (
    ("mass", "Mass", "m", "", kinds.MASS, "kg", "RB_ROLLUP of the parts list"),
    ("x", "Mass center from the hinge, along x", "x_G", "", kinds.LENGTH, "mm", "table level"),
    ("y", "Mass center from the hinge, along y", "y_G", "", kinds.LENGTH, "mm", ""),
    ("z", "Mass center along the hinge", "z_G", "", kinds.LENGTH, "mm", ""),
    ("Izz", "Moment of inertia about the mass center", "I_G", "", kinds.INERTIA, "kg*m^2", ""),
    (
        "Izz", "Moment of inertia about the hinge", "I_O", "origin", kinds.INERTIA, "kg*m^2",
        "I_O = I_G + m (x_G² + y_G²)",
    ),
    (
        "Izx", "Product of inertia about the hinge", "I_{zx}", "origin", kinds.INERTIA, "kg*m^2",
        "tensor term, = minus the sum of z x m",
    ),
    (
        "Iyz", "Product of inertia about the hinge", "I_{yz}", "origin", kinds.INERTIA, "kg*m^2",
        "tensor term, = minus the sum of y z m",
    ),
)  # fmt: skip
# Label, symbol, unit and rule of the sums about the hinge axis.
SUMS: Final = (
    ("Mass", "m", "kg", ""),
    ("First moment of mass along x", "S_x", "kg*m", "S_x = m x_G"),
    ("First moment of mass along y", "S_y", "kg*m", "S_y = m y_G"),
    ("Moment of inertia about the hinge", "I_O", "kg*m^2", "fruit: all fruit less empty"),
    ("First moment of mass along the hinge", "S_z", "kg*m", "S_z = m z_G"),
    ("Sum of z x m", "K_x", "kg*m^2", "K_x = −I_{zx} about the hinge"),
    ("Sum of z y m", "K_y", "kg*m^2", "K_y = −I_{yz} about the hinge"),
)
# What counts for one hinge: label, symbol and its index, unit, the sums across and along, what they are called.
SHARES: Final = (
    ("Mass", "m_{h", "kg", 4, 0, ("S_z", "m")),
    ("First moment along x", "S_{x,h", "kg*m", 5, 1, ("K_x", "S_x")),
    ("First moment along y", "S_{y,h", "kg*m", 6, 2, ("K_y", "S_y")),
)


Cells: TypeAlias = tuple[str, str, str]  # one for each state of the bin


@dataclass(frozen=True, slots=True)
class Body:
    """Sums about the hinge axis in SI, as references, for one state of the bin."""

    mass: str
    x: str  # first moments of mass
    y: str
    inertia: str
    shares: tuple[tuple[str, str, str], tuple[str, str, str]]  # mass and first moments for hinge 1 and 2


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
    drive_shares: tuple[str, str]  # parts of the cylinder's force that count for hinge 1 and 2
    rolled: dict[str, dict[str, Place]]  # state of the bin, field


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
        _drive_shares(page, given),
        rolled,
    )


def _rolled_up(page: Page, parts: str, title: str, word: str) -> dict[str, Place]:
    page.section(title, {**page.INPUT_WORDS})
    got = {}
    for field, label, symbol, about, kind, unit, note in ROLLED:
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
    verdict = f'RB_TENSOR_CHECK(RB_ROLLUP({parts},"inertia"))'
    judged = f'IF({verdict}="OK","yes",{verdict})'
    page.put(page.LABEL, "Whether a body can have this tensor", "RS label")
    page.put(page.VALUE, page.book.guarded(judged), "RS value")
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
        "Acceleration, speeding up and slowing down",
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
    empty, whole = (_sums_of(rolled[state]) for state in ("empty", "whole"))
    rows = [_sum_row(page, *one) for one in zip(SUMS, empty, whole, strict=True)]
    rows += _hinge_rows(page, given, rows)
    return {
        state: Body(
            rows[0][k],
            rows[1][k],
            rows[2][k],
            rows[3][k],
            ((rows[7][k], rows[8][k], rows[9][k]), (rows[10][k], rows[11][k], rows[12][k])),
        )
        for k, state in enumerate(STATES)
    }


def _sums_of(rows: dict[str, Place]) -> tuple[str, ...]:
    """Return the formulas of the sums about the hinge axis out of a roll-up."""
    m, x, y, z = (rows[field].si for field in ("mass", "x", "y", "z"))
    products = f"-{rows['Izx_hinge'].si}", f"-{rows['Iyz_hinge'].si}"
    return (m, f"{m}*{x}", f"{m}*{y}", rows["Izz_hinge"].si, f"{m}*{z}", *products)


def _hinge_rows(page: Page, given: Inputs, sums: list[Cells]) -> list[Cells]:
    """Write the mass and first moments that count for each hinge: what balances about the other one."""
    z1, z2, made = given.hinge_1.si, given.hinge_2.si, []
    for hinge, far, other, span in (("1", "2", z2, f"({z1}-{z2})"), ("2", "1", z1, f"({z2}-{z1})")):
        for label, symbol, unit, across, along, (high, low) in SHARES:
            rule = f"({high} − z_{far} {low}) / (z_{hinge} − z_{far})"
            text = f"{label} that counts for hinge {hinge}", f"{symbol}{hinge}}}", unit, rule
            cells = [f"({sums[across][k]}-{other}*{sums[along][k]})/{span}" for k in (0, 2)]
            made.append(_sum_row(page, text, *cells))
    return made


def _drive_shares(page: Page, given: Inputs) -> tuple[str, str]:
    cells = []
    z1, z2, z = given.hinge_1.si, given.hinge_2.si, given.cylinder["cylinder_z"].si
    for name, this, other in (("1", z1, z2), ("2", z2, z1)):
        page.put(2, f"Cylinder's part that counts for hinge {name}", "RS label")
        page.put(3, rich(f"c_{name}", 10, italic=True, serif=True), "RS symbol")
        share = f"IF({given.by_cylinder},({z}-{other})/({this}-{other}),0)"
        page.put(4, page.book.guarded(share), "RS number")
        far = "z_2) / (z_1 − z_2)" if name == "1" else "z_1) / (z_2 − z_1)"
        page.put(8, rich(f"(z_d − {far}; none with a gearbox", 8, italic=True, color=SOFT), "RS note")
        cells.append(page.at(4))
        page.row += 1
    return cells[0], cells[1]


def _sum_row(page: Page, text: tuple[str, str, str, str], empty: str, whole: str) -> Cells:
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
