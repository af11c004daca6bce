"""The sketch of the bin tipper: parts, mass centers, drive and forces at the position looked at."""

from __future__ import annotations

from .bin_tipper import Inputs
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
    parts, where, phi = given.parts, page.columns + 3, given.look_tilt.si
    for part in range(parts.first, parts.last + 1):  # how far each part reaches from the hinge
        x, y, length, width, od = (parts.si(label, part) for label in ("x", "y", "L", "W", "OD"))
        half = f"SQRT((({length})*({width}>0))^2+({width})^2+({od})^2)/2"
        page.put(where, book.guarded(f"SQRT(({x})^2+({y})^2)+{half}"), "RS si", row=part, form="0.000")
    reach = page.at(where, parts.last + 1)
    cells = page.span((parts.first, where), (parts.last, where))
    anchor = f"IF({given.by_cylinder},MAX(ABS({given.cylinder['anchor_x'].si}),"
    anchor += f"-{given.cylinder['anchor_y'].si}/{LOWEST}),0)"
    page.put(
        where, book.guarded(f"MAX(0.001,MAX({cells}),{anchor})"), "RS si", row=parts.last + 1, form="0.000"
    )
    points = Points(page, where + 1, row, reach)
    _outlines(points, given, phi)
    steps = [f"{given.tilt_end.si}*{k}/24" for k in range(25)]
    arc = [(f"{reach}*COS({a})", f"{reach}*SIN({a})") for a in steps]
    points.add("sweep", arc, dash="sysDash", width=0.75, color=SOFT)
    _marks(points, work, phi)
    _forces(points, given, tilt, looked, phi, reach)
    sketch_chart(
        page,
        f"J{row}",
        points.curves,
        width=103.0,
        title="Position looked at",
        window=(-0.9, 1.05, -0.65, 1.05),
    )
    key = f'"Mass center: ● all fruit, ◆ empty bin. Arc: "&ROUND(1000*{reach},0)&" mm."'
    page.put(10, book.guarded(key), "RS note", row=row + 20)


def _outlines(points: Points, given: Inputs, phi: str) -> None:
    parts = given.parts
    for row in range(parts.first, parts.last + 1):
        x, y, length, width, od, turn = (
            parts.si(label, row) for label in ("x", "y", "L", "W", "OD", "turn z")
        )
        corners = []
        angle = f"({turn}+{phi})"
        box = f'{parts.cell("W", row)}<>""'
        for k in range(13):
            sx, sy = ((1, 1), (-1, 1), (-1, -1), (1, -1), (1, 1))[k // 3]
            u = f"IF({box},{sx}*({length})/2,({od})/2*COS({k}*PI()/6))"
            v = f"IF({box},{sy}*({width})/2,({od})/2*SIN({k}*PI()/6))"
            corners.append(
                (
                    f"({x})*COS({phi})-({y})*SIN({phi})+{u}*COS({angle})-{v}*SIN({angle})",
                    f"({x})*SIN({phi})+({y})*COS({phi})+{u}*SIN({angle})+{v}*COS({angle})",
                )
            )
        fruit = row == parts.last
        points.add(
            f"part {row - parts.first + 1}",
            corners,
            dash="sysDot" if fruit else "solid",
            width=1.0,
            color=SOFT if fruit else "2E4A3D",
        )


def _marks(points: Points, work: Work, phi: str) -> None:
    for state, (x, y) in work.centers.items():
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
        points.label(f'"{name} "&ROUND({amount},0)&" N"', tip, color=color, side=side)
    along = [f"IF({cylinder},{tilt.cell(column, row)},0)" for column in (ALONG_X, ALONG_Y)]
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
    place = (f"IF({cylinder},{x},-0.5*{reach})", f"IF({cylinder},{y},-0.34*{reach})")
    points.label(drive, place, color=RULE)
