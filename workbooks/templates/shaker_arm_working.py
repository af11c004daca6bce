"""What the tables of the shaker arm use: load cases in SI, slides of the pusher, inertia of the tray."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

from rigidsheet.udf import kinds
from rigidsheet.udf.states import STANDARD_GRAVITY

from .kit import Book, Page, Place
from .kit_look import SOFT, rich
from .shaker_arm import CASES, STOPPING, Given

COLUMNS: Final = (2.5, 37.0, 9.0, 12.0, 9.0, 12.0, 12.0, 8.5, 13.0, 13.0)
NOTES: Final = 9


@dataclass(frozen=True, slots=True)
class Work:
    """Places on the sheet of working that the tables and the sketch use."""

    page: Page
    gravity: Place
    inertia: Place
    speeds: tuple[str, ...]  # of the crank for each load case, in SI
    accelerations: tuple[str, ...]
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
        if case == STOPPING[0]:
            page.put(NOTES, rich("α = −ω² / (2 θ_s)", 8, italic=True, color=SOFT), "RS note")
        page.row += 1
    gravity = page.derived("Standard gravity", "g", f"{STANDARD_GRAVITY}", kinds.ACCELERATION, "m/s^2")
    inertia = _inertia(page, given)
    rows = range(first, first + len(CASES))
    speeds, accelerations = (tuple(page.at(column, row) for row in rows) for column in (4, 6))
    return Work(page, gravity, inertia, speeds, accelerations, *_feet(page, given, inertia))


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
