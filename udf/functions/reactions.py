"""Reactions of supports and the torque of a drive, for one body in motion."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from ...core import balance, drives, motion
from ...core.errors import InputError
from ...core.reactions import SolvedReactions, solve_reactions
from ...core.supports import Hold
from ...core.vectors import cross
from ..declaration import Arg, CellFunction, Example, Field, Result, Row
from ..reading.arguments import Vector
from ..reading.bodies import BODY, BodyRead, needs_space
from ..reading.states import LOADS, MOTION, SUPPORTS, SUPPORTS_3D, LoadsRead, MotionRead, SupportsRead
from ..units import kinds
from ..working import num, vec

GROUP = "Forces"
WITH_AXIS = ("thrust bearing", "hinge")  # supports in space that hold along an axis as well as across it
NEWTON_EULER = "Newton-Euler equations of one rigid body (Meriam, Kraige: Dynamics, kinetics of rigid bodies)"


class Solved(list[Row]):
    """The rows of the result, with the solution they come from for the working."""

    def __init__(self, rows: Sequence[Row], solution: SolvedReactions, mass: float) -> None:
        super().__init__(rows)
        self.solution = solution
        self.mass = mass


def planar_motion(state: MotionRead) -> None:
    """Refuse spins about x or y and places out of the plane in planar work."""
    if state.free_axis in ("x", "y"):
        raise InputError("motion", "planar: alpha is about z", remedy="RB_REACTIONS_3D works in space")
    for name, spin in (("omega", state.omega), ("alpha", state.alpha)):
        if spin is not None and np.any(spin[:2] != 0.0):
            raise InputError(
                "motion", f"planar: '{name}' as one number about z", remedy="RB_REACTIONS_3D works in space"
            )


def solved(
    body: BodyRead, state: MotionRead, loads: LoadsRead, supports: SupportsRead, planar: bool
) -> Solved:
    gravity = state.falling()
    if planar:
        planar_motion(state)
    rigid = body.body if planar else needs_space(body)
    solution = solve_reactions(
        rigid,
        state.balance(in_space=not planar),
        supports.holds,
        loads=loads.beside(gravity),
        gravity=gravity,
        planar=planar,
    )
    return Solved(rows_of(solution, state, planar, supports.kinds), solution, rigid.mass)


def rows_of(
    solution: SolvedReactions, state: MotionRead, planar: bool, kinds_of: Mapping[str, str]
) -> list[Row]:
    """Return a row for each reaction and each support's resultant, alpha if solved, weight and residual."""
    rows: list[Row] = []
    for support in dict.fromkeys(r.support for r in solution.reactions):
        own = [r for r in solution.reactions if r.support == support]
        rows += [
            Row(f"{support} {r.component}", float(r.value), kinds.TORQUE if r.hold.couple else kinds.FORCE)
            for r in own
        ]
        rows += resultants(support, [(r.hold, r.value) for r in own], kinds_of.get(support, "") in WITH_AXIS)
    axes = "xy" if planar else "xyz"
    if state.alpha is None:
        for k in state.free_axis or ("z" if planar else "xyz"):
            label = "alpha" if planar else f"alpha {k}"
            rows.append(Row(label, float(solution.alpha["xyz".index(k)]), kinds.ANGULAR_ACCELERATION))
    rows += [Row(f"weight {k}", float(w), kinds.FORCE) for k, w in zip(axes, solution.weight, strict=False)]
    left = solution.residual
    rows.append(Row("residual force", float(np.linalg.norm(left.force)), kinds.FORCE))
    rows.append(Row("residual moment", float(np.linalg.norm(left.moment)), kinds.TORQUE))
    return rows


def resultants(support: str, own: list[tuple[Hold, float]], with_axis: bool) -> list[Row]:
    """Return the size of what a support with several components carries."""
    rows = []
    forces = [v for h, v in own if not h.couple]
    if len(forces) > 1:
        rows.append(Row(f"{support} force", float(np.hypot.reduce(forces)), kinds.FORCE))
    if with_axis:  # the two forces across the axis come first
        rows.append(Row(f"{support} radial", float(np.hypot.reduce(forces[:2])), kinds.FORCE))
    couples = [v for h, v in own if h.couple]
    if len(couples) > 1:
        rows.append(Row(f"{support} couple", float(np.hypot.reduce(couples)), kinds.TORQUE))
    return rows


