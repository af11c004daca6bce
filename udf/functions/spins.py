"""Spins: instant centers, the spin that fits measured velocities, and spins that add up."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core import motion, spin_fit
from ...core.errors import InputError
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..reading.arguments import Spin, Vector
from ..units import kinds
from ..working import num, vec
from .motion import OMEGA

GROUP = "Motion"
INSTANT = "Instantaneous center of zero velocity (Meriam, Kraige: Dynamics, plane kinematics)"


def in_plane(**vectors: Any) -> None:
    """Refuse vectors out of the plane."""
    for name, v in vectors.items():
        if np.any(v[..., 2] != 0.0):
            raise InputError(name, "in the x-y plane: an instant center exists in planar motion only")


def instant_center(point_a: Any, velocity_a: Any, omega: Any) -> Any:
    in_plane(point_a=point_a, velocity_a=velocity_a)
    if np.any(omega[..., :2] != 0.0):
        raise InputError("omega", "one number about z")
    return spin_fit.instant_center(point_a, velocity_a, omega[..., 2])


def instant_center_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    p, v, omega = values
    w = num(omega[2])
    return [
        "Instant center C: the point that is at rest now",
        "r_C = r_A + (-vy, vx) / omega",
        f"  = {vec(p, True)} + ({num(-v[1])}, {num(v[0])}) / {w} = {vec(answer, True)} m",
    ]


def instant_center_2(point_a: Any, velocity_a: Any, point_b: Any, velocity_b: Any) -> Any:
    in_plane(point_a=point_a, velocity_a=velocity_a, point_b=point_b, velocity_b=velocity_b)
    return spin_fit.instant_center_two(point_a, velocity_a, point_b, velocity_b).center


def instant_center_2_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    a, va, b, vb = values
    d, dv = b - a, vb - va
    square = float(d @ d)
    w = (d[0] * dv[1] - d[1] * dv[0]) / square
    return [
        "Instant center from the velocities of two points, ccw +",
        f"d = r_B - r_A = {vec(d, True)} m, v_B - v_A = {vec(dv, True)} m/s",
        f"rigid: (v_B - v_A).d / |d| must vanish, is {num(float(dv @ d) / np.sqrt(square))} m/s",
        f"omega = (dx dvy - dy dvx) / d^2 = {num(w)} rad/s",
        f"r_C = r_A + (-vy, vx) / omega = {vec(answer, True)} m",
    ]


class SpinFit:
    """Best fitting spin [rad/s], velocity of the centroid [m/s], residuals and the verdict."""

    def __init__(self, found: spin_fit.SpinFit) -> None:
        self.found = found
        self.omega = found.omega
        self.velocity = found.velocity
        self.centroid = found.centroid
        self.residual = found.largest
        self.rms = found.rms
        self.misfit = found.misfit
        fault = f"Not one rigid body: point {found.worst + 1} is off by {num(found.largest)} m/s"
        self.verdict = "OK" if found.rigid else fault


def omega_from(points: Any, velocities: Any) -> SpinFit:
    for name, v in (("points", points), ("velocities", velocities)):
        if v.ndim != 2:
            raise InputError(name, "two or more rows of x y or x y z")
    planar = not points[:, 2].any() and not velocities[:, 2].any()
    return SpinFit(spin_fit.omega_from(points, velocities, planar=planar))


def omega_from_working(values: tuple[Any, ...], answer: SpinFit) -> list[str]:
    points, velocities = values
    flat = not points[:, 2].any() and not velocities[:, 2].any()
    lines = [
        "Spin that fits the velocities best: smallest sum of |v_i - v_C - omega x r_i|^2, r_i from the centroid C",
        f"C = {vec(answer.centroid, flat)} m, v_C = {vec(answer.velocity, flat)} m/s",
        f"omega = {num(answer.omega[2]) if flat else vec(answer.omega)} rad/s",
    ]
    for k, left in enumerate(answer.found.residuals[:20], 1):
        lines.append(f"point {k}: left over {vec(left, flat)} m/s")
    return [
        *lines,
        f"largest {num(answer.residual)} m/s, {num(100 * answer.misfit)} % of the speed: {answer.verdict}",
    ]


def spin_sum(omega_1: Any, omega_2: Any, alpha_1: Any, alpha_2: Any) -> motion.SpinSum:
    zero = np.zeros(3)
    return motion.spin_sum(
        omega_1, omega_2, zero if alpha_1 is None else alpha_1, zero if alpha_2 is None else alpha_2
    )


def spin_sum_working(values: tuple[Any, ...], answer: motion.SpinSum) -> list[str]:
    w1, w2, a1, a2 = (np.zeros(3) if v is None else v for v in values)
    return [
        "Spins add: 1 is the carrier in the fixed frame, 2 is the body as seen from the carrier",
        f"omega = omega_1 + omega_2 = {vec(w1)} + {vec(w2)} = {vec(answer.omega)} rad/s",
        "alpha = alpha_1 + alpha_2 + omega_1 x omega_2",
        f"  = {vec(a1)} + {vec(a2)} + {vec(answer.carried)} = {vec(answer.alpha)} rad/s^2",
    ]


POINT_A = Arg("point_a", Vector(kinds.LENGTH, example=((0.0, 0.4),)), "a point of the body")
VELOCITY_A = Arg("velocity_a", Vector(kinds.VELOCITY, example=((0.8, 0.0),)), "its velocity")

FUNCTIONS = (
    CellFunction(
        name="RB_INSTANT_CENTER",
        group=GROUP,
        line="Instant center of planar motion from one point's velocity and the spin.",
        args=(POINT_A, VELOCITY_A, OMEGA),
        result=Result((Field("center", kinds.LENGTH, "point that is at rest now", Form.VECTOR),)),
        kernel=instant_center,
        working=instant_center_working,
        source=INSTANT,
        examples=(
            Example(
                '=RB_INSTANT_CENTER("(0, 400) mm", "(0.8, 0) m/s", "-2 rad/s", "mm")',
                "About which point the shaker arm turns at this instant.",
            ),
        ),
    ),
    CellFunction(
        name="RB_INSTANT_CENTER_2",
        group=GROUP,
        line="Instant center of planar motion from the velocities of two points of one rigid body.",
        args=(
            POINT_A,
            VELOCITY_A,
            Arg("point_b", Vector(kinds.LENGTH, example=((0.0, 0.1),)), "another point of the body"),
            Arg("velocity_b", Vector(kinds.VELOCITY, example=((0.2, 0.0),)), "its velocity"),
        ),
        result=Result(
            (Field("center", kinds.LENGTH, "point that is at rest now", Form.VECTOR),),
        ),
        kernel=instant_center_2,
        working=instant_center_2_working,
        source=INSTANT,
        examples=(
            Example(
                '=RB_INSTANT_CENTER_2("(0, 400) mm", "(0.8, 0) m/s", "(0, 100) mm", "(0.2, 0) m/s", "mm")',
                "About which point the shaker's coupler turns, from two measured points.",
            ),
        ),
    ),
    CellFunction(
        name="RB_OMEGA_FROM",
        group=GROUP,
        line="Spin that fits the velocities of several points best, and whether they can be one rigid body.",
        args=(
            Arg(
                "points",
                Vector(kinds.LENGTH, example=((0.0, 0.0), (0.6, 0.0), (0.6, 0.4))),
                "points, a row each",
            ),
            Arg(
                "velocities",
                Vector(kinds.VELOCITY, example=((0.0, 0.0), (0.0, 1.2), (-0.8, 1.2))),
                "their velocities, a row each",
            ),
        ),
        result=Result(
            (
                Field("omega", kinds.ANGULAR_VELOCITY, "spin", Form.SPIN),
                Field("velocity", kinds.VELOCITY, "of the points' centroid", Form.VECTOR),
                Field("centroid", kinds.LENGTH, "of the points", Form.VECTOR),
                Field("residual", kinds.VELOCITY, "largest velocity left over"),
                Field("rms", kinds.VELOCITY, "root mean square left over"),
                Field("misfit", None, "largest residual over the largest speed"),
                Field("verdict", None, "OK, or which point does not fit", Form.TEXT),
            ),
            default="omega",
            gathers=True,
        ),
        kernel=omega_from,
        working=omega_from_working,
        source="Least squares over the points, first principles",
        examples=(
            Example(
                '=RB_OMEGA_FROM({0,0;0.6,0;0.6,0.4}, {0,0;0,1.2;-0.8,1.2}, "omega", "rpm")',
                "Spin of the swing gate from three tracked points.",
            ),
        ),
    ),
    CellFunction(
        name="RB_SPIN_SUM",
        group=GROUP,
        line="Spin and angular acceleration of a body carried by a turning carrier.",
        args=(
            Arg("omega_1", Spin(kinds.ANGULAR_VELOCITY), "spin of the carrier in the fixed frame"),
            Arg("omega_2", Spin(kinds.ANGULAR_VELOCITY), "spin of the body seen from the carrier"),
            Arg("alpha_1", Spin(kinds.ANGULAR_ACCELERATION), "of the carrier; 0 when omitted", default=None),
            Arg(
                "alpha_2",
                Spin(kinds.ANGULAR_ACCELERATION),
                "seen from the carrier; 0 when omitted",
                default=None,
            ),
        ),
        result=Result(
            (
                Field("omega", kinds.ANGULAR_VELOCITY, "omega_1 + omega_2", Form.SPIN),
                Field(
                    "alpha", kinds.ANGULAR_ACCELERATION, "alpha_1 + alpha_2 + omega_1 x omega_2", Form.SPIN
                ),
                Field("carried", kinds.ANGULAR_ACCELERATION, "the part omega_1 x omega_2", Form.SPIN),
            ),
            default="omega",
        ),
        kernel=spin_sum,
        working=spin_sum_working,
        source="Meriam, Kraige: Dynamics, three-dimensional kinematics (angular acceleration of a carried body)",
        examples=(
            Example(
                '=RB_SPIN_SUM({0,0,2}, {0,30,0}, , , "alpha")',
                "What a wheel on the turning bin carousel adds to its angular acceleration.",
            ),
        ),
    ),
)
