"""The sketch of the hoist arm: carriage, arm, crate, mass center and pivot with forces and acceleration."""

from __future__ import annotations

from .hoist_arm import SKETCH_COLUMN, Inputs
from .hoist_arm_position import Looked
from .hoist_arm_working import Work
from .kit import Book, Page
from .kit_charts import sketch_chart
from .kit_look import INK, RULE, SOFT
from .kit_sketch import Points

WARM = "A5622A"
TRACK, DECK, HALF = -0.62, -0.42, 0.36  # heights of track and deck and half length of the carriage, by the reach
WHEEL = 0.07
WINDOW = (-0.75, 1.35, -0.68, 1.1)


def sketch(book: Book, given: Inputs, work: Work, looked: Looked, page: Page, row: int) -> None:
    """Draw beside the inputs, from a row on; the points stand right of the printed part of the page."""
    parts, where, theta = given.parts, page.columns + 3, given.si("look_angle")
    for part in range(parts.first, parts.last + 1):  # how far each part reaches from the pivot
        x, y, length, width, od = (parts.si(label, part) for label in ("x", "y", "L", "W", "OD"))
        half = f"SQRT((({length})*({width}>0))^2+({width})^2+({od})^2)/2"
        page.put(where, book.guarded(f"SQRT(({x})^2+({y})^2)+{half}"), "RS si", row=part, form="0.000")
    cells = page.span((parts.first, where), (parts.last, where))
    reach = page.at(where, parts.last + 1)
    page.put(where, book.guarded(f"MAX(0.001,MAX({cells}))"), "RS si", row=parts.last + 1, form="0.000")
    points = Points(page, where + 1, row, reach)
    _carriage(points, reach)
    _outlines(points, given, theta)
    low, high = given.si("angle_from"), given.si("angle_to")
    steps = [f"({low}+({high}-{low})*{k}/24)" for k in range(25)]
    arc = [(f"{reach}*COS({a})", f"{reach}*SIN({a})") for a in steps]
    points.add("sweep", arc, dash="sysDash", width=0.75, color=SOFT)
    points.add("mass center", [(looked.x, looked.y)], width=0.0, marker="circle", size=8, color=WARM)
    points.add("pivot", [("0", "0")], width=0.0, marker="circle", size=8, color=INK)
    _arrows(points, looked, reach)
    sketch_chart(
        page, f"J{row}", points.curves, width=106.0, title="Position looked at", window=WINDOW
    )
    key = f'"● brown: mass center, black: pivot B. The dashed arc has a radius of "&ROUND(1000*{reach},0)&" mm."'
    page.put(SKETCH_COLUMN, book.guarded(key), "RS note", row=row + 21)


def _carriage(points: Points, reach: str) -> None:
    def scaled(*corners: tuple[float, float]) -> list[tuple[str, str]]:
        return [(f"{x}*{reach}", f"{y}*{reach}") for x, y in corners]

    low = TRACK + WHEEL
    deck = ((-HALF, low), (HALF, low), (HALF, DECK), (0.09, DECK), (0.03, 0.0), (-0.03, 0.0), (-0.09, DECK))
    points.add("carriage", scaled(*deck, (-HALF, DECK), (-HALF, low)), width=1.5, color=SOFT)
    points.add("track", scaled((-0.72, TRACK), (1.3, TRACK)), width=1.5, color=INK)
    for center in (-0.24, 0.24):
        rim = [
            (f"{reach}*({center}+{WHEEL}*COS({k}*PI()/6))", f"{reach}*({TRACK + WHEEL}+{WHEEL}*SIN({k}*PI()/6))")
            for k in range(13)
        ]
        points.add("wheel", rim, width=1.25, color=SOFT)


def _outlines(points: Points, given: Inputs, theta: str) -> None:
    parts = given.parts
    for row in range(parts.first, parts.last + 1):
        x, y, length, width, od, turn = (
            parts.si(label, row) for label in ("x", "y", "L", "W", "OD", "turn z")
        )
        corners = []
        angle, box = f"({turn}+{theta})", f'{parts.cell("W", row)}<>""'
        for k in range(13):
            sx, sy = ((1, 1), (-1, 1), (-1, -1), (1, -1), (1, 1))[k // 3]
            u = f"IF({box},{sx}*({length})/2,({od})/2*COS({k}*PI()/6))"
            v = f"IF({box},{sy}*({width})/2,({od})/2*SIN({k}*PI()/6))"
            corners.append(
                (
                    f"({x})*COS({theta})-({y})*SIN({theta})+{u}*COS({angle})-{v}*SIN({angle})",
                    f"({x})*SIN({theta})+({y})*COS({theta})+{u}*SIN({angle})+{v}*COS({angle})",
                )
            )
        crate = row == parts.last
        points.add(
            f"part {row - parts.first + 1}",
            corners,
            dash="sysDash" if crate else "solid",
            width=1.25 if crate else 1.0,
            color=WARM if crate else "2E4A3D",
        )


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
    text = f'IF({looked.pivot}=0,"pivot does not accelerate","a_B = "&ROUND({looked.pivot},2)&" m/s²")'
    points.label(text, (f"{HALF + 0.03}*{reach}", f"{DECK - 0.07}*{reach}"), color=WARM)
    arc, sign, start = f"0.17*{reach}", f"SIGN({looked.torque})", 200

    def around(radius: float, a: int) -> tuple[str, str]:
        turn = f"RADIANS({start}+{sign}*{a})"
        return f"{arc}*{radius}*COS({turn})", f"{arc}*{radius}*SIN({turn})"

    turned = [around(1.0, a) for a in range(-60, 61, 10)]
    points.add("drive torque", [*turned, around(1.2, 42), around(1.0, 60), around(0.8, 42)], width=2.0, color=RULE)
    points.label(f'"drive "&ROUND({looked.torque},0)&" N*m"', (f"-0.2*{reach}", f"-0.12*{reach}"), color=RULE, side="l")
