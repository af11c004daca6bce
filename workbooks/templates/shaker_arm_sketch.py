"""The sketch of the shaker arm: linkage, tray, pusher, sensor, arrows and instant center at the entered angle."""

from __future__ import annotations

from typing import Final

from .kit import Page
from .kit_charts import sketch_chart
from .kit_look import INK, RULE, SOFT
from .kit_sketch import Points
from .shaker_arm_inputs import Given
from .shaker_arm_working import Looked, Vector

WARM: Final = "A5622A"
WINDOW: Final = (-0.52, 1.22, -0.5, 0.95)  # left, right, low, high, as parts of arm and crank
KEY: Final = (
    "Arrows: v velocity, a acceleration. ● sensor S, ◆ mass center G of tray",
    "and fruit, ■ pusher P, × instant center, where the dashed lines meet.",
)
Point = tuple[str, str]


def sketch(given: Given, looked: Looked, page: Page, row: int) -> None:
    """Draw beside the inputs, from a row on; the points stand right of the printed part of the page."""
    reach = f"({given['arm'].si}+{given['crank'].si})"
    points = Points(page, page.columns + 3, row, reach)
    pin = looked.vectors["pin"]
    _frame(points, given, reach)
    _arm(points, given, looked, reach)
    _center(points, given, looked, reach)
    far = _plus(pin, looked.vectors["far"])
    _arrow(points, looked, reach, "vA", (pin.x, pin.y), "pin_velocity")
    _arrow(points, looked, reach, "vB", far, "far_velocity")
    _arrow(points, looked, reach, "aS", _plus(pin, looked.vectors["sensor"]), "sensor_acceleration")
    points.label('"A"', (pin.x, pin.y), color=INK, side="b")
    points.label('"B"', far, color=INK, side="r")
    sketch_chart(page, f"J{row}", points.curves, width=103.0, title="Position looked at", window=WINDOW)
    for k, line in enumerate(KEY):
        page.put(10, line, "RS note", row=row + 20 + k)


def _arrow(points: Points, looked: Looked, reach: str, word: str, tail: Point, key: str) -> None:
    """Draw a velocity or an acceleration with its size beside its head, on the side that it points to."""
    vector, speeds = looked.vectors[key], key.endswith("velocity")
    known = ("pin_velocity", "far_velocity") if speeds else (key,)
    sizes = [f"SQRT({looked.vectors[k].x}^2+{looked.vectors[k].y}^2)" for k in known]
    scale = f"0.26*{reach}/MAX(1E-12,{','.join(sizes)})"
    step = (f"{vector.x}*{scale}", f"{vector.y}*{scale}")
    color, unit = (RULE, "m/s") if speeds else (WARM, "m/s²")
    points.arrow(word, tail, step, color=color)
    tip = (f"({tail[0]})+{step[0]}", f"({tail[1]})+{step[1]}")
    size = f"ROUND(SQRT({vector.x}^2+{vector.y}^2),2)"
    text = f'IF({size}=0," ","{word} "&{size}&" {unit}")'
    if key == "far_velocity":  # along the guide, so its label stands clear below
        points.label(text, (tip[0], f"({tip[1]})-0.05*{reach}"), color=color, side="b")
        return
    for side, there in (("r", f"{vector.x}>=0"), ("l", f"{vector.x}<0")):
        points.label(f'IF({there},{text}," ")', tip, color=color, side=side)


def _plus(*parts: Vector) -> Point:
    return "+".join(part.x for part in parts), "+".join(part.y for part in parts)


def _frame(points: Points, given: Given, reach: str) -> None:
    """Draw the circle of the crank pin, the crank shaft and the guide."""
    r, e, length = (given[name].si for name in ("crank", "guide", "arm"))
    circle = [(f"{r}*COS({k}*PI()/12)", f"{r}*SIN({k}*PI()/12)") for k in range(25)]
    points.add("crank circle", circle, dash="sysDash", width=0.75, color=SOFT)
    points.add("crank shaft", [("0", "0")], width=0.0, marker="circle", size=5, color=INK)
    gap = f"0.035*{reach}"
    ends = (f"{length}-2*{r}-0.06*{reach}", f"{length}+2*{r}+0.06*{reach}")
    for sign in ("+", "-"):
        points.add("guide", [(end, f"{e}{sign}{gap}") for end in ends], width=1.5, color=SOFT)


