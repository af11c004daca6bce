"""What a person gives the sheet: load cases, parts, and the page of inputs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from rigidsheet.udf.limits import FRACTION, NOT_NEGATIVE, POSITIVE
from rigidsheet.udf.units import kinds

from .kit import Book, Page, Place
from .kit_parts import Part, PartsTable, parts_table

TITLE: Final = "Hoist arm"
LINE: Final = (
    "Fruit-packing line, Windfall Hollow orchard co-operative: arm on a carriage that lifts fruit crates"
)
INPUT_COLUMNS: Final = (2.5, 38.0, 7.0, 13.5, 9.0, 10.5, 8.5, *([7.3] * 9))
SKETCH_COLUMN: Final = 10
STEEL: Final = 7850.0  # kg/m^3, structural steel (EN 1991-1-1, table A.4: 77 to 78.5 kN/m^3)
FREE_ROWS: Final = 5


def _part(part: str, shape: str, qty: int = 1, *, at: tuple[float, float], **rest: float) -> Part:
    turn = {"turn z": rest.pop("turn")} if "turn" in rest else {}
    return {"part": part, "qty": qty, "shape": shape, **rest, "x": at[0], "y": at[1], "z": 0, **turn}


ARM: Final[tuple[Part, ...]] = (
    _part("arm beam", "hollow box", at=(825, 0), density=STEEL, L=2450, W=180, H=100, t=5),
    _part("window in the webs", "box", -1, at=(1150, 0), density=STEEL, L=500, W=80, H=10),
    _part("pivot hub", "tube", at=(0, 0), density=STEEL, L=190, OD=150, ID=90),
    _part(
        "cradle strut, turned", "hollow box", at=(1880, -150), density=STEEL, L=620, W=60, H=60, t=4, turn=18
    ),
    _part("cradle", "box", at=(2250, 20), mass=26, L=840, W=40, H=960),
    _part("counterweight", "box", at=(-330, 0), mass=120, L=200, W=240, H=300),
)
CRATE: Final = _part("crate, full", "box", at=(2250, 330), mass=190, L=800, W=580, H=1000)


@dataclass(frozen=True, slots=True)
class Case:
    """A load case: name, what happens, sign of the arm's motion, what slows or speeds it, and the carriage.

    `alpha` is one of "ramp" (either way, whichever asks more of the drive), "stop +", "stop -" and "none";
    `carriage` one of "none", "travel" (its ordinary acceleration), "forward" and "backward" (emergency stop
    from travel that way) and "with arm" (what the choice among the inputs says).
    """

    name: str
    text: str
    direction: int
    alpha: str
    carriage: str

    @property
    def by_motor(self) -> bool:
        """Whether the motor moves the arm; else the brake holds or stops it."""
        return self.alpha == "ramp"


CASES: Final = (
    Case("lift", "at full speed, ramps", 1, "ramp", "travel"),
    Case("lower", "at full speed, ramps", -1, "ramp", "travel"),
    Case("hold", "arm and carriage at rest", 0, "none", "none"),
    Case("carriage stop forward", "arm held by the brake", 0, "none", "forward"),
    Case("carriage stop backward", "arm held by the brake", 0, "none", "backward"),
    Case("stop while lowering", "arm stops from full speed", -1, "stop +", "with arm"),
    Case("stop while lifting", "arm stops from full speed", 1, "stop -", "with arm"),
)
NAMES: Final = tuple(case.name for case in CASES)
BY_MOTOR: Final = sum(case.by_motor for case in CASES)  # these cases stand first
LOWER: Final = NAMES.index("lower")
HOLD: Final = NAMES.index("hold")
FORWARD: Final = NAMES.index("carriage stop forward")
BACKWARD: Final = NAMES.index("carriage stop backward")
STOP_LOWERING: Final = NAMES.index("stop while lowering")
IN_STOP: Final = ("rolls on", "stops from forward", "stops from backward")


@dataclass(frozen=True, slots=True)
class Inputs:
    """Places of all inputs."""

    given: dict[str, Place]
    parts: PartsTable

    def si(self, name: str) -> str:
        return self.given[name].si

    def ref(self, name: str) -> str:
        return self.given[name].ref

    @property
    def body(self) -> str:
        """The parts list with the crate."""
        return self.parts.through(self.parts.last)

    @property
    def arm(self) -> str:
        """The parts list without the crate."""
        return self.parts.through(self.parts.last - 1)


def inputs(book: Book) -> tuple[Inputs, Page, int]:
    """Write the sheet of inputs; give also the page and the row where the sketch starts."""
    page = book.page("Inputs", INPUT_COLUMNS, landscape=True)
    page.title_block()
    book.status(page)
    row = page.row + 1
    page.rule_to = SKETCH_COLUMN - 2
    got: dict[str, Place] = {}
    _motion(page, got)
    _drive(page, got)
    _factors(page, got)
    _looking(page, got)
    page.rule_to = page.columns
    page.page_break()
    page.section("Parts list, arm level and pointing forward: arm, then the crate in the last row")
    parts = parts_table(page, [*ARM, *([None] * FREE_ROWS), CRATE])
    page.skip(height=4.0)
    _notes(page)
    return Inputs(got, parts), page, row


def _notes(page: Page) -> None:
    page.prose(
        (
            "x, y: mass center of the part from the pivot, with the arm level; z along the pivot. "
            "turn z: turned about its own mass center, counter-clockwise.",
            "Give the mass or the density of a part, not both. A quantity of -1 is a cut-out. "
            "Boxes: L along x, W along y, H along z; tubes: L along z.",
        )
    )
    page.section("Assumptions")
    page.prose(
        (
            "Rigid arm, pivot and carriage on a level track. Pivot friction is left out; "
            "the gearbox turns the arm with a pure couple.",
            "The crate is latched in the cradle and turns with the arm. "
            "Kept level by a parallel rod, it is the shape point at the tip; then the drive is right, the pin not.",
            "Speeds rise and fall evenly in time. Lift and lower count the arm at full speed, "
            "with the ramp on the side that asks more of the drive.",
            "The brake holds the arm while the carriage stops; "
            "gear losses, which would help the brake at rest, are then not counted.",
            "An emergency stop may act at any angle of the arm; "
            "what the carriage does while the arm stops counts as entered.",
        )
    )
    page.cautions()


def _motion(page: Page, got: dict[str, Place]) -> None:
    angle, time, length = kinds.ANGLE, kinds.TIME, kinds.LENGTH
    speed, turning, acceleration = kinds.VELOCITY, kinds.ANGULAR_VELOCITY, kinds.ACCELERATION
    page.section("Arm", page.INPUT_WORDS)
    _rows(
        page,
        got,
        ("angle_from", "Lowest angle of the arm", "θ_1", -30, "deg", angle, None),
        ("angle_to", "Highest angle of the arm", "θ_2", 80, "deg", angle, None),
    )
    range_ = f"{got['angle_to'].si}-{got['angle_from'].si}"
    page.condition("Range of the arm", range_, angle, "the highest angle must be above the lowest")
    _rows(
        page,
        got,
        ("arm_speed", "Speed of lifting and lowering", "ω_0", 20, "deg/s", turning, POSITIVE),
        ("ramp_time", "Time to speed up, and to slow down", "t_r", 0.8, "s", time, POSITIVE),
        ("arm_stop_time", "Emergency stop of the arm within", "t_s", 0.25, "s", time, POSITIVE),
    )
    page.section("Carriage", page.INPUT_WORDS)
    _rows(
        page,
        got,
        ("travel_speed", "Travel speed", "v", 1.5, "m/s", speed, NOT_NEGATIVE),
        ("travel_acceleration", "Acceleration while the arm lifts or lowers", "a_n", -0.4, "m/s^2", acceleration, None),
    )  # fmt: skip
    words = ("distance", "time")
    got["stop_by"] = page.choice("Emergency stop is given by", "", "distance", words, "stop_by")
    by = got["stop_by"].ref
    _rows(
        page,
        got,
        ("stop_distance", "Stops within a distance of", "s", 400, "mm", length, POSITIVE),
        when=f'{by}="distance"',
    )
    _rows(
        page,
        got,
        ("stop_time", "Stops within a time of", "t_c", 0.5, "s", time, POSITIVE),
        when=f'{by}="time"',
    )
    got["in_stop"] = page.choice(
        "While the arm stops, the carriage", "", IN_STOP[1], IN_STOP, "carriage_in_stop"
    )


def _drive(page: Page, got: dict[str, Place]) -> None:
    torque, ratio = kinds.TORQUE, kinds.RATIO
    page.section("Gearbox, motor, brake, pivot", page.INPUT_WORDS)
    _rows(
        page,
        got,
        ("ratio", "Gearbox: ratio, motor to arm", "i", 400, "-", ratio, POSITIVE),
        ("efficiency", "Gearbox: efficiency, same both ways", "η", 0.9, "-", ratio, FRACTION),
        ("gear_rating", "Gearbox: rated torque at the pivot", "M", 9, "kN*m", torque, POSITIVE),
        ("motor_rating", "Motor: largest torque", "M_m", 28, "N*m", torque, POSITIVE),
        ("motor_speed", "Motor: rated speed", "n_m", 1440, "rpm", kinds.ANGULAR_VELOCITY, POSITIVE),
        ("return_rating", "Motor: power it can take back", "P_r", 2.5, "kW", kinds.POWER, POSITIVE),
        ("rotor", "Inertia of rotor and brake", "J", 0.012, "kg*m^2", kinds.INERTIA, NOT_NEGATIVE),
        ("brake_rating", "Brake: rated torque at the motor shaft", "M_b", 36, "N*m", torque, POSITIVE),
        ("pin_rating", "Pivot pin: rated load", "F_R", 15, "kN", kinds.FORCE, POSITIVE),
    )


def _looking(page: Page, got: dict[str, Place]) -> None:
    page.section("Position to look at: sketch and working", page.INPUT_WORDS)
    _rows(page, got, ("look_angle", "Angle of the arm", "θ", 55, "deg", kinds.ANGLE, None))
    got["look_case"] = page.choice("Load case", "", CASES[STOP_LOWERING].name, NAMES, "look_case")


def _factors(page: Page, got: dict[str, Place]) -> None:
    page.section("Required factors: capacity over demand", page.INPUT_WORDS)
    _rows(
        page,
        got,
        ("factor_drive", "Gearbox and motor", "k_m", 1.25, "-", kinds.RATIO, POSITIVE),
        ("factor_brake", "Brake", "k_b", 1.5, "-", kinds.RATIO, POSITIVE),
        ("factor_pin", "Pivot pin", "k_p", 2.0, "-", kinds.RATIO, POSITIVE),
    )


NOTES: Final = {"travel_acceleration": "+ forward; 0: interlocked"}


def _rows(page: Page, got: dict[str, Place], *rows: tuple[Any, ...], when: str = "") -> None:
    for name, label, symbol, value, unit, kind, limit in rows:
        got[name] = page.quantity(
            label, symbol, value, unit, name, kind, limit=limit, note=NOTES.get(name, ""), when=when
        )
