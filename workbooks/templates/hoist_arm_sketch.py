"""The sketch of the hoist arm: carriage, arm, crate, mass center and pivot with forces and acceleration."""

from __future__ import annotations

import math
from collections.abc import Sequence

from .hoist_arm_inputs import SKETCH_COLUMN, Inputs
from .hoist_arm_position import Looked
from .hoist_arm_working import Work
from .kit import Book, Page
from .kit_charts import sketch_chart
from .kit_look import INK, RULE, SOFT
from .kit_sketch import Outlines, Points

WARM = "A5622A"
TRACK, DECK, HALF = (
    -0.62,
    -0.42,
    0.36,
)  # heights of track and deck and half length of the carriage, by the reach
WHEEL = 0.07
WINDOW = (-1.08, 1.32, -1.08, 1.08)  # the arm may point down and back


def sketch(book: Book, given: Inputs, work: Work, looked: Looked, page: Page, row: int) -> None:
    """Draw beside the inputs, from a row on; the points stand right of the printed part of the page."""
    parts, where, theta = given.parts, page.columns + 3, given.si("look_angle")
    outlines = Outlines.beside(parts, where)
    reach = outlines.reach
    points = Points(page, where + 8, row, reach)
    _carriage(points)
    for part in range(parts.first, parts.last):
        points.part(outlines, part, theta, width=1.0, color=RULE)
    points.part(outlines, parts.last, theta, dash="sysDash", width=1.25, color=WARM)
    low, high = given.si("angle_from"), given.si("angle_to")
    steps = [f"({low}+({high}-{low})*{k}/24)" for k in range(25)]
    arc = [(f"{reach}*COS({a})", f"{reach}*SIN({a})") for a in steps]
    points.add("sweep", arc, dash="sysDash", width=0.75, color=SOFT)
    points.add("mass center", [(looked.x, looked.y)], width=0.0, marker="circle", size=8, color=WARM)
    points.add("pivot", [("0", "0")], width=0.0, marker="circle", size=8, color=INK)
    _arrows(points, looked, reach)
    sketch_chart(page, f"J{row}", points.curves, width=106.0, title="Position looked at", window=WINDOW)
    key = (
        f'"● mass center (brown), pivot B (black). Arc: "&ROUND(1000*{reach},0)&" mm. Carriage not to scale."'
    )
    page.put(SKETCH_COLUMN, book.guarded(key), "RS note", row=row + 22)


def _carriage(points: Points) -> None:
    """Draw the carriage on its track, in parts of the reach."""

    def line(name: str, corners: Sequence[tuple[float, float]], width: float, color: str) -> None:
        points.add(
            name, [(f"{x:.6g}", f"{y:.6g}") for x, y in corners], scaled=True, width=width, color=color
        )

    low = TRACK + WHEEL
    base = ((-HALF, DECK), (-HALF, low), (HALF, low), (HALF, DECK))
    line("carriage", (*base, (0.09, DECK), (0.03, 0.0), (-0.03, 0.0), (-0.09, DECK), base[0]), 1.5, SOFT)
    line("track", ((-1.0, TRACK), (1.3, TRACK)), 1.5, INK)
    turns = [math.radians(30 * k) for k in range(13)]
    for center in (-0.26, 0.26):
        rim = [(center + WHEEL * math.cos(a), low + WHEEL * math.sin(a)) for a in turns]
        line("wheel", rim, 1.25, SOFT)


def _arrows(points: Points, looked: Looked, reach: str) -> None:
    """Draw the weight and the pin's force in one scale, the pivot's acceleration, and the drive torque."""
    pin = f"SQRT({looked.pin_x}^2+{looked.pin_y}^2)"
    scale = f"0.42*{reach}/MAX({looked.weight},{pin})"
    for name, tail, (fx, fy), amount, color, side in (
        ("weight", (looked.x, looked.y), ("0", f"-{looked.weight}"), looked.weight, WARM, "r"),
        ("pin", ("0", "0"), (looked.pin_x, looked.pin_y), pin, INK, "l"),
    ):
        step = (f"({fx})*{scale}", f"({fy})*{scale}")
        points.arrow(name, tail, step, color=color)
        tip = (f"({tail[0]})+{step[0]}", f"({tail[1]})+{step[1]}")
        points.label(f'"{name} "&ROUND({amount},0)&" N"', tip, color=color, side=side)
    run = f"0.4*{reach}*SIGN({looked.pivot})"
    points.arrow("acceleration of B", ("0", f"{DECK - 0.07}*{reach}"), (run, "0"), color=WARM)
    text = f'IF({looked.pivot}=0,"pivot does not accelerate","a of B "&ROUND({looked.pivot},2)&" m/s²")'
    points.label(text, (f"-{HALF + 0.03}*{reach}", f"{DECK - 0.07}*{reach}"), color=WARM, side="l")
    arc, sign, start = f"0.17*{reach}", f"SIGN({looked.torque})", 200

    def around(radius: float, a: int) -> tuple[str, str]:
        turn = f"RADIANS({start}+{sign}*{a})"
        return f"{arc}*{radius}*COS({turn})", f"{arc}*{radius}*SIN({turn})"

    turned = [around(1.0, a) for a in range(-60, 61, 10)]
    points.add(
        "drive torque", [*turned, around(1.2, 42), around(1.0, 60), around(0.8, 42)], width=2.0, color=RULE
    )
    points.label(
        f'"drive "&ROUND({looked.torque},0)&" N*m"', (f"-0.2*{reach}", f"-0.12*{reach}"), color=RULE, side="l"
    )
