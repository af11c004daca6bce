"""What the bin tipper must say, from first principles in plain numpy: nothing of rigidsheet is used here.

Sources: moments of boxes and tubes (any handbook of mechanics, from memory), the parallel axis theorem, Newton
and Euler for a body that turns about a fixed axis, M_O = I_O alpha + omega x (I_O omega), solved for the six
unknown reactions as a linear system; power flow through a gearbox as common practice.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
G = 9.80665
RAMP, STEADY = 8, 40
CASES = (  # name, stuck, pours, direction, run, stop
    ("empty: returning", 0, 0, -1, 1, 0),
    ("full: pouring", 0, 1, 1, 1, 0),
    ("stuck: tipping", 1, 0, 1, 1, 0),
    ("stuck: returning", 1, 0, -1, 1, 0),
    ("stuck: stop tipping", 1, 0, 1, 0, -1),
    ("stuck: stop returning", 1, 0, -1, 0, 1),
)


@dataclass(frozen=True)
class Sums:
    """Mass [kg], first moment [kg m], second moments of mass, integrals of r r^T [kg m^2], about the hinge."""

    mass: float
    first: Array
    second: Array

    def __add__(self, other: Sums) -> Sums:
        return Sums(self.mass + other.mass, self.first + other.first, self.second + other.second)

    def times(self, share: float) -> Sums:
        return Sums(share * self.mass, share * self.first, share * self.second)

    def turned(self, angle: float) -> Sums:
        c, s = np.cos(angle), np.sin(angle)
        turn = np.array([[c, -s, 0.0], [s, c, 0.0], [0.0, 0.0, 1.0]])
        return Sums(self.mass, turn @ self.first, turn @ self.second @ turn.T)

    @property
    def tensor(self) -> Array:
        return np.asarray(np.trace(self.second) * np.eye(3) - self.second)


def _box(sides: Array) -> tuple[float, Array]:
    """Volume and the spread of a unit mass: integral of r r^T over the volume, per volume."""
    return float(np.prod(sides)), np.diag(sides**2) / 12.0


def _shape(part: Mapping[str, Any]) -> tuple[float, Array]:
    """Return volume [m^3] and spread [m^2] of a part about its own mass center."""
    mm = {k: float(part[k]) / 1000.0 for k in ("L", "W", "H", "t", "OD", "ID") if part.get(k) is not None}
    if part["shape"] == "box":
        return _box(np.array([mm["L"], mm["W"], mm["H"]]))
    if part["shape"] in ("hollow box", "closed hollow box"):
        outer = np.array([mm["L"], mm["W"], mm["H"]])
        wall = np.array([0.0 if part["shape"] == "hollow box" else 2 * mm["t"], 2 * mm["t"], 2 * mm["t"]])
        (v1, s1), (v2, s2) = _box(outer), _box(outer - wall)
        return v1 - v2, (v1 * s1 - v2 * s2) / (v1 - v2)
    assert part["shape"] == "tube"
    across = (mm["OD"] ** 2 + mm["ID"] ** 2) / 16.0
    return np.pi / 4.0 * (mm["OD"] ** 2 - mm["ID"] ** 2) * mm["L"], np.diag(
        [across, across, mm["L"] ** 2 / 12.0]
    )


def sums_of(part: Mapping[str, Any]) -> Sums:
    """Return the sums about the hinge of one row of the parts list, in mm, kg and degrees."""
    volume, spread = _shape(part)
    mass = float(part["mass"]) if part.get("mass") is not None else float(part["density"]) * volume
    angle = np.radians(float(part.get("turn z") or 0.0))
    spread = Sums(1.0, np.zeros(3), spread).turned(angle).second
    place = np.array([part["x"], part["y"], part["z"]], dtype=float) / 1000.0
    qty = float(part["qty"])
    return Sums(qty * mass, qty * mass * place, qty * mass * (spread + np.outer(place, place)))


def total(parts: Sequence[Mapping[str, Any]]) -> Sums:
    out = Sums(0.0, np.zeros(3), np.zeros((3, 3)))
    for part in parts:
        out = out + sums_of(part)
    return out


def rows(v: Mapping[str, float]) -> list[tuple[float, float, float, float]]:
    """Return tilt, time, speed and acceleration of each row of the table."""
    end, whole, ramp = v["tilt_end"], v["tilt_time"], v["ramp_time"]
    speed = end / (whole - ramp)
    a, angle = speed / ramp, speed * ramp / 2.0
    out = []
    for i in range(RAMP + 1):
        phi = angle * i / RAMP
        t = np.sqrt(2.0 * phi / a)
        out.append((phi, t, a * t, a))
    for i in range(STEADY + 1):
        phi = angle + (end - 2.0 * angle) * i / STEADY
        out.append((phi, ramp + (phi - angle) / speed, speed, 0.0))
    for i in range(RAMP + 1):
        left = angle * (RAMP - i) / RAMP
        back = np.sqrt(2.0 * left / a)
        out.append((end - left, whole - back, a * back, -a))
    return out


def reactions(v: Mapping[str, float], body: Sums, omega: float, alpha: float, eye: Array | None) -> Array:
    """Return torque (or push of the cylinder) and the sizes of both hinges' forces from six equations."""
    spin = np.array([0.0, 0.0, 1.0])
    center = body.first / body.mass
    a = alpha * np.cross(spin, center) - omega**2 * np.array([center[0], center[1], 0.0])
    force = body.mass * a - body.mass * np.array([0.0, -G, 0.0])
    w = omega * spin
    moment = body.tensor @ (alpha * spin) + np.cross(w, body.tensor @ w)
    moment = moment - np.cross(center, body.mass * np.array([0.0, -G, 0.0]))
    system = np.zeros((6, 6))
    for column, (z, axis) in enumerate(
        (
            (v["hinge_1_z"], 0),
            (v["hinge_1_z"], 1),
            (v["hinge_1_z"], 2),
            (v["hinge_2_z"], 0),
            (v["hinge_2_z"], 1),
        )
    ):
        system[:3, column] = np.eye(3)[axis]
        system[3:, column] = np.cross([0.0, 0.0, z], np.eye(3)[axis])
    if eye is None:
        system[5, 5] = 1.0
    else:
        anchor = np.array([v["anchor_x"], v["anchor_y"], v["cylinder_z"]])
        along = (eye - anchor) / np.linalg.norm(eye - anchor)
        system[:3, 5], system[3:, 5] = along, np.cross(eye, along)
    x = np.linalg.solve(system, np.concatenate((force, moment)))
    return np.array([x[5], np.linalg.norm(x[:3]), np.linalg.norm(x[3:5])])


