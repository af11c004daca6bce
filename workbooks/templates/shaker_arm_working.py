"""The shaker arm's sheet of working: load cases in SI, how the tray stands, and rows of vectors."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Final

from rigidsheet.udf.reading.states import STANDARD_GRAVITY
from rigidsheet.udf.units import kinds
from rigidsheet.udf.units.kinds import Kind

from .kit import Book, Page, Place
from .kit_look import SOFT, rich
from .shaker_arm_inputs import CASES, STOPPING, Given

COLUMNS: Final = (2.5, 37.0, 9.0, 12.0, 9.0, 12.0, 12.0, 8.5, 13.0, 13.0)
NOTES: Final = 9
BESIDE: Final = (12, 13)  # components in SI, right of the printed part


@dataclass(frozen=True, slots=True)
class Work:
    """Places on the sheet of working that the tables and the sketch use."""

    page: Page
    gravity: Place
    inertia: Place
    speeds: tuple[str, ...]  # of the crank for each load case, in SI
    accelerations: tuple[str, ...]
    squares: tuple[str, ...]  # of the speeds
    felt: str  # 1 when the sensor reads gravity, else 0
    share_1: Place  # of the pressing force that foot 1 takes
    share_2: Place
    lever: Place  # mass center above the mat, over the distance of the feet
    spin: Place  # moment of inertia over mass and that distance, in m


def working(book: Book, given: Given) -> Work:
    """Write what the tables use: load cases in SI, slides of the pusher, moment of inertia of the tray."""
    page = book.page("Working", COLUMNS)
    page.title_block()
    page.NOTE = NOTES
    page.section("Load cases and constants, in SI")
    words = {2: "Load case", 4: "crank speed", 5: "unit", 6: "acceleration", 7: "unit"}
    for column in range(2, 8):
        page.put(column, words.get(column), "RS head")
    page.row += 1
    first = page.row
    names = ("speed_slow", "speed_rated", "speed_over", "speed_jam")
    stop = f"-{given['speed_jam'].si}*ABS({given['speed_jam'].si})/(2*{given['stop_angle'].si})"
    for k, case in enumerate(CASES):
        speed = given[names[k]].si if k < len(names) else "0"
        cells = {2: case, 4: book.guarded(speed), 5: "rad/s", 7: "rad/s^2"}
        cells[6] = book.guarded(stop if case in STOPPING else "0")
        for column in range(2, 8):
            page.put(column, cells.get(column), "RS number" if column in (4, 6) else "RS text")
        page.put(BESIDE[0], book.guarded(f"{page.at(4)}^2"), "RS si")
        if case == STOPPING[0]:
            page.put(NOTES, rich("α = −ω² / (2 θ_s)", 8, italic=True, color=SOFT), "RS note")
        page.row += 1
    gravity = page.derived("Standard gravity", "g", f"{STANDARD_GRAVITY}", kinds.ACCELERATION, "m/s^2")
    page.put(BESIDE[0], book.guarded(f"IF({given['sensor_reads'].si}=1,1,0)"), "RS si", row=gravity.row)
    felt = page.at(BESIDE[0], gravity.row)
    inertia = _inertia(page, given)
    rows = range(first, first + len(CASES))
    speeds, accelerations, squares = (
        tuple(page.at(column, row) for row in rows) for column in (4, 6, BESIDE[0])
    )
    return Work(page, gravity, inertia, speeds, accelerations, squares, felt, *_feet(page, given, inertia))


def _feet(page: Page, given: Given, inertia: Place) -> tuple[Place, Place, Place, Place]:
    """Write how the loads of the tray spread over its feet."""
    u, foot_1, foot_2 = given["tray_u"].si, given["foot_1"].si, given["foot_2"].si
    apart, height = f"({foot_2}-{foot_1})", f"({given['tray_v'].si}-{given['seat'].si})"
    rows = (
        (
            "Foot 1: share of the pressing force",
            "s_1",
            f"({foot_2}-{u})/{apart}",
            "s_1 = (u_2 − u_G) / (u_2 − u_1)",
        ),
        (
            "Foot 2: share of the pressing force",
            "s_2",
            f"({u}-{foot_1})/{apart}",
            "s_2 = (u_G − u_1) / (u_2 − u_1)",
        ),
        ("Height of G on its feet", "h", f"{height}/{apart}", "h = (v_G − v_F) / (u_2 − u_1)"),
    )
    made = [
        page.derived(label, symbol, formula, kinds.RATIO, "", note=note)
        for label, symbol, formula, note in rows
    ]
    formula, note = f"{inertia.si}/({given['tray_mass'].si}*{apart})", "j = I_G / (m_T (u_2 − u_1))"
    spin = page.derived("Spin of the tray on its feet", "j", formula, kinds.LENGTH, "mm", note=note)
    return made[0], made[1], made[2], spin


def _inertia(page: Page, given: Given) -> Place:
    top = page.row
    for label, name, note in (
        ("L", "tray_length", "along the arm"),
        ("W", "tray_height", "across the arm"),
        ("H", "tray_height", "along z, has no effect here"),
    ):
        page.put(2, f"Tray and fruit as a box: size {label}", "RS label")
        page.put(3, label, "RS symbol")
        page.put(4, page.book.guarded(given[name].si), "RS value")
        page.put(5, "m", "RS unit fixed")
        page.put(NOTES, note, "RS note")
        page.row += 1
    sizes = page.span((top, 3), (top + 2, 5))
    return page.result(
        "Moment of inertia of tray and fruit about G",
        "I_G",
        f'RB_SHAPE("box",{given["tray_mass"].pair},{sizes},"Izz",{{unit}})',
        kinds.INERTIA,
        "kg*m^2",
        "tray_inertia",
        note="I_G = m_T (L² + H²) / 12",
    )


@dataclass(frozen=True, slots=True)
class Vector:
    """A vector on the sheet: its components and unit, and its components in SI."""

    ref: str  # x, y, unit: hand this to functions
    x: str
    y: str


@dataclass(slots=True)
class Looked:
    """References to what the functions say about the position looked at."""

    angle: str = ""  # of the arm, in SI
    vectors: dict[str, Vector] = field(default_factory=dict)
    gaps: str = ""  # differences between functions and tables
    residual: str = ""  # of the far end across its guide, in m/s^2


class Position:
    """Writes the rows of one position, and keeps what later rows need."""

    def __init__(self, book: Book, given: Given, work: Work) -> None:
        self.book, self.page, self.given, self.work = book, work.page, given, work
        self.number, self.looked = given["look_case"].si, Looked()
        self.scalars: dict[str, Place] = {}

    def scalar(
        self, key: str, label: str, symbol: str, formula: str, kind: Kind, unit: str, note: str = ""
    ) -> str:
        """Write a number worked out in SI; give its reference."""
        place = self.page.derived(label, symbol, formula, kind, unit, f"look_{key}", note=note)
        self.scalars[key] = place
        return place.si

    def vector(
        self,
        key: str,
        label: str,
        symbol: str,
        formula: str | tuple[str, str],
        kind: Kind,
        unit: str,
        note: str = "",
    ) -> str:
        """Write a vector from a function (`{unit}` is its unit) or from two numbers in SI; give it with its unit."""
        page, row = self.page, self.page.row
        page.put(page.LABEL, label, "RS label")
        page.put(page.SYMBOL, rich(symbol, 10, italic=True, serif=True), "RS symbol")
        page.put(page.UNIT, unit, "RS unit")
        page.unit_choices(page.UNIT, kind)
        where = page.at(page.UNIT)
        for k, column in enumerate((6, 7)):
            if isinstance(formula, str):
                text = f"INDEX({formula.replace('{unit}', where)},1,{k + 1})"
            else:
                text = f'({formula[k]})*RB_CONVERT("1 {kind.si}",{where})'
            page.put(column, self.book.guarded(text), "RS value")
        x, y = page.at(6), page.at(7)
        page.put(page.VALUE, self.book.guarded(f"SQRT({x}^2+{y}^2)"), "RS value")
        page.put(8, f"={where}", "RS unit fixed")
        page.put(NOTES, rich(note, 8, italic=True, color=SOFT) or None, "RS note")
        for name, cell in (("", page.at(page.VALUE)), ("_x", x), ("_y", y)):
            self.book.name(f"look_{key}{name}", cell)
        for column, cell in zip(BESIDE, (x, y), strict=True):
            text = f'{cell}*RB_CONVERT("1 "&{where},"{kind.si}")'
            page.put(column, self.book.guarded(text), "RS si")
        ref = page.span((row, 6), (row, 8))
        self.looked.vectors[key] = Vector(ref, page.at(BESIDE[0]), page.at(BESIDE[1]))
        page.row += 1
        return self.looked.vectors[key].ref

    def on_arm(self, u: str, v: str) -> tuple[str, str]:
        """Return along x and y what is given along and across the arm."""
        phi = self.looked.angle
        return f"{u}*COS({phi})-({v})*SIN({phi})", f"{u}*SIN({phi})+({v})*COS({phi})"

    def along(self, x: str, y: str) -> tuple[str, str]:
        """Return along and across the arm what is given along x and y."""
        phi = self.looked.angle
        return f"(({x})*COS({phi})+({y})*SIN({phi}))", f"(({y})*COS({phi})-({x})*SIN({phi}))"

    def acceleration(self, arm: str, what: str = "total") -> str:
        """Return RB_ACCELERATION_AT of a point of the arm."""
        motion = f"{self.scalars['arm_omega'].pair},{self.scalars['arm_alpha'].pair}"
        return f'RB_ACCELERATION_AT({self.looked.vectors["pin_acceleration"].ref},{motion},{arm},"{what}",{{unit}})'
