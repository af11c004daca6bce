"""What a person gives the sheet: load cases, parts, and the page of inputs."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

from openpyxl.utils import get_column_letter

from rigidsheet.udf.limits import NONZERO, NOT_NEGATIVE, POSITIVE, Limit
from rigidsheet.udf.units import kinds
from rigidsheet.udf.units.kinds import Kind

from .kit import Book, Page, Place

TITLE: Final = "Shaker arm"
LINE: Final = (
    "Fruit-packing line, Windfall Hollow orchard co-operative: shaker arm with sensor, tray and pusher"
)
INPUT_COLUMNS: Final = (2.5, 34.0, 7.0, 13.5, 9.0, 9.5, 8.5, *([7.4] * 9))
CASES: Final = ("slow", "rated", "overspeed", "jam stop begins", "jam stop ends")
STOPPING: Final = CASES[3:]
GRAVITY_WORDS: Final = ("with gravity", "motion only")

Given = dict[str, Place]
Row = tuple[str, str, str, float, str, Kind, "Limit | None", str]

LINKAGE: Final[tuple[Row, ...]] = (
    ("crank", "Crank, from its shaft to pin A", "r", 30, "mm", kinds.LENGTH, POSITIVE, ""),
    ("arm", "Arm, from pin A to far end B", "l", 400, "mm", kinds.LENGTH, POSITIVE, ""),
    ("guide", "Guide of B above the crank shaft", "e", 20, "mm", kinds.LENGTH, None, ""),
)
SENSOR: Final[tuple[Row, ...]] = (
    ("sensor_u", "Place along the arm, from A", "u_S", -35, "mm", kinds.LENGTH, None, "beyond A"),
    ("sensor_v", "Place across the arm", "v_S", 60, "mm", kinds.LENGTH, None, ""),
    ("sensor_limit", "Rated range of the sensor, + and −", "a_R", 2, "g", kinds.ACCELERATION, POSITIVE, ""),
)
TRAY: Final[tuple[Row, ...]] = (
    ("tray_mass", "Mass of tray and fruit", "m_T", 9, "kg", kinds.MASS, POSITIVE, ""),
    ("tray_u", "Mass center along the arm, from A", "u_G", 210, "mm", kinds.LENGTH, None, ""),
    ("tray_v", "Mass center across the arm", "v_G", 75, "mm", kinds.LENGTH, None, ""),
    ("tray_length", "Length of tray and fruit, as a box", "L", 360, "mm", kinds.LENGTH, POSITIVE, ""),
    ("tray_height", "Height of tray and fruit, as a box", "H", 110, "mm", kinds.LENGTH, POSITIVE, ""),
    ("foot_1", "Foot 1 along the arm, from A", "u_1", 60, "mm", kinds.LENGTH, None, ""),
    ("foot_2", "Foot 2 along the arm, from A", "u_2", 360, "mm", kinds.LENGTH, None, ""),
    ("seat", "Mat under the feet, across the arm", "v_F", 20, "mm", kinds.LENGTH, None, ""),
    ("friction", "Coefficient of friction of the mat", "μ", 0.8, "-", kinds.RATIO, POSITIVE, "wet mat"),
)
PUSHER: Final[tuple[Row, ...]] = (
    ("pusher_mass", "Mass that slides", "m_P", 2.4, "kg", kinds.MASS, POSITIVE, ""),
    ("pusher_u", "Place along the arm, from A", "u_P", 300, "mm", kinds.LENGTH, None, "where it counts most"),
    ("pusher_v", "Place across the arm", "v_P", 150, "mm", kinds.LENGTH, None, ""),
    ("slide_speed", "Slide speed, out and back", "w", 0.6, "m/s", kinds.VELOCITY, NOT_NEGATIVE, ""),
    ("slide_rise", "Slide acceleration, out and back", "b", 4, "m/s^2", kinds.ACCELERATION, NOT_NEGATIVE, ""),
    ("guide_rating", "Rated side load of its guide", "F_S", 60, "N", kinds.FORCE, POSITIVE, ""),
    ("thrust_rating", "Rated thrust of its cylinder", "F_T", 45, "N", kinds.FORCE, POSITIVE, "both ways"),
)
SPEEDS: Final[tuple[Row, ...]] = (
    ("speed_slow", "Crank speed, slow", "n_1", 45, "rpm", kinds.ANGULAR_VELOCITY, NONZERO, "ccw +"),
    ("speed_rated", "Crank speed, rated", "n_2", 110, "rpm", kinds.ANGULAR_VELOCITY, NONZERO, ""),
    ("speed_over", "Crank speed, overspeed", "n_3", 125, "rpm", kinds.ANGULAR_VELOCITY, NONZERO, ""),
    ("speed_jam", "Crank speed before a jam stop", "n_4", 110, "rpm", kinds.ANGULAR_VELOCITY, NONZERO, ""),
    (
        "stop_angle",
        "A jam stops the crank within",
        "θ_s",
        30,
        "deg",
        kinds.ANGLE,
        POSITIVE,
        "at any crank angle",
    ),
)
FACTORS: Final[tuple[Row, ...]] = (
    ("factor_sensor", "Sensor: range over acceleration", "k_S", 1.2, "-", kinds.RATIO, POSITIVE, ""),
    ("factor_lift", "Tray feet: weight over what lifts them", "k_L", 1.5, "-", kinds.RATIO, POSITIVE, ""),
    ("factor_slip", "Tray: friction there is over needed", "k_F", 1.25, "-", kinds.RATIO, POSITIVE, ""),
    ("factor_pusher", "Pusher: rating over load", "k_P", 1.5, "-", kinds.RATIO, POSITIVE, ""),
)
ASSUMPTIONS: Final = (
    "Rigid links without play. Vibration of arm and frame on top of the motion is not in these numbers.",
    "Steady crank speed, but a jam takes it off evenly within its angle, and may come at any crank angle.",
    "At a crank angle loads follow the square of the speed: a stop is worst where it begins or where it ends.",
    "The size of the acceleration is compared with the sensor's range; no axis reads more. At rest it reads 1 g.",
    "The tray stands on two feet that only push. Fruit lies still in the tray.",
    "The pusher may slide at any crank angle, out or back, speeding up or slowing down, without friction.",
)


def block(first: Place, second: Place) -> str:
    """Return two places under each other, values beside units: a vector for the functions."""
    return f"{first.ref}:${get_column_letter(second.unit_column)}${second.row}"


def inputs(book: Book) -> tuple[Given, Page]:
    """Write the sheet of inputs."""
    page = book.page("Inputs", INPUT_COLUMNS, landscape=True)
    page.title_block()
    book.status(page)
    given: Given = {}
    page.rule_to = page.SI_UNIT  # the sketch stands beside the first page
    _rows(page, given, "Linkage", LINKAGE)
    left = f"{given['arm'].si}-{given['crank'].si}-ABS({given['guide'].si})"
    why = "The arm is too short for the crank to turn right round."
    page.condition("Left over, l − r − |e|", left, kinds.LENGTH, why)
    _looking(page, given)
    _rows(page, given, "Sensor S", SENSOR)
    given["sensor_reads"] = page.choice(
        "The sensor reads",
        "",
        GRAVITY_WORDS[0],
        GRAVITY_WORDS,
        "sensor_reads",
        note="motion only: piezo type",
    )
    _rows(page, given, "Tray, mass center G", TRAY)
    apart = f"{given['foot_2'].si}-{given['foot_1'].si}"
    why = "Foot 2 must be farther along the arm than foot 1."
    page.condition("Between the feet, u_2 − u_1", apart, kinds.LENGTH, why)
    page.rule_to = page.columns
    page.page_break()
    _rows(page, given, "Pusher P, slides along the arm", PUSHER)
    _rows(page, given, "Load cases", SPEEDS)
    _rows(page, given, "Required factors", FACTORS)
    page.section("Assumptions")
    page.prose(ASSUMPTIONS)
    page.cautions()
    return given, page


def _rows(page: Page, given: Given, title: str, rows: Sequence[Row]) -> None:
    page.section(title, page.INPUT_WORDS)
    for name, label, symbol, value, unit, kind, limit, note in rows:
        given[name] = page.quantity(label, symbol, value, unit, name, kind, limit=limit, note=note)


def _looking(page: Page, given: Given) -> None:
    page.section("Position to look at: sketch and working", page.INPUT_WORDS)
    given["look_angle"] = page.quantity(
        "Crank angle", "θ", 40, "deg", "look_angle", kinds.ANGLE, note="ccw from x"
    )
    given["look_case"] = page.choice("Load case", "", "rated", CASES, "look_case")
