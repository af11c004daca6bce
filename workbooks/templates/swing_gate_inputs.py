"""What a person gives the sheet: load cases, parts, and the page of inputs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from rigidsheet.udf.limits import AT_LEAST_ONE, FRACTION, NOT_NEGATIVE, POSITIVE
from rigidsheet.udf.units import kinds

from .kit import Book, Page, Place
from .kit_parts import Part, PartsTable, parts_table, turned_about

TITLE: Final = "Swing gate"
LINE: Final = "Fruit-packing line, Windfall Hollow orchard co-operative: gate of the loading yard, one leaf"
INPUT_COLUMNS: Final = (2.5, 31.0, 7.0, 13.5, 9.0, 9.5, 8.5, *([7.4] * 9))
STEEL: Final = 7850.0  # kg/m^3, structural steel (EN 1991-1-1, table A.4: 77 to 78.5 kN/m^3)
LOWER, UPPER = "lower hinge", "upper hinge"
DRIVE, HAND = "gearmotor", "hand"
RAMPS, SMOOTH = "even ramps", "cycloidal"
FREE_ROWS: Final = 2


def _part(part: str, shape: str, qty: int = 1, *, at: tuple[float, float, float], **rest: float) -> Part:
    x, y, z = at
    turn = {"turn y": rest.pop("turn")} if "turn" in rest else {}
    return {"part": part, "qty": qty, "shape": shape, **rest, "x": x, "y": y, "z": z, **turn}


PARTS: Final[tuple[Part, ...]] = (
    _part("hinge stile", "tube", at=(120, 0, 900), density=STEEL, L=1600, OD=88.9, ID=78.9),
    _part("tip stile", "tube", at=(3650, 0, 900), density=STEEL, L=1600, OD=60.3, ID=52.3),
    _part("top rail", "hollow box", at=(1890, 0, 1670), density=STEEL, L=3460, W=60, H=60, t=4),
    _part("bottom rail", "hollow box", at=(1890, 0, 130), density=STEEL, L=3460, W=60, H=60, t=4),
    _part("brace", "hollow box", at=(1890, 0, 900), density=STEEL, L=3660, W=50, H=30, t=3, turn=-22.7),
    _part("infill bars, as one sheet", "box", at=(1890, 0, 900), mass=38, L=3400, W=14, H=1480),
    _part("kick plate", "box", at=(1890, 33, 310), density=STEEL, L=3400, W=3, H=300),
    _part("opening in the kick plate", "box", -1, at=(2900, 33, 310), density=STEEL, L=600, W=3, H=160),
    _part("name board", "box", at=(1400, -45, 1250), mass=11, L=1200, W=18, H=450),
    _part("lock and handle", "box", at=(3560, 40, 1000), mass=4.5, L=160, W=90, H=240),
    _part("drive arm", "box", at=(180, 60, 300), mass=6.5, L=320, W=40, H=80),
)


@dataclass(frozen=True, slots=True)
class Case:
    """A load case: what holds the turn, signs of speed, acceleration and wind, person or not.

    `turn` is move (drive or hand), brake or latch; `alpha` multiplies the acceleration of the motion, or with
    the brake that of the stop; friction acts against the speed while the gate is moved.
    """

    name: str
    turn: str
    speed: int = 0
    alpha: int = 0
    wind: int = 0
    storm: int = 0
    person: int = 0


CASES: Final = (
    Case("gate at rest", "brake"),
    Case("opening starts", "move", 1, 1, -1),
    Case("opening slows down", "move", 1, -1, 1),
    Case("closing starts", "move", -1, -1, 1),
    Case("opening braked", "brake", 1, -1, 1),
    Case("closing braked", "brake", -1, 1, -1),
    Case("person on the tip", "brake", wind=1, person=1),
    Case("storm on the front", "latch", storm=1),
    Case("storm on the back", "latch", storm=-1),
)


@dataclass(frozen=True, slots=True)
class Inputs:
    """Places of all inputs, by name."""

    at: dict[str, Place]
    parts: PartsTable

    def __getitem__(self, name: str) -> Place:
        return self.at[name]

    def si(self, *names: str) -> tuple[str, ...]:
        """Return the cells with the numbers in SI."""
        return tuple(self.at[name].si for name in names)

    @property
    def all_parts(self) -> str:
        return self.parts.through(self.parts.last)

    @property
    def by_drive(self) -> str:
        return self.parts.page.chosen(self["moved_by"], DRIVE)

    @property
    def by_hand(self) -> str:
        return self.parts.page.chosen(self["moved_by"], HAND)

    @property
    def axial_below(self) -> str:
        return self.parts.page.chosen(self["axial_hinge"], LOWER)

    @property
    def tip(self) -> str:
        """From the hinge axis to the tip."""
        return f"({self['edge'].si}+{self['leaf_length'].si})"

    @property
    def top(self) -> str:
        """From the yard to the upper edge."""
        return f"({self['clearance'].si}+{self['leaf_height'].si})"


class _Rows:
    """Writes quantities and keeps their places."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.got: dict[str, Place] = {}

    def add(
        self, name: str, label: str, symbol: str, value: float, unit: str, kind: Any, **rest: Any
    ) -> None:
        self.got[name] = self.page.quantity(label, symbol, value, unit, name, kind, **rest)

    def choose(self, name: str, label: str, value: str, words: tuple[str, ...], note: str = "") -> None:
        self.got[name] = self.page.choice(label, "", value, words, name, note=note)


