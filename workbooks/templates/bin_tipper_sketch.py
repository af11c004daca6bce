"""The sketch of the bin tipper: parts, mass centers, drive and forces at the position looked at."""

from __future__ import annotations

from math import cos, pi, sin

from .bin_tipper_inputs import Inputs
from .bin_tipper_position import Looked
from .bin_tipper_tables import ALONG_X, ALONG_Y, Table
from .bin_tipper_working import Work
from .kit import Book, Page
from .kit_charts import sketch_chart
from .kit_look import INK, RULE, SOFT
from .kit_sketch import Points

WARM = "A5622A"
LOWEST = 0.6  # the sketch reaches so far below the hinge, as a part of the reach


def sketch(book: Book, given: Inputs, work: Work, tilt: Table, looked: Looked, page: Page, row: int) -> None:
    """Draw beside the inputs, from a row on; the points stand right of the printed part of the page."""
    phi, where = given.look_tilt.si, page.columns + 3
    reach = _reach(page, given, where)
    points = Points(page, where + 14, row, reach)
    _outlines(page, points, given, where + 7, reach)
    steps = [f"{given.tilt_end.si}*{k}/24" for k in range(25)]
    points.add(
        "sweep",
        [(f"COS({a})", f"SIN({a})") for a in steps],
        scaled=True,
        dash="sysDash",
        width=0.75,
        color=SOFT,
    )
    _marks(points, work, phi)
    _forces(points, given, tilt, looked, phi, reach)
    title, window = "Position looked at", (-0.9, 1.05, -0.65, 1.05)
    sketch_chart(page, f"J{row}", points.curves, width=103.0, title=title, window=window)
    key = f'"Mass center: ● all fruit, ◆ empty bin. Arc: "&ROUND(1000*{reach},0)&" mm."'
    page.put(10, book.guarded(key), "RS note", row=row + 20)


def _reach(page: Page, given: Inputs, where: int) -> str:
    """Write place and half sizes of each part in SI, and how far the farthest reaches from the hinge."""
    parts, book = given.parts, page.book
    for row in range(parts.first, parts.last + 1):
        x, y, length, width, od, turn = (
            parts.si(label, row) for label in ("x", "y", "L", "W", "OD", "turn z")
        )
        box = f'{parts.cell("W", row)}<>""'
        halves = (f"IF({box},({length})/2,0)", f"({width})/2", f"({od})/2")
        for k, formula in enumerate((x, y, *halves, turn)):
            page.put(where + k, book.guarded(formula), "RS si", row=row)
        here = [page.at(where + k, row) for k in range(5)]
        far = f"SQRT({here[0]}^2+{here[1]}^2)+SQRT({here[2]}^2+{here[3]}^2+{here[4]}^2)"
        page.put(where + 6, book.guarded(far), "RS si", row=row)
    anchor = (given.cylinder[name].si for name in ("anchor_x", "anchor_y"))
    far = f"IF({given.by_cylinder},MAX(ABS({next(anchor)}),-{next(anchor)}/{LOWEST}),0)"
    cells = page.span((parts.first, where + 6), (parts.last, where + 6))
    page.put(where + 6, book.guarded(f"MAX(0.001,MAX({cells}),{far})"), "RS si", row=parts.last + 1)
    return page.at(where + 6, parts.last + 1)


