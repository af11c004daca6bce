"""What the hoist arm must say, from first principles in plain numpy: nothing of rigidsheet is used here.

The arm with its crate is replaced by four point masses with the same mass, mass center and second moments. Each
point's acceleration follows from the motion of the carriage and of the arm; Newton's second law for each point,
and the sum of r x m (a - g) about the pivot, give the drive torque and the pin's force (d'Alembert's principle,
any textbook of dynamics, from memory). Power flow through a gearbox: common practice.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from template_first_principles import G, Sums, total

Array = NDArray[np.float64]
STEPS = 40
NAMES = (
    "lift", "lower", "hold", "carriage stop forward", "carriage stop backward", "stop while lowering",
    "stop while lifting",
)  # fmt: skip


@dataclass(frozen=True)
class Motion:
    """Angular velocity and acceleration of the arm, acceleration of the pivot along x; `both`: alpha of any sign."""

    omega: float
    alpha: float
    pivot: float
    both: bool = False


def motions(v: Mapping[str, Any]) -> list[Motion]:
    w, ramp = v["arm_speed"], v["arm_speed"] / v["ramp_time"]
    stop = v["arm_speed"] / v["arm_stop_time"]
    brakes = (
        v["travel_speed"] ** 2 / (2.0 * v["stop_distance"])
        if v["stop_by"] == "distance"
        else v["travel_speed"] / v["stop_time"]
    )
    with_arm = {"rolls on": 0.0, "stops from forward": -brakes, "stops from backward": brakes}
    carriage = with_arm[v["carriage_in_stop"]]
    return [
        Motion(w, ramp, v["travel_acceleration"], both=True),
        Motion(-w, ramp, v["travel_acceleration"], both=True),
        Motion(0.0, 0.0, 0.0),
        Motion(0.0, 0.0, -brakes),
        Motion(0.0, 0.0, brakes),
        Motion(-w, stop, carriage),
        Motion(w, -stop, carriage),
    ]


def points(body: Sums) -> Array:
    """Return four places (4, 2) that, with a quarter of the mass each, have the body's moments in the plane."""
    center = body.first[:2] / body.mass
    spread = body.second[:2, :2] / body.mass - np.outer(center, center)
    values, axes = np.linalg.eigh(spread)
    steps = np.sqrt(2.0 * values) * axes
    return np.array([center + sign * step for step in steps.T for sign in (1.0, -1.0)])


def turned(places: Array, angle: float) -> Array:
    c, s = np.cos(angle), np.sin(angle)
    return places @ np.array([[c, s], [-s, c]])


def balance(body: Sums, angle: float, omega: float, alpha: float, pivot: float) -> tuple[float, Array]:
    """Return drive torque [N m] on the arm, counter-clockwise, and the pin's force [N] on it."""
    torque, force = 0.0, np.zeros(2)
    for r in turned(points(body), angle):
        a = np.array([pivot, 0.0]) + alpha * np.array([-r[1], r[0]]) - omega**2 * r
        push = body.mass / 4.0 * (a + np.array([0.0, G]))  # all that acts on the point, but its weight
        torque += r[0] * push[1] - r[1] * push[0]
        force += push
    return float(torque), force


@dataclass(frozen=True)
class Instant:
    """One load case at one angle: torque, torque with the pivot at rest, motor or brake, pin."""

    torque: float
    fixed: float
    effort: float
    pin: Array
    alpha: float


def instant(v: Mapping[str, Any], body: Sums, angle: float, m: Motion) -> Instant:
    signs = (1.0, -1.0) if m.both else (1.0,)
    tried = [balance(body, angle, m.omega, sign * m.alpha, m.pivot) for sign in signs]
    worst = int(np.argmax([abs(torque) for torque, _ in tried]))
    torque, pin = tried[worst]
    alpha = signs[worst] * m.alpha
    fixed, _ = balance(body, angle, m.omega, alpha, 0.0)
    power = torque * m.omega  # what the drive gives to the arm
    loss = 1.0 if m.omega == 0.0 else (1.0 / v["efficiency"] if power >= 0.0 else v["efficiency"])
    effort = torque * loss / v["ratio"] + v["rotor"] * v["ratio"] * alpha
    return Instant(torque, fixed, effort, pin, alpha)


@dataclass(frozen=True)
class Expected:
    """Tables over the angle (rows of angles, columns of load cases), demands, and the position looked at."""

    angles: Array
    torque: Array
    effort: Array
    pin: Array
    fixed: Array
    demands: dict[str, float]
    look: Instant
    body: Sums


def expected(v: Mapping[str, Any], parts: Sequence[Mapping[str, Any]]) -> Expected:
    body, cases = total(parts), motions(v)
    angles = np.linspace(v["angle_from"], v["angle_to"], STEPS + 1)
    grid = [[instant(v, body, angle, m) for m in cases] for angle in angles]
    torque = np.array([[one.torque for one in row] for row in grid])
    effort = np.array([[one.effort for one in row] for row in grid])
    pin = np.array([[float(np.hypot(*one.pin)) for one in row] for row in grid])
    fixed = np.array([[one.fixed for one in row] for row in grid])
    demands = {
        "gearbox_torque": np.abs(torque).max(),
        "motor_torque": np.abs(effort[:, :2]).max(),
        "brake_torque": np.abs(effort[:, 2:]).max(),
        "motor_speed": v["arm_speed"] * v["ratio"],
        "power_back": v["efficiency"] * v["arm_speed"] * max(0.0, torque[:, 1].max()),
        "pin": pin.max(),
        "step": (v["angle_to"] - v["angle_from"]) / STEPS,
    }
    look = instant(v, body, v["look_angle"], cases[NAMES.index(v["look_case"])])
    return Expected(angles, torque, effort, pin, fixed, demands, look, body)
