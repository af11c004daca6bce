"""The swing gate's working: roll-up, motion and loads; then one load case with a pocket calculator."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Final

from rigidsheet.udf.reading.states import STANDARD_GRAVITY
from rigidsheet.udf.units import kinds

from .kit import Book, Page, Place
from .swing_gate_cases import Card, Cases
from .swing_gate_inputs import RAMPS, Inputs

WORK_COLUMNS: Final = (2.5, 36.0, 7.0, 12.0, 9.0, 11.5, 8.5, *([9.5] * 4), 11.0, 12.0, 8.0)
RECORD_AT: Final = 12  # first column of the body's record
TERMS: Final = ("Ixx", "Iyy", "Izz", "Ixy", "Iyz", "Izx")
STEPS: Final = 13


@dataclass(frozen=True, slots=True)
class Work:
    """Places on the sheet of working, by name."""

    page: Page
    at: dict[str, Place]
    body: str  # range of the body's record

    def __getitem__(self, name: str) -> Place:
        return self.at[name]

    def si(self, *names: str) -> tuple[str, ...]:
        """Return the cells with the numbers in SI."""
        return tuple(self.at[name].si for name in names)


class _Rows:
    """Writes results and keeps their places."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.got: dict[str, Place] = {}

    def derive(
        self,
        name: str,
        label: str,
        symbol: str,
        formula: str,
        kind: Any,
        unit: str,
        note: str = "",
        **rest: Any,
    ) -> str:
        place = self.page.derived(label, symbol, formula, kind, unit, name, note=note, **rest)
        self.got[name] = place
        return place.si


def working(book: Book, given: Inputs) -> Work:
    """Write roll-up, motion, loads and the record of the body."""
    page = book.page("Working", WORK_COLUMNS, landscape=True)
    page.title_block()
    page.rule_to = RECORD_AT - 2
    rows = _Rows(page)
    _rolled_up(rows, given)
    body = _record(page, given.all_parts, 7)
    _motion(rows, given)
    _loads(rows, given)
    return Work(page, rows.got, body)


def _rolled_up(rows: _Rows, given: Inputs) -> None:
    page, parts = rows.page, given.all_parts
    page.section("Leaf, rolled up from the parts list", page.INPUT_WORDS)
    length, inertia = kinds.LENGTH, kinds.INERTIA
    lines: tuple[tuple[str, str, str, str, str, Any, str, str], ...] = (
        ("mass", "Mass", "m", "mass", "", kinds.MASS, "kg", "RB_ROLLUP of the parts list"),
        ("center_x", "Mass center along the leaf", "x_G", "x", "", length, "mm", "from the hinge axis"),
        ("center_y", "Mass center beside the hinge axis", "y_G", "y", "", length, "mm", ""),
        ("center_z", "Mass center above the yard", "z_G", "z", "", length, "mm", ""),
        ("inertia_g", "Moment of inertia about the mass center", "I_G", "Izz", "", inertia, "kg*m^2", ""),
        ("inertia", "Moment of inertia about the hinge axis", "I_z", "Izz", "origin", inertia, "kg*m^2",
         "I_z = I_G + m (x_G² + y_G²), parallel axis"),
        ("izx", "Product of inertia about the origin", "I_{zx}", "Izx", "origin", inertia, "kg*m^2",
         "tensor term: minus the sum of z x m"),
        ("iyz", "Product of inertia about the origin", "I_{yz}", "Iyz", "origin", inertia, "kg*m^2",
         "tensor term: minus the sum of y z m"),
    )  # fmt: skip
    for name, label, symbol, field, about, kind, unit, note in lines:
        call = f'RB_ROLLUP({parts},"{field}",{about and chr(34) + about + chr(34)},{{unit}})'
        first = name == "mass"
        rows.got[name] = page.result(
            label, symbol, call, kind, unit, name, note=note, strong=first, needed=first
        )
    mass = rows.got["mass"].si
    page.put(page.LABEL, f'=IF(ISERROR({mass}),RB_WHY("RB_ROLLUP",{parts},"mass"),"")', "RS line")
    page.row += 4  # as far down as the record of the body beside it