def inputs(book: Book) -> tuple[Inputs, Page, int]:
    """Write the sheet of inputs; give it with the row at which its second page starts."""
    page = book.page("Inputs", INPUT_COLUMNS, landscape=True)
    page.title_block()
    book.status(page)
    page.rule_to = page.SI_UNIT  # the sketches stand beside the first two pages
    rows = _Rows(page)
    _leaf(rows)
    _motion(rows)
    _moved(rows)
    page.page_break()
    second = page.row
    _loads(rows)
    _ratings(rows)
    _factors(rows)
    page.rule_to = page.columns
    page.page_break()
    page.section("Parts list of the leaf")
    parts = parts_table(page, [*PARTS, *([None] * FREE_ROWS)], turned_about("y"))
    page.prose(
        (
            "x along the leaf from the hinge axis to the tip, y square to it, z up from the "
            "yard: place of the mass center of each part. "
            "turn y: turned about its own mass center, + from z toward x.",
            "Give the mass or the density of a part, not both. A quantity of -1 is a cut-out. "
            "Boxes: L along x, W along y, H along z; hollow boxes are open along x; tubes: L along z.",
        )
    )
    _assumptions(page)
    page.cautions()
    return Inputs(rows.got, parts), page, second


def _leaf(rows: _Rows) -> None:
    page, length = rows.page, kinds.LENGTH
    page.section("Leaf and hinges", page.INPUT_WORDS)
    rows.add("leaf_length", "Length of the leaf", "b", 3600, "mm", length, limit=POSITIVE)
    rows.add("leaf_height", "Height of the leaf", "h", 1600, "mm", length, limit=POSITIVE)
    rows.add("edge", "Hinge axis to the edge of the leaf", "x_0", 80, "mm", length, limit=NOT_NEGATIVE)
    rows.add("clearance", "Yard to the lower edge of the leaf", "z_0", 100, "mm", length, limit=NOT_NEGATIVE)
    rows.add("hinge_1_z", "Lower hinge above the yard", "z_1", 300, "mm", length, limit=NOT_NEGATIVE)
    rows.add("hinge_2_z", "Upper hinge above the yard", "z_2", 1500, "mm", length, limit=POSITIVE)
    _distance(rows)
    rows.choose("axial_hinge", "Thrust bearing, axial load: in the", LOWER, (LOWER, UPPER))


