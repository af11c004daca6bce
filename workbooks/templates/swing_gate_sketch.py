"""The sketches of the swing gate: the leaf from the side with its hinge forces, and from above at an angle."""

from __future__ import annotations

from .kit import Page
from .kit_charts import sketch_chart
from .kit_look import INK, RULE, SOFT
from .kit_sketch import Points
from .swing_gate_inputs import Inputs
from .swing_gate_working import Looked, Work

WARM = "A5622A"
LEAF = "2E4A3D"
ARROW = 0.3  # length of the longest arrow, as a part of the reach
SKETCH_AT = "J"  # column of the sheet of inputs where the sketches stand
WIDTH = 103.0  # mm
WIDE_AT, WIDE = "I", 118.0  # the one from the side


def elevation(given: Inputs, work: Work, looked: Looked, page: Page, row: int) -> None:
    """Draw the leaf in the plane of x and z with the forces in that plane."""
    f = looked.forces
    z_1, z_2 = given["hinge_1_z"].si, given["hinge_2_z"].si
    where = page.columns + 3
    reach = _scale(page, where, row, f"MAX({given.tip},2*{given.top},2*{z_2})")
    points = Points(page, where + 1, row + 2, reach)
    points.add(
        "yard", [(f"-0.3*{reach}", "0"), (f"1.3*{reach}", "0")], width=0.75, color=SOFT, dash="sysDash"
    )
    points.add(
        "post", [("0", "0"), ("0", f"1.08*MAX({given.top},{z_2})")], width=0.75, color=SOFT, dash="lgDashDot"
    )
    _parts(points, given)
    for z in (z_1, z_2):
        points.add("hinge", [("0", z)], width=0.0, marker="circle", size=7, color=INK)
    center = work["center_x"].si, work["center_z"].si
    points.add("mass center", [center], width=0.0, marker="circle", size=8, color=WARM)
    person = f"(-{looked.card.cells['person']})"
    largest = f"MAX({f['look_weight']},{f['look_axial']},ABS({f['look_1x']}),ABS({f['look_2x']}))"
    scale = f"{ARROW}*{reach}/{largest}"
    z_a = f"IF({given.axial_below},{z_1},{z_2})"
    low = f"-0.06*{reach}"
    labels = {
        "weight": ((center[0], low), "r"),
        "person": ((given.tip, f"{given.top}-{person}*{scale}/2"), "r"),
        "axial": (("0", f"{z_a}-{f['look_axial']}*{scale}"), "r"),
        "lower": ((f"-0.5*ABS({f['look_1x']})*{scale}", z_1), "t"),
        "upper": ((f"-0.5*ABS({f['look_2x']})*{scale}", z_2), "t"),
    }

    def beside(force: str) -> str:
        """Keep an arrow on the post's side of the hinge: its tip at the hinge when it pushes the leaf away."""
        return f"-MAX(0,{force})*{scale}"

    arrows = (
        ("weight", center, ("0", f"-{f['look_weight']}"), f["look_weight"], WARM),
        ("person", (given.tip, given.top), ("0", f"-{person}"), person, WARM),
        ("axial", ("0", f"{z_a}-{f['look_axial']}*{scale}"), ("0", f["look_axial"]), f["look_axial"], RULE),
        ("lower", (beside(f["look_1x"]), z_1), (f["look_1x"], "0"), f["look_1x"], INK),
        ("upper", (beside(f["look_2x"]), z_2), (f["look_2x"], "0"), f["look_2x"], INK),
    )
    for name, tail, (fx, fz), amount, color in arrows:
        points.arrow(name, tail, (f"({fx})*{scale}", f"({fz})*{scale}"), color=color)
        place, side = labels[name]
        points.label(_words(name, amount, "N"), place, color=color, side=side)
    window = (-0.42, 1.38, -0.2, 0.62)
    sketch_chart(
        page,
        f"{WIDE_AT}{row}",
        points.curves,
        width=WIDE,
        title="Load case looked at, from the side",
        window=window,
    )
    note = "● hinges, and mass center in the leaf; forces in the plane of x and z"
    page.put(10, note, "RS note", row=row + 13)


