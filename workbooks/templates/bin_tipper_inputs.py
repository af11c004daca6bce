"""What a person gives the sheet: load cases, parts, and the page of inputs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from rigidsheet.udf.limits import AT_LEAST_ONE, FRACTION, NOT_NEGATIVE, POSITIVE
from rigidsheet.udf.units import kinds

from .bin_tipper_parts import FRUIT, TABLE
from .kit import Book, Page, Place
from .kit_parts import PartsTable, parts_table

TITLE: Final = "Bin tipper"
LINE: Final = (
    "Fruit-packing line, Windfall Hollow orchard co-operative: tilting table that tips bins into the flume"
)
INPUT_COLUMNS: Final = (2.5, 31.0, 7.0, 13.5, 9.0, 10.5, 8.5, *([7.3] * 9))
FREE_ROWS: Final = 2


@dataclass(frozen=True, slots=True)
class Case:
    """A load case: share of the fruit that stays (`stuck`) and that pours, direction, run or emergency stop."""

    name: str
    stuck: int
    pours: int
    direction: int
    run: int
    stop: int


CASES: Final = (
    Case("empty: returning", 0, 0, -1, 1, 0),
    Case("full: pouring", 0, 1, 1, 1, 0),
    Case("stuck: tipping", 1, 0, 1, 1, 0),
    Case("stuck: returning", 1, 0, -1, 1, 0),
    Case("stuck: stop tipping", 1, 0, 1, 0, -1),
    Case("stuck: stop returning", 1, 0, -1, 0, 1),
)
WHOLE: Final = tuple(case.name for case in CASES if not case.pours)  # cases in which the body stays whole


@dataclass(frozen=True, slots=True)
class Inputs:
    """Places of all inputs."""

    hinge_1: Place
    hinge_2: Place
    tilt_end: Place
    tilt_time: Place
    ramp_time: Place
    pour_from: Place
    pour_to: Place
    stop_by: Place
    stop_angle: Place
    stop_time: Place
    drive: Place
    cylinder: dict[str, Place]
    gearbox: dict[str, Place]
    pin_rating: Place
    unevenness: Place
    factor_drive: Place
    factor_pins: Place
    look_tilt: Place
    look_case: Place
    parts: PartsTable

    @property
    def by_cylinder(self) -> str:
        return self.parts.page.chosen(self.drive, "cylinder")

    @property
    def by_gearbox(self) -> str:
        return self.parts.page.chosen(self.drive, "gearbox")

    @property
    def table(self) -> str:
        """The parts list without the fruit."""
        return self.parts.through(self.parts.last - 1)

    @property
    def whole(self) -> str:
        """The parts list with the fruit."""
        return self.parts.through(self.parts.last)


def inputs(book: Book) -> tuple[Inputs, Page]:
    """Write the sheet of inputs."""
    page = book.page("Inputs", INPUT_COLUMNS, landscape=True)
    page.title_block()
    book.status(page)
    got: dict[str, Any] = {}
    page.rule_to = page.SI_UNIT  # the sketch stands beside the first page
    _motion(page, got)
    _drive(page, got)
    _hinges(page, got)
    page.rule_to = page.columns
    page.page_break()
    _factors(page, got)
    _looking(page, got)
    page.section("Parts list: table and bin, then the fruit in the last row")
    got["parts"] = parts_table(page, [*TABLE, *([None] * FREE_ROWS), FRUIT])
    page.skip(height=4.0)
    page.prose(
        (
            "x, y, z: mass center of the part with the table level, from the hinge axis; z along the hinge. "
            "turn z: turned about its own mass center, counter-clockwise.",
            "Give the mass or the density of a part, not both. A quantity of -1 is a cut-out. "
            "Boxes: L along x, W along y, H along z; tubes: L along z.",
        )
    )
    page.section("Assumptions")
    page.prose(
        (
            "Rigid table and frame; hinge friction is left out. Speed rises and falls evenly in time.",
            "Pouring fruit leaves evenly over the tilt; what stays keeps its mass center. Stuck fruit stays for good.",
            "An emergency stop takes the full speed off evenly, and may act at any tilt, both ways.",
            "The gearbox turns the hinge shaft with a couple and puts no side load on the hinges. "
            "The cylinder's own mass is left out.",
            "Each hinge takes its share by the places of masses and drive along the hinge, "
            "then the allowance for uneven bearing.",
        )
    )
    page.cautions()
    return Inputs(**got), page


def _motion(page: Page, got: dict[str, Any]) -> None:
    page.section("Motion", page.INPUT_WORDS)
    angle, time = kinds.ANGLE, kinds.TIME
    got["tilt_end"] = page.quantity("Tilt at the end", "φ_1", 110, "deg", "tilt_end", angle, limit=POSITIVE)
    got["tilt_time"] = page.quantity(
        "Time for the whole tilt", "T", 5.6, "s", "tilt_time", time, limit=POSITIVE
    )
    got["ramp_time"] = page.quantity(
        "Time to speed up, and to slow down", "t_r", 0.8, "s", "ramp_time", time, limit=POSITIVE
    )
    got["pour_from"] = page.quantity(
        "Fruit starts to leave at", "φ_a", 55, "deg", "pour_from", angle, limit=NOT_NEGATIVE
    )
    got["pour_to"] = page.quantity("Bin is empty at", "φ_e", 100, "deg", "pour_to", angle, limit=POSITIVE)
    got["stop_by"] = page.choice("Emergency stop is given by", "", "angle", ("angle", "time"), "stop_by")
    word = got["stop_by"].ref
    got["stop_angle"] = page.quantity(
        "Stops within an angle of",
        "φ_s",
        6,
        "deg",
        "stop_angle",
        angle,
        limit=POSITIVE,
        when=f'{word}="angle"',
    )
    got["stop_time"] = page.quantity(
        "Stops within a time of", "t_s", 0.5, "s", "stop_time", time, limit=POSITIVE, when=f'{word}="time"'
    )


def _hinges(page: Page, got: dict[str, Any]) -> None:
    page.section("Hinges", page.INPUT_WORDS)
    length = kinds.LENGTH
    got["hinge_1"] = page.quantity(
        "Hinge 1 along the axis", "z_1", -560, "mm", "hinge_1_z", length, note="drive side"
    )
    got["hinge_2"] = page.quantity("Hinge 2 along the axis", "z_2", 560, "mm", "hinge_2_z", length)
    got["pin_rating"] = page.quantity(
        "Rated load of one hinge bearing", "F_R", 12, "kN", "pin_rating", kinds.FORCE, limit=POSITIVE
    )
    got["unevenness"] = page.quantity(
        "Allowance for uneven bearing",
        "k_u",
        1.1,
        "-",
        "unevenness",
        kinds.RATIO,
        limit=AT_LEAST_ONE,
        note="on each hinge's share",
    )


def _factors(page: Page, got: dict[str, Any]) -> None:
    page.section("Required factors", page.INPUT_WORDS)
    got["factor_drive"] = page.quantity(
        "Drive: capacity over demand", "k_m", 1.3, "-", "factor_drive", kinds.RATIO, limit=POSITIVE
    )
    got["factor_pins"] = page.quantity(
        "Hinge bearings: rating over demand", "k_p", 2.0, "-", "factor_pins", kinds.RATIO, limit=POSITIVE
    )


def _drive(page: Page, got: dict[str, Any]) -> None:
    page.section("Drive", page.INPUT_WORDS)
    length, force = kinds.LENGTH, kinds.FORCE
    got["drive"] = page.choice(
        "The table is driven by a",
        "",
        "gearbox",
        ("cylinder", "gearbox"),
        "drive",
        note="only the rows of this drive are needed",
    )
    when = page.chosen(got["drive"], "cylinder")
    rows: tuple[tuple[str, str, str, float, str, Any, Any, str], ...] = (
        ("anchor_x", "Cylinder: eye on the frame, x", "x_a", 780, "mm", length, None, ""),
        ("anchor_y", "Cylinder: eye on the frame, y", "y_a", -780, "mm", length, None, ""),
        ("eye_x", "Cylinder: eye on the level table, x", "x_b", 390, "mm", length, None, ""),
        ("eye_y", "Cylinder: eye on the level table, y", "y_b", -60, "mm", length, None, ""),
        ("cylinder_z", "Cylinder: place along the hinge", "z_d", -480, "mm", length, None, ""),
        ("push_rating", "Cylinder: rated push", "F_{push}", 40, "kN", force, POSITIVE, "at working pressure"),
        ("pull_rating", "Cylinder: rated pull", "F_{pull}", 31, "kN", force, POSITIVE, "on the rod side"),
        ("closed_length", "Cylinder: length closed, eye to eye", "L_0", 790, "mm", length, POSITIVE, ""),
        ("open_length", "Cylinder: length open, eye to eye", "L_1", 1480, "mm", length, POSITIVE, ""),
        (
            "least_arm",
            "Cylinder: least arm allowed",
            "h",
            120,
            "mm",
            length,
            POSITIVE,
            "clear of dead center",
        ),
    )
    got["cylinder"] = {
        name: page.quantity(label, symbol, value, unit, name, kind, limit=limit, note=note, when=when)
        for name, label, symbol, value, unit, kind, limit, note in rows
    }
    when = page.chosen(got["drive"], "gearbox")
    torque, speed = kinds.TORQUE, kinds.ANGULAR_VELOCITY
    rows = (
        ("ratio", "Gearbox: ratio, motor to hinge", "i", 320, "-", kinds.RATIO, POSITIVE, ""),
        ("efficiency", "Gearbox: efficiency", "η", 0.92, "-", kinds.RATIO, FRACTION, "same both ways"),
        ("gear_rating", "Gearbox: rated torque at the hinge", "M", 7500, "N*m", torque, POSITIVE, ""),
        ("motor_rating", "Motor: rated torque", "M_m", 26, "N*m", torque, POSITIVE, ""),
        ("motor_speed", "Motor: rated speed", "n_m", 1440, "rpm", speed, POSITIVE, ""),
        ("rotor", "Motor: inertia of rotor and brake", "J", 0.011, "kg*m^2", kinds.INERTIA, NOT_NEGATIVE, ""),
    )
    got["gearbox"] = {
        name: page.quantity(label, symbol, value, unit, name, kind, limit=limit, note=note, when=when)
        for name, label, symbol, value, unit, kind, limit, note in rows
    }


def _looking(page: Page, got: dict[str, Any]) -> None:
    page.section("Position to look at", page.INPUT_WORDS)
    got["look_tilt"] = page.quantity(
        "Tilt", "φ", 35, "deg", "look_tilt", kinds.ANGLE, limit=NOT_NEGATIVE, note="up to the tilt at the end"
    )
    got["look_case"] = page.choice("Load case", "", "stuck: stop returning", WHOLE, "look_case")
