"""Sliding: velocity and acceleration of a point that moves along a turning body, Coriolis part included."""

from __future__ import annotations

from typing import Any

from ...core import motion
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..reading.arguments import Vector
from ..units import kinds
from ..working import is_flat, num, vec
from .motion import ALPHA, KINEMATICS, OMEGA, cross_text, planar_spin

SLIDING = f"{KINEMATICS}; motion relative to turning axes"
ARM = Arg("arm", Vector(kinds.LENGTH), "from A to the slider's place on the body now")
SLIDE_VELOCITY = Arg("slide_velocity", Vector(kinds.VELOCITY), "seen from the body, along the sheet's axes")


def velocity_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    v, omega, r, slide = values
    flat = is_flat(v, r, slide) and planar_spin(omega)
    return [
        "Velocity of a slider on the turning body, ccw +",
        "v_P = v_A + omega x r_AP + v_slide",
        f"  {cross_text('omega', omega, r, flat)} = {vec(answer - v - slide, flat)} m/s",
        f"  v_P = {vec(v, flat)} + {vec(answer - v - slide, flat)} + {vec(slide, flat)} = {vec(answer, flat)} m/s",
    ]


def acceleration_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    a, omega, alpha, r, slide_v, slide_a = values
    flat = is_flat(a, r, slide_v, slide_a) and planar_spin(omega, alpha)
    if flat:
        inward = f"-omega^2 r = -{num(omega[2])}^2*{vec(r, flat)}"
        coriolis = f"2*{num(omega[2])}*({num(-slide_v[1])}, {num(slide_v[0])})"
    else:
        inward = f"omega x (omega x r), omega = {vec(omega)}"
        coriolis = f"2*{vec(omega)} x {vec(slide_v)}"
    return [
        "Acceleration of a slider on the turning body, ccw +",
        "a_P = a_A + alpha x r + omega x (omega x r) + a_slide + 2 omega x v_slide",
        f"  tangential {cross_text('alpha', alpha, r, flat)} = {vec(answer.tangential, flat)} m/s^2",
        f"  centripetal {inward} = {vec(answer.centripetal, flat)} m/s^2",
        f"  Coriolis {coriolis} = {vec(answer.coriolis, flat)} m/s^2",
        f"  a_P = {vec(a, flat)} + {vec(answer.tangential, flat)} + {vec(answer.centripetal, flat)} + "
        f"{vec(slide_a, flat)} + {vec(answer.coriolis, flat)}",
        f"  = {vec(answer.total, flat)} m/s^2",
    ]


FUNCTIONS = (
    CellFunction(
        name="RB_VELOCITY_SLIDING",
        group="Motion",
        line="Velocity of a point that slides along the body: v_A + omega x r + the slide velocity.",
        args=(
            Arg("velocity_a", Vector(kinds.VELOCITY), "velocity of point A of the body"),
            OMEGA,
            ARM,
            SLIDE_VELOCITY,
        ),
        result=Result((Field("velocity", kinds.VELOCITY, "velocity of the slider", Form.VECTOR),)),
        kernel=motion.velocity_sliding,
        working=velocity_working,
        source=SLIDING,
        examples=(
            Example(
                '=RB_VELOCITY_SLIDING("(0, 0) m/s", "2 rad/s", "(300, 0) mm", "(120, 0) mm/s", "mm/s")',
                "The pusher on the shaker arm while the arm turns.",
            ),
        ),
    ),
    CellFunction(
        name="RB_ACCELERATION_SLIDING",
        group="Motion",
        line="Acceleration of a point that slides along the body, with the Coriolis part 2 omega x v_slide.",
        args=(
            Arg("acceleration_a", Vector(kinds.ACCELERATION), "acceleration of point A of the body"),
            OMEGA,
            ALPHA,
            ARM,
            SLIDE_VELOCITY,
            Arg(
                "slide_acceleration", Vector(kinds.ACCELERATION), "seen from the body, along the sheet's axes"
            ),
        ),
        result=Result(
            (
                Field("total", kinds.ACCELERATION, "acceleration of the slider", Form.VECTOR),
                Field("tangential", kinds.ACCELERATION, "alpha x r", Form.VECTOR),
                Field("centripetal", kinds.ACCELERATION, "omega x (omega x r)", Form.VECTOR),
                Field("slide", kinds.ACCELERATION, "slide acceleration", Form.VECTOR),
                Field("coriolis", kinds.ACCELERATION, "2 omega x v_slide", Form.VECTOR),
            ),
            default="total",
        ),
        kernel=motion.acceleration_sliding,
        working=acceleration_working,
        source=SLIDING,
        examples=(
            Example(
                '=RB_ACCELERATION_SLIDING("(0, 0) m/s^2", "2 rad/s", 0, "(300, 0) mm", "(120, 0) mm/s", '
                '"(0, 0) m/s^2", "coriolis")',
                "The Coriolis part on the pusher of the shaker arm.",
            ),
        ),
    ),
)