def reactions(body: BodyRead, state: MotionRead, loads: LoadsRead, supports: SupportsRead) -> Solved:
    return solved(body, state, loads, supports, True)


def reactions_3d(body: BodyRead, state: MotionRead, loads: LoadsRead, supports: SupportsRead) -> Solved:
    return solved(body, state, loads, supports, False)


def reactions_working(values: tuple[Any, ...], answer: Solved) -> list[str]:
    s = answer.solution
    planar = not any(r.hold.point[2] or (r.hold.direction[2] and not r.hold.couple) for r in s.reactions)
    mass_center = f"m a_G = {num(answer.mass)}*{vec(s.acceleration, planar)} = {vec(s.asked_force, planar)} N"
    lines = [
        "Reactions: sum F = m a_G and sum M_R = I alpha + omega x (I omega) + r_RG x m a_G, on the body, ccw +",
        f"Motion: alpha = {moment_text(s.alpha, planar)} rad/s^2, a_G = {vec(s.acceleration, planar)} m/s^2",
        mass_center,
        f"Moments about R = {vec(s.about, planar)} m asked by the motion: {moment_text(s.asked_moment, planar)} N*m",
        f"Weight {vec(s.weight, planar)} N; weight and loads {vec(s.given_force, planar)} N, "
        f"their moment {moment_text(s.given_moment, planar)} N*m",
    ]
    for r in s.reactions:
        unit = "N*m" if r.hold.couple else "N"
        where = (
            "a couple"
            if r.hold.couple
            else f"along {vec(r.hold.direction, planar)} at {vec(r.hold.point, planar)} m"
        )
        lines.append(f"{r.support} {r.component} = {num(r.value)} {unit}, {where}")
    left = s.residual
    return [
        *lines,
        f"Balance again about {vec(left.point, planar)} m: residual force {vec(left.force, planar)} N, "
        f"moment {moment_text(left.moment, planar)} N*m",
    ]


def moment_text(moment: Any, planar: bool) -> str:
    return num(moment[2]) if planar else vec(moment)


def pivot_acceleration(state: MotionRead, body: BodyRead, pivot: Any) -> Any:
    """Return the acceleration of the pivot, carried over from the point the motion knows."""
    told = state.balance()
    start = body.body.center if told.point is None else told.point
    if np.array_equal(start, pivot):
        return told.acceleration
    return motion.acceleration_at(told.acceleration, told.omega, told.alpha, pivot - start).total


def drive_torque(body: BodyRead, state: MotionRead, loads: LoadsRead, pivot: Any) -> drives.DriveTorque:
    gravity = state.falling()
    planar_motion(state)
    if state.alpha_given and state.alpha is None:
        raise InputError(
            "motion", "a motion with a number for 'alpha': the drive makes it, so it is not unknown"
        )
    if pivot.ndim != 1:
        raise InputError("pivot", "one point")
    told = loads.beside(gravity)
    force, couple = told.forces.sum(axis=0), told.couples.sum(axis=0)
    if len(told.forces):
        couple = couple + cross(told.points - pivot, told.forces).sum(axis=0)
    alpha = state.balance().alpha
    return drives.drive_torque(
        body.body,
        pivot,
        np.array([0.0, 0.0, 1.0]),
        omega=float(state.omega[2]),
        alpha=float(alpha[2]),
        acceleration_pivot=pivot_acceleration(state, body, pivot),
        gravity=gravity,
        load_force=force,
        load_moment=couple,
    )