def _motion(rows: _Rows, given: Inputs) -> None:
    page = rows.page
    page.section("Motion", page.INPUT_WORDS)
    turn, run, ramp, stop = given.si("opening", "run_time", "ramp_time", "stop_angle")
    even = given.parts.page.chosen(given["law"], RAMPS)
    spin, spin_up = kinds.ANGULAR_VELOCITY, kinds.ANGULAR_ACCELERATION
    rows.derive(
        "gravity", "Standard gravity", "g", f"{STANDARD_GRAVITY}", kinds.ACCELERATION, "m/s^2", "along -z"
    )
    speed = rows.derive(
        "speed", "Largest speed", "ω", f"IF({even},{turn}/({run}-{ramp}),2*{turn}/{run})", spin, "deg/s",
        "even ramps φ_1 / (T − t_r); cycloidal 2 φ_1 / T", strong=True,
    )  # fmt: skip
    rows.derive(
        "alpha", "Largest acceleration", "α", f"IF({even},{speed}/{ramp},2*PI()*{turn}/{run}^2)", spin_up, "deg/s^2",
        "even ramps ω / t_r; cycloidal 2π φ_1 / T²",
    )  # fmt: skip
    alpha_s = rows.derive(
        "stop_alpha", "Deceleration of the brake", "α_s", f"{speed}^2/(2*{stop})", spin_up, "deg/s^2",
        "α_s = ω² / (2 φ_s)",
    )  # fmt: skip
    rows.derive("stop_time", "Time to stop", "t_s", f"{speed}/{alpha_s}", kinds.TIME, "s", "t_s = ω / α_s")
    rows.derive(
        "tip_speed", "Speed of the tip", "v", f"{speed}*{given.tip}", kinds.VELOCITY, "m/s", "v = ω (x_0 + b)"
    )
    inertia = rows.got["inertia"].si
    rows.derive(
        "energy",
        "Kinetic energy of the leaf",
        "E",
        f"{inertia}*{speed}^2/2",
        kinds.ENERGY,
        "J",
        "E = I_z ω² / 2",
    )
    rotor = f"IF({given.by_drive},{given['rotor'].si}*{given['ratio'].si}^2,0)"
    rows.derive(
        "rotor_inertia", "Inertia of the rotor at the hinge axis", "J i²", rotor, kinds.INERTIA, "kg*m^2",
        "0 when moved by hand",
    )  # fmt: skip


def _loads(rows: _Rows, given: Inputs) -> None:
    page = rows.page
    page.section("Loads", page.INPUT_WORDS)
    b, h, c, s = given.si("leaf_length", "leaf_height", "force_factor", "solid")
    for name, label, symbol, source in (
        ("wind_force", "Wind on the leaf while it moves", "W", "wind"),
        ("storm_force", "Wind on the leaf in a storm", "W_s", "storm"),
    ):
        q = given[source].si
        note = f"{symbol} = {'q' if source == 'wind' else 'q_s'} c_f s b h"
        rows.derive(name, label, symbol, f"{q}*{c}*{s}*{b}*{h}", kinds.FORCE, "N", note)
    rows.derive(
        "wind_x", "Wind acts from the hinge axis at", "x_W", f"{given['edge'].si}+{b}/2", kinds.LENGTH, "mm"
    )
    rows.derive(
        "wind_z", "Wind acts above the yard at", "z_W", f"{given['clearance'].si}+{h}/2", kinds.LENGTH, "mm"
    )
    person = f"{given['person'].si}*{given['swing'].si}*{rows.got['gravity'].si}"
    rows.derive(
        "person_force", "Person on the tip", "P", person, kinds.FORCE, "N", "P = k_p m_p g, straight down"
    )