def _arm(points: Points, given: Given, looked: Looked, reach: str) -> None:
    pin, far = looked.vectors["pin"], looked.vectors["far"]
    points.add("crank", [("0", "0"), (pin.x, pin.y)], width=3.5, color=INK)
    points.add("arm", [(pin.x, pin.y), _plus(pin, far)], width=3.0, color=RULE, marker="circle", size=5)

    def on_arm(u: str, v: str) -> Point:
        phi = looked.angle
        return f"{pin.x}+({u})*COS({phi})-({v})*SIN({phi})", f"{pin.y}+({u})*SIN({phi})+({v})*COS({phi})"

    si = {name: place.si for name, place in given.items()}
    half = f"{si['tray_length']}/2"
    low, high = si["seat"], f"{si['seat']}+{si['tray_height']}"
    sides = ((f"{si['tray_u']}-{half}", low), (f"{si['tray_u']}+{half}", low))
    top = ((f"{si['tray_u']}+{half}", high), (f"{si['tray_u']}-{half}", high))
    points.add("tray", [on_arm(u, v) for u, v in (*sides, *top, sides[0])], width=1.25, color=SOFT)
    for foot in ("foot_1", "foot_2"):
        points.add(foot, [on_arm(si[foot], "0"), on_arm(si[foot], low)], width=2.0, color=INK)
    bracket = (("0", "0"), (si["sensor_u"], si["sensor_v"]))
    points.add("bracket", [on_arm(u, v) for u, v in bracket], width=1.0, color=RULE)
    slide = (f"{si['pusher_u']}-0.12*{reach}", f"{si['pusher_u']}+0.12*{reach}")
    points.add("slide", [on_arm(u, si["pusher_v"]) for u in slide], dash="sysDash", width=1.0, color=INK)
    for name, u, v, marker, size in (
        ("sensor", "sensor_u", "sensor_v", "circle", 7),
        ("mass center", "tray_u", "tray_v", "diamond", 7),
        ("pusher", "pusher_u", "pusher_v", "square", 7),
    ):
        points.add(name, [on_arm(si[u], si[v])], width=0.0, marker=marker, size=size, color=WARM)


def _center(points: Points, given: Given, looked: Looked, reach: str) -> None:
    """Draw the lines from A and from B that meet in the instant center; cut where they leave the drawing."""
    pin, far = looked.vectors["pin"], looked.vectors["far"]
    a, b = (pin.x, pin.y), _plus(pin, far)
    theta = given["look_angle"].si
    # From A along the crank; from B straight up or down, as the guide is level. Where they meet:
    straight = f"IF(ABS(COS({theta}))<1E-6,1E-6,COS({theta}))"
    away = f"({b[0]})*SIN({theta})/{straight}"
    inside = f"AND({away}<{WINDOW[3] - 0.06}*{reach},{away}>{WINDOW[2] + 0.06}*{reach})"
    held = f"MIN({WINDOW[3] - 0.02}*{reach},MAX({WINDOW[2] + 0.02}*{reach},{away}))"
    along = f"({b[0]})*({held})/IF(ABS({away})<1E-9,1E-9,{away})"
    points.add("normal at A", [a, (along, held)], dash="dash", width=0.75, color=SOFT)
    points.add("normal at B", [b, (b[0], held)], dash="dash", width=0.75, color=SOFT)
    half = f"IF({inside},0.025,0)*{reach}"
    cross = [(f"{b[0]}{i}{half}", f"{held}{k}{half}") for i, k in ("++", "--")]
    points.add("instant center", cross, width=2.0, color=INK)
    cross = [(f"{b[0]}{i}{half}", f"{held}{k}{half}") for i, k in ("+-", "-+")]
    points.add("instant center, across", cross, width=2.0, color=INK)
    apart = f'"to C, "&ROUND(ABS({away}),2)&" m away"'
    words = f'IF({inside},"instant center C",IF(ABS({away})<99*{reach},{apart},"C is far away"))'
    points.label(words, (f"({b[0]})-{half}", f"0.96*({held})"), color=INK, side="l")