@dataclass(frozen=True)
class Expected:
    """Columns over the tilt by case (rows, 6) and what the checks ask."""

    torque: Array
    effort: Array
    hinge_1: Array
    hinge_2: Array
    demands: dict[str, float]
    energy: Array  # of the stuck load over the tilt, exact
    look: Array  # torque, hinge 1, hinge 2 at the position looked at, by case


def expected(v: Mapping[str, Any], table: Sequence[Mapping[str, Any]], fruit: Mapping[str, Any]) -> Expected:
    """Return everything from inputs in SI (words for choices) and the parts in mm, kg and degrees."""
    empty, load = total(table), sums_of(fruit)
    motion = rows(v)
    speed = v["tilt_end"] / (v["tilt_time"] - v["ramp_time"])
    stop = speed**2 / (2.0 * v["stop_angle"]) if v["stop_by"] == "angle" else speed / v["stop_time"]
    cylinder = v["drive"] == "cylinder"
    grid = np.array([[_row(v, empty, load, case, *row, stop, cylinder) for case in CASES] for row in motion])
    look = np.array(
        [_row(v, empty, load, case, *position(v), stop, cylinder) for case in CASES if not case[2]]
    )
    torque, effort, hinge_1, hinge_2 = (grid[:, :, k] for k in range(4))
    body = empty + load
    phi, omega = np.array([r[0] for r in motion]), np.array([r[2] for r in motion])
    height = body.first[0] * np.sin(phi) + body.first[1] * (np.cos(phi) - 1.0)
    energy = G * height + 0.5 * body.tensor[2, 2] * omega**2
    demands = {
        "hinge_1": v["unevenness"] * hinge_1.max(),
        "hinge_2": v["unevenness"] * hinge_2.max(),
    }
    if cylinder:
        eye = np.hypot(v["eye_x"], v["eye_y"])
        far = np.hypot(v["anchor_x"], v["anchor_y"])
        between = phi + np.arctan2(v["eye_y"], v["eye_x"]) - np.arctan2(v["anchor_y"], v["anchor_x"])
        length = np.sqrt(eye**2 + far**2 - 2.0 * eye * far * np.cos(between))  # law of cosines
        arm = eye * far * np.sin(between) / length  # twice the triangle's area over its base
        demands |= {"push": max(0.0, effort.max()), "pull": max(0.0, -effort.min())}
        demands |= {"shortest": length.min(), "longest": length.max(), "arm": arm.min()}
    else:
        demands |= {"gearbox_torque": abs(torque).max(), "motor_torque": abs(effort).max()}
        demands["motor_speed"] = speed * v["ratio"]
    return Expected(torque, effort, hinge_1, hinge_2, demands, energy, look)


def position(v: Mapping[str, float]) -> tuple[float, float, float, float]:
    """Return tilt, time, speed and acceleration at the position looked at."""
    phi, end, ramp = v["look_tilt"], v["tilt_end"], v["ramp_time"]
    speed = end / (v["tilt_time"] - ramp)
    a, angle = speed / ramp, speed * ramp / 2.0
    if phi <= angle:
        return phi, 0.0, np.sqrt(2.0 * a * phi), a
    if phi < end - angle:
        return phi, 0.0, speed, 0.0
    return phi, 0.0, np.sqrt(2.0 * a * (end - phi)), -a


def _row(
    v: Mapping[str, Any],
    empty: Sums,
    load: Sums,
    case: tuple[str, int, int, int, int, int],
    phi: float,
    _time: float,
    omega: float,
    run: float,
    stop: float,
    cylinder: bool,
) -> list[float]:
    """Return torque, effort and both hinges of a load case at one tilt."""
    _, stuck, pours, direction, runs, stops = case
    left = min(1.0, max(0.0, (v["pour_to"] - phi) / (v["pour_to"] - v["pour_from"])))
    body = (empty + load.times(1.0 if stuck else left if pours else 0.0)).turned(phi)
    alpha = run if runs else stops * stop
    torque = body.tensor[2, 2] * alpha + G * body.first[0]
    if cylinder:
        c, s = np.cos(phi), np.sin(phi)
        eye = np.array([v["eye_x"] * c - v["eye_y"] * s, v["eye_x"] * s + v["eye_y"] * c, v["cylinder_z"]])
        push, one, two = reactions(v, body, omega, alpha, eye)
        return [torque, push, one, two]
    drive, one, two = reactions(v, body, omega, alpha, None)
    assert abs(drive - torque) < 1e-6 * max(1.0, abs(torque))
    eta, ratio = v["efficiency"], v["ratio"]
    motor = torque / (ratio * eta) if torque * direction >= 0.0 else torque * eta / ratio
    return [torque, motor + v["rotor"] * ratio * alpha, one, two]