def _record(page: Page, parts: str, top: int) -> str:
    """Write the record of the body that the functions read, right of the roll-up; give its range."""
    for i, word in enumerate(("body", None, None)):
        page.put(RECORD_AT + i, word, "RS head", row=top)
    for i, field in enumerate(("mass", "x", "y", "z", *TERMS), 1):
        unit = "kg" if field == "mass" else ("m" if field in "xyz" else "kg*m^2")
        call = f'RB_ROLLUP({parts},"{field}",,"{unit}")'
        page.put(RECORD_AT, field, "RS label", row=top + i)
        page.put(RECORD_AT + 1, page.book.guarded(call), "RS number", row=top + i, form="0.0000;-0.0000;0")
        page.put(RECORD_AT + 2, unit, "RS unit fixed", row=top + i)
    page.put(RECORD_AT, "products", "RS label", row=top + 11)
    page.put(RECORD_AT + 1, "tensor terms", "RS number", row=top + 11)
    return page.span((top + 1, RECORD_AT), (top + 11, RECORD_AT + 2))


@dataclass(frozen=True, slots=True)
class Looked:
    """The load case looked at: its card, its forces by hand in SI, and how far function and hand differ."""

    card: Card
    forces: dict[str, str]
    gaps: str


def by_hand(given: Inputs, work: Work, cases: Cases) -> Looked:
    """Write the load case looked at as a person works it out, beside what the function says."""
    page, number = work.page, given["look_case"].si
    page.page_break()
    page.rule_to = page.columns
    words = {**page.INPUT_WORDS, RECORD_AT: "function", RECORD_AT + 1: "gap"}
    page.section("One case by pocket calculator", words)
    page.put(
        2,
        page.book.guarded(
            f'{given["look_case"].ref}&", sums about the origin O on the hinge axis, on the leaf"'
        ),
        "RS status",
    )
    page.row += 1
    first = page.row
    rows = _Rows(page)
    _pocket(rows, given, work, cases.looked)
    for name, solved in (
        ("look_axial", "axial"), ("look_2x", "x2"), ("look_1x", "x1"), ("look_2y", "y2"), ("look_1y", "y1"),
        ("look_1", "radial_1"), ("look_2", "radial_2"), ("look_hold", "hold"),
    ):  # fmt: skip
        row = rows.got[name].row
        function = page.at(RECORD_AT, row)
        gap = f"ABS({function}-{rows.got[name].si})/{rows.got['look_weight'].si}"
        page.put(RECORD_AT, page.book.guarded(cases.chosen(number, solved)), "RS value", row=row)
        page.put(RECORD_AT + 1, page.book.guarded(gap), "RS value", row=row, form="0.0E+00")
    gaps = page.span((first, RECORD_AT + 1), (page.row - 1, RECORD_AT + 1))
    page.prose(("Gap: difference as a part of the leaf's weight.",))
    page.steps("The same from RB_WORKING", cases.looked.call(work.body), STEPS)
    return Looked(cases.looked, {name: place.si for name, place in rows.got.items()}, gaps)


