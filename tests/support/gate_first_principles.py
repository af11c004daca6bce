"""What the swing gate must say, from first principles in plain numpy: nothing of rigidsheet is used here.

Sources: volumes and moments of boxes and tubes (any handbook of mechanics, from memory); Newton and Euler as
integrals of r x a dm over a body that turns about z, with a = alpha k x r - omega^2 (x, y, 0); six equations of
balance for six unknown reactions; power flow through a gearbox and wind force as common practice.

The free body of the person on the tip, by hand: the leaf stands still. Weight G at x_G and the person P at x_P
turn it about the lower hinge, tip down. Only the upper hinge can hold that moment, by pulling the leaf back
toward the post (-x) with (x_G G + x_P P) / a; the lower hinge pushes it away (+x) with the same force, as
nothing else acts along x. G + P rest on the thrust bearing, upward on the leaf. The wind W (+y) at x_W would
open the gate with x_W W; the brake holds against it: a negative couple. With the latch, wind on +y and a latch
force S on -y share: S x_S = W x_W, and the hinges take W - S.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
G = 9.80665
# name, held by, speed, acceleration, wind, storm, person, friction
CASES = (
    ("gate at rest", "brake", 0, 0, 0, 0, 0, 0),
    ("opening starts", "move", 1, 1, -1, 0, 0, -1),
    ("opening slows down", "move", 1, -1, 1, 0, 0, 0),
    ("closing starts", "move", -1, -1, 1, 0, 0, 1),
    ("opening braked", "brake", 1, -1, 1, 0, 0, 0),
    ("closing braked", "brake", -1, 1, -1, 0, 0, 0),
    ("person on the tip", "brake", 0, 0, 1, 0, 1, 0),
    ("storm on the front", "latch", 0, 0, 0, 1, 0, 0),
    ("storm on the back", "latch", 0, 0, 0, -1, 0, 0),
)


@dataclass(frozen=True)
class Sums:
    """Mass [kg], first moments [kg m] and integrals of r r^T dm [kg m^2] about the origin."""

    mass: float
    first: Array
    second: Array


def _volume_and_spread(part: Mapping[str, Any]) -> tuple[float, Array]:
    """Return volume [m^3] and the mean of r r^T [m^2] about the part's own mass center."""
    size = {k: float(part[k]) / 1000.0 for k in ("L", "W", "H", "t", "OD", "ID") if part.get(k) is not None}
    if part["shape"] == "tube":
        across = (size["OD"] ** 2 + size["ID"] ** 2) / 16.0
        area = np.pi / 4.0 * (size["OD"] ** 2 - size["ID"] ** 2)
        return area * size["L"], np.diag([across, across, size["L"] ** 2 / 12.0])
    outer = np.array([size["L"], size["W"], size["H"]])
    if part["shape"] == "box":
        return float(np.prod(outer)), np.diag(outer**2) / 12.0
    assert part["shape"] == "hollow box"
    inner = outer - np.array([0.0, 2 * size["t"], 2 * size["t"]])
    v, w = float(np.prod(outer)), float(np.prod(inner))
    return v - w, np.diag(v * outer**2 - w * inner**2) / (12.0 * (v - w))


def total(parts: Sequence[Mapping[str, Any]]) -> Sums:
    """Return the sums of a parts list in mm, kg and degrees."""
    mass, moments, second = 0.0, np.zeros(3), np.zeros((3, 3))
    for part in parts:
        volume, spread = _volume_and_spread(part)
        m = float(part["qty"]) * (
            float(part["mass"]) if part.get("mass") is not None else float(part["density"]) * volume
        )
        angle = np.radians(float(part.get("turn y") or 0.0))
        c, s = np.cos(angle), np.sin(angle)
        turn = np.array([[c, 0.0, s], [0.0, 1.0, 0.0], [-s, 0.0, c]])  # z toward x
        at = np.array([part["x"], part["y"], part["z"]], dtype=float) / 1000.0
        mass, moments = mass + m, moments + m * at
        second = second + m * (turn @ spread @ turn.T + np.outer(at, at))
    return Sums(mass, moments, second)


@dataclass(frozen=True)
class Expected:
    """Values of each case by name, what the checks ask, and motion and mass, all in SI."""

    cases: tuple[dict[str, float], ...]
    demands: dict[str, float]
    motion: dict[str, float]


