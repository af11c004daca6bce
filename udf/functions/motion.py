"""Motion: how velocity and acceleration carry over between the points of a body."""

from __future__ import annotations

from typing import Any

from ...core import motion
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..reading.arguments import Spin, Vector
from ..units import kinds
from ..working import is_flat, num, vec

KINEMATICS = (
    "Relative motion of two points of a rigid body (Meriam, Kraige: Dynamics, plane and space kinematics)"
)


def arm(from_point: Any, to_point: Any) -> Any:
    return to_point - from_point


def arm_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    a, b = values
    flat = is_flat(a, b)
    return [
        "Arm from A to B",
        "r_AB = r_B - r_A",
        f"  = {vec(b, flat)} - {vec(a, flat)} = {vec(answer, flat)} m",
    ]


def cross_text(first: str, spin: Any, arm_: Any, flat: bool) -> str:
    """Word the product of a spin and an arm: planar written out, in space as vectors."""
    if flat:
        return f"{first}*(-ry, rx) = {num(spin[2])}*({num(-arm_[1])}, {num(arm_[0])})"
    return f"{first} x r = {vec(spin)} x {vec(arm_)}"


def planar_spin(*spins: Any) -> bool:
    return all(float(s[0]) == 0.0 and float(s[1]) == 0.0 for s in spins)


def velocity_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    v, omega, r = values
    flat = is_flat(v, r) and planar_spin(omega)
    part = answer - v
    return [
        "Velocity of point B of the body, ccw +",
        "v_B = v_A + omega x r_AB",
        f"  {cross_text('omega', omega, r, flat)} = {vec(part, flat)} m/s",
        f"  v_B = {vec(v, flat)} + {vec(part, flat)} = {vec(answer, flat)} m/s",
    ]


def acceleration_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    a, omega, alpha, r = values
    flat = is_flat(a, r) and planar_spin(omega, alpha)
    if flat:
        inward = f"  centripetal -omega^2 r = -{num(omega[2])}^2*{vec(r, flat)}"
    else:
        inward = f"  centripetal omega x (omega x r), omega = {vec(omega)}, r = {vec(r)}"
    return [
        "Acceleration of point B of the body, ccw +",
        "a_B = a_A + alpha x r_AB + omega x (omega x r_AB)",
        f"  tangential {cross_text('alpha', alpha, r, flat)} = {vec(answer.tangential, flat)} m/s^2",
        f"{inward} = {vec(answer.centripetal, flat)} m/s^2",
        f"  a_B = {vec(a, flat)} + {vec(answer.tangential, flat)} + {vec(answer.centripetal, flat)}",
        f"  = {vec(answer.total, flat)} m/s^2",
    ]


OMEGA = Arg("omega", Spin(kinds.ANGULAR_VELOCITY), "angular velocity of the body, ccw +")
ALPHA = Arg("alpha", Spin(kinds.ANGULAR_ACCELERATION), "angular acceleration of the body, ccw +")
ARM = Arg("arm", Vector(kinds.LENGTH), "from point A to point B of the same body")

FUNCTIONS = (
    CellFunction(
        name="RB_ARM",
        group="Motion",
        line="Arm from one point to another: the vector to hand to the transfer functions.",
        args=(
            Arg("from_point", Vector(kinds.LENGTH), "point A, where the arm starts"),
            Arg("to_point", Vector(kinds.LENGTH), "point B, where the arm ends"),
        ),
        result=Result((Field("arm", kinds.LENGTH, "vector from A to B", Form.VECTOR),)),
        kernel=arm,
        working=arm_working,
        source="Definition",
        examples=(
            Example(
                '=RB_ARM("(120, 80) mm", "(870, 500) mm")', "From the tipper's hinge to the lip of the bin."
            ),
        ),
    ),
    CellFunction(
        name="RB_VELOCITY_AT",
        group="Motion",
        line="Velocity of another point B of the same rigid body: v_A + omega x r_AB.",
        args=(Arg("velocity_a", Vector(kinds.VELOCITY), "velocity of point A"), OMEGA, ARM),
        result=Result((Field("velocity", kinds.VELOCITY, "velocity of B", Form.VECTOR),)),
        kernel=motion.velocity_at,
        working=velocity_working,
        source=KINEMATICS,
        examples=(
            Example(
                '=RB_VELOCITY_AT("(0, 0) m/s", "12 deg/s", "(750, 420) mm", "mm/s")',
                "How fast the lip of the bin moves while it tips at 12 deg/s about a fixed hinge.",
            ),
        ),
    ),
    CellFunction(
        name="RB_ACCELERATION_AT",
        group="Motion",
        line="Acceleration of another point B of the same rigid body: a_A + alpha x r + omega x (omega x r).",
        args=(
            Arg("acceleration_a", Vector(kinds.ACCELERATION), "acceleration of point A"),
            OMEGA,
            ALPHA,
            ARM,
        ),
        result=Result(
            (
                Field("total", kinds.ACCELERATION, "acceleration of B", Form.VECTOR),
                Field("tangential", kinds.ACCELERATION, "alpha x r, relative to A", Form.VECTOR),
                Field("centripetal", kinds.ACCELERATION, "omega x (omega x r), relative to A", Form.VECTOR),
            ),
            default="total",
        ),
        kernel=motion.acceleration_at,
        working=acceleration_working,
        source=KINEMATICS,
        examples=(
            Example(
                '=RB_ACCELERATION_AT("(0, 0) m/s^2", "12 deg/s", "40 deg/s^2", "(750, 420) mm")',
                "What the fruit at the lip feels while the bin speeds up.",
            ),
        ),
    ),
)