def _distance(rows: _Rows) -> None:
    """Write the distance of the hinges; nothing is solved while the upper one does not stand "
    "above the lower."""
    page, low, high = rows.page, rows.got["hinge_1_z"].si, rows.got["hinge_2_z"].si
    rows.got["distance"] = Place(page.name, page.row, page.VALUE, page.UNIT, page.SI)
    why = "the upper hinge must stand above the lower"
    page.condition("Distance of the hinges a", f"{high}-{low}", kinds.LENGTH, why)


def _motion(rows: _Rows) -> None:
    page, time, angle = rows.page, kinds.TIME, kinds.ANGLE
    page.section("Opening and closing", page.INPUT_WORDS)
    rows.add("opening", "Opening angle", "φ_1", 95, "deg", angle, limit=POSITIVE)
    rows.choose("law", "Motion law", RAMPS, (RAMPS, SMOOTH))
    rows.add("run_time", "Time to open, and to close", "T", 14, "s", time, limit=POSITIVE)
    ramps = page.chosen(rows.got["law"], RAMPS)
    rows.add(
        "ramp_time", "Time to speed up, and to slow down", "t_r", 2.5, "s", time, limit=POSITIVE, when=ramps
    )
    run, ramp = rows.got["run_time"].si, rows.got["ramp_time"].si
    why = "speeding up and slowing down take longer than the run"
    page.condition("Time at steady speed", f"IF({ramps},{run}-2*{ramp},{run})", time, why)
    rows.add("stop_angle", "Brake stops the gate within", "φ_s", 5, "deg", angle, limit=POSITIVE)
    rows.add("friction", "Friction torque of both hinges", "M_f", 15, "N*m", kinds.TORQUE, limit=NOT_NEGATIVE)


def _moved(rows: _Rows) -> None:
    page, torque = rows.page, kinds.TORQUE
    page.section("Drive", page.INPUT_WORDS)
    rows.choose("moved_by", "The gate is moved by", DRIVE, (DRIVE, HAND), "only the rows of this are needed")
    when = page.chosen(rows.got["moved_by"], DRIVE)
    rest = {"limit": POSITIVE, "when": when}
    rows.add("ratio", "Gearbox: ratio, motor to hinge axis", "i", 900, "-", kinds.RATIO, **rest)
    rows.add(
        "efficiency",
        "Gearbox: efficiency",
        "η",
        0.6,
        "-",
        kinds.RATIO,
        limit=FRACTION,
        when=when,
        note="both ways",
    )
    rows.add("gear_rating", "Gearbox: rated torque at the hinge", "M_g", 950, "N*m", torque, **rest)
    rows.add("motor_rating", "Motor: rated torque", "M_m", 2.4, "N*m", torque, **rest)
    rows.add("motor_speed", "Motor: rated speed", "n_m", 1400, "rpm", kinds.ANGULAR_VELOCITY, **rest)
    rows.add(
        "rotor",
        "Motor: inertia of the rotor",
        "J",
        0.0009,
        "kg*m^2",
        kinds.INERTIA,
        limit=NOT_NEGATIVE,
        when=when,
    )
    when = page.chosen(rows.got["moved_by"], HAND)
    rest = {"limit": POSITIVE, "when": when}
    rows.add("hand_x", "Hand: from the hinge axis", "x_h", 3500, "mm", kinds.LENGTH, **rest)
    rows.add("hand_z", "Hand: above the yard", "z_h", 1000, "mm", kinds.LENGTH, **rest)
    rows.add("hand_rating", "Hand: force allowed", "F_h", 250, "N", kinds.FORCE, **rest)


