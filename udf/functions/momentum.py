"""Momentum and energy of one body: spin torque in space, angular momentum, kinetic energy."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core import balance, motion
from ...core.errors import InputError
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..reading.arguments import Spin, Tensor, Vector
from ..reading.bodies import AT_CENTER, AT_ORIGIN, BodyRead
from ..reading.states import MotionRead
from ..units import kinds
from ..working import num, tensor_rows, vec
from .reactions import BODY_ARG, MOTION_ARG

GROUP = "Forces"
SPACE = "Meriam, Kraige: Dynamics, three-dimensional kinetics (momentum and energy equations)"


def spin_torque_working(values: tuple[Any, ...], answer: balance.SpinTorque) -> list[str]:
    inertia, omega, alpha = values
    return [
        "Net moment about the mass center or a fixed point for a spin in space, on the body",
        "M = I alpha + omega x (I omega), I =",
        *tensor_rows(inertia),
        f"I alpha = {vec(answer.inertial)} N*m, alpha = {vec(alpha)} rad/s^2",
        f"omega x (I omega) = {vec(omega)} x {vec(balance.times(inertia, omega))} = {vec(answer.gyroscopic)} N*m",
        f"M = {vec(answer.total)} N*m",
    ]


def center_velocity(state: MotionRead, body: BodyRead) -> Any:
    """Return the velocity of the mass center from the point whose velocity the motion tells."""
    ways = [
        name
        for name, value in (
            ("center velocity", state.center_velocity),
            ("fixed point", state.fixed_point),
            ("point", state.point),
        )
        if value is not None
    ]
    if len(ways) != 1:
        raise InputError(
            "motion",
            "a motion with one of: 'center velocity'; 'fixed point'; 'point' with 'point velocity'; "
            f"got {' and '.join(ways) or 'none of them'}",
        )
    if state.center_velocity is not None:
        return state.center_velocity
    if state.fixed_point is not None:
        return motion.velocity_at(np.zeros(3), state.omega, body.body.center - state.fixed_point)
    if state.point is None or state.point_velocity is None:
        raise InputError("motion", "a motion with 'point velocity' beside 'point'")
    return motion.velocity_at(state.point_velocity, state.omega, body.body.center - state.point)


def spinning_in_plane(body: BodyRead, state: MotionRead) -> None:
    if body.planar and np.any(state.omega[:2] != 0.0):
        raise InputError("body", "a body with Ixx, Iyy, Izz and its products when omega has x or y parts")


def angular_momentum(body: BodyRead, state: MotionRead, about: Any) -> balance.AngularMomentum:
    spinning_in_plane(body, state)
    velocity = center_velocity(state, body)
    point = body.body.center if about is None or (isinstance(about, str) and about == AT_CENTER) else about
    if isinstance(point, str):
        point = np.zeros(3)
    return balance.angular_momentum(body.body, state.omega, velocity, point)


def angular_momentum_working(values: tuple[Any, ...], answer: balance.AngularMomentum) -> list[str]:
    body, state, about = values
    v = center_velocity(state, body)
    where = "the mass center" if about is None else about if isinstance(about, str) else f"{vec(about)} m"
    return [
        f"Angular momentum about {where}: H = I omega + r x m v_G",
        f"I omega = {vec(answer.spin)} kg*m^2/s, omega = {vec(state.omega)} rad/s",
        f"v_G = {vec(v)} m/s, r x m v_G = {vec(answer.transfer)} kg*m^2/s",
        f"H = {vec(answer.total)} kg*m^2/s",
    ]


def kinetic_energy(body: BodyRead, state: MotionRead) -> balance.KineticEnergy:
    spinning_in_plane(body, state)
    return balance.kinetic_energy(body.body, state.omega, center_velocity(state, body))


def kinetic_energy_working(values: tuple[Any, ...], answer: balance.KineticEnergy) -> list[str]:
    body, state = values
    v = center_velocity(state, body)
    m = body.body.mass
    return [
        "Kinetic energy: T = m v_G^2 / 2 + omega.(I omega) / 2",
        f"v_G = {vec(v)} m/s, m v_G^2 / 2 = {num(m)}*{num(float(v @ v))}/2 = {num(answer.translation)} J",
        f"omega = {vec(state.omega)} rad/s, omega.(I omega) / 2 = {num(answer.rotation)} J",
        f"T = {num(answer.translation)} + {num(answer.rotation)} = {num(answer.total)} J",
    ]


FUNCTIONS = (
    CellFunction(
        name="RB_SPIN_TORQUE",
        group=GROUP,
        line="Net moment for a spin in space, gyroscopic term included: I alpha + omega x (I omega).",
        args=(
            Arg("inertia", Tensor(kinds.INERTIA), "about the mass center or a fixed point"),
            Arg("omega", Spin(kinds.ANGULAR_VELOCITY), "spin in the fixed frame"),
            Arg("alpha", Spin(kinds.ANGULAR_ACCELERATION), "angular acceleration in the fixed frame"),
        ),
        result=Result(
            (Field("moment", kinds.TORQUE, "net moment on the body, gyroscopic term included", Form.SPACE),)
        ),
        kernel=lambda *v: balance.spin_torque(*v).total,
        working=lambda values, answer: spin_torque_working(values, balance.spin_torque(*values)),
        source="Euler's equations in vector form (Meriam, Kraige: Dynamics, three-dimensional kinetics)",
        examples=(
            Example(
                "=RB_SPIN_TORQUE({0.4,0,0;0,0.4,0;0,0,0.7}, {0,2,40}, {80,0,0})",
                "Moment on the bearings of the bin carousel's wheel while its carrier turns.",
            ),
        ),
    ),
    CellFunction(
        name="RB_ANGULAR_MOMENTUM",
        group=GROUP,
        line="Angular momentum of a moving body about the mass center or another point.",
        args=(
            BODY_ARG,
            MOTION_ARG,
            Arg(
                "about",
                Vector(kinds.LENGTH, words_for=(AT_CENTER, AT_ORIGIN)),
                "point; the mass center when omitted",
                default=None,
            ),
        ),
        result=Result((Field("total", kinds.ANGULAR_MOMENTUM, "angular momentum", Form.SPACE),)),
        kernel=lambda *v: angular_momentum(*v).total,
        working=lambda values, answer: angular_momentum_working(values, angular_momentum(*values)),
        source=SPACE,
        examples=(
            Example(
                '=RB_ANGULAR_MOMENTUM("mass 38 kg; center (0.65, 0.43) m; Izz 6.1 kg*m^2", '
                '"omega 12 deg/s; fixed point (0, 0) m", "origin")',
                "Angular momentum of the tipping bin about the hinge.",
            ),
        ),
    ),
    CellFunction(
        name="RB_KINETIC_ENERGY",
        group=GROUP,
        line="Kinetic energy of a moving body: translation of the mass center and rotation.",
        args=(BODY_ARG, MOTION_ARG),
        result=Result((Field("energy", kinds.ENERGY, "translation of the mass center and rotation"),)),
        kernel=lambda *v: kinetic_energy(*v).total,
        working=lambda values, answer: kinetic_energy_working(values, kinetic_energy(*values)),
        source=SPACE,
        examples=(
            Example(
                '=RB_KINETIC_ENERGY("mass 38 kg; center (0.65, 0.43) m; Izz 6.1 kg*m^2", '
                '"omega 12 deg/s; fixed point (0, 0) m")',
                "What the emergency stop of the tipper has to take up.",
            ),
        ),
    ),
)
