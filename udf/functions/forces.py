"""Forces: moment balance about fixed and moving points, torque and angular acceleration."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core import balance, drives
from ...core.errors import InputError
from .. import kinds
from ..arguments import Scalar, Spin, Tensor, Vector
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..limits import NOT_NEGATIVE, POSITIVE
from ..working import num, signed, tensor_rows, total, vec

GROUP = "Forces"
ANY_POINT = (
    "Moment balance about an arbitrary moving point (Meriam, Kraige: Dynamics, plane and space kinetics)"
)


def torque_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    inertia, alpha = values
    return [
        "Net torque about a fixed axis or the mass center, ccw +",
        f"T = I alpha = {num(inertia)} kg*m^2 * {num(alpha)} rad/s^2 = {num(answer)} N*m; weight not included",
    ]


def acceleration_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    torque, inertia = values
    return [
        "Angular acceleration about a fixed axis or the mass center, ccw +",
        f"alpha = T / I = {num(torque)} N*m / {num(inertia)} kg*m^2 = {num(answer)} rad/s^2",
    ]


def is_tensor(inertia: Any) -> bool:
    return type(inertia) is np.ndarray and inertia.shape == (3, 3)


def moment_sum(inertia: Any, mass: Any, center_arm: Any, omega: Any, alpha: Any, acceleration_b: Any) -> Any:
    """Net moment about the moving point B: one number about z for one moment of inertia, x y z for a tensor."""
    if is_tensor(inertia):
        return balance.moment_sum(inertia, mass, center_arm, omega, alpha, acceleration_b).total
    planar_only(omega, alpha)
    return balance.moment_sum_planar(
        inertia, mass, center_arm, omega[..., 2], alpha[..., 2], acceleration_b
    ).total


def planar_only(omega: Any, alpha: Any) -> None:
    """Refuse spins about x or y beside a single moment of inertia."""
    for name, spin in (("omega", omega), ("alpha", alpha)):
        if np.any(spin[..., :2] != 0.0):
            raise InputError(
                "inertia",
                f"a tensor of 3 x 3 when `{name}` has x or y parts",
                remedy="Give the whole tensor about G",
            )


def moment_sum_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    inertia, mass, r, omega, alpha, a_b = values
    if is_tensor(inertia):
        parts = balance.moment_sum(inertia, mass, r, omega, alpha, a_b)
        return [
            "Moment sum about the moving point B, on the body",
            "a_G = a_B + alpha x r + omega x (omega x r), r = r_BG",
            f"  = {vec(parts.acceleration)} m/s^2",
            "sum M_B = I alpha + omega x (I omega) + r x m a_G, I about G =",
            *tensor_rows(inertia),
            f"  I alpha + omega x (I omega) = {vec(parts.spin)} N*m",
            f"  r x m a_G = {vec(r)} x {num(mass)}*{vec(parts.acceleration)} = {vec(parts.transfer)} N*m",
            f"  sum M_B = {vec(parts.total)} N*m; weight not included",
        ]
    w, al = float(omega[2]), float(alpha[2])
    ax, ay = float(a_b[0]) - al * float(r[1]), float(a_b[1]) + al * float(r[0])
    transfer = mass * (r[0] * ay - r[1] * ax)
    return [
        "Moment sum about the moving point B, on the body, ccw +",
        "a = a_B + alpha k x r (the omega^2 part has no moment about B)" if w else "a = a_B + alpha k x r",
        f"  = ({num(a_b[0])} - {signed(al)}*{signed(r[1])}, {num(a_b[1])} + {signed(al)}*{signed(r[0])})"
        f" = ({num(ax)}, {num(ay)}) m/s^2",
        "sum M_B = I_G alpha + m (rx ay - ry ax)",
        f"  = {num(inertia)}*{signed(al)} + {num(mass)}*({signed(r[0])}*{signed(ay)} - {signed(r[1])}*{signed(ax)})",
        f"  = {total((inertia * al, transfer))} = {num(answer)} N*m; weight not included",
    ]


INERTIA_G = Arg("inertia", Tensor(kinds.INERTIA, planar=True), "about the mass center G", NOT_NEGATIVE)

FUNCTIONS = (
    CellFunction(
        name="RB_ANGULAR_ACCELERATION",
        group=GROUP,
        line="Angular acceleration from a net torque: T / I, about a fixed axis or the mass center.",
        args=(
            Arg("torque", Scalar(kinds.TORQUE), "net torque about the axis, ccw +"),
            Arg("inertia", Scalar(kinds.INERTIA), "moment of inertia about the same axis", POSITIVE),
        ),
        result=Result((Field("alpha", kinds.ANGULAR_ACCELERATION, "angular acceleration"),)),
        kernel=drives.angular_acceleration,
        working=acceleration_working,
        source="Euler's second law for a fixed axis",
        examples=(
            Example(
                '=RB_ANGULAR_ACCELERATION("120 N*m", "85 kg*m^2", "deg/s^2")',
                "How fast the empty bin starts to tip.",
            ),
        ),
    ),
    CellFunction(
        name="RB_TORQUE",
        group=GROUP,
        line="Net torque for an angular acceleration: I alpha, about a fixed axis or the mass center.",
        args=(
            Arg("inertia", Scalar(kinds.INERTIA), "moment of inertia about the axis", NOT_NEGATIVE),
            Arg("alpha", Scalar(kinds.ANGULAR_ACCELERATION), "angular acceleration, ccw +"),
        ),
        result=Result((Field("torque", kinds.TORQUE, "net torque about the axis, weight not included"),)),
        kernel=drives.torque,
        working=torque_working,
        source="Euler's second law for a fixed axis",
        examples=(
            Example(
                '=RB_TORQUE("85 kg*m^2", "40 deg/s^2")',
                "Torque that speeds up the bin, apart from its weight.",
            ),
        ),
    ),
    CellFunction(
        name="RB_MOMENT_SUM",
        group=GROUP,
        line="Net moment about any moving point B of the body; weight not included.",
        args=(
            INERTIA_G,
            Arg("mass", Scalar(kinds.MASS), "mass of the body", POSITIVE),
            Arg("center_arm", Vector(kinds.LENGTH), "arm from B to the mass center G"),
            Arg("omega", Spin(kinds.ANGULAR_VELOCITY), "angular velocity, ccw +"),
            Arg("alpha", Spin(kinds.ANGULAR_ACCELERATION), "angular acceleration, ccw +"),
            Arg("acceleration_b", Vector(kinds.ACCELERATION), "acceleration of B"),
        ),
        result=Result((Field("moment", kinds.TORQUE, "sum of all moments on the body about B", Form.SPIN),)),
        kernel=moment_sum,
        working=moment_sum_working,
        source=ANY_POINT,
        examples=(
            Example(
                '=RB_MOMENT_SUM("49.2383 kg*m^2", "166 kg", "(1.43401, 1.00410) m", 0, 1.1, "(-1.8, 0.4) m/s^2")',
                "What the drive and the weight of the hoist arm must add up to while the carriage brakes.",
            ),
        ),
    ),
)