def plan(given: Inputs, work: Work, looked: Looked, page: Page, row: int) -> None:
    """Draw the leaf from above at the opening angle that was entered, with the forces along y."""
    f, cells = looked.forces, looked.card.cells
    phi, turn, tip = given["look_angle"].si, given["opening"].si, given.tip
    where = page.columns + 3
    reach = _scale(page, where, row, tip)
    points = Points(page, where + 1, row + 2, reach)
    arc = [(f"{tip}*COS({turn}*{k}/24)", f"{tip}*SIN({turn}*{k}/24)") for k in range(25)]
    points.add("sweep", arc, dash="sysDash", width=0.75, color=SOFT)
    for name, angle in (("shut", "0"), ("open", turn)):
        end = f"{tip}*COS({angle})", f"{tip}*SIN({angle})"
        points.add(name, [("0", "0"), end], dash="sysDash", width=0.75, color=SOFT)
        points.label(f'"{name}"', end, color=SOFT, side="b" if name == "shut" else "t")
    points.add("leaf", [("0", "0"), _turned(tip, "0", phi)], width=4.0, color=LEAF)
    points.add("hinge axis", [("0", "0")], width=0.0, marker="circle", size=9, color=INK)
    center = _turned(work["center_x"].si, work["center_y"].si, phi)
    points.add("mass center", [center], width=0.0, marker="circle", size=8, color=WARM)
    wind, force, hinges = cells["wind"], f["look_force"], f["look_q"]
    largest = f"MAX(1E-6,ABS({wind}),ABS({force}),ABS({hinges}))"
    scale = f"{ARROW}*{reach}/{largest}"
    for name, along, amount, color in (
        ("wind", cells["wind x"], wind, WARM),
        ("held", cells["turn 0"], force, RULE),
        ("hinges", "0", hinges, INK),
    ):
        tail = _turned(along, "0", phi)
        end = _turned(along, f"({amount})*{scale}", phi)
        points.arrow(name, tail, (f"({end[0]})-({tail[0]})", f"({end[1]})-({tail[1]})"), color=color)
        points.label(_words(name, amount, "N"), end, color=color, side="t" if name == "wind" else "r")
    _couple(points, f["look_torque"], cells["turn 0"], reach, phi)
    window = (-0.6, 1.35, -0.35, 1.15)
    sketch_chart(
        page, f"{SKETCH_AT}{row + 1}", points.curves, width=WIDTH, title="From above, opening at the angle drawn",
        window=window,
    )  # fmt: skip
    page.put(10, "● hinge axis, and mass center; forces square to the leaf", "RS note", row=row + 20)


def _scale(page: Page, column: int, row: int, formula: str) -> str:
    """Write the reach that a sketch is drawn by; give its cell."""
    page.put(column, "reach [m]", "RS column", row=row)
    page.put(column, page.book.guarded(formula), "RS si", row=row + 1)
    return page.at(column, row + 1)


def _turned(x: str, y: str, phi: str) -> tuple[str, str]:
    return f"(({x})*COS({phi})-({y})*SIN({phi}))", f"(({x})*SIN({phi})+({y})*COS({phi}))"


def _parts(points: Points, given: Inputs) -> None:
    """Draw each part as the rectangle that it shows from the side, turned about y."""
    parts = given.parts
    for row in range(parts.first, parts.last + 1):
        labels = ("x", "z", "L", "H", "OD", "turn y")
        x, z, length, height, od, turn = points.shared([parts.si(label, row) for label in labels], 5)
        round_ = f'{parts.cell("OD", row)}<>""'
        half = f"IF({round_},{od},{length})/2", f"IF({round_},{length},{height})/2"
        u, v = points.shared(half, 8)
        corners = [
            (f"{x}+{a}{u}*COS({turn})+{b}{v}*SIN({turn})", f"{z}-{a}{u}*SIN({turn})+{b}{v}*COS({turn})")
            for a, b in (("", ""), ("-", ""), ("-", "-"), ("", "-"), ("", ""))
        ]
        points.add(f"part {row - parts.first + 1}", corners, width=1.0, color=LEAF)


def _couple(points: Points, torque: str, slot_x: str, reach: str, phi: str) -> None:
    """Draw the couple of gearmotor or brake as an arc about the hinge axis; nothing for hand or latch."""
    size = f"IF({slot_x}>0,0,IF(ABS({torque})<0.5,0,0.16*{reach}))"
    sign, start = f"IF({torque}<0,-1,1)", f"({phi}+PI())"

    def at(degrees: float, part: float = 1.0) -> tuple[str, str]:
        angle = f"({start}+{sign}*{degrees}*PI()/180)"
        return f"{part}*{size}*COS({angle})", f"{part}*{size}*SIN({angle})"

    turn = [at(a) for a in range(-60, 61, 10)]
    points.add("couple", [*turn, at(42, 1.18), at(60), at(42, 0.82)], width=2.0, color=RULE)
    text = f'IF({slot_x}>0," ",{_words("held", torque, "N*m")})'
    points.label(text, (f"-0.58*{reach}", f"-0.24*{reach}"), color=RULE)


def _words(name: str, amount: str, unit: str) -> str:
    """Return the formula of a label: a name and a size, which the arrow gives the direction to; blank for none."""
    size = f'TEXT(ABS({amount}),"#,##0")&" {unit}"'
    return f'IF(ABS({amount})<0.5," ",{f"{chr(34)}{name} {chr(34)}&" if name else ""}{size})'
