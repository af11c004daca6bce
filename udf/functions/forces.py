"""Forces: moment balance about fixed and moving points, torque and angular acceleration."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core import balance, drives, loads
from ...core.errors import InputError, PhysicsError
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..limits import NOT_NEGATIVE, POSITIVE
from ..reading.arguments import Scalar, Spin, Tensor, Vector
from ..reading.states import LOADS, LoadsRead
from ..units import kinds
from ..working import is_flat, num, signed, tensor_rows, total, vec
from .tensors import is_tensor

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


def moment_sum(inertia: Any, mass: Any, center_arm: Any, omega: Any, alpha: Any, acceleration_b: Any) -> Any:
    """Net moment about the moving point B: one number about z for one moment of inertia, x y z for a tensor."""
    if is_tensor(inertia):
        return balance.moment_sum(inertia, mass, center_arm, omega, alpha, acceleration_b).total
    planar_only(omega, alpha)
    about_z: Any = balance.moment_sum_planar(
        inertia, mass, center_arm, omega[..., 2], alpha[..., 2], acceleration_b
    ).total
    return about_z[..., None] if np.ndim(about_z) else about_z


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


def center_acceleration_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    force, mass = values
    flat = is_flat(force)
    return [
        "Acceleration of the mass center from the sum of all forces",
        f"a_G = F / m = {vec(force, flat)} / {num(mass)} = {vec(answer, flat)} m/s^2",
    ]


def moment_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    force, r = values
    if is_flat(force, r):
        return [
            "Moment of a force about the point the arm starts from, ccw +",
            f"M = rx Fy - ry Fx = {signed(r[0])}*{signed(force[1])} - {signed(r[1])}*{signed(force[0])}"
            f" = {num(answer[2])} N*m",
        ]
    return [
        "Moment of a force about the point the arm starts from",
        f"M = r x F = {vec(r)} x {vec(force)} = {vec(answer)} N*m",
    ]


class ResultantTerms:
    """Resultant [N], moment [N m] about the point, and the line of action [m] under the names `what` takes."""

    def __init__(self, found: loads.Resultant) -> None:
        self.found = found
        self.force, self.moment = found.force, found.moment
        self.size = float(np.linalg.norm(found.force))

    def __getattr__(self, label: str) -> Any:
        if label[:1] in "FM" and label[1:] in ("x", "y", "z"):
            return (self.force if label[0] == "F" else self.moment)["xyz".index(label[1])]
        if label in ("crosses_x", "crosses_y", "lever", "pitch"):
            return self.line(label)
        raise AttributeError(label)

    def line(self, label: str) -> float:
        """Return a property of the line of action, refused where there is none."""
        found = self.found
        if found.is_couple:
            raise PhysicsError("", "The forces cancel: a couple is left, which has no line of action")
        value = (
            getattr(found, label) if label in ("lever", "pitch") else found.crossing()[label == "crosses_y"]
        )
        if value is None:
            raise PhysicsError(
                "", f"The line of action runs along the {label[-1]} axis and does not cross it"
            )
        return float(value)


def resultant(told: LoadsRead, about: Any) -> ResultantTerms:
    read = told.loads
    point = np.zeros(3) if about is None or isinstance(about, str) else about
    if point.ndim != 1:
        raise InputError("about", "one point")
    couples = read.couples if len(read.couples) else np.zeros((1, 3))
    return ResultantTerms(loads.resultant(read.forces, read.points, couples, point))


def resultant_working(values: tuple[Any, ...], answer: ResultantTerms) -> list[str]:
    read = values[0].loads
    point = answer.found.about
    lines = [f"Resultant of the loads about {vec(point)} m: F = sum F_i, M = sum r_i x F_i + sum M_i"]
    for f, p in list(zip(read.forces, read.points, strict=True))[:40]:
        lines.append(f"F {vec(f)} N at {vec(p)} m: r x F = {vec(np.cross(p - point, f))} N*m")
    lines += [f"couple {vec(c)} N*m" for c in read.couples[:40]]
    return [*lines, f"F = {vec(answer.force)} N, |F| = {num(answer.size)} N; M = {vec(answer.moment)} N*m"]


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
    CellFunction(
        name="RB_RESULTANT",
        group=GROUP,
        line="Resultant force and moment of a table of loads about a point, and its line of action.",
        args=(
            Arg("loads", LOADS, "table of forces with their points, and couples"),
            Arg(
                "about",
                Vector(kinds.LENGTH, words_for=("origin",)),
                "point of the moment; the origin when omitted",
                default=None,
            ),
        ),
        result=Result(
            (
                *(Field(f"F{k}", kinds.FORCE, f"force along {k}") for k in "xyz"),
                Field("size", kinds.FORCE, "size of the force"),
                *(Field(f"M{k}", kinds.TORQUE, f"moment about {k} through the point") for k in "xyz"),
                Field("force", kinds.FORCE, "x y z", Form.SPACE, in_record=False),
                Field("moment", kinds.TORQUE, "x y z, about the point", Form.SPACE, in_record=False),
                Field(
                    "lever", kinds.LENGTH, "distance of the line of action from the point", in_record=False
                ),
                Field("crosses x", kinds.LENGTH, "planar: x where the line crosses y = 0", in_record=False),
                Field("crosses y", kinds.LENGTH, "planar: y where the line crosses x = 0", in_record=False),
                Field("pitch", kinds.LENGTH, "moment along the force over the force", in_record=False),
            ),
        ),
        kernel=resultant,
        working=resultant_working,
        source="Meriam, Kraige: Statics, resultants (wrench)",
        examples=(
            Example(
                '=RB_RESULTANT(B4:F8, "(0, 0) m", "Mz", "kN*m")',
                "Moment of wind and cable pull about the gate's hinge line.",
            ),
        ),
    ),
    CellFunction(
        name="RB_MOMENT",
        group=GROUP,
        line="Moment of a force about the point that its arm starts from: r x F.",
        args=(
            Arg("force", Vector(kinds.FORCE), "force on the body"),
            Arg("arm", Vector(kinds.LENGTH), "from the point to the force"),
        ),
        result=Result((Field("moment", kinds.TORQUE, "about z when planar, else x y z", Form.SPIN),)),
        kernel=loads.moment,
        working=moment_working,
        source="Definition of the moment of a force",
        examples=(
            Example(
                '=RB_MOMENT("(0, -373) N", "(650, 430) mm")', "Moment of the bin's weight about the hinge."
            ),
        ),
    ),
    CellFunction(
        name="RB_CENTER_ACCELERATION",
        group=GROUP,
        line="Acceleration of the mass center from the sum of all forces: F / m.",
        args=(
            Arg("force", Vector(kinds.FORCE), "sum of all forces, weight included"),
            Arg("mass", Scalar(kinds.MASS), "mass of the body", POSITIVE),
        ),
        result=Result((Field("acceleration", kinds.ACCELERATION, "of the mass center", Form.VECTOR),)),
        kernel=loads.center_acceleration,
        working=center_acceleration_working,
        source="Newton's second law for the mass center",
        examples=(
            Example(
                '=RB_CENTER_ACCELERATION("(240, -90) N", "38 kg")',
                "How the bin starts to move when the clamp lets go.",
            ),
        ),
    ),
)