def _loads(rows: _Rows) -> None:
    page, ratio, length = rows.page, kinds.RATIO, kinds.LENGTH
    page.section("Wind and person", page.INPUT_WORDS)
    rows.add("wind", "Wind pressure while the gate moves", "q", 90, "Pa", kinds.PRESSURE, limit=NOT_NEGATIVE)
    rows.add(
        "storm", "Wind pressure in a storm, latched", "q_s", 490, "Pa", kinds.PRESSURE, limit=NOT_NEGATIVE
    )
    rows.add("force_factor", "Force coefficient of the bars", "c_f", 1.6, "-", ratio, limit=POSITIVE)
    rows.add("solid", "Solid part of the leaf's area", "s", 0.3, "-", ratio, limit=FRACTION)
    rows.add("person", "Mass of the person on the tip", "m_p", 90, "kg", kinds.MASS, limit=POSITIVE)
    rows.add("swing", "Allowance for swinging on to it", "k_p", 1.5, "-", ratio, limit=AT_LEAST_ONE)
    rows.add("person_y", "Person hangs beside the leaf by", "y_p", 200, "mm", length, note="+ on the y side")
    rows.add("latch_x", "Latch: from the hinge axis", "x_l", 3650, "mm", length, limit=POSITIVE)
    rows.add("latch_z", "Latch: above the yard", "z_l", 1000, "mm", length, limit=NOT_NEGATIVE)


def _ratings(rows: _Rows) -> None:
    page, force = rows.page, kinds.FORCE
    page.section("Rated loads and limits", page.INPUT_WORDS)
    rows.add("radial_1", "Lower hinge: rated radial load", "F_{r1}", 16, "kN", force, limit=POSITIVE)
    rows.add("radial_2", "Upper hinge: rated radial load", "F_{r2}", 16, "kN", force, limit=POSITIVE)
    rows.add("axial", "Thrust bearing: rated axial load", "F_a", 8, "kN", force, limit=POSITIVE)
    rows.add(
        "brake_rating", "Brake: rated torque at the hinge", "M_b", 1200, "N*m", kinds.TORQUE, limit=POSITIVE
    )
    rows.add("latch_rating", "Latch: rated force", "F_l", 2.5, "kN", force, limit=POSITIVE)
    rows.add("tip_limit", "Speed allowed at the tip", "v_t", 0.6, "m/s", kinds.VELOCITY, limit=POSITIVE)


def _factors(rows: _Rows) -> None:
    page, ratio = rows.page, kinds.RATIO
    page.section("Required factors", page.INPUT_WORDS)
    rows.add("factor_hinges", "Hinges: rating over demand", "k_h", 2.0, "-", ratio, limit=POSITIVE)
    rows.add("factor_moved", "Drive and hand: rating over demand", "k_m", 1.3, "-", ratio, limit=POSITIVE)
    rows.add("factor_brake", "Brake: rating over demand", "k_b", 1.5, "-", ratio, limit=POSITIVE)
    rows.add("factor_latch", "Latch: rating over demand", "k_l", 1.5, "-", ratio, limit=POSITIVE)
    page.section("Load case to look at", page.INPUT_WORDS)
    names = tuple(case.name for case in CASES)
    rows.choose("look_case", "Load case", "person on the tip", names)
    rows.add(
        "look_angle", "Opening angle drawn", "φ", 40, "deg", kinds.ANGLE, note="drawn only: changes no result"
    )


def _assumptions(page: Page) -> None:
    page.section("Assumptions")
    page.prose(
        (
            "Rigid leaf and posts, hinge axis upright. One hinge alone carries the axial load; "
            "both carry radial loads. Two thrust bearings would share it by chance.",
            "The axes go with the leaf: a load case holds at every opening angle, with the wind "
            "taken square to the leaf on the side that is worse.",
            "Largest speed and largest acceleration are taken together: so it is at the end of "
            "an even ramp; with the cycloidal law it is on the safe side.",
            "Gearmotor and brake turn the hinge axis with a couple and put no side load on the "
            "hinges; hand and latch push square to the leaf.",
            "The brake takes the speed off evenly, the rotor's part included; the gearbox loses "
            "nothing then. Hinge friction counts while the gate speeds up, and is left out "
            "where it would help.",
            "Wind force: pressure x force coefficient x solid part of the area, at the middle "
            "of the leaf. The person hangs still; nobody rides on the moving gate.",
        )
    )