def drive_working(values: tuple[Any, ...], answer: drives.DriveTorque) -> list[str]:
    body, state, _, pivot = values
    g = body.body
    arm = g.center - pivot
    alpha, a_b = float(state.alpha[2]), pivot_acceleration(state, body, pivot)
    gravity = state.falling()
    inertia = float(g.inertia[2, 2])
    parts = balance.moment_sum_planar(inertia, g.mass, arm, float(state.omega[2]), alpha, a_b)
    return [
        "Drive torque about the pivot B, on the body, ccw +: T = sum M_B - M_weight - M_loads",
        f"sum M_B = I_G alpha + m (rx ay - ry ax), r = r_BG = {vec(arm, True)} m, a_B = {vec(a_b, True)} m/s^2",
        f"  = {num(inertia)}*{num(alpha)} + {num(parts.transfer)} = {num(answer.motion)} N*m",
        f"weight held: -(rx m gy - ry m gx) = {num(answer.weight)} N*m, m g = {vec(g.mass * gravity, True)} N",
        f"loads held: {num(answer.loads)} N*m",
        f"T = {num(answer.motion)} + {num(answer.weight)} + {num(answer.loads)} = {num(answer.total)} N*m",
        f"power of the drive T omega = {num(answer.power)} W"
        + (" (the body drives)" if answer.power < 0 else ""),
    ]


BODY_ARG = Arg("body", BODY, "mass, mass center and inertia, as RB_ROLLUP gives them")
MOTION_ARG = Arg("motion", MOTION, "omega, alpha, gravity, and how one point moves")
LOADS_ARG = Arg("loads", LOADS, "table of loads on the body, or the word none; weight comes from gravity")
ROWS = Result(
    (
        Field("alpha", kinds.ANGULAR_ACCELERATION, "when it was unknown"),
        Field("residual force", kinds.FORCE, "of the balance about a second point"),
        Field("residual moment", kinds.TORQUE, "of the balance about a second point"),
    ),
    open=True,
)

FUNCTIONS = (
    CellFunction(
        name="RB_REACTIONS",
        group=GROUP,
        line="Reactions of a body's supports in planar motion, weight included; alpha too when it is unknown.",
        args=(
            BODY_ARG,
            MOTION_ARG,
            LOADS_ARG,
            Arg("supports", SUPPORTS, "table: pin, roller, slot, cable, link, fixed, drive"),
        ),
        result=ROWS,
        kernel=reactions,
        working=reactions_working,
        source=NEWTON_EULER,
        examples=(
            Example(
                '=RB_REACTIONS(B4:D9, B12:D15, "none", B20:F22, "hinge force", "kN")',
                "The force on the tipper's hinge pin while the bin starts to tip.",
            ),
        ),
    ),
    CellFunction(
        name="RB_REACTIONS_3D",
        group=GROUP,
        line="Reactions of a body's supports in space, weight included; alpha too when it is unknown.",
        args=(
            BODY_ARG,
            MOTION_ARG,
            LOADS_ARG,
            Arg(
                "supports",
                SUPPORTS_3D,
                "table: held, ball, bearing, thrust bearing, hinge, roller, slot, cable, link",
            ),
        ),
        result=ROWS,
        kernel=reactions_3d,
        working=reactions_working,
        source=NEWTON_EULER,
        examples=(
            Example(
                '=RB_REACTIONS_3D(B4:D14, B17:D20, "none", B24:I27, "lower hinge fz")',
                "What the lower hinge of the yard gate carries along its axis.",
            ),
        ),
    ),
    CellFunction(
        name="RB_DRIVE_TORQUE",
        group=GROUP,
        line="Torque a drive must give about a pivot along z, weight and loads included; the pivot may move.",
        args=(
            BODY_ARG,
            MOTION_ARG,
            LOADS_ARG,
            Arg("pivot", Vector(kinds.LENGTH), "point B of the drive's axis"),
        ),
        result=Result(
            (
                Field("total", kinds.TORQUE, "torque of the drive on the body"),
                Field("motion", kinds.TORQUE, "part that the motion asks for"),
                Field("weight", kinds.TORQUE, "part that holds the weight"),
                Field("loads", kinds.TORQUE, "part that holds the loads"),
                Field("power", kinds.POWER, "from the drive to the body; negative when the body drives"),
            ),
            default="total",
        ),
        kernel=drive_torque,
        working=drive_working,
        source="Moment balance about an arbitrary moving point (Meriam, Kraige: Dynamics, kinetics of rigid bodies)",
        examples=(
            Example(
                '=RB_DRIVE_TORQUE(B4:D9, B12:D15, "none", "(0, 0) m", "total", "kN*m")',
                "What the tipper's drive must give at the hinge.",
            ),
        ),
    ),
)