def expected(v: Mapping[str, Any], parts: Sequence[Mapping[str, Any]]) -> Expected:
    """Return everything from inputs in SI (words for choices) and the parts in mm, kg and degrees."""
    body = total(parts)
    if v["law"] == "even ramps":
        speed = v["opening"] / (v["run_time"] - v["ramp_time"])
        alpha = speed / v["ramp_time"]
    else:  # phi = phi_1 (s - sin(2 pi s) / (2 pi)), s = t / T: largest values of its derivatives
        speed, alpha = 2.0 * v["opening"] / v["run_time"], 2.0 * np.pi * v["opening"] / v["run_time"] ** 2
    stop = speed**2 / (2.0 * v["stop_angle"])
    made = tuple(_case(v, body, case, speed, alpha, stop) for case in CASES)

    def largest(name: str) -> float:
        return max(abs(case[name]) for case in made)

    tip = speed * (v["edge"] + v["leaf_length"])
    demands = {name: largest(name) for name in ("radial_1", "radial_2", "axial")}
    demands |= {"brake_rating": largest("brake"), "latch_rating": largest("latch"), "tip_speed": tip}
    hand = v["hand_x"] if v["moved_by"] == "hand" else 0.0
    demands |= {"stop_fits": v["stop_angle"], "on_leaf": max(body.first[0] / body.mass, v["latch_x"], hand)}
    if v["moved_by"] == "hand":
        demands["hand_rating"] = largest("hand")
    else:
        demands |= {"gear_rating": largest("gear"), "motor_rating": largest("motor")}
        demands["motor_speed"] = speed * v["ratio"]
    about_axis = body.second[0, 0] + body.second[1, 1]
    center = body.first / body.mass
    motion = {
        "mass": body.mass, "center_x": center[0], "center_y": center[1], "center_z": center[2],
        "inertia": about_axis, "inertia_g": about_axis - body.mass * (center[0] ** 2 + center[1] ** 2),
        "izx": -body.second[2, 0], "iyz": -body.second[1, 2], "speed": speed, "alpha": alpha,
        "stop_alpha": stop, "stop_time": speed / stop, "tip_speed": tip, "energy": 0.5 * about_axis * speed**2,
    }  # fmt: skip
    return Expected(made, demands, motion)


def _case(
    v: Mapping[str, Any], body: Sums, case: Sequence[Any], speed: float, alpha: float, stop: float
) -> dict[str, float]:
    """Solve the six equations of balance about the origin for one load case."""
    _, held, sign, turn, wind, storm, person, friction = case
    w, a = sign * speed, turn * (alpha if held == "move" else stop)
    (x, y, _), s = body.first, body.second
    needed = np.array(
        [
            -a * y - w**2 * x,
            a * x - w**2 * y,
            0.0,
            -a * s[2, 0] + w**2 * s[2, 1],
            -a * s[2, 1] - w**2 * s[2, 0],
            a * (s[0, 0] + s[1, 1]),
        ]
    )
    area = v["leaf_length"] * v["leaf_height"] * v["solid"] * v["force_factor"]
    forces = [
        (body.first / body.mass, [0.0, 0.0, -G * body.mass]),
        (
            [v["edge"] + v["leaf_length"] / 2.0, 0.0, v["clearance"] + v["leaf_height"] / 2.0],
            [0.0, area * (wind * v["wind"] + storm * v["storm"]), 0.0],
        ),
        (
            [v["edge"] + v["leaf_length"], v["person_y"], v["clearance"] + v["leaf_height"]],
            [0.0, 0.0, -person * v["person"] * v["swing"] * G],
        ),
    ]
    given = sum((_wrench(at, force) for at, force in forces), np.zeros(6))
    given[5] += friction * v["friction"]
    low, high = [0.0, 0.0, v["hinge_1_z"]], [0.0, 0.0, v["hinge_2_z"]]
    if held == "latch":
        hold = _wrench([v["latch_x"], 0.0, v["latch_z"]], [0.0, 1.0, 0.0])
    elif held == "move" and v["moved_by"] == "hand":
        hold = _wrench([v["hand_x"], 0.0, v["hand_z"]], [0.0, 1.0, 0.0])
    else:
        hold = np.array([0.0, 0.0, 0.0, 0.0, 0.0, 1.0])
    ex, ey, ez = np.eye(3)
    thrust = low if v["axial_hinge"] == "lower hinge" else high
    system = np.column_stack(
        [_wrench(low, ex), _wrench(low, ey), _wrench(high, ex), _wrench(high, ey), _wrench(thrust, ez), hold]
    )
    x1, y1, x2, y2, axial, force = (float(f) for f in np.linalg.solve(system, needed - given))
    out = {"x1": x1, "y1": y1, "x2": x2, "y2": y2, "axial": axial, "hold": force}
    out |= {"radial_1": float(np.hypot(x1, y1)), "radial_2": float(np.hypot(x2, y2))}
    return out | _effort(v, held, force, w, a)


def _wrench(at: Any, force: Any) -> Array:
    return np.concatenate((force, np.cross(at, force)))


def _effort(v: Mapping[str, Any], held: str, force: float, omega: float, alpha: float) -> dict[str, float]:
    """Return what gearbox, motor, hand, brake and latch give."""
    out = dict.fromkeys(("gear", "motor", "hand", "brake", "latch"), 0.0)
    by_hand = v["moved_by"] == "hand"
    if held == "latch":
        out["latch"] = force
    elif held == "brake":
        out["brake"] = force + (0.0 if by_hand else v["rotor"] * v["ratio"] ** 2 * alpha)
    elif by_hand:
        out["hand"] = force
    else:
        power = force * omega
        loss = 1.0 / v["efficiency"] if power >= 0.0 else v["efficiency"]
        out["gear"] = force
        out["motor"] = force * loss / v["ratio"] + v["rotor"] * v["ratio"] * alpha
    return out