def _outlines(page: Page, points: Points, given: Inputs, where: int, reach: str) -> None:
    """Draw each part as a box or a round: first its mid point and half axes at the tilt, then its corners."""
    parts, phi = given.parts, given.look_tilt.si
    for row in range(parts.first, parts.last + 1):
        x, y, u, v, r, turn = (page.at(where - 7 + k, row) for k in range(6))
        angle = f"{turn}+{phi}"
        axes = (
            f"({x}*COS({phi})-{y}*SIN({phi}))/{reach}",
            f"({x}*SIN({phi})+{y}*COS({phi}))/{reach}",
            f"{u}*COS({angle})/{reach}",
            f"{u}*SIN({angle})/{reach}",
            f"-{v}*SIN({angle})/{reach}",
            f"{v}*COS({angle})/{reach}",
            f"IF({u}>0,0,{r}/{reach})",
        )
        for k, formula in enumerate(axes):
            page.put(where + k, page.book.guarded(formula), "RS si", row=row)
        mx, my, ux, uy, vx, vy, radius = (page.at(where + k, row) for k in range(7))
        corners = []
        for k in range(13):
            a, b = ("+", "+-", "+-", "+")[k // 3 % 4], ("+", "+", "+-", "+-")[k // 3 % 4]
            c, d = cos(k * pi / 6.0), sin(k * pi / 6.0)
            corners.append((f"{mx}{a}{ux}{b}{vx}+{radius}*{c:.6f}", f"{my}{a}{uy}{b}{vy}+{radius}*{d:.6f}"))
        look = ("sysDot", SOFT) if row == parts.last else ("solid", RULE)
        name = f"part {row - parts.first + 1}"
        points.add(name, corners, scaled=True, dash=look[0], width=1.0, color=look[1])


def _marks(points: Points, work: Work, phi: str) -> None:
    for state, rows in work.rolled.items():
        x, y = rows["x"], rows["y"]
        center = (f"({x.si}*COS({phi})-{y.si}*SIN({phi}))", f"({x.si}*SIN({phi})+{y.si}*COS({phi}))")
        look = ("circle", 8) if state == "whole" else ("diamond", 7)
        points.add(f"mass center {state}", [center], width=0.0, marker=look[0], size=look[1], color=WARM)
    points.add("hinge", [("0", "0")], width=0.0, marker="circle", size=9, color=INK)


def _forces(points: Points, given: Inputs, tilt: Table, looked: Looked, phi: str, reach: str) -> None:
    """Draw the weight, what both hinges carry, and the drive; force arrows share one scale."""
    c = {name: place.si for name, place in given.cylinder.items()}
    cylinder, row = given.by_cylinder, tilt.look
    x = f"IF({cylinder},{c['eye_x']}*COS({phi})-{c['eye_y']}*SIN({phi}),0)"
    y = f"IF({cylinder},{c['eye_x']}*SIN({phi})+{c['eye_y']}*COS({phi}),0)"
    frame = (f"IF({cylinder},{c['anchor_x']},0)", f"IF({cylinder},{c['anchor_y']},0)")
    points.add("cylinder", [frame, (x, y)], width=3.0, color=RULE, marker="circle", size=5)
    effort = f"IF({cylinder},{looked.effort},0)"
    largest = f"MAX({looked.weight},SQRT(({looked.hinge_x})^2+({looked.hinge_y})^2),ABS({effort}))"
    scale = f"0.45*{reach}/{largest}"
    forces = (
        ("weight", (looked.x, looked.y), ("0", f"-{looked.weight}"), WARM, looked.weight),
        (
            "hinges",
            ("0", "0"),
            (looked.hinge_x, looked.hinge_y),
            INK,
            f"SQRT({looked.hinge_x}^2+{looked.hinge_y}^2)",
        ),
    )
    for name, tail, (fx, fy), color, amount in forces:
        points.arrow(name, tail, (f"({fx})*{scale}", f"({fy})*{scale}"), color=color)
        tip = (f"({tail[0]})+({fx})*{scale}", f"({tail[1]})+({fy})*{scale}")
        side = "l" if name == "hinges" else "r"
        if name == "hinges":  # a cylinder makes this arrow short, and the table covers it
            tip = (f"IF({cylinder},-0.08*{reach},{tip[0]})", f"IF({cylinder},-0.1*{reach},{tip[1]})")
        points.label(f'"{name} "&ROUND({amount},0)&" N"', tip, color=color, side=side)
    u, v = tilt.cell(ALONG_X, row), tilt.cell(ALONG_Y, row)  # in the table's own axes
    along = f"({u}*COS({phi})-{v}*SIN({phi}))", f"({u}*SIN({phi})+{v}*COS({phi}))"
    points.arrow(
        "drive force", (x, y), (f"{effort}*{along[0]}*{scale}", f"{effort}*{along[1]}*{scale}"), color=RULE
    )
    arc = f"IF({cylinder},0,0.2*{reach})"
    start, sign = 200, f"SIGN({looked.torque})"
    turn = [
        (f"{arc}*COS(RADIANS({start}+{sign}*{a}))", f"{arc}*SIN(RADIANS({start}+{sign}*{a}))")
        for a in range(-60, 61, 10)
    ]
    head = [
        (f"{arc}*{r}*COS(RADIANS({start}+{sign}*{a}))", f"{arc}*{r}*SIN(RADIANS({start}+{sign}*{a}))")
        for r, a in ((1.18, 44), (1.0, 60), (0.82, 44))
    ]
    points.add("drive torque", [*turn, head[0], head[1], head[2]], width=2.0, color=RULE)
    drive = (
        f'IF({cylinder},"cylinder "&ROUND({looked.effort},0)&" N","drive "&ROUND({looked.torque},0)&" N*m")'
    )
    middle = f"({frame[0]}+{x})/2", f"({frame[1]}+{y})/2"
    place = (f"IF({cylinder},{middle[0]},-0.5*{reach})", f"IF({cylinder},{middle[1]},-0.34*{reach})")
    points.label(drive, place, color=RULE)