def _pocket(rows: _Rows, given: Inputs, work: Work, card: Card) -> None:
    """Write the balance of forces and moments step by step."""
    c = card.cells
    m, x, y, g = work.si("mass", "center_x", "center_y", "gravity")
    i_z, i_zx, i_yz = work.si("inertia", "izx", "iyz")
    w, p, force = c["wind"], f"(-{c['person']})", kinds.FORCE
    omega, alpha = c["omega"], c["alpha"]
    z_1, a = given["hinge_1_z"].si, given["distance"].si
    x_s, z_s = c["turn 0"], c["turn 2"]

    def step(name: str, label: str, symbol: str, formula: str, kind: Any, unit: str, note: str) -> str:
        return rows.derive(f"look_{name}", label, symbol, formula, kind, unit, note)

    weight = step("weight", "Weight", "G", f"{m}*{g}", force, "N", "G = m g")
    step(
        "axial",
        "Axial load of the thrust bearing",
        "F_a",
        f"{weight}+{p}",
        force,
        "N",
        "F_a = G + P, upward on the leaf",
    )
    a_x = step("ax", "Acceleration of the mass center, x", "a_x", f"-{alpha}*{y}-{omega}^2*{x}", kinds.ACCELERATION,
               "m/s^2", "a_x = −α y_G − ω² x_G")  # fmt: skip
    a_y = step("ay", "Acceleration of the mass center, y", "a_y", f"{alpha}*{x}-{omega}^2*{y}", kinds.ACCELERATION,
               "m/s^2", "a_y = α x_G − ω² y_G")  # fmt: skip
    torque = step("torque", "Torque about the hinge axis", "T", f"{i_z}*{alpha}-{c['wind x']}*{w}-({c['friction']})",
                  kinds.TORQUE, "N*m", "T = I_z α − x_W W − M_f")  # fmt: skip
    s = step("force", "Force of hand or latch along y", "S", f"IF({x_s}>0,{torque}/MAX({x_s},1E-9),0)", force, "N",
             "S = T / x_S; 0 when a couple holds")  # fmt: skip
    m_x = step("mx", "Moment that the motion asks, x", "M_x", f"{i_zx}*{alpha}-{i_yz}*{omega}^2", kinds.TORQUE, "N*m",
               "M_x = I_{zx} α − I_{yz} ω²")  # fmt: skip
    m_y = step("my", "Moment that the motion asks, y", "M_y", f"{i_yz}*{alpha}+{i_zx}*{omega}^2", kinds.TORQUE, "N*m",
               "M_y = I_{yz} α + I_{zx} ω²")  # fmt: skip
    about_y = f"({m_y}-{z_1}*{m}*{a_x}-{x}*{weight}-{c['person x']}*{p})/{a}"
    x_2 = step("2x", "Upper hinge, along x", "F_{2x}", about_y, force, "N",
               "F_{2x} = (M_y − z_1 m a_x − x_G G − x_P P) / a")  # fmt: skip
    x_1 = step(
        "1x", "Lower hinge, along x", "F_{1x}", f"{m}*{a_x}-{x_2}", force, "N", "F_{1x} = m a_x − F_{2x}"
    )
    q = step("q", "Both hinges, along y", "Q", f"{m}*{a_y}-{w}-{s}", force, "N", "Q = m a_y − W − S")
    moments = f"{m_x}+{y}*{weight}+{c['wind z']}*{w}+{c['person y']}*{p}+{z_s}*{s}+{z_1}*{q}"
    y_2 = step("2y", "Upper hinge, along y", "F_{2y}", f"-({moments})/{a}", force, "N",
               "−(M_x + y_G G + z_W W + y_P P + z_S S + z_1 Q) / a")  # fmt: skip
    y_1 = step("1y", "Lower hinge, along y", "F_{1y}", f"{q}-{y_2}", force, "N", "F_{1y} = Q − F_{2y}")
    step(
        "1", "Lower hinge, radial", "R_1", f"SQRT({x_1}^2+{y_1}^2)", force, "N", "R_1 = √(F_{1x}² + F_{1y}²)"
    )
    step(
        "2", "Upper hinge, radial", "R_2", f"SQRT({x_2}^2+{y_2}^2)", force, "N", "R_2 = √(F_{2x}² + F_{2y}²)"
    )
    # One number whether a couple in N*m or a force in N holds the turn, as the function gives it.
    hold = page_hold(rows.page, f"IF({x_s}>0,{s},{torque})", f'IF({x_s}>0,"N","N*m")')
    rows.got["look_hold"] = hold


def page_hold(page: Page, formula: str, unit: str) -> Place:
    """Write what holds the turn, in SI: a couple or a force."""
    place = Place(page.name, page.row, page.VALUE, page.UNIT, page.SI)
    page.put(page.LABEL, "What holds the turn", "RS label")
    for column in (page.VALUE, page.SI):
        page.put(column, page.book.guarded(formula), "RS value" if column == page.VALUE else "RS si")
    page.put(page.UNIT, page.book.guarded(unit), "RS unit fixed")
    page.put(page.NOTE, "T or S", "RS note")
    page.row += 1
    return place
